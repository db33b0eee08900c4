/** Sets of links that run around a lattice: loops, and the cuts that they cross. */
import { cellKey, isLatticeProblem, origin, shifted, unit } from './cells.ts';
import type { Cell, LatticeFamily, LatticeProblem, Offset } from './cells.ts';
import { incidence } from './incidence.ts';
import { oddCells } from './family.ts';
import { hermite, inLattice } from './vectors.ts';

/** One cell and the translates of it that belong to a set: along each direction it stays put (0) or goes everywhere (1). */
export interface SteppedCell {
  readonly cell: Cell;
  readonly steps: readonly number[];
}

/** Vertices that the search for a loop may visit, from all starts together. */
const searchLimit = 200_000;

const noCycle = (family: LatticeFamily, direction: number): LatticeProblem => ({
  problem: 'direction',
  message: `no closed path of links of ${family.name} leads once around direction ${String(direction)}`,
  which: `direction ${String(direction)}`,
});

const tooFar = (direction: number): LatticeProblem => ({
  problem: 'limit',
  message: `no closed path around direction ${String(direction)} was found among ${String(searchLimit)} vertices; choose primitive vectors that links join more directly`,
  which: `direction ${String(direction)}`,
});

/** Checks a direction (from 1); undefined if it is one of the lattice's. */
export function directionProblem(family: LatticeFamily, direction: number): LatticeProblem | undefined {
  if (Number.isInteger(direction) && direction >= 1 && direction <= family.dimension) return undefined;
  const range = family.dimension === 1 ? '1' : `1 to ${String(family.dimension)}`;
  return {
    problem: 'direction',
    message: `${family.name} has direction${family.dimension === 1 ? '' : 's'} ${range}, got ${String(direction)}`,
    which: `direction ${String(direction)}`,
  };
}

/** Vertex classes that links connect (anywhere) with a class, each with the offset of a cell reached, and the displacements of all closed walks. */
function component(family: LatticeFamily, start: number): { reached: Map<number, Offset>; windings: number[][] } {
  const { neighbours } = incidence(family);
  const reached = new Map<number, Offset>([[start, origin(family.dimension)]]);
  const windings: number[][] = [];
  const queue = [start];
  for (let next = queue.pop(); next !== undefined; next = queue.pop()) {
    const here = reached.get(next)!;
    for (const n of neighbours[next]!) {
      const there = n.offset.map((c, d) => c + here[d]!);
      const known = reached.get(n.index);
      if (known) windings.push(there.map((c, d) => c - known[d]!));
      else {
        reached.set(n.index, there);
        queue.push(n.index);
      }
    }
  }
  return { reached, windings: hermite(windings.length > 0 ? windings : [[...origin(family.dimension)]]) };
}

interface Visit {
  readonly vertex: Cell;
  readonly length: number;
  readonly link: Cell | undefined;
  readonly from: Visit | undefined;
}

const linksTo = (last: Visit): Cell[] => {
  const path: Cell[] = [];
  for (let back: Visit | undefined = last; back?.link; back = back.from) path.push(back.link);
  return path.reverse();
};

/**
 * Links of a shortest path from vertex class `start` in unit cell 0 to its translate by `by`, breadth first in the order
 * of the star; undefined if none is shorter than `below`. Takes its visits from `left`, and gives up when none are left.
 */
function shortestPath(
  family: LatticeFamily,
  start: number,
  by: Offset,
  below: number,
  left: { visits: number },
): Cell[] | undefined {
  const { star, neighbours } = incidence(family);
  const from: Cell = { kind: 'vertices', index: start, offset: origin(family.dimension) };
  const goal = cellKey(shifted(from, by));
  const queue: Visit[] = [{ vertex: from, length: 0, link: undefined, from: undefined }];
  const seen = new Set([cellKey(from)]);
  for (let at = 0; at < queue.length; at++) {
    const visit = queue[at]!;
    if (visit.length + 1 >= below || left.visits-- <= 0) return undefined;
    for (const [k, far] of neighbours[visit.vertex.index]!.entries()) {
      const vertex = shifted(far, visit.vertex.offset);
      const name = cellKey(vertex);
      if (seen.has(name)) continue;
      seen.add(name);
      const link = shifted(star[visit.vertex.index]![k]!, visit.vertex.offset);
      const next: Visit = { vertex, length: visit.length + 1, link, from: visit };
      if (name === goal) return linksTo(next);
      queue.push(next);
    }
  }
  return undefined;
}

interface Loop {
  readonly start: number;
  readonly path: readonly Cell[];
}

const loops = new WeakMap<LatticeFamily, Map<number, Loop | LatticeProblem>>();

/** The vertex class on a shortest closed path around a direction (from 1), and the links of that path from unit cell 0 on. Worked out once. */
function shortestLoop(family: LatticeFamily, direction: number): Loop | LatticeProblem {
  const known = loops.get(family) ?? new Map<number, Loop | LatticeProblem>();
  loops.set(family, known);
  const before = known.get(direction);
  if (before) return before;
  const by = unit(family.dimension, direction - 1);
  const left = { visits: searchLimit };
  const starts = family.vertices.flatMap((_, v) => (inLattice(component(family, v).windings, by) ? [v] : []));
  let best: Loop | undefined;
  for (const start of starts) {
    const path = shortestPath(family, start, by, best?.path.length ?? Infinity, left);
    if (path) best = { start, path };
  }
  const found = best ?? (starts.length > 0 ? tooFar(direction) : noCycle(family, direction));
  known.set(direction, found);
  return found;
}

/**
 * One cycle around `direction` (from 1) through unit cell 0: the links of a shortest path from a vertex to its
 * translate by one unit cell, each with all translates along the direction. Of equally short ones the first in the
 * order of vertices and links. Derived here; closed because the path ends where its translate begins.
 */
export function loopLinks(family: LatticeFamily, direction: number): readonly SteppedCell[] | LatticeProblem {
  const wrong = directionProblem(family, direction);
  if (wrong) return wrong;
  const d = direction - 1;
  const found = shortestLoop(family, direction);
  if (isLatticeProblem(found)) return found;
  const steps = unit(family.dimension, d);
  // A path may pass a link and its translate: over F2 they cancel, so the pair is left out.
  const flat = found.path.map((cell) =>
    shifted(
      cell,
      steps.map((s, k) => (s === 1 ? 0 - cell.offset[k]! : 0)),
    ),
  );
  const kept = new Set(oddCells(flat));
  return found.path.flatMap((cell, k) => (kept.has(flat[k]!) ? [{ cell, steps }] : []));
}

/**
 * Thresholds c (one for each vertex class) that minimise Σ_links |height_b − c_b − height_a + c_a|, the number of links
 * that cross between the vertices below and those at or above their threshold. The sum is L-natural convex (Murota,
 * Discrete Convex Analysis, SIAM 2003, sections 7 and 10): a threshold is optimal if raising no subset lowers the sum,
 * and the best subset is a minimum cut.
 */
function bestThresholds(
  vertices: readonly number[],
  links: readonly { readonly a: number; readonly b: number; readonly rise: number }[],
): Map<number, number> {
  const c = new Map(vertices.map((v) => [v, 1]));
  for (;;) {
    const pull = new Map(vertices.map((v) => [v, 0]));
    const tight: (readonly [number, number])[] = [];
    for (const { a, b, rise } of links) {
      if (a === b) continue;
      const height = rise - c.get(b)! + c.get(a)!;
      if (height === 0) tight.push([a, b]);
      else {
        pull.set(a, pull.get(a)! + Math.sign(height));
        pull.set(b, pull.get(b)! - Math.sign(height));
      }
    }
    const raised = cheapestSubset(vertices, pull, tight);
    if (raised.size === 0) return c;
    for (const v of raised) c.set(v, c.get(v)! + 1);
  }
}

/** The subset S that minimises Σ_{v∈S} pull(v) + number of tight pairs it splits; empty unless negative. By augmenting paths. */
function cheapestSubset(
  vertices: readonly number[],
  pull: ReadonlyMap<number, number>,
  tight: readonly (readonly [number, number])[],
): Set<number> {
  const source = -1;
  const sink = -2;
  const capacity = new Map<number, Map<number, number>>(
    [source, sink, ...vertices].map((v) => [v, new Map<number, number>()]),
  );
  const add = (from: number, to: number, amount: number): void => {
    capacity.get(from)!.set(to, (capacity.get(from)!.get(to) ?? 0) + amount);
    if (!capacity.get(to)!.has(from)) capacity.get(to)!.set(from, 0);
  };
  for (const v of vertices) {
    const p = pull.get(v)!;
    if (p < 0) add(source, v, -p);
    if (p > 0) add(v, sink, p);
  }
  for (const [a, b] of tight) {
    add(a, b, 1);
    add(b, a, 1);
  }
  for (;;) {
    const from = new Map<number, number>([[source, source]]);
    const queue = [source];
    for (let at = 0; at < queue.length && !from.has(sink); at++)
      for (const [to, left] of capacity.get(queue[at]!)!)
        if (left > 0 && !from.has(to)) {
          from.set(to, queue[at]!);
          queue.push(to);
        }
    if (!from.has(sink)) return new Set(vertices.filter((v) => from.has(v)));
    for (let to = sink; to !== source; to = from.get(to)!) {
      add(from.get(to)!, to, -1);
      add(to, from.get(to)!, 1);
    }
  }
}

/**
 * The links between two halves of the infinite lattice that part along `direction` (from 1) and are invariant under
 * every other translation: fewest for each unit cell. A coboundary, so every rim meets it an even number of times;
 * it meets `loop(direction)` an odd number of times. Only the connected part that holds that loop is cut.
 */
export function cutLinks(family: LatticeFamily, direction: number): readonly SteppedCell[] | LatticeProblem {
  const wrong = directionProblem(family, direction);
  if (wrong) return wrong;
  const d = direction - 1;
  const loop = shortestLoop(family, direction);
  if (isLatticeProblem(loop)) return loop;
  const vertices = [...component(family, loop.start).reached.keys()].sort((p, q) => p - q);
  const links = family.links.map(({ a, b }) => ({ a: a.index, b: b.index, low: a.offset[d]!, high: b.offset[d]! }));
  const inside = new Set(vertices);
  const part = links.filter((l) => inside.has(l.a));
  const c = bestThresholds(
    vertices,
    part.map((l) => ({ a: l.a, b: l.b, rise: l.high - l.low })),
  );
  const steps = Array.from({ length: family.dimension }, (_, k) => (k === d ? 0 : 1));
  const cut = links.flatMap((l, index) => {
    if (!inside.has(l.a)) return [];
    const from = c.get(l.a)! - l.low;
    const to = c.get(l.b)! - l.high;
    return Array.from({ length: Math.abs(to - from) }, (_, k) => ({ index, height: Math.min(from, to) + k }));
  });
  const lowest = Math.min(...cut.map((l) => l.height));
  return cut.map(({ index, height }) => ({
    cell: { kind: 'links', index, offset: steps.map((s) => (s === 1 ? 0 : height - lowest)) },
    steps,
  }));
}

/** Links that a cycle of the dual lattice around `direction` crosses; two dimensions only. */
export function coloopLinks(family: LatticeFamily, direction: number): readonly SteppedCell[] | LatticeProblem {
  if (family.dimension !== 2)
    return {
      problem: 'dimension',
      message: `coloop is for two dimensions, ${family.name} has ${String(family.dimension)}${family.dimension === 3 ? '; membrane(d) is its counterpart' : ''}`,
      which: 'coloop',
    };
  return directionProblem(family, direction) ?? cutLinks(family, 3 - direction);
}

/** Links that pierce one dual plane normal to `direction`; three dimensions only. */
export function membraneLinks(family: LatticeFamily, direction: number): readonly SteppedCell[] | LatticeProblem {
  if (family.dimension !== 3)
    return {
      problem: 'dimension',
      message: `membrane is for three dimensions, ${family.name} has ${String(family.dimension)}${family.dimension === 2 ? '; coloop(d) is its counterpart' : ''}`,
      which: 'membrane',
    };
  return cutLinks(family, direction);
}
