import { compareOffsets } from '../algebra/pauli/string.ts';
import type { Extended, Factor, LocalString, ProductPart, Steps } from '../algebra/pauli/types.ts';
import type { Cell, CellKind, LatticeFamily } from '../lattice/cells.ts';
import { geometryTable } from '../lattice/geometry.ts';

/** Strings written in the operator language, for sentences: short where the string has a short name there. */

const letters: Record<CellKind, string> = { vertices: 'v', links: 'l', plaquettes: 'p', cubes: 'c' };
const axes = ['x', 'y', 'z'] as const;

/** `links.1`, or the bare kind where it has a single class; `undefined` where no label tells the class apart. */
export function classWords(family: LatticeFamily, kind: CellKind, index: number): string | undefined {
  const classes = family[kind];
  if (classes.length <= 1) return kind;
  const own = classes[index]?.labels.find((label) => classes.filter((c) => c.labels.includes(label)).length === 1);
  return own === undefined ? undefined : `${kind}.${own}`;
}

/** `s^x[vertices.A(1, 0)]`. */
export function factorText(f: Factor, family: LatticeFamily): string {
  const words = classWords(family, f.cell.kind, f.cell.index) ?? `${f.cell.kind}.${String(f.cell.index + 1)}`;
  return `${f.species}^${f.pauli}[${words}(${f.cell.offset.join(', ')})]`;
}

const signs = ['', '1i ', '- ', '- 1i '] as const;

/** A local string: `- s^z[vertices(0)] s^z[vertices(1)]`; the identity is 1. */
export function stringPhrase(s: LocalString, family: LatticeFamily): string {
  const body = s.factors.map((f) => factorText(f, family)).join(' ');
  return `${signs[s.phase]}${body === '' ? '1' : body}`;
}

/** The `where` clause that says which cells steps from an offset reach; empty for all. */
function whereText(letter: string, offset: readonly number[], steps: Steps): string {
  const clauses = steps.flatMap((m, d) => {
    const name = `${letter}.${axes[d] ?? 'x'}`;
    if (m === 0) return [`${name} == ${String(offset[d] ?? 0)}`];
    return m === 1 ? [] : [`${name} % ${String(m)} == ${String((((offset[d] ?? 0) % m) + m) % m)}`];
  });
  return clauses.length === 0 ? '' : ` where ${clauses.join(' and ')}`;
}

/** `prod(v: vertices) s^x[v]` for parts of one Pauli each, classes of a kind joined where all take part. */
function partsText(parts: readonly ProductPart[], family: LatticeFamily): string[] {
  const groups = new Map<string, { factor: Factor; where: string; indices: number[] }>();
  const out: string[] = [];
  for (const p of parts) {
    const [f, ...more] = p.string.factors;
    if (!f) continue;
    if (p.steps.every((m) => m === 0) || more.length > 0) {
      out.push(
        p.steps.every((m) => m === 0)
          ? stringPhrase({ phase: 0, factors: p.string.factors }, family)
          : wholeText(p, family),
      );
      continue;
    }
    const where = whereText(letters[f.cell.kind], f.cell.offset, p.steps);
    const key = `${f.species}^${f.pauli} ${f.cell.kind}${where}`;
    const group = groups.get(key) ?? { factor: f, where, indices: [] };
    group.indices.push(f.cell.index);
    groups.set(key, group);
  }
  for (const { factor, where, indices } of groups.values()) {
    const { kind } = factor.cell;
    const letter = letters[kind];
    const whole = indices.length === family[kind].length;
    const cells = whole
      ? [kind as string]
      : indices.map((k) => classWords(family, kind, k) ?? `${kind}.${String(k + 1)}`);
    out.push(...cells.map((c) => `prod(${letter}: ${c}${where}) ${factor.species}^${factor.pauli}[${letter}]`));
  }
  return out;
}

/** A part of several factors: the product over a cell of the first factor, the others by their shift from it. */
function wholeText(p: ProductPart, family: LatticeFamily): string {
  const [first] = p.string.factors;
  if (!first) return '1';
  const by = p.steps.map((m, d) => (m === 0 ? '' : `${axes[d] ?? 'x'} by ${String(m)}`)).filter((t) => t !== '');
  return `the product of ${stringPhrase({ phase: 0, factors: p.string.factors }, family)} moved along ${by.join(', ')}`;
}

/** A product of unbounded support, in words that the language reads where it can. */
export function extendedPhrase(e: Extended, family: LatticeFamily): string {
  const sorted = [...e.parts].sort((a, b) =>
    compareOffsets(a.string.factors[0]?.cell.offset ?? [], b.string.factors[0]?.cell.offset ?? []),
  );
  // a product's body runs to the next sign, so all but a lone one stand in brackets
  const parts = partsText(sorted, family);
  const body = parts.map((part) => (parts.length > 1 && part.startsWith('prod(') ? `(${part})` : part)).join(' ');
  return `${signs[e.phase]}${body === '' ? '1' : body}`;
}

/**
 * A string that is one Pauli matrix on all cells which a geometry function gives for some cell: `prod(l: rim(p)) g^z[l]`, with its sign.
 * Undefined for other strings.
 */
export function incidencePhrase(s: LocalString, family: LatticeFamily): string | undefined {
  const [first] = s.factors;
  if (
    !first ||
    s.factors.length < 2 ||
    s.factors.some((f) => f.species !== first.species || f.pauli !== first.pauli || f.cell.kind !== first.cell.kind)
  )
    return undefined;
  const zero = family.vectors.map(() => 0);
  const shape = (cells: readonly Cell[]): string => {
    const low = zero.map((_, d) => Math.min(...cells.map((c) => c.offset[d] ?? 0)));
    return cells
      .map((c) => `${String(c.index)}@${c.offset.map((o, d) => o - (low[d] ?? 0)).join(',')}`)
      .sort()
      .join(' ');
  };
  const own = shape(s.factors.map((f) => f.cell));
  for (const f of geometryTable) {
    if (f.form !== 'around' || f.gives !== first.cell.kind || !f.dimensions.includes(family.dimension)) continue;
    for (const kind of f.takes)
      for (const index of family[kind].keys())
        if (shape(f.cells(family, { kind, index, offset: zero })) === own) {
          const letter = letters[first.cell.kind] === letters[kind] ? 'u' : letters[first.cell.kind];
          return `${signs[s.phase]}prod(${letter}: ${f.name}(${letters[kind]})) ${first.species}^${first.pauli}[${letter}]`;
        }
  }
  return undefined;
}
