import { cellPosition, type CellKind, type LatticeFamily } from '../../../shared/lattice/drawing.ts';
import type { PlateLattice, Support } from './supports.ts';
import { flat, type Projection } from './view.ts';

/** The piece of the lattice that is drawn, in drawing units: x to the right, y downwards. */

export interface Point {
  readonly x: number;
  readonly y: number;
  /** Larger is nearer to the eye; 0 throughout in fewer than three dimensions. */
  readonly depth: number;
}

/** Range of unit cells drawn in each direction, both ends included. */
export type Window = readonly (readonly [number, number])[];

export interface Frame {
  readonly window: Window;
  readonly links: readonly { readonly from: Point; readonly to: Point; readonly outside: boolean }[];
  readonly vertices: readonly Point[];
  readonly box: { readonly x: number; readonly y: number; readonly width: number; readonly height: number };
}

/** Where the cell of a class in a unit cell stands; drawing has y upwards, the page downwards. */
export function pointOf(
  family: LatticeFamily,
  kind: CellKind,
  index: number,
  offset: readonly number[],
  project: Projection = flat,
): Point {
  const [x, y, depth] = project(cellPosition(family, { kind, index, offset }));
  return { x, y: -y, depth };
}

/** Directions that end: all of an open lattice, all but the first of a cylinder. */
export const isOpen = (lattice: PlateLattice, d: number): boolean =>
  lattice.boundary === 'open' || (lattice.boundary === 'cylinder' && d > 0);

/** Unit cells of the declared lattice, straight ones only: 0 … L − 1 in each direction; null for tilted periods. */
export function declaredWindow(lattice: PlateLattice): Window | null {
  const straight = lattice.periods.every((row, d) => row.every((c, k) => (k === d ? c > 0 : c === 0)));
  return straight ? lattice.periods.map((row, d) => [0, (row[d] ?? 1) - 1] as const) : null;
}

/** Fewest and most unit cells drawn, by dimension, along each direction. */
const least: Readonly<Record<number, readonly number[]>> = { 1: [7], 2: [5, 3], 3: [3, 2, 2] };
const most: Readonly<Record<number, readonly number[]>> = { 1: [14], 2: [8, 5], 3: [4, 3, 3] };

/**
 * A window about the support, at least wide enough to see the lattice repeat. With the declared lattice: all of it in the
 * directions where it is small enough to be drawn whole, and nothing past an open end that the support does not reach.
 */
export function windowAbout(family: LatticeFamily, supports: readonly Support[], lattice?: PlateLattice): Window {
  const declared = lattice ? declaredWindow(lattice) : null;
  return Array.from({ length: family.dimension }, (_, d) => {
    const at = supports.flatMap((support) => support.sites.map((site) => site.offset[d] ?? 0));
    const low = at.length > 0 ? Math.min(...at) : 0;
    const high = at.length > 0 ? Math.max(...at) : 0;
    const wanted = least[family.dimension]?.[d] ?? 3;
    const limit = most[family.dimension]?.[d] ?? 4;
    const whole = declared?.[d];
    if (lattice && whole && whole[1] < limit) {
      const [from, to] = [Math.min(low, 0), Math.max(high, whole[1])];
      if (to - from < limit && (isOpen(lattice, d) || to - from + 1 >= Math.min(wanted, 3))) return [from, to] as const;
    }
    const spare = Math.max(0, wanted - (high - low + 1));
    const from = low - Math.floor(spare / 2);
    return [from, Math.min(Math.max(high, from + wanted - 1), from + limit - 1)] as const;
  });
}

function* cellsIn(window: Window, d = 0, at: readonly number[] = []): Generator<readonly number[]> {
  const range = window[d];
  if (!range) {
    yield at;
    return;
  }
  for (let n = range[0]; n <= range[1]; n += 1) yield* cellsIn(window, d + 1, [...at, n]);
}

const inside = (window: Window, offset: readonly number[]): boolean =>
  window.every(([low, high], d) => (offset[d] ?? 0) >= low && (offset[d] ?? 0) <= high);

/**
 * Links and vertices of a window. Links that leave it are marked, and drawn as the hint that the lattice goes on; where
 * the declared lattice is given and ends, there is nothing to hint at.
 */
export function frameOf(
  family: LatticeFamily,
  window: Window,
  project: Projection = flat,
  lattice?: PlateLattice,
): Frame {
  const declared = lattice ? declaredWindow(lattice) : null;
  const beyond = (offset: readonly number[]): boolean =>
    lattice !== undefined &&
    declared !== null &&
    declared.some(([low, high], d) => isOpen(lattice, d) && ((offset[d] ?? 0) < low || (offset[d] ?? 0) > high));
  const cells = [...cellsIn(window)];
  const links: { from: Point; to: Point; outside: boolean }[] = [];
  for (const cell of [...cellsIn(window.map(([low, high]) => [low - 1, high + 1] as const))])
    for (const link of family.links) {
      const ends = [link.a, link.b].map((end) => end.offset.map((c, d) => c + (cell[d] ?? 0)));
      const [a = [], b = []] = ends;
      const within = [inside(window, a), inside(window, b)];
      if (!within[0] && !within[1]) continue;
      if (beyond(within[0] ? b : a)) continue;
      const from = pointOf(family, 'vertices', link.a.index, a, project);
      const to = pointOf(family, 'vertices', link.b.index, b, project);
      // A link that leaves is cut at half its length, drawn from the end that is inside.
      const half = { x: (from.x + to.x) / 2, y: (from.y + to.y) / 2, depth: (from.depth + to.depth) / 2 };
      if (within[0] && within[1]) links.push({ from, to, outside: false });
      else links.push({ from: within[0] ? from : to, to: half, outside: true });
    }
  const vertices = cells.flatMap((cell) =>
    family.vertices.map((_, index) => pointOf(family, 'vertices', index, cell, project)),
  );
  const points = [...vertices, ...links.map((link) => link.to)];
  const xs = points.map((point) => point.x);
  const ys = points.map((point) => point.y);
  const pad = 0.35;
  const x = Math.min(...xs) - pad;
  const y = Math.min(...ys) - pad;
  return {
    window,
    // Farther links first, so that nearer ones lie over them.
    links: links.sort((p, q) => p.from.depth + p.to.depth - q.from.depth - q.to.depth),
    vertices,
    box: { x, y, width: Math.max(...xs) + pad - x, height: Math.max(...ys) + pad - y },
  };
}

/** The vertices that a cell of a class touches, in unit cells about its own. */
function vertexOffsets(family: LatticeFamily, kind: CellKind, index: number): readonly (readonly number[])[] {
  const link = kind === 'links' ? family.links[index] : undefined;
  const plaquette = kind === 'plaquettes' ? family.plaquettes[index] : undefined;
  const corners = link ? [link.a, link.b] : (plaquette?.corners ?? []);
  return corners.map((corner) => corner.offset);
}

/** Unit cells of a window whose cell of a class lies whole in it. */
export function wholeCells(
  family: LatticeFamily,
  window: Window,
  kind: CellKind,
  index: number,
): readonly (readonly number[])[] {
  const touched = vertexOffsets(family, kind, index);
  const whole = (cell: readonly number[]) =>
    touched.every((offset) =>
      inside(
        window,
        offset.map((c, d) => c + (cell[d] ?? 0)),
      ),
    );
  return [...cellsIn(window)].filter(whole);
}

/** Points of a class in a window: of the cells that lie whole in it. */
export const pointsIn = (
  family: LatticeFamily,
  window: Window,
  kind: CellKind,
  index: number,
  project: Projection = flat,
): readonly Point[] =>
  wholeCells(family, window, kind, index).map((cell) => pointOf(family, kind, index, cell, project));

/** A support as points with their marks; repeated strings fill the window, the representative first. */
export interface Drawn {
  readonly at: Point;
  readonly pauli: 'x' | 'y' | 'z';
  /** Turn of the bar of X in degrees: across the link it stands on; 0 elsewhere. */
  readonly turn: number;
  readonly species: string;
}

export function drawnOf(
  family: LatticeFamily,
  window: Window,
  supports: readonly Support[],
  project: Projection = flat,
): readonly Drawn[] {
  const drawn = new Map<string, Drawn>();
  for (const support of supports)
    for (const shift of shiftsIn(window, support.repeats))
      for (const site of support.sites) {
        const offset = site.offset.map((c, d) => c + (shift[d] ?? 0));
        if (shift.some((n) => n !== 0) && !inside(window, offset)) continue;
        const at = pointOf(family, site.kind, site.index, offset, project);
        const key = [at.x.toFixed(4), at.y.toFixed(4), site.pauli, site.species].join(' ');
        drawn.set(key, {
          at,
          pauli: site.pauli,
          species: site.species,
          turn: turnOf(family, site.kind, site.index, project),
        });
      }
  return [...drawn.values()].sort((a, b) => a.at.depth - b.at.depth);
}

function turnOf(family: LatticeFamily, kind: CellKind, index: number, project: Projection): number {
  const link = kind === 'links' ? family.links[index] : undefined;
  if (!link) return 0;
  const a = pointOf(family, 'vertices', link.a.index, link.a.offset, project);
  const b = pointOf(family, 'vertices', link.b.index, link.b.offset, project);
  return (Math.atan2(b.y - a.y, b.x - a.x) * 180) / Math.PI + 90;
}

function* shiftsIn(window: Window, repeats: readonly number[]): Generator<readonly number[]> {
  const ranges = window.map(([low, high], d) => {
    const step = repeats[d] ?? 0;
    if (step <= 0) return [0];
    const reach = Math.ceil((high - low + 1) / step) + 1;
    return Array.from({ length: 2 * reach + 1 }, (_, k) => (k - reach) * step);
  });
  const combine = function* (d: number, at: readonly number[]): Generator<readonly number[]> {
    const range = ranges[d];
    if (!range) yield at;
    else for (const n of range) yield* combine(d + 1, [...at, n]);
  };
  yield* combine(0, []);
}

/** "4 × 4 torus", "open chain of 8", "torus (2, 2), (1, −2)". */
export function sizeInWords(lattice: PlateLattice): string {
  const rows = lattice.periods;
  const straight = rows.every((row, d) => row.every((c, k) => k === d || c === 0));
  if (!straight) return `${lattice.boundary} ${rows.map((row) => `(${row.join(', ')})`).join(', ')}`.replace(/-/g, '−');
  return `${rows.map((row, d) => String(row[d] ?? 0)).join(' × ')} ${lattice.boundary}`;
}

/** Hint that a support does not fit a small torus as it is drawn: a period shorter than its extent wraps it onto itself. */
export function wraps(lattice: PlateLattice, supports: readonly Support[]): boolean {
  if (lattice.boundary === 'open') return false;
  return supports.some((support) =>
    lattice.periods.some((row, d) => {
      const period = Math.abs(row[d] ?? 0);
      const at = support.sites.map((site) => site.offset[d] ?? 0);
      const straight = row.every((c, k) => k === d || c === 0);
      return (
        straight && (support.repeats[d] ?? 0) === 0 && at.length > 0 && Math.max(...at) - Math.min(...at) >= period
      );
    }),
  );
}
