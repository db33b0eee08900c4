import { cellKey, type Cell, type LatticeFamily, type Offset } from '../lattice/cells.ts';
import { around, boundary, incidence } from '../lattice/incidence.ts';
import type { Budget } from '../limits.ts';

/** Vertices that one search of a path may visit. */
const mostVisited = 20_000;
/** Charges up to which all pairings are tried; beyond, nearest pairs are taken first. */
const mostPaired = 10;

/** Links of shortest paths from one vertex to others on the infinite lattice, through links that `has` accepts; the search is breadth first. */
function pathsFrom(
  start: Cell,
  goals: readonly Cell[],
  family: LatticeFamily,
  has: (link: Cell) => boolean,
  budget: Budget,
): Map<string, Cell[]> {
  const wanted = new Set(goals.map(cellKey));
  const found = new Map<string, Cell[]>();
  if (wanted.size === 0) return found;
  const before = new Map<string, { vertex: Cell; link: Cell | undefined; from: string | undefined }>([
    [cellKey(start), { vertex: start, link: undefined, from: undefined }],
  ]);
  const { star } = incidence(family);
  for (const [key, { vertex }] of before) {
    if (wanted.has(key)) {
      const path: Cell[] = [];
      for (let at = before.get(key); at?.link; at = before.get(at.from ?? '')) path.unshift(at.link);
      found.set(key, path);
      if (found.size === wanted.size) break;
    }
    if (before.size > mostVisited) break;
    for (const link of around(star, vertex)) {
      budget.spend(4);
      if (!has(link)) continue;
      for (const next of boundary(family, link))
        if (!before.has(cellKey(next))) before.set(cellKey(next), { vertex: next, link, from: key });
    }
  }
  return found;
}

/**
 * A set of fewest links whose ends are, mod 2, the given vertices (an even number of them): shortest paths between pairs, over the best
 * pairing of up to ten vertices, a greedy one beyond. Deterministic; it moves along with the vertices. Undefined if some pair is not joined.
 */
export function fewestLinks(
  vertices: readonly Cell[],
  family: LatticeFamily,
  has: (link: Cell) => boolean,
  budget: Budget,
): Cell[] | undefined {
  const sorted = [...vertices].sort((a, b) => compare(a.offset, b.offset) || a.index - b.index);
  const paths = sorted.map((v, k) => pathsFrom(v, sorted.slice(k + 1), family, has, budget));
  const path = (i: number, j: number): Cell[] | undefined => {
    const goal = sorted[j];
    return goal && paths[i]?.get(cellKey(goal));
  };
  const pairs =
    sorted.length <= mostPaired
      ? bestPairing(
          sorted.map((_, k) => k),
          path,
          budget,
        )
      : greedyPairing(sorted.length, path);
  if (!pairs) return undefined;
  const odd = new Map<string, Cell>();
  for (const [i, j] of pairs)
    for (const link of path(i, j) ?? []) if (!odd.delete(cellKey(link))) odd.set(cellKey(link), link);
  return [...odd.values()];
}

type Pairs = readonly (readonly [number, number])[];
type Path = (i: number, j: number) => Cell[] | undefined;

function bestPairing(open: readonly number[], path: Path, budget: Budget): Pairs | undefined {
  const [first, ...rest] = open;
  if (first === undefined) return [];
  let best: { pairs: Pairs; length: number } | undefined;
  for (const partner of rest) {
    budget.spend();
    const own = path(first, partner);
    const others =
      own &&
      bestPairing(
        rest.filter((k) => k !== partner),
        path,
        budget,
      );
    if (!others) continue;
    const length = own.length + others.reduce((sum, [i, j]) => sum + (path(i, j)?.length ?? 0), 0);
    if (!best || length < best.length) best = { pairs: [[first, partner], ...others], length };
  }
  return best?.pairs;
}

function greedyPairing(count: number, path: Path): Pairs | undefined {
  const all = Array.from({ length: count }, (_, i) =>
    Array.from({ length: count - i - 1 }, (_, k) => [i, i + k + 1] as const),
  ).flat();
  const byLength = all
    .flatMap(([i, j]) => {
      const own = path(i, j);
      return own ? [{ i, j, length: own.length }] : [];
    })
    .sort((a, b) => a.length - b.length);
  const used = new Set<number>();
  const pairs: [number, number][] = [];
  for (const { i, j } of byLength) {
    if (used.has(i) || used.has(j)) continue;
    used.add(i).add(j);
    pairs.push([i, j]);
  }
  return used.size === count ? pairs : undefined;
}

const compare = (a: Offset, b: Offset): number => {
  const d = a.findIndex((c, k) => c !== b[k]);
  return d < 0 ? 0 : (a[d] ?? 0) - (b[d] ?? 0);
};
