/** Where cells stand on a plate: pure data, y up, in units of the primitive vectors' own scale. */
import { cellKinds, isLatticeProblem, shifted } from './cells.ts';
import type { Cell, CellKind, LatticeFamily, Offset, Size } from './cells.ts';
import { newCluster } from './cluster.ts';
import type { Extent } from './cluster.ts';
import { cartesian } from './vectors.ts';

export type { Cell, CellKind, LatticeFamily, Offset } from './cells.ts';
export { cellKey } from './cells.ts';
export { builtInFamily } from './built-in.ts';

/** A point of the plate. */
export type Point = readonly [x: number, y: number];

/** Depth in an oblique view: the third axis goes up and to the right, at 0.45 of its length (a cabinet projection). */
const depth: Point = [0.38, 0.24];

/** A Cartesian position (1 to 3 components) as a point: a chain lies on y = 0, three dimensions are seen obliquely. */
export const flatten = (position: readonly number[]): Point => {
  const [x = 0, y = 0, z] = position;
  // In three dimensions z stands upright and y goes into the depth, as the trade draws it.
  return z === undefined ? [x, y] : [x + depth[0] * y, z + depth[1] * y];
};

/** Cartesian centre of a cell. */
export const cellPosition = (family: LatticeFamily, cell: Cell): number[] => {
  const own = family[cell.kind][cell.index];
  if (!own) throw new Error(`cellPosition: ${family.name} has no class ${String(cell.index)} of ${cell.kind}`);
  return cartesian(family.vectors, cell.offset).map((x, k) => x + own.position[k]!);
};

/** Centre of a cell on the plate. */
export const cellPoint = (family: LatticeFamily, cell: Cell): Point => flatten(cellPosition(family, cell));

/** What is drawn of a cell: the point of a vertex, the two ends of a link, the corners of a plaquette, the faces of a cube as polygons. */
export interface Drawn {
  readonly cell: Cell;
  readonly centre: Point;
  /** One list for a vertex (1 point), a link (2) and a plaquette (its corners); one a face for a cube. */
  readonly outline: readonly (readonly Point[])[];
}

/** The drawing of one cell. */
export function drawCell(family: LatticeFamily, cell: Cell): Drawn {
  const point = (vertex: Cell): Point => cellPoint(family, shifted(vertex, cell.offset));
  const polygon = (index: number, offset: Offset): Point[] =>
    family.plaquettes[index]!.corners.map((c) => point(shifted(c, offset)));
  const zero = cell.offset.map(() => 0);
  const outlines: Readonly<Record<CellKind, () => Point[][]>> = {
    vertices: () => [[cellPoint(family, cell)]],
    links: () => [[point(family.links[cell.index]!.a), point(family.links[cell.index]!.b)]],
    plaquettes: () => [polygon(cell.index, zero)],
    cubes: () => family.cubes[cell.index]!.faces.map((f) => polygon(f.index, f.offset)),
  };
  return { cell, centre: cellPoint(family, cell), outline: outlines[cell.kind]() };
}

/** All cells of the given kinds in unit cells low … high (both included), kind by kind, direction 1 fastest. */
export function cellsInWindow(
  family: LatticeFamily,
  low: Offset,
  high: Offset,
  kinds: readonly CellKind[] = cellKinds,
): Cell[] {
  const offsets = low.reduceRight<number[][]>(
    (rest, from, d) =>
      rest.flatMap((o) => Array.from({ length: Math.max(0, high[d]! - from + 1) }, (_, k) => [from + k, ...o])),
    [[]],
  );
  return kinds.flatMap((kind) =>
    offsets.flatMap((offset) => family[kind].map((_, index) => ({ kind, index, offset }))),
  );
}

/** The cells that exist at a size, each once (canonical), of the given kinds; empty if the size does not fit the lattice. */
export function cellsOfSize(lattice: Extent, size: Size, kinds: readonly CellKind[] = cellKinds): Cell[] {
  const cluster = newCluster(lattice, size);
  return isLatticeProblem(cluster) ? [] : kinds.flatMap((kind) => cluster.cells(kind));
}

export interface Bounds {
  readonly low: Point;
  readonly high: Point;
}

/** The smallest upright box around drawings, widened by `margin` on each side; undefined for none. */
export function boundsOf(drawn: readonly Drawn[], margin = 0): Bounds | undefined {
  const points = drawn.flatMap((d) => d.outline.flat());
  if (points.length === 0) return undefined;
  const xs = points.map((p) => p[0]);
  const ys = points.map((p) => p[1]);
  const least = (list: readonly number[]): number => list.reduce((a, b) => Math.min(a, b));
  const most = (list: readonly number[]): number => list.reduce((a, b) => Math.max(a, b));
  return { low: [least(xs) - margin, least(ys) - margin], high: [most(xs) + margin, most(ys) + margin] };
}

/** Unit cells that cover all the given cells, widened by `around` on each side: a window for `cellsInWindow`. */
export function windowAround(family: LatticeFamily, cells: readonly Cell[], around = 1): { low: Offset; high: Offset } {
  const along = (d: number): number[] => (cells.length > 0 ? cells.map((c) => c.offset[d] ?? 0) : [0]);
  const directions = family.vectors.map((_, d) => along(d));
  return {
    low: directions.map((list) => list.reduce((a, b) => Math.min(a, b)) - around),
    high: directions.map((list) => list.reduce((a, b) => Math.max(a, b)) + around),
  };
}
