import { oddShifts } from '../algebra/pauli/overlaps.ts';
import { modulo } from '../algebra/pauli/collect.ts';
import type { LocalString, Steps } from '../algebra/pauli/types.ts';
import type { Budget } from '../limits.ts';
import type { Flip, GroundSpace } from './ground-space.ts';

/** A perturbing string by its number and enlarged cell. */
export interface Placed {
  readonly string: number;
  readonly cell: readonly number[];
}

/** A connected multiset of perturbing strings that flips no term of H0, up to translation; equal ones stand side by side. */
export interface Cluster {
  readonly members: readonly Placed[];
}

const flipKey = ({ term, cell }: Flip): string => `${String(term)}@${cell.join(',')}`;
const moved = (cell: readonly number[], by: readonly number[]): number[] => cell.map((c, d) => c + (by[d] ?? 0));
const apart = (cell: readonly number[], from: readonly number[]): number[] => cell.map((c, d) => c - (from[d] ?? 0));

/** The strings that are connected to string k at the origin: they anticommute with it or flip a common term of H0. */
function neighbourhoods(
  strings: readonly LocalString[],
  flips: readonly (readonly Flip[])[],
  period: Steps,
  budget: Budget,
): Placed[][] {
  return strings.map((a, k) => {
    const found = new Map<string, Placed>();
    const take = (string: number, cell: readonly number[]): void =>
      void found.set(`${String(string)}@${cell.join(',')}`, { string, cell });
    strings.forEach((b, j) => {
      for (const shift of oddShifts(a, b, budget))
        if (shift.every((c, d) => modulo(c, period[d] ?? 1) === 0))
          take(
            j,
            shift.map((c, d) => c / (period[d] ?? 1)),
          );
      for (const f of flips[k] ?? [])
        for (const g of flips[j] ?? []) {
          budget.spend();
          if (f.term === g.term) take(j, apart(f.cell, g.cell));
        }
    });
    return [...found.values()];
  });
}

interface Growing {
  readonly members: readonly Placed[];
  /** Terms of H0 that it flips. */
  readonly flipped: ReadonlyMap<string, Flip>;
}

/** Members in order, moved so that the lowest corner of their cells is 0; and the key of that. */
function normalised(members: readonly Placed[]): { key: string; members: Placed[] } {
  const dimension = members[0]?.cell.length ?? 0;
  const low = Array.from({ length: dimension }, (_, d) => Math.min(...members.map((m) => m.cell[d] ?? 0)));
  const placed = members
    .map(({ string, cell }) => ({ string, cell: apart(cell, low), key: '' }))
    .map((m) => ({ ...m, key: `${String(m.string)}@${m.cell.join(',')}` }))
    .sort((a, b) => (a.key < b.key ? -1 : a.key > b.key ? 1 : 0));
  return { key: placed.map((m) => m.key).join(' '), members: placed.map(({ string, cell }) => ({ string, cell })) };
}

/**
 * All connected multisets of 1 … order translates of the strings that flip no term of H0, each once up to translation by the enlarged cell. Connected: by strings that anticommute or flip a common term. Built up
 * one by one; a multiset that flips more terms than the missing strings can mend is left out. Throws BudgetSpent.
 */
export function closedClusters(
  strings: readonly LocalString[],
  space: GroundSpace,
  order: number,
  budget: Budget,
): Cluster[] {
  const flips = strings.map((s) => space.flips(s));
  const around = neighbourhoods(strings, flips, space.period, budget);
  const mends = Math.max(0, ...flips.map((f) => f.length));
  const zero = space.period.map(() => 0);
  const closed: Cluster[] = [];
  let level = new Map<string, Growing>();
  const offer = (into: Map<string, Growing>, members: readonly Placed[], left: number): void => {
    budget.spend(members.length);
    const form = normalised(members);
    if (into.has(form.key)) return;
    const flipped = new Map<string, Flip>();
    for (const { string, cell } of form.members)
      for (const f of flips[string] ?? []) {
        const here = { term: f.term, cell: moved(f.cell, cell) };
        if (!flipped.delete(flipKey(here))) flipped.set(flipKey(here), here);
      }
    budget.spend(flipped.size);
    if (flipped.size > mends * left) return;
    into.set(form.key, { members: form.members, flipped });
  };
  strings.forEach((_, string) => {
    offer(level, [{ string, cell: zero }], order - 1);
  });
  for (let size = 1; size <= order; size++) {
    const next = new Map<string, Growing>();
    for (const { members, flipped } of level.values()) {
      if (flipped.size === 0) closed.push({ members });
      if (size === order) continue;
      for (const { string, cell } of members)
        for (const n of around[string] ?? [])
          offer(next, [...members, { string: n.string, cell: moved(n.cell, cell) }], order - size - 1);
    }
    level = next;
  }
  return closed;
}
