import type { Statement } from '../../grammar/syntax.ts';
import type { Lattice } from '../lattice/cells.ts';
import type { Layout } from './source.ts';
import type { Value, Values } from './values.ts';

/** The values declared so far; `find("N.gauss")` finds a law that the map N declares. */
export function newValues(lattice: Lattice | undefined, all: ReadonlyMap<string, Value>): Values {
  return {
    lattice,
    all,
    find(name) {
      const own = all.get(name);
      if (own) return own;
      const dot = name.indexOf('.');
      if (dot < 0) return undefined;
      const map = all.get(name.slice(0, dot));
      return map?.what === 'map' ? map.map.laws.get(name.slice(dot + 1)) : undefined;
    },
  };
}

/** Names that a statement declares, with their places. */
export function declaredWords(
  node: Statement,
): readonly { readonly text: string; readonly start: number; readonly end: number }[] {
  switch (node.type) {
    case 'spins':
      return node.names;
    case 'couplings':
      return node.items.map((item) => item.name);
    case 'model':
    case 'operator':
    case 'symmetry':
    case 'law':
    case 'rule':
      return [node.head.name];
    case 'reference':
    case 'dictionary':
    case 'gauge':
    case 'circuit':
    case 'solve':
    case 'states':
    case 'composition':
      return [node.name];
    default:
      return [];
  }
}

/**
 * Names that a statement which does not parse most likely meant to declare: what depends on them is then not reported
 * a second time.
 */
export function guessedNames(layout: Layout): readonly string[] {
  const header = (layout.text.split('\n')[0] ?? '').replace(/#.*$/u, '');
  const rest = header.slice(layout.keyword.length);
  if (/^coupl/u.test(layout.keyword))
    return [...layout.text.matchAll(/([A-Za-z_]\w*)\s*(?==|,|$)/gu)].map((m) => m[1] ?? '');
  if (/^audit|^lattice/u.test(layout.keyword)) return [];
  const name = /^\s*([A-Za-z_]\w*)/u.exec(rest)?.[1];
  return name === undefined ? [] : [name];
}
