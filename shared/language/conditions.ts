import type { Condition, Expression } from '../../grammar/syntax.ts';
import type { Coefficient } from '../algebra/numbers/coefficient.ts';
import { fail, say, whatIsIt } from './problem.ts';
import { cellSet, type SetPart } from './sets.ts';
import {
  Aperiodic,
  Unsolved,
  integerOf,
  settled,
  textOf,
  type Bound,
  type MovingCell,
  type NumberAmount,
  type Scene,
} from './scene.ts';

/** Difference of two numbers with their dependence on the frame. */
function difference(a: NumberAmount, b: NumberAmount): NumberAmount {
  const length = Math.max(a.along?.length ?? 0, b.along?.length ?? 0);
  const along = Array.from({ length }, (_, k) => (a.along?.[k] ?? 0) - (b.along?.[k] ?? 0));
  return { what: 'number', value: a.value.sub(b.value), along: along.some((k) => k !== 0) ? along : undefined };
}

function sign(value: Coefficient, node: Expression, scene: Scene): number {
  const q = value.asRational();
  if (!q) return fail(say.notConstant(`"${textOf(node, scene)}"`), node);
  return q.num === 0n ? 0 : q.num > 0n ? 1 : -1;
}

/** Whether two cells are one, wherever the frame stands. Throws Aperiodic where that depends on it. */
function sameCell(a: MovingCell, b: MovingCell, node: Expression): boolean {
  if (a.unknown ?? b.unknown) throw new Unsolved();
  if (a.cell.kind !== b.cell.kind || a.cell.index !== b.cell.index) return false;
  const different = a.cell.offset.some((c, d) => a.moves[d] === b.moves[d] && c !== b.cell.offset[d]);
  if (different) return false;
  if (a.moves.some((m, d) => m !== b.moves[d])) throw new Aperiodic(node);
  return true;
}

function inPart(cell: MovingCell, { at, steps }: SetPart, node: Expression): boolean {
  if (at.what !== 'cell') return fail(say.notCells('pairs'), node);
  if (at.cell.kind !== cell.cell.kind || at.cell.index !== cell.cell.index) return false;
  if (steps.every((m) => m === 0)) return sameCell(cell, at, node);
  return steps.every((m, d) => {
    if (m > 0) return true;
    if (cell.unknown?.[d]) throw new Unsolved();
    if (cell.moves[d] !== at.moves[d]) throw new Aperiodic(node);
    return cell.cell.offset[d] === at.cell.offset[d];
  });
}

const compareNumbers = (order: number, operator: string): boolean =>
  operator === '=='
    ? order === 0
    : operator === '!='
      ? order !== 0
      : operator === '<'
        ? order < 0
        : operator === '<='
          ? order <= 0
          : operator === '>'
            ? order > 0
            : order >= 0;

/** Whether a condition holds at the representative and so at all its translates. Throws Refine or Aperiodic where it does not repeat so. */
export function holds(condition: Condition, scene: Scene): boolean {
  scene.budget.spend();
  switch (condition.type) {
    case 'group':
      return holds(condition.body, scene);
    case 'not':
      return !holds(condition.body, scene);
    case 'and':
      return holds(condition.left, scene) && holds(condition.right, scene);
    case 'or':
      return holds(condition.left, scene) || holds(condition.right, scene);
    case 'in': {
      const left = scene.amount(condition.left, scene);
      if (left.what !== 'cell') return fail(say.notACell(textOf(condition.left, scene)), condition.left);
      const { parts } = cellSet(condition.set, scene);
      return parts.some((part) => inPart(left, part, condition.left)) !== condition.negated;
    }
    case 'compare': {
      const left = scene.amount(condition.left, scene);
      const right = scene.amount(condition.right, scene);
      const equality = condition.operator === '==' || condition.operator === '!=';
      if (left.what === 'cell' && right.what === 'cell' && equality)
        return sameCell(left, right, condition.left) === (condition.operator === '==');
      if (left.what !== 'number')
        return fail(say.wrongKind(whatIsIt[left.what] ?? 'an operator', 'a number'), condition.left);
      if (right.what !== 'number')
        return fail(say.wrongKind(whatIsIt[right.what] ?? 'an operator', 'a number'), condition.right);
      const value = settled(difference(left, right), scene, condition.left);
      return compareNumbers(sign(value, condition.left, scene), condition.operator);
    }
  }
}

/** The parts of a condition that must all hold. */
function conjuncts(condition: Condition): Condition[] {
  if (condition.type === 'group') return conjuncts(condition.body);
  if (condition.type === 'and') return [...conjuncts(condition.left), ...conjuncts(condition.right)];
  return [condition];
}

/** The parts of a condition of which one must hold; at most `most`, else the condition itself. */
export function disjuncts(condition: Condition, most: number): Condition[] {
  const all: Condition[] = [];
  const open: Condition[] = [condition];
  for (let one = open.pop(); one; one = open.pop()) {
    if (one.type === 'group') open.push(one.body);
    else if (one.type === 'or') open.push(one.right, one.left);
    else all.push(one);
    if (all.length + open.length > most) return [condition];
  }
  return all;
}

const isVariable = (node: Expression, name: string): boolean =>
  node.type === 'bracket'
    ? isVariable(node.body, name)
    : node.type === 'name' && node.path.words.length === 1 && node.path.words[0]?.text === name;

const cellOf = (bound: Bound): MovingCell => (bound.what === 'cell' ? bound : bound.a);
function moved(bound: Bound, change: (cell: MovingCell) => MovingCell): Bound {
  return bound.what === 'cell' ? change(bound) : { ...bound, a: change(bound.a), b: change(bound.b) };
}

/** A part of a set with some directions fixed by the condition. `free[d]`: still runs along d. */
export interface Solved {
  readonly at: Bound;
  readonly free: readonly boolean[];
}

/** Fixes direction d at offset `by` from the representative's unit cell, moving with the frame or not. */
const fix = (solved: Solved, d: number, by: number, moves: boolean): Solved => ({
  at: moved(solved.at, (c) => ({
    ...c,
    cell: { ...c.cell, offset: c.cell.offset.map((o, k) => (k === d ? o + by : o)) },
    moves: c.moves.map((m, k) => (k === d ? moves : m)),
  })),
  free: solved.free.map((f, k) => f && k !== d),
});

/** Uses `A == B` with one unknown coordinate of the variable; undefined if it has no solution. */
function byEquation(
  left: Expression,
  right: Expression,
  name: string,
  solved: Solved,
  scene: Scene,
): Solved | undefined {
  const unknown = moved(solved.at, (c) => ({ ...c, unknown: solved.free }));
  const inner: Scene = { ...scene, bound: new Map([...scene.bound, [name, unknown]]) };
  const a = scene.amount(left, inner);
  const b = scene.amount(right, inner);
  if (a.what !== 'number' || b.what !== 'number') return solved;
  const equation = difference(a, b);
  const D = scene.dimension;
  const unknowns = (equation.along ?? []).flatMap((k, d) => (d >= D && k !== 0 ? [d - D] : []));
  const [d, other] = unknowns;
  const constant = integerOf(equation.value);
  if (d === undefined || other !== undefined || constant === undefined) return solved;
  const k = equation.along?.[D + d] ?? 1;
  const along = (equation.along ?? []).slice(0, D);
  if (along.every((t) => t === 0)) {
    if (constant % k !== 0) return undefined;
    // the coordinate is offset + unknown, and the equation is linear in the unknown: offset + by with by = −constant/k
    return fix(solved, d, -constant / k, false);
  }
  if (along.some((t, e) => t !== (e === d ? -k : 0)) || constant % k !== 0) throw new Aperiodic(left);
  return fix(solved, d, -constant / k, true);
}

/** Uses `v in SET` or `v == CELL`: the set cut down to what both hold. */
function byMembership(parts: readonly SetPart[], solved: Solved): Solved[] {
  const mine = cellOf(solved.at);
  return parts.flatMap((part): Solved[] => {
    if (part.at.what !== 'cell') return [];
    const theirs = part.at;
    if (theirs.cell.kind !== mine.cell.kind || theirs.cell.index !== mine.cell.index) return [];
    let result: Solved | undefined = solved;
    for (const [d, m] of part.steps.entries()) {
      if (m > 0) continue;
      if (solved.free[d])
        result = fix(result, d, (theirs.cell.offset[d] ?? 0) - (mine.cell.offset[d] ?? 0), theirs.moves[d] ?? false);
      else if (mine.cell.offset[d] !== theirs.cell.offset[d]) return [];
    }
    return [result];
  });
}

/**
 * What of a part of a set can obey the condition: coordinates that the condition fixes (`v.x == 0`, `v.x == u.x + 1`,
 * `v == u + (1, 0)`, `v in star(u)`) are put in. Conditions of other forms are left to `holds`.
 */
export function solve(part: SetPart, name: string, where: Condition | undefined, scene: Scene): Solved[] {
  let all: Solved[] = [{ at: part.at, free: part.steps.map((m) => m > 0) }];
  for (const one of where ? conjuncts(where) : []) {
    all = all.flatMap((solved): Solved[] => {
      if (solved.free.every((f) => !f)) return [solved];
      const inner: Scene = {
        ...scene,
        bound: new Map([...scene.bound, [name, { ...cellOf(solved.at), unknown: solved.free }]]),
      };
      try {
        if (one.type === 'in' && !one.negated && isVariable(one.left, name)) {
          const found = new Map(
            byMembership(cellSet(one.set, inner).parts, solved).map((s) => [
              JSON.stringify([cellOf(s.at).cell, s.free]),
              s,
            ]),
          );
          return [...found.values()];
        }
        if (one.type !== 'compare' || one.operator !== '==') return [solved];
        const [mine, theirs] = isVariable(one.left, name) ? [one.left, one.right] : [one.right, one.left];
        if (isVariable(mine, name)) {
          const cell = inner.amount(theirs, inner);
          if (cell.what !== 'cell') return [solved];
          return byMembership([{ at: cell, steps: cell.moves.map(() => 0) }], solved);
        }
        const found = byEquation(one.left, one.right, name, solved, scene);
        return found ? [found] : [];
      } catch (error) {
        if (error instanceof Unsolved) return [solved];
        throw error;
      }
    });
  }
  return all;
}
