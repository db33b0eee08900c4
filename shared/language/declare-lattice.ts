import type { CustomCell, CustomLine, Expression, SizeItem, Span, Statement, Word } from '../../grammar/syntax.ts';
import type { Coefficient } from '../algebra/numbers/coefficient.ts';
import { builtInFamilies, builtInFamily } from '../lattice/built-in.ts';
import type { Lattice, LatticeFamily, LatticeProblem, Size } from '../lattice/cells.ts';
import { checkSize, periodicDirections, straight } from '../lattice/cluster.ts';
import { customFamily, isFamily, type CustomLattice } from '../lattice/custom.ts';
import { fail, say } from './problem.ts';

type Boundary = Lattice['boundary'];
const boundaries: readonly string[] = ['torus', 'cylinder', 'open'];

function boundaryOf(word: Word | undefined): Boundary {
  if (!word) return 'torus';
  return boundaries.includes(word.text) ? (word.text as Boundary) : fail(say.unknownBoundary(word.text), word);
}

/**
 * Sizes as written: `3 x 3`, or as many rows of periods as the lattice has directions. Rows of one size follow one another.
 * Fails at the item whose number of entries is wrong.
 */
export function sizesOf(items: readonly SizeItem[], lattice: Pick<Lattice, 'family' | 'periodic'>): Size[] {
  const n = lattice.family.dimension;
  const sizes: { size: Size; at: Span }[] = [];
  let rows: { row: readonly number[]; at: Span }[] = [];
  const close = (at: Span): void => {
    if (rows.length > 0) fail(say.sizeRows(rows.length, n), at);
  };
  for (const item of items) {
    if (item.type === 'counts') {
      close(item);
      if (item.counts.length !== n) fail(say.sizeDimension(item.counts.length, n), item);
      sizes.push({ size: straight(...item.counts), at: item });
      continue;
    }
    if (item.row.length !== n) fail(say.sizeDimension(item.row.length, n), item);
    rows = [...rows, { row: item.row, at: item }];
    if (rows.length === n) {
      sizes.push({ size: { periods: rows.map((r) => r.row) }, at: { start: rows[0]?.at.start ?? 0, end: item.end } });
      rows = [];
    }
  }
  const last = items.at(-1);
  if (last) close(last);
  for (const { size, at } of sizes) {
    const wrong = checkSize(lattice, size);
    if (wrong) fail(say.badSize(`${sentence(wrong.message)}.`), at);
  }
  return sizes.map((s) => s.size);
}

const sentence = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);

function declared(family: LatticeFamily, boundary: Boundary, items: readonly SizeItem[], place: Span): Lattice {
  const periodic = periodicDirections(boundary, family.dimension);
  const sizes = sizesOf(items, { family, periodic });
  const [size] = sizes;
  if (!size || sizes.length !== 1) return fail(say.badSize('A lattice has one size.'), place);
  return { family, boundary, periodic, size };
}

/** A real number of the lines of a lattice: numbers, quotients, roots. */
export type Constant = (node: Expression) => Coefficient;

const real = (node: Expression, constant: Constant): number => constant(node).toFloat().re;
const part = (cell: CustomCell): { label: string; offset: readonly number[] } => ({
  label: cell.label.text,
  offset: cell.shift ?? [],
});

function linesOf<T extends CustomLine['type']>(lines: readonly CustomLine[], type: T): (CustomLine & { type: T })[] {
  return lines.filter((line): line is CustomLine & { type: T } => line.type === type);
}

function only<T extends 'cell' | 'size'>(lines: readonly CustomLine[], type: T, place: Span): CustomLine & { type: T } {
  const [first, second] = linesOf(lines, type);
  if (!first) return fail(say.missingLine(type), place);
  return second ? fail(say.repeatedLine(type), second) : first;
}

function customData(lines: readonly CustomLine[], place: Span, constant: Constant): CustomLattice {
  return {
    vectors: only(lines, 'cell', place).vectors.map((v) => v.map((x) => real(x, constant))),
    vertices: linesOf(lines, 'vertex').map((v) => ({
      label: v.label.text,
      position: v.position.map((x) => real(x, constant)),
    })),
    links: linesOf(lines, 'link').map((l) => ({
      ...(l.label ? { label: l.label.text } : {}),
      a: part(l.a),
      b: part(l.b),
    })),
    plaquettes: linesOf(lines, 'plaquette').map((p, k) => ({
      label: p.label?.text ?? String(k + 1),
      corners: p.parts.map(part),
    })),
    cubes: linesOf(lines, 'cube').map((c, k) => ({ label: c.label?.text ?? String(k + 1), faces: c.parts.map(part) })),
  };
}

/** The line that a problem of a declared lattice speaks of. */
function lineOf(problem: LatticeProblem, lines: readonly CustomLine[]): Span | undefined {
  const type = { vectors: 'cell', vertices: 'vertex', links: 'link', plaquettes: 'plaquette', cubes: 'cube' } as const;
  if (!problem.part) return undefined;
  const all = linesOf(lines, type[problem.part]);
  return all[problem.part === 'vectors' ? 0 : (problem.index ?? 0)];
}

/** The lattice that a statement declares. */
export function declareLattice(
  node: Statement & { readonly type: 'lattice' | 'custom lattice' },
  constant: Constant,
): Lattice {
  if (node.type === 'lattice') {
    const family = builtInFamily(node.family.text);
    if (!family) return fail(say.unknownFamily(node.family.text, [...builtInFamilies.keys()]), node.family);
    return declared(family, boundaryOf(node.boundary), node.size, node);
  }
  const family = customFamily(customData(node.lines, node, constant));
  if (!isFamily(family)) {
    const [problem] = family;
    const where = problem && lineOf(problem, node.lines);
    return fail(say.badLattice(`${sentence(problem?.message ?? 'the lattice has no cells')}.`), where ?? node);
  }
  const size = only(node.lines, 'size', node);
  return declared(family, boundaryOf(size.boundary), size.size, size);
}
