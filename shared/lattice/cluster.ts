/** A finite piece of a lattice: which cells exist, and their numbers. */
import { cellKinds } from './cells.ts';
import type { Cell, CellKind, LatticeFamily, LatticeProblem, Offset, Size } from './cells.ts';
import { limits } from '../limits.ts';
import { determinant, hermite, inLattice } from './vectors.ts';

/**
 * A torus, cylinder or open piece of a family. Periodic directions wrap (also along tilted periods); along an open
 * direction of extent L vertices have coordinates 0 … L−1, and a link, plaquette or cube exists if all its vertices do.
 * Numbers of one kind run from 0 without gaps: class by class, in each class direction 1 fastest.
 */
export interface Cluster {
  readonly family: LatticeFamily;
  readonly periodic: readonly boolean[];
  readonly size: Size;
  readonly dimension: number;
  /** |determinant of the periods|: the number of vertices of one class. */
  readonly unitCells: number;
  /** Cells of a kind, or of one class of it. */
  count(kind: CellKind, index?: number): number;
  /** Number of a cell; undefined where it is missing (past an open edge). */
  number(cell: Cell): number | undefined;
  /** The canonical cell of a number; throws RangeError outside 0 … count−1. */
  cell(kind: CellKind, number: number): Cell;
  /** The canonical cell that a cell wraps to; undefined where it is missing. */
  wrap(cell: Cell): Cell | undefined;
  /** The cells of a kind, in order of their numbers. */
  cells(kind: CellKind): Cell[];
  /** Canonical offset of a translation: along periodic directions reduced by the periods, along open ones unchanged. */
  reduce(offset: Offset): Offset;
  /** The translation group of the periodic directions, as canonical offsets (0 along open ones); the identity first. */
  translations(): Offset[];
  /**
   * The translates of something with `steps` (0 stays put, m > 0 moves by multiples of m), each once. Along periodic
   * directions: the group that the steps generate. Along open ones: every multiple that may bring an offset
   * within low … high (default 0 … 0) onto an existing cell; the caller asks `number` whether it is there.
   */
  orbit(steps: readonly number[], low?: Offset, high?: Offset): Offset[];
  /** True if what repeats with these steps fits the periods: every period is a multiple of each step > 0. */
  admits(steps: readonly number[]): boolean;
}

/** What of a lattice is the same at every size. */
export interface Extent {
  readonly family: LatticeFamily;
  readonly periodic: readonly boolean[];
}

/** periodic[d] of a boundary: a cylinder is periodic in direction 1 only. */
export const periodicDirections = (boundary: 'torus' | 'cylinder' | 'open', dimension: number): boolean[] =>
  Array.from({ length: dimension }, (_, d) => boundary === 'torus' || (boundary === 'cylinder' && d === 0));

/** The size L1 x L2 x …, in unit cells. */
export const straight = (...lengths: readonly number[]): Size => ({
  periods: lengths.map((length, d) => lengths.map((_, k) => (k === d ? length : 0))),
});

/** True if the periods run along the lattice directions. */
export const isStraight = (size: Size): boolean =>
  size.periods.every((row, d) => row.every((p, k) => k === d || p === 0));

/** "3 x 3" or "(2, 2), (1, -2)". */
export const sizeText = (size: Size): string =>
  isStraight(size)
    ? size.periods.map((row, d) => String(row[d])).join(' x ')
    : size.periods.map((row) => `(${row.join(', ')})`).join(', ');

/** Equal for two sizes if and only if their periods span the same lattice. */
export const sizeKey = (size: Size): string =>
  hermite(size.periods)
    .map((row) => row.join(','))
    .join(';');

/** Offsets of all vertices of a cell's class at unit cell 0. */
function vertexOffsets(family: LatticeFamily, kind: CellKind, index: number): Offset[] {
  if (kind === 'vertices') return [new Array<number>(family.dimension).fill(0)];
  if (kind === 'links') return [family.links[index]!.a.offset, family.links[index]!.b.offset];
  if (kind === 'plaquettes') return family.plaquettes[index]!.corners.map((c) => c.offset);
  return family.cubes[index]!.faces.flatMap((face) =>
    family.plaquettes[face.index]!.corners.map((c) => c.offset.map((x, d) => x + face.offset[d]!)),
  );
}

const sizeProblem = (size: Size, message: string, problem: 'size' | 'limit' = 'size'): LatticeProblem => ({
  problem,
  message,
  which: `size ${sizeText(size)}`,
});

/** Why a size does not fit a lattice, or undefined if it does. */
export function checkSize({ family, periodic }: Extent, size: Size): LatticeProblem | undefined {
  const n = family.dimension;
  const { periods } = size;
  if (periods.length !== n || periods.some((row) => row.length !== n))
    return {
      problem: 'size',
      which: 'size',
      message: `${family.name} has ${String(n)} direction${n === 1 ? '' : 's'}, the size gives ${String(periods.length)}`,
    };
  if (!periods.flat().every(Number.isSafeInteger)) return sizeProblem(size, 'a size is given in whole unit cells');
  if (isStraight(size) && periods.some((row, d) => row[d]! < 1)) return sizeProblem(size, 'every extent is at least 1');
  if (periods.flat().some((p) => Math.abs(p) > limits.extent))
    return sizeProblem(size, `an extent is at most ${String(limits.extent)} unit cells`, 'limit');
  const cells = Math.abs(determinant(periods));
  if (cells === 0) return sizeProblem(size, 'the periods are linearly dependent');
  for (let d = 0; d < n; d++) {
    if (periodic[d]) continue;
    if (periods.some((row, k) => (k === d ? row[d]! < 1 || row.some((p, j) => j !== d && p !== 0) : row[d] !== 0)))
      return sizeProblem(
        size,
        `direction ${String(d + 1)} is open: its period is straight, and no other period runs along it`,
      );
  }
  const most = Math.max(...cellKinds.map((kind) => family[kind].length)) * cells;
  if (most > limits.cells)
    return sizeProblem(size, `${String(most)} cells of one kind; at most ${String(limits.cells)}`, 'limit');
  return undefined;
}

/** Existing cells of one class: a box of canonical offsets, numbered from `first`. */
interface Box {
  readonly low: readonly number[];
  readonly extent: readonly number[];
  readonly first: number;
  readonly count: number;
}

/** The cluster of a lattice at a size, or why there is none (limits: extent, cells of one kind). Sizes start from 1. */
export function newCluster(lattice: Extent, size: Size): Cluster | LatticeProblem {
  const { family, periodic } = lattice;
  const wrong = checkSize(lattice, size);
  if (wrong) return wrong;
  const n = family.dimension;
  const normal = hermite(size.periods);
  const lengths = normal.map((row, d) => row[d]!);
  const wraps = Array.from({ length: n }, (_, d) => periodic[d] ?? false);

  const boxes = (kind: CellKind): Box[] => {
    let first = 0;
    return family[kind].map((_, index) => {
      const offsets = vertexOffsets(family, kind, index);
      // "+ 0" turns −0 into 0.
      const low = wraps.map((w, d) => (w ? 0 : -Math.min(...offsets.map((o) => o[d]!)) + 0));
      const extent = wraps.map((w, d) =>
        w ? lengths[d]! : Math.max(0, lengths[d]! - Math.max(...offsets.map((o) => o[d]!)) - low[d]!),
      );
      const count = extent.reduce((product, e) => product * e, 1);
      const box = { low, extent, first, count };
      first += count;
      return box;
    });
  };
  const table: Readonly<Record<CellKind, readonly Box[]>> = {
    vertices: boxes('vertices'),
    links: boxes('links'),
    plaquettes: boxes('plaquettes'),
    cubes: boxes('cubes'),
  };
  const total = (kind: CellKind): number => table[kind].reduce((sum, box) => sum + box.count, 0);
  const totals = {
    vertices: total('vertices'),
    links: total('links'),
    plaquettes: total('plaquettes'),
    cubes: total('cubes'),
  };
  // One scratch offset serves every call: `number` is called millions of times and must not allocate.
  const scratch = new Array<number>(n).fill(0);

  const reduceInto = (offset: Offset): void => {
    for (let d = 0; d < n; d++) scratch[d] = offset[d]!;
    for (let d = 0; d < n; d++) {
      if (!wraps[d]) continue;
      const value = scratch[d]!;
      const length = lengths[d]!;
      if (value >= 0 && value < length) continue;
      const turns = Math.floor(value / length);
      const row = normal[d]!;
      for (let k = d; k < n; k++) scratch[k]! -= turns * row[k]!;
    }
  };
  const place = (box: Box): number => {
    let place = 0;
    for (let d = n - 1; d >= 0; d--) {
      const along = scratch[d]! - box.low[d]!;
      if (along < 0 || along >= box.extent[d]!) return -1;
      place = place * box.extent[d]! + along;
    }
    return place;
  };
  const number = (cell: Cell): number | undefined => {
    const box = table[cell.kind][cell.index];
    if (!box) return undefined;
    reduceInto(cell.offset);
    const at = place(box);
    return at < 0 ? undefined : box.first + at;
  };
  const cellAt = (kind: CellKind, k: number): Cell => {
    const index = table[kind].findIndex((box) => k >= box.first && k < box.first + box.count);
    if (index < 0 || !Number.isInteger(k))
      throw new RangeError(`${kind} are numbered 0 to ${String(totals[kind] - 1)}, got ${String(k)}`);
    const box = table[kind][index]!;
    let rest = k - box.first;
    const offset = box.extent.map((e, d) => {
      const along = rest % e;
      rest = (rest - along) / e;
      return along + box.low[d]!;
    });
    return { kind, index, offset };
  };
  const reduce = (offset: Offset): Offset => {
    reduceInto(offset);
    return [...scratch];
  };
  const grid = (ranges: readonly (readonly number[])[]): number[][] =>
    ranges.reduceRight<number[][]>((rest, range) => rest.flatMap((o) => range.map((c) => [c, ...o])), [[]]);
  const count = (length: number): number[] => Array.from({ length }, (_, k) => k);
  const translations = (): Offset[] => grid(wraps.map((w, d) => (w ? count(lengths[d]!) : [0])));

  /** Along open direction d: the coordinates of existing cells of any kind. */
  const span = (d: number): { low: number; high: number } => {
    const all = cellKinds.flatMap((kind) => table[kind]).filter((box) => box.count > 0);
    return {
      low: Math.min(...all.map((b) => b.low[d]!)),
      high: Math.max(...all.map((b) => b.low[d]! + b.extent[d]! - 1)),
    };
  };
  const turning = (steps: readonly number[]): Offset[] => {
    if (steps.every((m, d) => !wraps[d] || m === 1)) return translations();
    const moves = wraps.flatMap((w, d) => (w && steps[d]! > 0 ? [count(n).map((k) => (k === d ? steps[d]! : 0))] : []));
    const found = new Map<string, Offset>();
    const queue: Offset[] = [count(n).map(() => 0)];
    for (let next = queue.pop(); next; next = queue.pop()) {
      const key = next.join(',');
      if (found.has(key)) continue;
      found.set(key, next);
      for (const move of moves) queue.push(reduce(next.map((c, d) => c + move[d]!)));
    }
    return [...found.values()];
  };
  const orbit = (steps: readonly number[], low?: Offset, high?: Offset): Offset[] => {
    const open = wraps.map((w, d) => {
      const m = steps[d]!;
      if (w || m === 0) return [0];
      const reach = span(d);
      const from = Math.ceil((reach.low - (high?.[d] ?? 0)) / m);
      const to = Math.floor((reach.high - (low?.[d] ?? 0)) / m);
      return Array.from({ length: Math.max(0, to - from + 1) }, (_, k) => (from + k) * m);
    });
    const turned = turning(steps);
    return grid(open).flatMap((o) => turned.map((t) => t.map((c, d) => c + o[d]!)));
  };

  return {
    family,
    periodic: wraps,
    size,
    dimension: n,
    unitCells: Math.abs(determinant(size.periods)),
    count: (kind, index) => (index === undefined ? totals[kind] : (table[kind][index]?.count ?? 0)),
    number,
    cell: cellAt,
    wrap: (cell) => {
      const box = table[cell.kind][cell.index];
      if (!box) return undefined;
      reduceInto(cell.offset);
      return place(box) < 0 ? undefined : { kind: cell.kind, index: cell.index, offset: [...scratch] };
    },
    cells: (kind) => count(totals[kind]).map((k) => cellAt(kind, k)),
    reduce,
    translations,
    orbit,
    admits: (steps) =>
      size.periods.every((row, r) => !wraps[r] || row.every((p, d) => (steps[d] ?? 0) < 1 || p % steps[d]! === 0)),
  };
}

/** True if a translation is a whole number of periods of a torus: it moves no cell. */
export const isPeriod = (cluster: Cluster, offset: Offset): boolean =>
  inLattice(hermite(cluster.size.periods), offset) && offset.every((c, d) => cluster.periodic[d] || c === 0);
