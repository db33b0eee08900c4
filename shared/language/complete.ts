import type { Completion, Completions, TextPosition } from '../contracts/assist.ts';
import { plainName } from '../../grammar/words.ts';
import { cellKinds, labelsOf, type CellKind } from '../lattice/cells.ts';
import { coordinateNames, geometryFunction, geometryTable } from '../lattice/geometry.ts';
import type { Program } from './evaluate.ts';
import { auditForms } from './forms.ts';
import { whatIsIt } from './problem.ts';
import { helpOn, reference, type HelpRecord } from './reference.ts';
import { isKind } from './sets.ts';
import type { Value } from './values.ts';
import { layoutAt, lineAt, wordAt } from './word-at.ts';

/** What may stand at a place of a text that is half written: it is read off the words before it. */

const asCompletion = (r: HelpRecord): Completion => ({ label: r.name, detail: r.topic, help: r.help });
const ofTopic = (...topics: readonly HelpRecord['topic'][]): Completion[] =>
  reference.filter((r) => topics.includes(r.topic)).map(asCompletion);

/** A bound variable, as the text before the place binds it. */
interface BoundCell {
  readonly name: string;
  readonly kind: CellKind | 'pairs' | undefined;
  readonly domain: string;
}

/** Kind of the cells of a set: `links.1`, `star(v)`. */
function kindOfSet(set: string): BoundCell['kind'] {
  const word = /^[A-Za-z]+/u.exec(set)?.[0] ?? '';
  return isKind(word) ? word : geometryFunction(word)?.gives;
}

const binderAt = /([A-Za-z_]\w*)\s*:\s*([A-Za-z]+(?:\.\w+)?(?:\s*\([^()]*\))?)/uy;

const boundCell = (name = '', domain = ''): BoundCell => ({ name, kind: kindOfSet(domain), domain });

/**
 * Variables that are known at the end of a text: those of heads, and of sums and products whose body has not ended there
 * (it runs to the next sign at its depth). `after` is the rest of the line, where a rule of a map binds its cells.
 */
function boundIn(text: string, after: string): BoundCell[] {
  let known: { readonly cell: BoundCell; readonly depth: number }[] = [];
  const open: boolean[] = [];
  for (let k = 0; k < text.length; k++) {
    const c = text[k] ?? '';
    if (c === '(' || c === '[') open.push(/\b(?:sum|prod)\s*$/u.test(text.slice(Math.max(0, k - 12), k)));
    else if (c === ')' || c === ']') {
      open.pop();
      known = known.filter((one) => one.depth <= open.length);
    } else if ((c === '+' || c === '-') && text[k - 1] !== '^') known = known.filter((one) => one.depth < open.length);
    else if (/[A-Za-z_]/u.test(c) && !/\w/u.test(text[k - 1] ?? '')) {
      binderAt.lastIndex = k;
      const m = binderAt.exec(text);
      // a head's variable is known in the whole statement
      if (m) known.push({ cell: boundCell(m[1], m[2]), depth: open.at(-1) === true ? open.length - 1 : -1 });
    }
  }
  const later = /\bfor\s.*/u.exec(after)?.[0] ?? '';
  const binders = [...later.matchAll(new RegExp(binderAt.source, 'gu'))];
  return [...known.map((one) => one.cell).reverse(), ...binders.map((m) => boundCell(m[1], m[2]))];
}

/** The innermost bracket that is open at the end of a text, with what stands before it. */
function openBracket(text: string): { readonly mark: '(' | '['; readonly before: string } | undefined {
  let depth = 0;
  for (let k = text.length - 1; k >= 0; k--) {
    const c = text[k];
    if (c === ')' || c === ']') depth++;
    else if (c === '(' || c === '[') {
      if (depth === 0) return { mark: c, before: text.slice(0, k) };
      depth--;
    }
  }
  return undefined;
}

const names = (kinds: readonly CellKind[]): string => kinds.join(' or ');

/** Cells that may stand where one of some kinds is wanted: bound ones, their ends, one cell by its place. */
function cellsOf(kinds: readonly CellKind[], bound: readonly BoundCell[], program: Program): Completion[] {
  const fits = (kind: BoundCell['kind']): boolean => kind !== undefined && kind !== 'pairs' && kinds.includes(kind);
  const family = program.lattice?.family;
  const own = bound.flatMap(({ name, kind, domain }): Completion[] => {
    const detail = `a cell of ${domain}`;
    const itself = fits(kind) ? [{ label: name, detail, help: '' }] : [];
    const ends = (kind === 'links' || kind === 'pairs') && kinds.includes('vertices') ? ['a', 'b'] : [];
    const rim = kind === 'plaquettes' && kinds.includes('links') ? ['1'] : [];
    const parts = [...ends, ...rim].map((part) => ({
      label: `${name}.${part}`,
      detail: kind === 'plaquettes' ? 'a link of its rim, in order' : `an end of ${name}`,
      help: '',
    }));
    return [...itself, ...parts];
  });
  const places = coordinateNames.slice(0, family?.dimension ?? 2).map(() => '${0}');
  const named = kinds.flatMap((kind): Completion[] => {
    const words = (family?.[kind].length ?? 1) > 1 && family ? `${kind}.${labelsOf(family, kind)[0] ?? ''}` : kind;
    const template = `${words}(${places.join(', ')})`;
    return [{ label: words, detail: 'one cell by its unit cell', help: helpOn(kind)?.help ?? '', template }];
  });
  return [...own, ...named];
}

/** A function or declared family with its argument, the first bound cell that fits it written in. */
function callOf(
  label: string,
  takes: readonly CellKind[],
  bound: readonly BoundCell[],
  given: Omit<Completion, 'label' | 'template'>,
): Completion {
  const first = bound.find((b) => b.kind !== undefined && b.kind !== 'pairs' && takes.includes(b.kind))?.name;
  return { ...given, label, template: `${label}(\${${first ?? takes[0]?.charAt(0) ?? 'c'}})` };
}

const geometry = (bound: readonly BoundCell[]): Completion[] =>
  geometryTable.map((f) => {
    if (f.form !== 'around')
      return { label: f.name, detail: `${f.gives} by ${f.takes}`, help: f.help, template: `${f.name}(\${1})` };
    return callOf(f.name, f.takes, bound, { detail: `${f.gives} of ${names(f.takes)}`, help: f.help });
  });

/** Declared names before a line, of some kinds. */
function declared(
  program: Program,
  line: number,
  bound: readonly BoundCell[],
  kinds?: readonly Value['what'][],
): Completion[] {
  const audit = kinds !== undefined;
  return [...program.values.all.values()]
    .filter((v) => v.place.line < line && (!kinds || kinds.includes(v.what)))
    .flatMap((v): Completion[] => {
      const given = { detail: whatIsIt[v.what] ?? v.what, help: v.text };
      const laws =
        v.what === 'map'
          ? [...v.map.laws.keys()].map((law) => ({ label: `${v.name}.${law}`, detail: 'a law of a map', help: v.text }))
          : [];
      if (!audit && v.what === 'spins')
        return [{ ...given, label: v.name, template: `${v.name}^\${x}[\${${fitting(v.kind, bound)}}]` }];
      const parameter = v.what === 'law' || v.what === 'operator' ? v.parameter : undefined;
      const own = parameter && !audit ? callOf(v.name, [parameter.kind], bound, given) : { ...given, label: v.name };
      return [own, ...laws];
    });
}

const fitting = (kind: CellKind, bound: readonly BoundCell[]): string =>
  bound.find((b) => b.kind === kind)?.name ??
  bound.flatMap((b) => (kind === 'vertices' && (b.kind === 'links' || b.kind === 'pairs') ? [`${b.name}.a`] : []))[0] ??
  kind.charAt(0);

/** What may follow `x.`: parts of a bound cell, labels of a kind, laws of a map. */
function partsOf(word: string, bound: readonly BoundCell[], program: Program): Completion[] {
  const family = program.lattice?.family;
  const label = (text: string, detail: string): Completion => ({ label: text, detail, help: '' });
  if (isKind(word)) return family ? labelsOf(family, word).map((l) => label(l, `those of class ${l}`)) : [];
  const map = program.values.all.get(plainName(word));
  if (map?.what === 'map') return [...map.map.laws.keys()].map((law) => label(law, 'a law of the map'));
  const kind = bound.find((b) => b.name === word)?.kind;
  if (kind === undefined) return [];
  const longest = Math.max(0, ...(family?.plaquettes ?? []).map((p) => p.rim.length));
  return [
    ...(kind === 'links' || kind === 'pairs' ? ['a', 'b'].map((end) => label(end, 'an end')) : []),
    ...(kind === 'plaquettes'
      ? Array.from({ length: longest }, (_, k) => label(String(k + 1), 'a link of its rim, in order'))
      : []),
    ...coordinateNames.slice(0, family?.dimension ?? 2).map((axis) => label(axis, 'a coordinate of its unit cell')),
  ];
}

/** Inside an audit line: subjects, what stands behind `with`, labels of a sector, clauses. */
function inAudit(program: Program, line: number, text: string): Completion[] {
  const form = auditForms.find((f) => f.name === /^audit\s+([A-Za-z]+)/u.exec(text)?.[1]);
  if (!form) return declared(program, line, [], ['model', 'operator', 'law', 'symmetry', 'rule', 'map']);
  if (openBracket(text)?.mark === '[') return declared(program, line, [], ['law', 'symmetry', 'rule', 'map']);
  const clauses = Object.keys(form.clauses).map((name): Completion => ({
    label: name,
    detail: 'a clause',
    help: form.help,
  }));
  if (/\bover\s+(?:[^=]*=[^,]*,\s*)*\w*$/u.test(text)) return declared(program, line, [], ['coupling']);
  if (/\b(?:with|from)\s[^~]*$/u.test(text))
    return [...declared(program, line, [], form.withKinds.length > 0 ? form.withKinds : ['model']), ...clauses];
  const measured = (form.quantity?.words ?? []).map((word): Completion => ({
    label: word,
    detail: 'what is measured',
    help: form.help,
  }));
  return [...declared(program, line, [], [...form.operands, ...(form.quantity?.kinds ?? [])]), ...measured, ...clauses];
}

function optionsAt(program: Program, at: TextPosition, before: string): Completion[] {
  if (/^\S*$/u.test(before)) return ofTopic('statement');
  if (/\^$/u.test(before)) return ofTopic('operator').map((c) => ({ ...c, label: c.label.slice(1) }));
  if (/^audit\s+$/u.test(before)) return ofTopic('audit');
  if (/^lattice\s+$/u.test(before)) return ofTopic('lattice');
  const layout = layoutAt(program.source, at.line);
  const above = layout ? layout.text.split('\n').slice(0, at.line - layout.line) : [];
  const text = [...above, before].join('\n');
  if (text.startsWith('lattice'))
    return ['torus', 'cylinder', 'open'].map((label) => ({
      label,
      detail: 'a boundary',
      help: helpOn('lattice')?.help ?? '',
    }));
  if (text.startsWith('audit')) return inAudit(program, at.line, text);
  const bound = boundIn(text, lineAt(program.source, at.line).slice(before.length));
  const part = /([A-Za-z_]\w*)\s*\.$/u.exec(before)?.[1];
  if (part !== undefined) return partsOf(part, bound, program);
  const sets = [...ofTopic('cells'), ...geometry(bound)];
  if (/(?::|\bon|\bin)\s*$/u.test(before)) return sets;
  const open = openBracket(text);
  const caller = /([A-Za-z_\u0370-\u03ff]\w*)(?:\s*\^\s*\{?[xyzn+-]\}?)?\s*$/u.exec(open?.before ?? '')?.[1] ?? '';
  const known = program.values.all.get(plainName(caller));
  if (open?.mark === '[' && known?.what === 'spins') return cellsOf([known.kind], bound, program);
  if (open?.mark === '(' && !/:[^()]*$/u.test(text.slice(open.before.length))) {
    const fn = geometryFunction(caller);
    if (fn?.form === 'around') return cellsOf(fn.takes, bound, program);
    if ((known?.what === 'law' || known?.what === 'operator') && known.parameter)
      return cellsOf([known.parameter.kind], bound, program);
  }
  const cells = bound.map(({ name, domain }): Completion => ({ label: name, detail: `a cell of ${domain}`, help: '' }));
  const big = (which: 'sum' | 'prod'): Completion => {
    const { help = '' } = helpOn(which) ?? {};
    return { label: which, detail: 'over cells', help, template: `${which}(\${v}: \${vertices}) ` };
  };
  const words = ofTopic('expression').map((c) => (c.label === 'sum' || c.label === 'prod' ? big(c.label) : c));
  return [...cells, ...declared(program, at.line, bound), ...words, ...sets];
}

/** What may stand at a position, beginning with what is written of it already; in order of use: bound cells, names, words. */
export function completions(program: Program, at: TextPosition): Completions {
  const line = lineAt(program.source, at.line);
  const whole = wordAt(program.source, at);
  const replace = { ...whole.place, length: at.column - whole.place.column };
  const typed = line.slice(replace.column - 1, at.column - 1);
  const options = optionsAt(program, at, line.slice(0, replace.column - 1)).filter((c) =>
    c.label.toLowerCase().startsWith(typed.toLowerCase()),
  );
  return { replace, options: [...new Map(options.map((c) => [c.label, c])).values()] };
}

/** Kinds of cell, for those who ask which words are geometric. */
export const geometricWords: ReadonlySet<string> = new Set([...cellKinds, ...geometryTable.map((f) => f.name)]);
