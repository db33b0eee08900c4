import type { Binder, Condition } from '../../grammar/syntax.ts';
import { residues } from '../algebra/pauli/collect.ts';
import type { Steps } from '../algebra/pauli/types.ts';
import type { Cell } from '../lattice/cells.ts';
import { isLatticeProblem } from '../lattice/cells.ts';
import { newCluster, sizeText } from '../lattice/cluster.ts';
import { limits } from '../limits.ts';
import { disjuncts, holds, solve, type Solved } from './conditions.ts';
import { fail, say } from './problem.ts';
import { cellSet } from './sets.ts';
import { Aperiodic, Refine, gcd, type Bound, type MovingCell, type Scene } from './scene.ts';

/** The body at one representative. `steps`: translations it stands for, undefined where the binders open no frame. */
export interface Instance<T> {
  readonly steps: Steps | undefined;
  /** Bound cells that must exist, and cells named on the way. */
  readonly needs: readonly Cell[];
  /** First bound cell. */
  readonly anchor: Cell | undefined;
  /** Bound by a set that an open boundary cuts. */
  readonly cut: boolean;
  readonly value: T;
}

/** Cases of a condition (`… or …`) that are solved one by one. */
const mostCases = 16;
/** Cells that one expression may be written out on, cell by cell. */
const mostFrozen = 4_096;

const cellsOf = (bound: Bound): Cell[] => (bound.what === 'cell' ? [bound.cell] : [bound.a.cell, bound.b.cell]);
const withCells = (bound: Bound, change: (cell: MovingCell) => MovingCell): Bound =>
  bound.what === 'cell' ? change(bound) : { ...bound, a: change(bound.a), b: change(bound.b) };

const placed = (bound: Bound, by: readonly number[], moves: readonly boolean[]): Bound =>
  withCells(bound, (c) => ({
    ...c,
    cell: { ...c.cell, offset: c.cell.offset.map((o, d) => o + (by[d] ?? 0)) },
    moves: c.moves.map((m, d) => m || (moves[d] ?? false)),
  }));

/** How a binder is used: a product leaves a factor out where a cut set loses its cell; a sum drops the term. */
export type Use = 'sum' | 'prod';

/**
 * Evaluates `body` at each representative of the binders. A variable that still runs along some direction opens a
 * frame; steps of the frame grow until every condition and coefficient repeats; what never repeats is written out on
 * the declared size, with a caution. A second such variable inside is refused.
 */
export function instances<T>(
  binders: readonly Binder[],
  use: Use,
  scene: Scene,
  body: (scene: Scene) => T,
): Instance<T>[] {
  const [binder, ...rest] = binders;
  if (!binder) return [{ steps: undefined, needs: [], anchor: undefined, cut: false, value: body(scene) }];
  const name = binder.variable.text;
  const set = cellSet(binder.domain, scene);

  const inside = (at: Bound, inner: Scene, steps: Steps | undefined, cases: readonly Condition[]): Instance<T>[] => {
    scene.budget.spend(8);
    const optional = set.cut && use === 'prod';
    const known = optional ? withCells(at, (c) => ({ ...c, optional: true })) : at;
    const next: Scene = {
      ...inner,
      cut: inner.cut || (optional && inner.open),
      bound: new Map([...inner.bound, [name, known]]),
    };
    const [own, ...earlier] = [...cases].reverse();
    if (own && !holds(own, next)) return [];
    if (earlier.some((one) => holds(one, next))) return [];
    const here = [...set.needs, ...(optional ? [] : cellsOf(at))];
    return instances(rest, use, next, body).map((one) => ({
      ...one,
      steps: steps ?? one.steps,
      needs: scene.open ? [...here, ...one.needs] : [],
      anchor: cellsOf(at)[0],
      cut: set.cut || one.cut,
    }));
  };

  const found = set.parts.flatMap((part) => {
    const whole = part.steps.every((m) => m === 0);
    const all = binder.where ? (whole ? [binder.where] : disjuncts(binder.where, mostCases)) : [undefined];
    // the k-th case holds and none before it: so no cell is taken twice
    return all.flatMap((one, k) => {
      const cases = all.slice(0, k + 1).flatMap((c) => (c ? [c] : []));
      return solve(part, name, one, scene).flatMap((solved) => {
        if (solved.free.every((f) => !f)) return inside(solved.at, scene, undefined, cases);
        if (scene.within) return fail(say.infiniteInside(name), binder);
        return moving(solved, scene, binder, (at, inner, steps) => inside(at, inner, steps, cases));
      });
    });
  });
  if (found.length === 0 && set.parts.length > 0 && binder.where)
    scene.note({ ...say.emptySet(), start: binder.start, end: binder.end });
  return found;
}

/** Evaluates in a frame that moves along the free directions. */
function moving<T>(
  solved: Solved,
  scene: Scene,
  binder: Binder,
  inside: (at: Bound, scene: Scene, steps: Steps) => Instance<T>[],
): Instance<T>[] {
  let steps: number[] = solved.free.map((f) => (f ? 1 : 0));
  for (;;) {
    try {
      const inner: Scene = { ...scene, frame: solved.free, steps, within: true };
      const all = [...residues(steps)].flatMap((r) => inside(placed(solved.at, r, solved.free), inner, steps));
      checkPeriod(steps, scene, binder);
      return all;
    } catch (error) {
      if (error instanceof Refine) {
        const { direction, period } = error;
        steps = steps.map((m, d) => (d === direction ? (m / gcd(m, period)) * period : m));
        if ((steps[direction] ?? 0) > limits.period) return fail(say.period(steps[direction] ?? 0), binder);
      } else if (error instanceof Aperiodic) return writtenOut(solved, scene, binder, error, inside);
      else throw error;
    }
  }
}

/** What repeats with longer steps must fit the declared torus. */
function checkPeriod(steps: Steps, scene: Scene, binder: Binder): void {
  if (steps.every((m) => m <= 1)) return;
  const { size, periodic } = scene.lattice;
  const fits = size.periods.every((row, k) => !periodic[k] || row.every((p, d) => !steps[d] || p % steps[d] === 0));
  if (!fits) fail(say.sizeNotDivisible(steps, sizeText(size)), binder);
}

/** Evaluates cell by cell on the declared size. */
function writtenOut<T>(
  solved: Solved,
  scene: Scene,
  binder: Binder,
  cause: Aperiodic,
  inside: (at: Bound, scene: Scene, steps: Steps) => Instance<T>[],
): Instance<T>[] {
  const cluster = newCluster(scene.lattice, scene.lattice.size);
  if (isLatticeProblem(cluster)) return fail(say.badSize(`${cluster.message}.`), binder);
  const cells = solved.at.what === 'cell' ? [solved.at.cell] : [solved.at.a.cell];
  const [first] = cells;
  if (!first) return [];
  const total = cluster.count(first.kind, first.index);
  if (total > mostFrozen) return fail(say.frozenTooLarge(total, mostFrozen), binder);
  const place = cause.place ?? binder;
  scene.note({ ...say.declaredSize(), start: place.start, end: place.end });
  const zero = solved.free.map(() => 0);
  const inner: Scene = { ...scene, frame: undefined, steps: zero, within: true };
  return cluster
    .cells(first.kind)
    .filter((c) => c.index === first.index && c.offset.every((o, d) => solved.free[d] || o === first.offset[d]))
    .flatMap((c) => {
      const by = c.offset.map((o, d) => o - (first.offset[d] ?? 0));
      return inside(placed(solved.at, by, []), inner, zero);
    });
}
