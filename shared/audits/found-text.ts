import { factorOrder } from '../algebra/pauli/string.ts';
import type { Factor, LocalString } from '../algebra/pauli/types.ts';
import type { Cell, CellKind, LatticeFamily } from '../lattice/cells.ts';
import { classWords } from '../maps/phrases.ts';

/** Laws that were found, written as declarations of the operator language. */

const letters: Record<CellKind, string> = { vertices: 'v', links: 'l', plaquettes: 'p', cubes: 'c' };
const inner: Record<CellKind, string> = { vertices: 'u', links: 'k', plaquettes: 'q', cubes: 'd' };
const axes = ['x', 'y', 'z'] as const;

const difference = (a: readonly number[], b: readonly number[]): number[] => a.map((c, d) => c - (b[d] ?? 0));

/** Links at a vertex, as a geometry function lists them; corners and rim of a plaquette; edges of a cube. */
function sets(family: LatticeFamily): { parameter: Cell; words: string; kind: CellKind; cells: Cell[] }[] {
  const zero = family.vectors.map(() => 0);
  const at = (kind: CellKind, index: number): Cell => ({ kind, index, offset: zero });
  const stars = family.vertices.map((_, index) => ({
    parameter: at('vertices', index),
    words: 'star',
    kind: 'links' as const,
    cells: family.links.flatMap(({ a, b }, link): Cell[] =>
      [a, b].flatMap((end) =>
        end.index === index ? [{ kind: 'links' as const, index: link, offset: end.offset.map((c) => 0 - c) }] : [],
      ),
    ),
  }));
  const plaquettes = family.plaquettes.flatMap(({ corners, rim }, index) => [
    { parameter: at('plaquettes', index), words: 'rim', kind: 'links' as const, cells: [...rim] },
    { parameter: at('plaquettes', index), words: 'corners', kind: 'vertices' as const, cells: [...corners] },
  ]);
  const cubes = family.cubes.flatMap(({ faces, edges }, index) => [
    { parameter: at('cubes', index), words: 'edges', kind: 'links' as const, cells: [...edges] },
    { parameter: at('cubes', index), words: 'faces', kind: 'plaquettes' as const, cells: [...faces] },
  ]);
  return [...stars, ...plaquettes, ...cubes];
}

/** Factors that one set gives with one Pauli matrix of one species, and the rest; undefined if they are not among the factors. */
function takeSet(
  factors: readonly Factor[],
  cells: readonly Cell[],
  by: readonly number[],
  like: Factor,
): Factor[] | undefined {
  const rest = [...factors];
  for (const cell of cells) {
    const moved = { ...cell, offset: cell.offset.map((c, d) => c + (by[d] ?? 0)) };
    const k = rest.findIndex(
      (f) => f.pauli === like.pauli && factorOrder(f, { species: like.species, cell: moved }) === 0,
    );
    if (k < 0) return undefined;
    rest.splice(k, 1);
  }
  return rest;
}

interface Anchor {
  readonly parameter: Cell;
  readonly body: string[];
  readonly rest: readonly Factor[];
}

/** The sets that stand in a string, around one cell, so that fewest factors are left. */
function anchored(factors: readonly Factor[], family: LatticeFamily): Anchor | undefined {
  let best: Anchor | undefined;
  const all = sets(family);
  for (const set of all)
    for (const f of factors) {
      const [first] = set.cells;
      if (first?.kind !== f.cell.kind || first.index !== f.cell.index || set.cells.length < 2) continue;
      const by = difference(f.cell.offset, first.offset);
      const parameter = { ...set.parameter, offset: by };
      const variable = letters[parameter.kind];
      const body: string[] = [];
      let rest = [...factors];
      // the same cell may carry several sets, of several species
      for (const other of all) {
        if (other.parameter.kind !== parameter.kind || other.parameter.index !== parameter.index) continue;
        for (const like of factors) {
          const left = takeSet(rest, other.cells, by, like);
          if (!left || other.cells.length < 2) continue;
          rest = left;
          const bound = inner[other.kind];
          body.push(`prod(${bound}: ${other.words}(${variable})) ${like.species}^${like.pauli}[${bound}]`);
        }
      }
      if (body.length > 0 && (!best || rest.length < best.rest.length)) best = { parameter, body, rest };
    }
  return best;
}

const offsetText = (variable: string, by: readonly number[]): string =>
  by.every((c) => c === 0) ? variable : `${variable} + (${by.join(', ')})`;

const coordinate = (variable: string, axis: string, by: number): string =>
  by === 0 ? `${variable}.${axis}` : `${variable}.${axis} ${by > 0 ? '+' : '-'} ${String(Math.abs(by))}`;

/** One factor beside a parameter: by a shift where it is of the same class, else by its place. */
function factorBeside(f: Factor, parameter: Cell, family: LatticeFamily): string {
  const by = difference(f.cell.offset, parameter.offset);
  const variable = letters[parameter.kind];
  if (f.cell.kind === parameter.kind && f.cell.index === parameter.index)
    return `${f.species}^${f.pauli}[${offsetText(variable, by)}]`;
  const bound = inner[f.cell.kind];
  const where = by
    .map((c, d) => `${bound}.${axes[d] ?? 'x'} == ${coordinate(variable, axes[d] ?? 'x', c)}`)
    .join(' and ');
  const cells = classWords(family, f.cell.kind, f.cell.index) ?? f.cell.kind;
  return `prod(${bound}: ${cells} where ${where}) ${f.species}^${f.pauli}[${bound}]`;
}

/** The body of a product runs to the next sign: where there are several factors each product stands in brackets. */
const bracketed = (factors: readonly string[]): string =>
  factors.map((f) => (factors.length > 1 && f.startsWith('prod(') ? `(${f})` : f)).join(' ');

/** `law found1(v: vertices) = prod(k: star(v)) g^x[k]`: one string translated by `steps`, as a law of the operator language. */
export function lawText(name: string, string: LocalString, steps: readonly number[], family: LatticeFamily): string {
  const anchor = anchored(string.factors, family);
  const [first] = string.factors;
  const parameter = anchor?.parameter ??
    first?.cell ?? { kind: 'vertices' as const, index: 0, offset: steps.map(() => 0) };
  const rest = (anchor?.rest ?? string.factors).map((f) => factorBeside(f, parameter, family));
  const variable = letters[parameter.kind];
  const cells = classWords(family, parameter.kind, parameter.index) ?? parameter.kind;
  const where = steps.flatMap((m, d) =>
    m > 1
      ? [`${variable}.${axes[d] ?? 'x'} % ${String(m)} == ${String((((parameter.offset[d] ?? 0) % m) + m) % m)}`]
      : [],
  );
  return `law ${name}(${variable}: ${cells}${where.length > 0 ? ` where ${where.join(' and ')}` : ''}) = ${bracketed([...(anchor?.body ?? []), ...rest])}`;
}
