import type { Budget } from '../../limits.ts';
import { Coefficient } from '../numbers/coefficient.ts';
import { gcd } from '../numbers/rational.ts';
import { phaseCoefficient } from './collect.ts';
import { siteKey } from './string.ts';
import type { LocalString, Site } from './types.ts';

/**
 * The amplitude with which Σ terms, all of which flip the same spins, takes a state of the given bits to the flipped one; bit k of the index is spin k. Exact, for up to about 16
 * spins, by the fast Walsh–Hadamard transform (2^spins table entries for each kind of coefficient). Throws BudgetSpent.
 */
export function amplitudesOf(
  terms: readonly { readonly coefficient: Coefficient; readonly string: LocalString }[],
  spins: readonly Site[],
  budget: Budget,
): (bits: number) => Coefficient {
  const numberOf = new Map(spins.map((s, k) => [siteKey(s), k]));
  const size = 2 ** spins.length;
  // Coefficients up to rational factors: one table of whole numbers for each kind.
  const kinds: { unit: Coefficient; den: bigint; entries: { mask: number; num: bigint; den: bigint }[] }[] = [];
  for (const { coefficient, string } of terms) {
    let mask = 0;
    let phase: number = string.phase;
    for (const f of string.factors) {
      if (f.pauli !== 'x') mask |= 1 << (numberOf.get(siteKey(f)) ?? 0);
      if (f.pauli === 'y') phase++;
    }
    const value = coefficient.mul(phaseCoefficient(phase));
    let done = false;
    for (const kind of kinds) {
      const ratio = value.div(kind.unit)?.asRational();
      if (!ratio) continue;
      kind.entries.push({ mask, ...ratio });
      kind.den = (kind.den * ratio.den) / gcd(kind.den, ratio.den);
      done = true;
      break;
    }
    if (!done && !value.isZero()) kinds.push({ unit: value, den: 1n, entries: [{ mask, num: 1n, den: 1n }] });
  }
  const tables = kinds.map(({ unit, den, entries }) => {
    const table = Array<bigint>(size).fill(0n);
    for (const { mask, num, den: d } of entries) table[mask] = (table[mask] ?? 0n) + num * (den / d);
    budget.spend(size * (spins.length + 1));
    for (let half = 1; half < size; half *= 2)
      for (let k = 0; k < size; k++) {
        if (k & half) continue;
        const [a, b] = [table[k] ?? 0n, table[k + half] ?? 0n];
        table[k] = a + b;
        table[k + half] = a - b;
      }
    return { unit, den, table };
  });
  return (bits) =>
    tables.reduce((sum, { unit, den, table }) => {
      const n = table[bits] ?? 0n;
      return n === 0n ? sum : sum.add(unit.mul(Coefficient.rational(n, den)));
    }, Coefficient.zero);
}
