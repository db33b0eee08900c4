import { antipode, fromMonomials, monomials, type LaurentVector } from '../algebra/f2/laurent.ts';
import { rank } from '../algebra/f2/bits.ts';
import { kernel, LaurentModule } from '../algebra/f2/module.ts';
import { commonPeriod, withinPeriod } from '../algebra/pauli/commutant.ts';
import type { Orbit } from '../algebra/pauli/commutation.ts';
import { lcmOf } from '../algebra/pauli/collect.ts';
import { newFrame, type SpinClass } from '../algebra/pauli/vector.ts';
import type { Extended, LocalString } from '../algebra/pauli/types.ts';
import type { Budget } from '../limits.ts';

/** Pauli strings that repeat along some directions for ever, are local along the others, and commute with all translates of some families. */
export interface Folded {
  /** Directions along which they repeat, from 0. */
  readonly along: readonly number[];
  /** The string repeats by these steps: 0 where it stands. Translates by unit cells belong to it. */
  readonly steps: readonly number[];
  readonly string: LocalString;
}

/** The product along `steps` of a string none of whose spins coincide there: one part a factor, so that it reads `prod(v: …) s^x[v]`. */
export const repeated = (string: LocalString, steps: readonly number[]): Extended => ({
  phase: 0,
  parts: string.factors.map((factor) => ({ string: { phase: 0, factors: [factor] }, steps, needs: [] })),
});

/**
 * Generators of the strings that repeat by `repeat` unit cells along the directions `along`: setting x_d = 1 on the cell enlarged by
 * `repeat` turns the product along d into a local vector, and it commutes with a family if and only if the folded symplectic product vanishes. The kernel is a module over the
 * Laurent polynomials of the other directions. With no directions: the local strings. Derived here from J. Haah, Commun. Math. Phys. 324, 351 (2013), section 4.
 * Throws BudgetSpent, RangeError for pinned families.
 */
export function foldedCommutant(
  orbits: readonly Orbit[],
  dimension: number,
  classes: readonly SpinClass[],
  along: readonly number[],
  repeat: number,
  budget: Budget,
): Folded[] {
  const period = commonPeriod(orbits, dimension).map((m, d) => (along.includes(d) ? lcmOf(m, repeat) : m));
  const frame = newFrame(classes, period);
  const fold = (v: LaurentVector): LaurentVector =>
    along.length === 0
      ? v
      : v.map((p) => fromMonomials(monomials(p, dimension).map((e) => e.map((c, d) => (along.includes(d) ? 0 : c)))));
  const flipped = (v: LaurentVector): LaurentVector => [...v.slice(frame.count), ...v.slice(0, frame.count)];
  const rows = orbits.flatMap((orbit) =>
    [...withinPeriod(orbit, period)].map((s) => flipped(fold(frame.toVector(s))).map(antipode)),
  );
  const steps = period.map((m, d) => (along.includes(d) ? m : 0));
  return kernel(rows, dimension, 2 * frame.count, budget).map((w) => ({ along, steps, string: frame.toString(w) }));
}

/**
 * A lower bound on the number of generators of the local strings: the number found less the rank of their relations at x = 1 (the module
 * modulo the augmentation ideal needs that many). Throws BudgetSpent.
 */
export function fewestGenerators(
  local: readonly Folded[],
  classes: readonly SpinClass[],
  period: readonly number[],
  budget: Budget,
): number {
  if (local.length < 2) return local.length;
  const frame = newFrame(classes, period);
  const vectors = local.map((one) => frame.toVector(one.string));
  const relations = new LaurentModule(vectors, period.length, 2 * frame.count, budget).syzygies();
  const atOne = relations.map((relation) => relation.flatMap((p, k) => (p.length % 2 === 1 ? [k] : [])));
  return local.length - rank(atOne, local.length, budget);
}
