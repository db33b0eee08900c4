/** Vertex pairs by distance. */
import { isLatticeProblem, shifted } from './cells.ts';
import type { Cell, LatticeFamily, LatticeProblem, Offset } from './cells.ts';
import { cartesian, dot, offsetsWithin } from './vectors.ts';

/** An unordered pair of vertices, one for each translation orbit. */
export interface PairClass {
  readonly a: Cell;
  readonly b: Cell;
}

/** Farthest shell that `pairs(k)` gives. */
export const pairLimit = 64;

/**
 * Distances whose squares agree to this fraction are one shell: coarse enough for primitive vectors typed with three
 * decimals (0.866 for √3/2), far finer than the gaps between the shells of the built-in lattices within the limit.
 */
const tolerance = 2e-4;

/** The positive half of the offsets: of o and −o, the one whose last nonzero entry is positive. */
const forward = (offset: Offset): boolean => {
  for (let d = offset.length - 1; d >= 0; d--) if (offset[d] !== 0) return offset[d]! > 0;
  return false;
};

/** All pair classes within a radius, with their squared distance, nearest first. */
function pairsWithin(family: LatticeFamily, radius: number): (PairClass & { readonly square: number })[] {
  const found: (PairClass & { readonly square: number })[] = [];
  family.vertices.forEach((from, i) => {
    family.vertices.forEach((to, j) => {
      if (j < i) return;
      const shift = to.position.map((x, k) => x - from.position[k]!);
      for (const offset of offsetsWithin(family.vectors, shift, radius)) {
        if (i === j && !forward(offset)) continue;
        const r = cartesian(family.vectors, offset).map((x, k) => x + shift[k]!);
        const a: Cell = { kind: 'vertices', index: i, offset: offset.map(() => 0) };
        found.push({
          a,
          b: shifted(
            { ...a, index: j },
            offset.map((c) => c + 0),
          ),
          square: dot(r, r),
        });
      }
    });
  });
  // Stable: within a shell the order of vertices and offsets stays.
  return found.sort((p, q) => p.square - q.square);
}

/** Groups sorted pairs into shells of one distance. */
function shells(
  pairs: readonly (PairClass & { readonly square: number })[],
): (PairClass & { readonly square: number })[][] {
  const groups: (PairClass & { readonly square: number })[][] = [];
  for (const pair of pairs) {
    const last = groups.at(-1);
    if (last && pair.square - last[0]!.square <= tolerance * pair.square) last.push(pair);
    else groups.push([pair]);
  }
  return groups;
}

/**
 * The k-th-nearest vertex pairs (k from 1) by Cartesian distance, one for each translation orbit. Between two vertices
 * of one class, b lies in the half of the offsets whose last nonzero entry is positive, as links do.
 */
export function nearestPairs(family: LatticeFamily, k: number): readonly PairClass[] | LatticeProblem {
  if (!Number.isInteger(k) || k < 1)
    return { problem: 'limit', message: `pairs(k) counts shells from 1, got ${String(k)}`, which: 'pairs' };
  if (k > pairLimit)
    return {
      problem: 'limit',
      message: `pairs(k) goes up to k = ${String(pairLimit)}, got ${String(k)}`,
      which: 'pairs',
    };
  const known = shellsOf.get(family) ?? new Map<number, readonly PairClass[]>();
  shellsOf.set(family, known);
  const shell = known.get(k) ?? findShell(family, k);
  known.set(k, shell);
  return shell;
}

/** Shells found before: setting formulas asks for the same few again and again. */
const shellsOf = new WeakMap<LatticeFamily, Map<number, readonly PairClass[]>>();

function findShell(family: LatticeFamily, k: number): readonly PairClass[] {
  let radius = Math.max(...family.vectors.map((v) => Math.sqrt(dot(v, v))));
  for (;;) {
    const groups = shells(pairsWithin(family, radius));
    // The last shell may be cut by the radius; the ones before it are whole.
    if (groups.length > k) {
      const order = (p: PairClass): string =>
        `${String(p.a.index).padStart(4, '0')}-${String(p.b.index).padStart(4, '0')}`;
      return groups[k - 1]!.map(({ a, b }) => ({ a, b })).sort(
        (p, q) => order(p).localeCompare(order(q)) || compareOffsets(p.b.offset, q.b.offset),
      );
    }
    radius *= 1.5;
  }
}

/** Order of offsets: by the last direction, then the one before; within a direction small before large. */
function compareOffsets(a: Offset, b: Offset): number {
  for (let d = a.length - 1; d >= 0; d--) if (a[d] !== b[d]) return a[d]! - b[d]!;
  return 0;
}

/** The pairs of a shell that hold a vertex: its coordination number there (0 for a problem). */
export function coordination(family: LatticeFamily, k: number, vertex: number): number {
  const pairs = nearestPairs(family, k);
  if (isLatticeProblem(pairs)) return 0;
  return pairs.reduce((sum, p) => sum + Number(p.a.index === vertex) + Number(p.b.index === vertex), 0);
}
