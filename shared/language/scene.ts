import type { Expression, Span } from '../../grammar/syntax.ts';
import { Coefficient } from '../algebra/numbers/coefficient.ts';
import type { Extended, Operator, Steps } from '../algebra/pauli/types.ts';
import type { Cell, Lattice, LatticeFamily } from '../lattice/cells.ts';
import type { Budget } from '../limits.ts';
import type { Fault } from './problem.ts';
import type { Values } from './values.ts';

/**
 * What an expression is evaluated in. A sum or product over the whole lattice opens a FRAME: its body is evaluated once
 * for a representative cell, and everything in it moves along when the representative does. `frame[d]` says whether
 * direction d moves, `steps[d]` by what multiples of a unit cell (0 where it does not).
 */
export interface Scene {
  readonly lattice: Lattice;
  readonly family: LatticeFamily;
  /** Whether some direction is open, so that missing cells matter. */
  readonly open: boolean;
  readonly dimension: number;
  readonly values: Values;
  readonly bound: ReadonlyMap<string, Bound>;
  readonly frame: readonly boolean[] | undefined;
  readonly steps: Steps;
  /** Inside the body of a sum or product over the whole lattice, moving or written out cell by cell. */
  readonly within: boolean;
  /** Inside a product over a set that an open boundary cuts. */
  readonly cut: boolean;
  /** Couplings stand for their values: values of other couplings, amplitudes, ranges. */
  readonly constants: boolean;
  readonly budget: Budget;
  /** Text of the statement, for sentences. */
  readonly text: string;
  /** Takes a caution. */
  readonly note: (fault: Fault) => void;
  /** Seams of the twisted models that were met, collected. */
  readonly seams: { readonly symmetry: Extended; readonly direction: number }[];
  /** Evaluates an expression; handed along so that sets and conditions can ask for it. */
  readonly amount: (node: Expression, scene: Scene) => Amount;
}

/**
 * A cell in a frame: it stands at `cell` when the representative stands in its residue, and moves along the directions
 * in `moves`. `unknown`: directions whose coordinate is being solved for.
 */
export interface MovingCell {
  readonly what: 'cell';
  readonly cell: Cell;
  readonly moves: readonly boolean[];
  /** Bound by a product over a cut set: its factor is left out where the cell is missing. */
  readonly optional: boolean;
  readonly unknown?: readonly boolean[];
}

/** A pair of vertices from `pairs(k)`. */
export interface MovingPair {
  readonly what: 'pair';
  readonly a: MovingCell;
  readonly b: MovingCell;
}
export type Bound = MovingCell | MovingPair;

/**
 * A number: `value`, plus, where it depends on where the frame stands, integer multiples of the frame's translation
 * (entries 0 … D−1) and of unknown coordinates (entries D … 2D−1), in unit cells.
 */
export interface NumberAmount {
  readonly what: 'number';
  readonly value: Coefficient;
  readonly along: readonly number[] | undefined;
}
/** In a frame all its families are pinned (steps 0) and move with the frame. */
export interface OperatorAmount {
  readonly what: 'operator';
  readonly operator: Operator;
}
export interface KetsAmount {
  readonly what: 'kets';
  readonly amplitudes: ReadonlyMap<string, Coefficient>;
}
export interface TupleAmount {
  readonly what: 'tuple';
  readonly items: readonly Amount[];
}
export type Amount = NumberAmount | OperatorAmount | KetsAmount | TupleAmount | Bound;

/** Thrown where a value repeats only after `period` unit cells along `direction`: the frame takes longer steps and begins again. */
export class Refine extends Error {
  readonly direction: number;
  readonly period: number;
  constructor(direction: number, period: number) {
    super('longer steps');
    this.direction = direction;
    this.period = period;
  }
}

/** Thrown where a value does not repeat along the lattice at all: the frame is written out on the declared size. */
export class Aperiodic extends Error {
  readonly place: Span | undefined;
  constructor(place: Span | undefined) {
    super('does not repeat');
    this.place = place;
  }
}

/** Thrown where a coordinate that is being solved for is used otherwise than in a linear equation. */
export class Unsolved extends Error {}

export const numberAmount = (value: Coefficient, along?: readonly number[]): NumberAmount => ({
  what: 'number',
  value,
  along: along?.some((k) => k !== 0) ? along : undefined,
});
export const integerAmount = (n: number): NumberAmount => numberAmount(Coefficient.rational(n));
export const operatorAmount = (operator: Operator): OperatorAmount => ({ what: 'operator', operator });

/** The integer a constant stands for, or undefined. */
export function integerOf(c: Coefficient): number | undefined {
  const q = c.asRational();
  if (!q || q.den !== 1n) return undefined;
  const n = Number(q.num);
  return Number.isSafeInteger(n) ? n : undefined;
}

/** Throws where a number still depends on where the frame stands, or on an unknown. */
export function settled(amount: NumberAmount, scene: Scene, place: Span): Coefficient {
  if (!amount.along) return amount.value;
  if (amount.along.slice(scene.dimension).some((k) => k !== 0)) throw new Unsolved();
  throw new Aperiodic(place);
}

/** The number modulo m (0 … m−1), which asks the frame for steps that make it well defined. */
export function modulo(amount: NumberAmount, m: number, scene: Scene): number | undefined {
  const n = integerOf(amount.value);
  if (n === undefined) return undefined;
  amount.along?.forEach((k, d) => {
    if (k === 0) return;
    if (d >= scene.dimension) throw new Unsolved();
    const wanted = m / gcd(Math.abs(k), m);
    const step = scene.steps[d] ?? 1;
    if (step % wanted !== 0) throw new Refine(d, (step / gcd(step, wanted)) * wanted);
  });
  return ((n % m) + m) % m;
}

export const gcd = (a: number, b: number): number => (b === 0 ? a : gcd(b, a % b));

/** `c.x`, `c.y`, `c.z` by direction. */
export function coordinateOf(cell: MovingCell, direction: number, scene: Scene): NumberAmount {
  const along = new Array<number>(2 * scene.dimension).fill(0);
  if (cell.unknown?.[direction]) along[scene.dimension + direction] = 1;
  else if (cell.moves[direction]) along[direction] = 1;
  return numberAmount(Coefficient.rational(cell.cell.offset[direction] ?? 0), along);
}

export const textOf = (node: Span, scene: Scene): string =>
  scene.text.slice(node.start, node.end).replace(/\s+/gu, ' ');
