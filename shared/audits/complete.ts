import { BudgetSpent, newBudget } from '../limits.ts';
import type { DiagonalRule } from '../spectra/bases/enumerated.ts';

/** A rule while states are searched: what is set so far, and what the open spins may still add. */
interface Watch {
  readonly rule: DiagonalRule;
  readonly entries: readonly (readonly [spin: number, weight: number])[];
}

/** Whether the rule can still hold, with `bits` 0, 1 or −1 (open). */
function alive({ rule, entries }: Watch, bits: Int8Array): boolean {
  let [sum, least, most, odd] = [0, 0, 0, false];
  for (const [spin, weight] of entries) {
    const b = bits[spin] ?? -1;
    if (b >= 0) sum += b * weight;
    else {
      least += Math.min(0, weight);
      most += Math.max(0, weight);
      odd ||= weight % 2 !== 0;
    }
  }
  switch (rule.relation) {
    case '==':
      return sum + least <= rule.bound && sum + most >= rule.bound;
    case '<=':
      return sum + least <= rule.bound;
    case '>=':
      return sum + most >= rule.bound;
    case 'even':
      return odd || sum % 2 === 0;
    case 'odd':
      return odd || sum % 2 !== 0;
  }
}

/**
 * A state of n bits that obeys the rules and has the given bits; 'none' if there is none, 'unknown' past `steps` steps.
 * Backtracking; what a rule forces is set before anything is guessed.
 */
export function completeState(
  n: number,
  rules: readonly DiagonalRule[],
  fixed: ReadonlyMap<number, 0 | 1>,
  steps = 400_000,
): Int8Array | 'none' | 'unknown' {
  const watches = rules.map((rule): Watch => {
    const weights = new Map<number, number>();
    rule.sites.forEach((site, k) => weights.set(site, (weights.get(site) ?? 0) + (rule.weights[k] ?? 1)));
    return { rule, entries: [...weights].filter(([, w]) => w !== 0) };
  });
  const at: Watch[][] = Array.from({ length: n }, () => []);
  for (const watch of watches) for (const [spin] of watch.entries) at[spin]?.push(watch);
  const bits = new Int8Array(n).fill(-1);
  const trail: number[] = [];
  const budget = newBudget(steps, 'steps of a search for a state');
  /** Sets a bit and all that follows from it; false on a contradiction. */
  const assign = (spin: number, value: 0 | 1): boolean => {
    bits[spin] = value;
    trail.push(spin);
    const queue = [...(at[spin] ?? [])];
    for (let watch = queue.pop(); watch; watch = queue.pop()) {
      budget.spend(watch.entries.length);
      if (!alive(watch, bits)) return false;
      for (const [open] of watch.entries) {
        if (bits[open] !== -1) continue;
        const can = ([0, 1] as const).filter((b) => {
          bits[open] = b;
          const fine = alive(watch, bits);
          bits[open] = -1;
          return fine;
        });
        const [only] = can;
        if (only === undefined) return false;
        if (can.length === 1) {
          bits[open] = only;
          trail.push(open);
          queue.push(...(at[open] ?? []));
        }
      }
    }
    return true;
  };
  const undo = (mark: number): void => {
    while (trail.length > mark) bits[trail.pop() ?? 0] = -1;
  };
  /** Next to guess: an open spin beside one that is set, so that dead ends show early. */
  const next = (): number => {
    for (let k = trail.length - 1; k >= 0; k--)
      for (const watch of at[trail[k] ?? 0] ?? [])
        for (const [spin] of watch.entries) if (bits[spin] === -1) return spin;
    return bits.indexOf(-1);
  };
  const search = (): boolean => {
    const spin = next();
    if (spin < 0) return true;
    for (const value of [0, 1] as const) {
      const mark = trail.length;
      budget.spend(1 + (trail.length >> 3));
      if (assign(spin, value) && search()) return true;
      undo(mark);
    }
    return false;
  };
  try {
    if (!watches.every((watch) => alive(watch, bits))) return 'none';
    for (const [spin, value] of fixed) {
      if (bits[spin] === value) continue;
      if (bits[spin] !== -1 || !assign(spin, value)) return 'none';
    }
    return search() ? bits : 'none';
  } catch (error) {
    if (error instanceof BudgetSpent) return 'unknown';
    throw error;
  }
}
