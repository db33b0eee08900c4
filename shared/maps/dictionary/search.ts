import type { LocalString, Steps } from '../../algebra/pauli/types.ts';
import type { Budget } from '../../limits.ts';
import { inSteps, points } from '../steps.ts';
import { carrying, Numbering, toggled, usable, type Coordinate, type Generator, type Use } from './coordinates.ts';

/** States of the search before it gives way to elimination. */
const searchLimit = 6_000;
/** Unknowns of one elimination. */
const windowLimit = 2_500;

interface State {
  readonly left: readonly number[];
  readonly uses: number;
  readonly from: State | undefined;
  readonly by: Use | undefined;
}

/** What is asked: a set of coordinates as a product of translated generators, in one block of tracks that generators join. */
interface Task {
  readonly numbering: Numbering;
  readonly parts: readonly (readonly Coordinate[])[];
  readonly generators: readonly Generator[];
  readonly allowed: readonly number[];
}

/** Tracks that occur in one generator belong together; the problem splits into the classes of this relation. */
function blocks(task: Task): (track: number) => number {
  const up = new Map<number, number>();
  const root = (t: number): number => {
    let at = t;
    for (let next = up.get(at); next !== undefined && next !== at; next = up.get(at)) at = next;
    return at;
  };
  for (const k of task.allowed) {
    const [first, ...rest] = task.parts[k] ?? [];
    if (first) for (const p of rest) up.set(root(p.track), root(first.track));
  }
  return root;
}

/** All translates of allowed generators that hold a coordinate. */
function covering(task: Task, id: number): { use: Use; numbers: number[] }[] {
  const goal = task.numbering.coordinates[id];
  if (!goal) return [];
  const seen = new Set<string>();
  return task.allowed.flatMap((k) =>
    (task.parts[k] ?? []).flatMap((p) => {
      if (p.track !== goal.track) return [];
      const by = carrying(p.offset, goal.offset, task.generators[k]?.steps ?? [], task.numbering.quotient);
      const key = `${String(k)}@${by?.join(',') ?? ''}`;
      if (!by || seen.has(key)) return [];
      seen.add(key);
      const numbers = task.numbering.numbers(task.parts[k] ?? [], by);
      return numbers.includes(id) ? [{ use: { generator: k, by }, numbers }] : [];
    }),
  );
}

/**
 * A product of fewest generators, by A*: some generator must hold the first coordinate that is left, so branching on those alone is
 * complete; each generator clears at most `widest` coordinates, which bounds what is still needed from below.
 * Undefined when the states run out (none, or none within `searchLimit`).
 */
function fewest(task: Task, target: readonly number[], budget: Budget): Use[] | undefined {
  const widest = Math.max(1, ...task.allowed.map((k) => task.parts[k]?.length ?? 0));
  const queues: State[][] = [];
  const push = (s: State) => {
    const f = s.uses + Math.ceil(s.left.length / widest);
    (queues[f] ??= []).push(s);
  };
  const best = new Map<string, number>();
  push({ left: target, uses: 0, from: undefined, by: undefined });
  let states = 0;
  for (let f = 0; f < queues.length; f++) {
    const queue = queues[f] ?? [];
    for (let s = queue.pop(); s; s = queue.pop()) {
      budget.spend(8 + s.left.length);
      if (s.left.length === 0) {
        const uses: Use[] = [];
        for (let at: State | undefined = s; at?.by; at = at.from) uses.push(at.by);
        return uses;
      }
      if (++states > searchLimit) return undefined;
      const options = covering(task, first(task.numbering, s.left));
      for (const { use, numbers } of options.reverse()) {
        const left = toggled(s.left, numbers);
        const key = left.join(',');
        if ((best.get(key) ?? Infinity) <= s.uses + 1) continue;
        best.set(key, s.uses + 1);
        push({ left, uses: s.uses + 1, from: s, by: use });
      }
    }
  }
  return undefined;
}

/** The coordinate of least offset, so that a search works its way from one end. */
function first(numbering: Numbering, ids: readonly number[]): number {
  const before = (a: number, b: number): boolean => {
    const [p, q] = [numbering.coordinates[a], numbering.coordinates[b]];
    if (!p || !q) return false;
    const d = p.offset.findIndex((c, k) => c !== q.offset[k]);
    return d < 0 ? p.track < q.track : (p.offset[d] ?? 0) < (q.offset[d] ?? 0);
  };
  return ids.reduce((least, id) => (before(id, least) ? id : least), ids[0] ?? 0);
}

/** Ranges of translations for a window `margin` around the target. */
function translations(
  task: Task,
  k: number,
  low: readonly number[],
  high: readonly number[],
  margin: number,
): number[][] {
  const parts = task.parts[k] ?? [];
  const generator = task.generators[k];
  const reach = low.map((_, d) => {
    const at = parts.map((p) => p.offset[d] ?? 0);
    return { low: Math.min(...at), high: Math.max(...at) };
  });
  const { quotient } = task.numbering;
  const from = low.map((c, d) => ((quotient[d] ?? 0) > 0 ? 0 : c - margin - (reach[d]?.high ?? 0)));
  const to = high.map((c, d) => ((quotient[d] ?? 0) > 0 ? (quotient[d] ?? 1) - 1 : c + margin - (reach[d]?.low ?? 0)));
  return points(from, to).filter((by) => inSteps(by, generator?.steps ?? []));
}

/**
 * Any product, by elimination over F2 among the translates in growing windows around the target, then made lighter by the
 * relations found on the way. Undefined when no window of allowed size holds one.
 */
function byElimination(task: Task, target: readonly number[], budget: Budget): Use[] | undefined {
  const dimension = task.numbering.quotient.length;
  const at = target.map((id) => task.numbering.coordinates[id]?.offset ?? []);
  const low = Array.from({ length: dimension }, (_, d) => Math.min(...at.map((o) => o[d] ?? 0)));
  const high = Array.from({ length: dimension }, (_, d) => Math.max(...at.map((o) => o[d] ?? 0)));
  const widest = task.numbering.quotient.every((m) => m > 0) ? 0 : 6;
  for (let margin = 0; margin <= widest; margin++) {
    const uses = task.allowed.flatMap((k) =>
      translations(task, k, low, high, margin).map((by): Use => ({ generator: k, by })),
    );
    if (uses.length > windowLimit) return undefined;
    const rows = uses.map((u) => task.numbering.numbers(task.parts[u.generator] ?? [], u.by));
    const found = solve(rows, target, budget);
    if (found) return [...found].map((k) => uses[k] ?? { generator: 0, by: [] });
  }
  return undefined;
}

/** Indices of rows whose symmetric difference is the target, lightened by kernel vectors; undefined if there are none. */
export function solve(
  rows: readonly (readonly number[])[],
  target: readonly number[],
  budget: Budget,
): Set<number> | undefined {
  const pivots = new Map<number, { row: readonly number[]; of: readonly number[] }>();
  const kernel: (readonly number[])[] = [];
  const reduce = (row: readonly number[], of: readonly number[]) => {
    let [left, used] = [row, of];
    for (;;) {
      const top = left.at(-1);
      const pivot = top === undefined ? undefined : pivots.get(top);
      if (!pivot) return { left, used };
      budget.spend(left.length + pivot.row.length);
      left = toggled(left, pivot.row);
      used = toggled(used, pivot.of);
    }
  };
  rows.forEach((row, k) => {
    const { left, used } = reduce(row, [k]);
    const top = left.at(-1);
    if (top === undefined) kernel.push(used);
    else pivots.set(top, { row: left, of: used });
  });
  const { left, used } = reduce(target, []);
  if (left.length > 0) return undefined;
  let best = used;
  for (let changed = true; changed;) {
    changed = false;
    for (const relation of kernel) {
      budget.spend(relation.length);
      const other = toggled(best, relation);
      if (other.length < best.length) [best, changed] = [other, true];
    }
  }
  return new Set(best);
}

/**
 * Writes a Pauli string, up to its phase, as a product of translated generators: fewest where the search ends, else some product
 * made light by known relations. `shift` is the translation that target and answer share; `quotient` (all 0 for a local string) the
 * translations along which the target is multiplied up. Undefined: none was found.
 */
export function product(
  target: LocalString,
  generators: readonly Generator[],
  shift: Steps,
  quotient: Steps,
  budget: Budget,
): readonly Use[] | undefined {
  const numbering = new Numbering(quotient);
  const task: Task = {
    numbering,
    generators,
    parts: generators.map((g) => numbering.parts(g.string)),
    allowed: usable(generators, shift, quotient),
  };
  const zero = quotient.map(() => 0);
  const all = numbering.numbers(numbering.parts(target), zero);
  const block = blocks(task);
  const split = new Map<number, number[]>();
  for (const id of all) {
    const b = block(numbering.coordinates[id]?.track ?? 0);
    split.set(b, [...(split.get(b) ?? []), id]);
  }
  const uses: Use[] = [];
  for (const [b, ids] of split) {
    const own: Task = {
      ...task,
      allowed: task.allowed.filter((k) => task.parts[k]?.some((p) => block(p.track) === b)),
    };
    const found = fewest(own, ids, budget) ?? byElimination(own, ids, budget);
    if (!found) return undefined;
    uses.push(...found);
  }
  return uses;
}
