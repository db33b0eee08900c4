import type { Budget } from '../../limits.ts';
import type { Offset } from '../../lattice/cells.ts';
import { gcdOf, lcmOf } from './collect.ts';
import { classKey } from './string.ts';
import type { Factor, LocalString, Steps } from './types.ts';

/**
 * Shifts s for which a and b translated by s anticommute, on the infinite lattice: the monomials of the symplectic product of their Laurent vectors
 * over F2 (J. Haah, Commun. Math. Phys. 324, 351 (2013), section 2). Finite, because both supports are.
 */
export function oddShifts(a: LocalString, b: LocalString, budget?: Budget): Offset[] {
  const byClass = new Map<string, Factor[]>();
  for (const g of b.factors) {
    const group = byClass.get(classKey(g));
    if (group) group.push(g);
    else byClass.set(classKey(g), [g]);
  }
  const odd = new Map<string, Offset>();
  for (const f of a.factors) {
    const group = byClass.get(classKey(f)) ?? [];
    budget?.spend(1 + group.length);
    for (const g of group) {
      if (f.pauli === g.pauli) continue;
      const shift = f.cell.offset.map((c, d) => c - (g.cell.offset[d] ?? 0));
      const key = shift.join(',');
      if (!odd.delete(key)) odd.set(key, shift);
    }
  }
  return [...odd.values()];
}

/** Steps of the group of relative translations of two families: the gcd in each direction, 0 where both are pinned. */
export const relativeSteps = (m: Steps, n: Steps): number[] => m.map((s, d) => gcdOf(s, n[d] ?? 0));

/** Periods that a size must be divisible by for both families to close on it; 1 where it is free. */
export const commonMultiples = (m: Steps, n: Steps): number[] => m.map((s, d) => Math.max(lcmOf(s, n[d] ?? 0), 1));

export const inGroup = (shift: Offset, steps: Steps): boolean =>
  shift.every((s, d) => (steps[d] ? s % steps[d] === 0 : s === 0));
