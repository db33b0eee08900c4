import { classKey, translateString } from '../../algebra/pauli/string.ts';
import type { Extended, LocalString, Pauli, ProductPart, Site, Steps } from '../../algebra/pauli/types.ts';
import type { CellKind, Offset } from '../../lattice/cells.ts';
import type { Budget } from '../../limits.ts';
import { box, inSteps, lcm, minus, mod, points } from '../steps.ts';
import { toggled, type Generator } from './coordinates.ts';

/** One class of spins: a species on one class of its cells. */
export interface Slot {
  readonly species: string;
  readonly kind: CellKind;
  readonly index: number;
}

/** Where a candidate lives: pinned directions hold a window of cells, the others repeat with the period. */
interface Pattern {
  readonly period: number;
  readonly pinned: readonly boolean[];
}

const most = 1_200;
const bits = ['x', 'z'] as const;

/** Number of spins (mod 2) on which a string meets a product along translations with another Pauli matrix, if that is finite. */
export function anticommutesWith(string: LocalString, extended: Extended): boolean {
  let odd = false;
  for (const part of extended.parts)
    for (const f of string.factors)
      for (const g of part.string.factors) {
        if (f.pauli === g.pauli || classKey(f) !== classKey(g)) continue;
        const by = minus(f.cell.offset, g.cell.offset);
        if (inSteps(by, part.steps)) odd = !odd;
      }
  return odd;
}

/** Whether every translate of a generator commutes with a product along translations. All that overlap are tried. */
export function generatorCommutes(generator: Generator, extended: Extended): boolean {
  const seen = new Set<string>();
  for (const part of extended.parts)
    for (const f of generator.string.factors)
      for (const g of part.string.factors) {
        if (classKey(f) !== classKey(g)) continue;
        for (const by of meeting(g.cell.offset, f.cell.offset, part.steps, generator.steps, extended)) {
          const key = by.join(',');
          if (seen.has(key)) continue;
          seen.add(key);
          if (anticommutesWith(translateString(generator.string, by), extended)) return false;
        }
      }
  return true;
}

/** Translations of a generator (by its steps) that bring an offset onto a part's orbit, one for each residue of all periods of the product. */
function meeting(goal: Offset, from: Offset, orbit: Steps, steps: Steps, whole: Extended): number[][] {
  const range = goal.map((c, d) => {
    const start = c - (from[d] ?? 0);
    if ((orbit[d] ?? 0) === 0) return { low: start, high: start };
    if ((steps[d] ?? 0) === 0) return { low: 0, high: 0 };
    const period = whole.parts.reduce((m, p) => ((p.steps[d] ?? 0) > 0 ? lcm(m, p.steps[d] ?? 1) : m), steps[d] ?? 1);
    return { low: start, high: start + period - 1 };
  });
  const start = minus(goal, from);
  return points(
    range.map((r) => r.low),
    range.map((r) => r.high),
  ).filter((by) => inSteps(by, steps) && inSteps(minus(by, start), orbit));
}

/** The patterns that are tried, the most familiar symmetries first: whole lattice, local, subsystem, then longer periods. */
function patterns(dimension: number): Pattern[] {
  const pins = points(Array<number>(dimension).fill(0), Array<number>(dimension).fill(1))
    .map((p) => p.map((b) => b === 1))
    .sort((a, b) => a.filter(Boolean).length - b.filter(Boolean).length);
  const none = pins.filter((p) => !p.some(Boolean));
  const all = pins.filter((p) => p.every(Boolean));
  const some = pins.filter((p) => p.some(Boolean) && !p.every(Boolean));
  const with1 = (list: boolean[][], period: number) => list.map((pinned) => ({ period, pinned }));
  return [
    ...with1(none, 1),
    ...with1(all, 1),
    ...with1(some, 1),
    ...with1(none, 2),
    ...with1(none, 3),
    ...with1(some, 2),
    ...with1(none, 4),
  ];
}

interface Unknown {
  readonly slot: number;
  readonly bit: 'x' | 'z';
  readonly offset: Offset;
}

/**
 * A Pauli string, local or multiplied up along translations, that commutes with every translate of the generators and anticommutes
 * with `term`: it proves that `term` is no product of them, for such a product would commute too. Found by elimination over F2 in
 * periodic patterns and windows; undefined when none of the patterns holds one. `slots`: the classes of spins to use; `familiar` looks only for those of
 * the whole lattice without a period.
 */
export function charge(
  term: LocalString,
  generators: readonly Generator[],
  slots: readonly Slot[],
  search: 'familiar' | 'all',
  budget: Budget,
): Extended | undefined {
  const dimension = term.factors[0]?.cell.offset.length ?? 0;
  for (const pattern of patterns(dimension).slice(0, search === 'familiar' ? 1 : undefined)) {
    const found = inPattern(term, generators, slots, pattern, budget);
    if (found) return found;
  }
  return undefined;
}

function inPattern(
  term: LocalString,
  generators: readonly Generator[],
  slots: readonly Slot[],
  { period, pinned }: Pattern,
  budget: Budget,
): Extended | undefined {
  const around = box(term);
  if (!around) return undefined;
  const margin = 1;
  const low = around.low.map((c, d) => (pinned[d] ? c - margin : 0));
  const high = around.high.map((c, d) => (pinned[d] ? c + margin : period - 1));
  const cells = points(low, high);
  if (cells.length * slots.length * 2 > most) return undefined;
  const unknowns = cells.flatMap((offset) =>
    slots.flatMap((_, slot) => bits.map((bit): Unknown => ({ slot, bit, offset }))),
  );
  const number = new Map(unknowns.map((u, k) => [`${String(u.slot)}${u.bit}@${u.offset.join(',')}`, k]));
  const slotOf = (s: Site) =>
    slots.findIndex((c) => c.species === s.species && c.kind === s.cell.kind && c.index === s.cell.index);
  /** The unknowns whose sum says whether a string anticommutes with the candidate. */
  const pairing = (string: LocalString): number[] => {
    let row: number[] = [];
    for (const f of string.factors) {
      const at = f.cell.offset.map((c, d) => (pinned[d] ? c : mod(c, period))).join(',');
      const slot = String(slotOf(f));
      // an x part of the string meets a z part of the candidate, and the other way round
      for (const bit of f.pauli === 'x' ? ['z'] : f.pauli === 'z' ? ['x'] : ['x', 'z']) {
        const k = number.get(`${slot}${bit}@${at}`);
        if (k !== undefined) row = toggled(row, [k]);
      }
    }
    return row;
  };
  const rows = generators.flatMap((g) => {
    const own = box(g.string);
    if (!own) return [];
    const range = low.map((c, d) =>
      pinned[d]
        ? { low: c - (own.high[d] ?? 0), high: (high[d] ?? 0) - (own.low[d] ?? 0) }
        : { low: 0, high: lcm(period, Math.max(1, g.steps[d] ?? 1)) - 1 },
    );
    return points(
      range.map((r) => r.low),
      range.map((r) => r.high),
    )
      .filter((by) => inSteps(by, g.steps))
      .map((by) => pairing(translateString(g.string, by)));
  });
  budget.spend(rows.reduce((sum, r) => sum + r.length + 1, 0));
  const vector = kernelVector(rows, unknowns.length, pairing(term), budget);
  return vector && asExtended(vector, unknowns, slots, pinned, period);
}

/** A light vector of the kernel of the rows whose pairing with `test` is odd. */
function kernelVector(
  rows: readonly (readonly number[])[],
  n: number,
  test: readonly number[],
  budget: Budget,
): number[] | undefined {
  // reduced echelon form, pivot = smallest index; each free unknown gives one vector of the kernel
  const pivots = new Map<number, number[]>();
  for (const start of rows) {
    let row = [...start];
    for (const k of [...row]) {
      const p = row.includes(k) ? pivots.get(k) : undefined;
      if (p) row = toggled(row, p);
    }
    for (let hit = row.find((k) => pivots.has(k)); hit !== undefined; hit = row.find((k) => pivots.has(k)))
      row = toggled(row, pivots.get(hit) ?? []);
    budget.spend(row.length + 1);
    const [lead] = row;
    if (lead === undefined) continue;
    for (const [k, other] of pivots) if (other.includes(lead)) pivots.set(k, toggled(other, row));
    pivots.set(lead, row);
  }
  const kernel: number[][] = [];
  for (let free = 0; free < n; free++) {
    if (pivots.has(free)) continue;
    kernel.push([free, ...[...pivots].flatMap(([k, row]) => (row.includes(free) ? [k] : []))].sort((a, b) => a - b));
  }
  budget.spend(kernel.length * (pivots.size + 1));
  const within = new Set(test);
  const odd = (v: readonly number[]) => v.filter((k) => within.has(k)).length % 2 === 1;
  let best = kernel.filter(odd).sort((a, b) => a.length - b.length)[0];
  if (!best) return undefined;
  const even = kernel.filter((v) => !odd(v));
  for (let changed = true; changed;) {
    changed = false;
    for (const v of even) {
      const other = toggled(best, v);
      if (other.length < best.length) [best, changed] = [other, true];
    }
  }
  return best;
}

function asExtended(
  vector: readonly number[],
  unknowns: readonly Unknown[],
  slots: readonly Slot[],
  pinned: readonly boolean[],
  period: number,
): Extended {
  const at = new Map<string, { slot: number; offset: Offset; pauli: Pauli }>();
  for (const k of vector) {
    const u = unknowns[k];
    if (!u) continue;
    const key = `${String(u.slot)}@${u.offset.join(',')}`;
    const old = at.get(key);
    at.set(key, { slot: u.slot, offset: u.offset, pauli: old ? 'y' : u.bit });
  }
  const steps = pinned.map((p) => (p ? 0 : period));
  const parts = [...at.values()].flatMap(({ slot, offset, pauli }): ProductPart[] => {
    const s = slots[slot];
    if (!s) return [];
    const cell = { kind: s.kind, index: s.index, offset };
    return [{ string: { phase: 0, factors: [{ species: s.species, cell, pauli }] }, steps, needs: [] }];
  });
  return { phase: 0, parts };
}
