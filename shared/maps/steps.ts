import type { LocalString, Steps } from '../algebra/pauli/types.ts';
import type { Offset } from '../lattice/cells.ts';

/**
 * Arithmetic of translations. `Steps` with entry m > 0 stands for the translations by multiples of m along that direction,
 * 0 for none; a residue is a translation modulo coarser steps.
 */
export const mod = (n: number, m: number): number => ((n % m) + m) % m;

export const gcd = (a: number, b: number): number => (b === 0 ? Math.abs(a) : gcd(b, a % b));

export const lcm = (a: number, b: number): number => (a === 0 || b === 0 ? 0 : (a / gcd(a, b)) * b);

export const minus = (a: Offset, b: Offset): number[] => a.map((c, d) => c - (b[d] ?? 0));
export const plus = (a: Offset, b: Offset): number[] => a.map((c, d) => c + (b[d] ?? 0));

/** Whether the translation by `offset` is one of those that `steps` stands for. */
export const inSteps = (offset: Offset, steps: Steps): boolean =>
  offset.every((c, d) => ((steps[d] ?? 0) === 0 ? c === 0 : c % (steps[d] ?? 1) === 0));

/** Whether every translation of `fine` by its own steps is also one of `coarse`: coarse ⊇ fine. */
export const contains = (coarse: Steps, fine: Steps): boolean =>
  fine.every((m, d) => m === 0 || ((coarse[d] ?? 0) > 0 && m % (coarse[d] ?? 1) === 0));

/**
 * The finest common coarsening of `steps` with those of others, direction by direction: least common multiples where both move,
 * `steps` itself where either is pinned.
 */
export const refined = (steps: Steps, others: Iterable<Steps>): number[] => {
  const out = [...steps];
  for (const other of others)
    other.forEach((m, d) => {
      if (m > 0 && (out[d] ?? 0) > 0) out[d] = lcm(out[d] ?? 1, m);
    });
  return out;
};

/** All translations of `fine` modulo those of `coarse` (coarse entries are multiples of fine ones): [0, 0], [1, 0], … */
export function residues(fine: Steps, coarse: Steps): number[][] {
  let out: number[][] = [[]];
  fine.forEach((m, d) => {
    const count = m === 0 ? 1 : (coarse[d] ?? m) / m;
    out = out.flatMap((start) => Array.from({ length: count }, (_, k) => [...start, k * m]));
  });
  return out;
}

/** Smallest and largest offset, direction by direction, over the cells of a string; undefined for the identity. */
export function box(string: LocalString): { low: number[]; high: number[] } | undefined {
  const [first] = string.factors;
  if (!first) return undefined;
  const low = [...first.cell.offset];
  const high = [...first.cell.offset];
  for (const f of string.factors)
    f.cell.offset.forEach((c, d) => {
      low[d] = Math.min(low[d] ?? c, c);
      high[d] = Math.max(high[d] ?? c, c);
    });
  return { low, high };
}

/** All integer points of a box, first direction slowest. */
export function points(low: Offset, high: Offset): number[][] {
  let out: number[][] = [[]];
  low.forEach((from, d) => {
    const to = high[d] ?? from;
    out = out.flatMap((start) => Array.from({ length: Math.max(0, to - from + 1) }, (_, k) => [...start, from + k]));
  });
  return out;
}
