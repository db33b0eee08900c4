import { limits, newBudget, type Budget } from '../../limits.ts';
import { antipode, type LaurentVector } from '../f2/laurent.ts';
import { kernel } from '../f2/module.ts';
import { canonicalFamily, lcmOf, residues } from './collect.ts';
import { translateString } from './string.ts';
import { newFrame, spinClasses, type Frame, type SpinClass } from './vector.ts';
import type { LocalString, Steps } from './types.ts';
import { Coefficient } from '../numbers/coefficient.ts';
import type { Orbit } from './commutation.ts';

/** The local Pauli strings that commute with all translates of some families, as generators under products and translations by `period`. */
export interface Commutant {
  readonly frame: Frame;
  readonly generators: readonly LocalString[];
}

/** Swaps the X and Z parts: the symplectic form of v and w is Σ_c (flipped v)[c]† · w[c]. */
const flipped = (v: LaurentVector): LaurentVector => [...v.slice(v.length / 2), ...v.slice(0, v.length / 2)];

/** Least common period of families; every direction of every family has to be translated. */
export function commonPeriod(orbits: readonly Orbit[], dimension: number): number[] {
  const period = Array<number>(dimension).fill(1);
  for (const { steps } of orbits)
    steps.forEach((m, d) => {
      if (m === 0) throw new RangeError('a commutant needs families that are translated in every direction');
      period[d] = lcmOf(period[d] ?? 1, m);
    });
  return period;
}

/** The translates of a family, in one enlarged cell, that its translates by the period repeat. */
export function* withinPeriod({ string, steps }: Orbit, period: Steps): Generator<LocalString> {
  for (const k of residues(period.map((p, d) => p / (steps[d] ?? 1))))
    yield translateString(
      string,
      k.map((c, d) => c * (steps[d] ?? 1)),
    );
}

/**
 * All local Pauli strings that commute with every translate of the families, on the infinite lattice: the kernel of the Laurent symplectic map, over the
 * enlarged cell of their common period (J. Haah, Commun. Math. Phys. 324, 351 (2013), section 4). `classes` are the spins that the strings may act on (default: those of the
 * families). Generators have phase 0 and stand at the origin, light ones first. Throws RangeError for pinned families, BudgetSpent.
 */
export function commutant(
  orbits: readonly Orbit[],
  dimension: number,
  classes: readonly SpinClass[] = spinClasses(orbits.map((o) => o.string)),
  budget: Budget = newBudget(limits.operations, 'operations of finding symmetries'),
): Commutant {
  const frame = newFrame(classes, commonPeriod(orbits, dimension));
  const rows = orbits.flatMap((orbit) =>
    [...withinPeriod(orbit, frame.period)].map((s) => flipped(frame.toVector(s)).map(antipode)),
  );
  const generators = kernel(rows, dimension, 2 * frame.count, budget).map((w) => {
    const family = { coefficient: Coefficient.one, string: frame.toString(w), steps: frame.period, needs: [] };
    return canonicalFamily(family, false).string;
  });
  return { frame, generators };
}
