import type { FiniteString } from '../../algebra/finite/types.ts';
import { fromParts, timesPhase, type Hamiltonian, type NumericTerm } from '../hamiltonian.ts';
import type { Kernel, RowForm } from '../kernel/kernel.ts';
import type { SectorFault } from './drop-qubits.ts';
import {
  bit,
  commute,
  hermitian,
  isIdentity,
  isZero,
  multiply,
  overlap,
  signed,
  support,
  type Constraint,
} from './packed.ts';
import type { Block, Sector } from './sector.ts';

/** Bases of the bit states that obey diagonal rules, alone or together with commuting Pauli constraints. */

/**
 * Σ weights[k] × bit(sites[k]) compared with the bound; the bit is 1 where Z = −1. For 'even' and 'odd' the parity of
 * the sum counts and the bound is not read.
 */
export interface DiagonalRule {
  readonly sites: readonly number[];
  readonly weights: readonly number[];
  readonly relation: '==' | '<=' | '>=' | 'even' | 'odd';
  readonly bound: number;
}

export type EnumeratedFault =
  | SectorFault
  | { readonly code: 'rule broken by constraint'; readonly constraint: number }
  | { readonly code: 'rules allow no state' }
  | { readonly code: 'too many states'; readonly limit: number };

type Outcome<T> = { readonly ok: true; readonly value: T } | { readonly ok: false; readonly fault: EnumeratedFault };

/** States as packed words, ascending by site-0-last order of enumeration; `find` is the inverse of `word`. */
export interface States {
  readonly count: number;
  /** Words of a state: state k stands in words k × width … */
  readonly width: number;
  readonly words: Uint32Array;
  /** Index of a state given as `width` words, or −1. */
  find(state: Uint32Array): number;
}

/**
 * All n-bit states that obey the rules, by backtracking over the sites: a branch is left as soon as one rule cannot be
 * met any more. Undefined when there are more than `limit`.
 */
export function enumerateStates(n: number, rules: readonly DiagonalRule[], limit: number): States | undefined {
  const width = Math.max(1, (n + 31) >>> 5);
  const order = siteOrder(n, rules);
  const checks = prepareRules(n, rules, order);
  const state = new Uint32Array(width);
  let words = new Uint32Array(1024 * width);
  let count = 0;
  const sums = new Float64Array(rules.length);
  const record = (): boolean => {
    if (count === limit) return false;
    if ((count + 1) * width > words.length) {
      const larger = new Uint32Array(2 * words.length);
      larger.set(words);
      words = larger;
    }
    words.set(state, count * width);
    count++;
    return true;
  };
  /** False when the limit is met. */
  const descend = (depth: number): boolean => {
    const site = order[depth];
    if (site === undefined) return record();
    const here = checks.at[depth] ?? [];
    for (const value of [0, 1]) {
      if (value === 1) {
        for (const c of here) sums[c.rule] = (sums[c.rule] ?? 0) + c.weight;
        state[site >>> 5] = (state[site >>> 5] ?? 0) | (2 ** (site & 31));
      }
      const alive = here.every((c) => possible(rules[c.rule], sums[c.rule] ?? 0, c.least, c.most, c.last));
      const within = !alive || descend(depth + 1);
      if (!within) return false;
    }
    for (const c of here) sums[c.rule] = (sums[c.rule] ?? 0) - c.weight;
    state[site >>> 5] = (state[site >>> 5] ?? 0) & ~(2 ** (site & 31));
    return true;
  };
  const empty = rules.every((r) => r.sites.length > 0 || possible(r, 0, 0, 0, true));
  if (empty && !descend(0)) return undefined;
  return lookup(words.subarray(0, count * width), count, width);
}

/** Sites of one rule together, so that its fate is known early. */
function siteOrder(n: number, rules: readonly DiagonalRule[]): number[] {
  const order: number[] = [];
  const seen = new Uint8Array(n);
  const take = (site: number) => {
    if (seen[site]) return;
    seen[site] = 1;
    order.push(site);
  };
  const byPlace = [...rules].sort((a, b) => Math.min(...a.sites) - Math.min(...b.sites));
  for (const rule of byPlace) rule.sites.forEach(take);
  for (let s = 0; s < n; s++) take(s);
  return order;
}

interface Check {
  readonly rule: number;
  readonly weight: number;
  /** Range of what the later sites can still add. */
  readonly least: number;
  readonly most: number;
  /** No later site with an odd weight (for parities), or none at all. */
  readonly last: boolean;
}

function prepareRules(n: number, rules: readonly DiagonalRule[], order: readonly number[]): { at: Check[][] } {
  const depthOf = new Int32Array(n);
  order.forEach((site, depth) => (depthOf[site] = depth));
  const at: Check[][] = Array.from({ length: n }, () => []);
  rules.forEach((rule, index) => {
    const weights = new Map<number, number>();
    rule.sites.forEach((site, k) => weights.set(site, (weights.get(site) ?? 0) + (rule.weights[k] ?? 1)));
    const entries = [...weights].sort((a, b) => (depthOf[a[0]] ?? 0) - (depthOf[b[0]] ?? 0));
    entries.forEach(([site, weight], k) => {
      const later = entries.slice(k + 1).map((e) => e[1]);
      at[depthOf[site] ?? 0]?.push({
        rule: index,
        weight,
        least: later.reduce((sum, w) => sum + Math.min(0, w), 0),
        most: later.reduce((sum, w) => sum + Math.max(0, w), 0),
        last: later.every((w) => w % 2 === 0),
      });
    });
  });
  return { at };
}

function possible(rule: DiagonalRule | undefined, sum: number, least: number, most: number, last: boolean): boolean {
  switch (rule?.relation) {
    case '==':
      return sum + least <= rule.bound && sum + most >= rule.bound;
    case '<=':
      return sum + least <= rule.bound;
    case '>=':
      return sum + most >= rule.bound;
    case 'even':
      return !last || sum % 2 === 0;
    case 'odd':
      return !last || sum % 2 !== 0;
    case undefined:
      return true;
  }
}

/** Open addressing over a table of twice the size. */
function lookup(words: Uint32Array, count: number, width: number): States {
  const size = 2 ** Math.ceil(Math.log2(Math.max(2, 2 * count)));
  const table = new Int32Array(size).fill(-1);
  const hash = (source: Uint32Array, from: number): number => {
    let h = 0;
    for (let w = 0; w < width; w++) {
      h = Math.imul(h ^ (source[from + w] ?? 0), 0x9e3779b1);
      h ^= h >>> 15;
    }
    return (h >>> 0) & (size - 1);
  };
  const same = (k: number, state: Uint32Array): boolean => {
    for (let w = 0; w < width; w++) if (words[k * width + w] !== state[w]) return false;
    return true;
  };
  for (let k = 0; k < count; k++) {
    let at = hash(words, k * width);
    while (table[at] !== -1) at = (at + 1) & (size - 1);
    table[at] = k;
  }
  return {
    count,
    width,
    words,
    find(state) {
      for (let at = hash(state, 0); ; at = (at + 1) & (size - 1)) {
        const k = table[at] ?? -1;
        if (k < 0) return -1;
        if (same(k, state)) return k;
      }
    },
  };
}

/**
 * Signed constraints split: `diagonal` ones (Z's only) and `flips` whose x parts are in reduced echelon form, flip k
 * alone having a one at its pivot site.
 */
interface Split {
  readonly diagonal: FiniteString[];
  readonly flips: { readonly law: FiniteString; readonly pivot: number; readonly constraint: number }[];
}

function splitConstraints(constraints: readonly Constraint[]): Outcome<Split> {
  for (const [k, { string }] of constraints.entries()) {
    if (!hermitian(string)) return { ok: false, fault: { code: 'not Hermitian', constraint: k } };
    const other = constraints.slice(0, k).findIndex((c) => !commute(c.string, string));
    if (other >= 0) return { ok: false, fault: { code: 'constraints clash', constraints: [other, k] } };
  }
  const split: Split = { diagonal: [], flips: [] };
  for (const [k, c] of constraints.entries()) {
    let law = signed(c.string, c.value === -1);
    for (const flip of split.flips) if (bit(law.x, flip.pivot)) law = multiply(law, flip.law);
    if (isIdentity(law) && law.phase !== 0) return { ok: false, fault: { code: 'no state', constraint: k } };
    if (isZero(law.x)) {
      if (!isIdentity(law)) split.diagonal.push(law);
      continue;
    }
    const pivot = support(law).find((s) => bit(law.x, s)) ?? 0;
    split.flips.forEach((flip, i) => {
      if (bit(flip.law.x, pivot)) split.flips[i] = { ...flip, law: multiply(flip.law, law) };
    });
    split.flips.push({ law, pivot, constraint: k });
  }
  return { ok: true, value: split };
}

/** A product of Z's that is +1 (phase 0) or −1 (phase 2 in front): a parity of bits. */
const parityRule = (law: FiniteString): DiagonalRule => {
  const sites = support(law);
  return { sites, weights: sites.map(() => 1), relation: law.phase === 0 ? 'even' : 'odd', bound: 0 };
};

/** True if a flip keeps the rule in every state, also in those that other rules exclude. At most 2^16 states are tried. */
function keepsRule(rule: DiagonalRule, flip: FiniteString): boolean {
  const weights = new Map<number, number>();
  rule.sites.forEach((site, k) => weights.set(site, (weights.get(site) ?? 0) + (rule.weights[k] ?? 1)));
  const entries = [...weights];
  const flipped = entries.map(([site]) => bit(flip.x, site));
  if (flipped.every((f) => f === 0)) return true;
  if (entries.length > 16) return false;
  for (let b = 0; b < 2 ** entries.length; b++) {
    let [before, after] = [0, 0];
    entries.forEach(([, weight], k) => {
      const value = (b >> k) & 1;
      before += weight * value;
      after += weight * (value ^ (flipped[k] ?? 0));
    });
    if (possible(rule, before, 0, 0, true) !== possible(rule, after, 0, 0, true)) return false;
  }
  return true;
}

/**
 * Sector of diagonal rules and commuting constraints. Products of Z's among the constraints become parities of bits.
 * The others act freely on the states by flips and signs: each orbit carries one state of the sector,
 * 2^(−r/2) Σ g |b>, summed over the 2^r products g of the signed constraints; b is the member whose pivot bits are 0.
 * Each constraint must keep the set of states; at most `limit` states are listed.
 */
export function enumeratedSector(
  n: number,
  terms: readonly NumericTerm[],
  constant: number,
  rules: readonly DiagonalRule[],
  constraints: readonly Constraint[],
  limit: number,
): Outcome<Sector> {
  const split = splitConstraints(constraints);
  if (!split.ok) return split;
  for (const [k, { string }] of constraints.entries()) {
    const term = terms.findIndex((t) => !commute(t.string, string));
    if (term >= 0) return { ok: false, fault: { code: 'term leaves', term, constraint: k } };
  }
  const { diagonal, flips } = split.value;
  const all = [...rules, ...diagonal.map(parityRule)];
  const broken = brokenBy(n, all, flips, limit);
  if (broken) return { ok: false, fault: broken };
  const pinned = flips.map(({ pivot }): DiagonalRule => ({ sites: [pivot], weights: [1], relation: '==', bound: 0 }));
  const states = enumerateStates(n, [...all, ...pinned], limit);
  if (!states) return { ok: false, fault: { code: 'too many states', limit } };
  if (states.count === 0) return { ok: false, fault: { code: 'rules allow no state' } };
  return { ok: true, value: sectorOf(n, states, terms, constant, constraints, flips) };
}

/** The fault of a constraint that leads from an allowed state to a forbidden one. */
function brokenBy(
  n: number,
  rules: readonly DiagonalRule[],
  flips: Split['flips'],
  limit: number,
): EnumeratedFault | undefined {
  const doubtful = flips.filter(({ law }) => !rules.every((rule) => keepsRule(rule, law)));
  if (doubtful.length === 0) return undefined;
  // Rule by rule it is not kept; the other rules may still forbid the states that would leave. Then all states decide.
  const states = enumerateStates(n, rules, limit);
  if (!states) return { code: 'too many states', limit };
  const target = new Uint32Array(states.width);
  for (const { law, constraint } of doubtful) {
    for (let k = 0; k < states.count; k++) {
      for (let w = 0; w < states.width; w++) target[w] = (states.words[k * states.width + w] ?? 0) ^ (law.x[w] ?? 0);
      if (states.find(target) < 0) return { code: 'rule broken by constraint', constraint };
    }
  }
  return undefined;
}

function sectorOf(
  n: number,
  states: States,
  terms: readonly NumericTerm[],
  constant: number,
  constraints: readonly Constraint[],
  flips: Split['flips'],
): Sector {
  const within = (all: readonly NumericTerm[]) =>
    all.map((t, index) => ({ t, index })).filter(({ t }) => constraints.every((c) => commute(c.string, t.string)));
  const built = project(states, within(terms), constant, flips);
  const imaginary = built.imaginary.values.length > 0;
  const entries = built.real.values.length + built.imaginary.values.length;
  const block: Block = {
    dimension: states.count,
    real: !imaginary,
    productCost: 2 * entries + states.count,
    matrixBytes: 12 * entries + 8 * states.count + 3 * states.words.byteLength,
    diagonal: undefined,
    hamiltonian: (kernel) => prepared(built, kernel, imaginary),
    operator(others, shift, kernel, complex) {
      const o = project(states, within(others), shift, flips);
      return prepared(o, kernel, complex && o.imaginary.values.length > 0, complex);
    },
  };
  return { kind: 'enumerated', spins: n, dimension: states.count, copies: 1, leaving: built.leaving, blocks: [block] };
}

function prepared(built: Projected, kernel: Kernel, imaginary: boolean, complex = false): Hamiltonian {
  return fromParts(
    kernel,
    kernel.prepareRows(built.real),
    imaginary ? kernel.prepareRows(built.imaginary) : undefined,
    complex,
  );
}

interface Projected {
  readonly real: RowForm;
  readonly imaginary: RowForm;
  readonly leaving: number[];
}

/** Matrix of P (Σ terms) P, row by row. Amplitudes of terms with the same flip are added before any is said to leave. */
function project(
  states: States,
  terms: readonly { readonly t: NumericTerm; readonly index: number }[],
  constant: number,
  flips: Split['flips'],
): Projected {
  const groups = new Map<string, { t: NumericTerm; index: number }[]>();
  for (const one of terms) {
    const key = one.t.string.x.join(',');
    groups.set(key, [...(groups.get(key) ?? []), one]);
  }
  const list = [...groups.values()];
  const leaving = new Set<number>();
  const re = newRows(states.count);
  const im = newRows(states.count);
  const source = new Uint32Array(states.width);
  const scale = terms.reduce((sum, { t }) => sum + Math.hypot(t.re, t.im), Math.abs(constant)) || 1;
  for (let row = 0; row < states.count; row++) {
    if (constant !== 0) re.add(row, constant);
    for (const group of list) {
      // H is Hermitian: the entry (row, column) is the conjugate of the amplitude that leads from row to column.
      let [a, b] = [0, 0];
      for (let w = 0; w < states.width; w++) source[w] = states.words[row * states.width + w] ?? 0;
      for (const { t } of group) {
        const [tr, ti] = timesPhase(t.re, t.im, t.string.phase + 2 * overlap(t.string.z, source));
        a += tr;
        b += ti;
      }
      if (Math.abs(a) + Math.abs(b) <= 1e-14 * scale) continue;
      const x = group[0]?.t.string.x ?? source;
      for (let w = 0; w < states.width; w++) source[w] = (source[w] ?? 0) ^ (x[w] ?? 0);
      const phase = toRepresentative(source, flips);
      const column = states.find(source);
      if (column < 0) {
        group.forEach(({ index }) => leaving.add(index));
        continue;
      }
      const [cr, ci] = timesPhase(a, b, phase);
      if (Math.abs(cr) > 1e-15 * scale) re.add(column, cr);
      if (Math.abs(ci) > 1e-15 * scale) im.add(column, -ci);
    }
    re.close();
    im.close();
  }
  return { real: re.done(), imaginary: im.done(), leaving: [...leaving].sort((a, b) => a - b) };
}

/**
 * Moves a state to the member of its orbit with pivot bits 0. Returns k with |state> = i^k |representative> in the
 * sector: g = +1 there, so |state> may be replaced by g |state> = i^phase (−1)^(z·state) |state + x>.
 */
function toRepresentative(state: Uint32Array, flips: Split['flips']): number {
  let phase = 0;
  for (const { law, pivot } of flips) {
    if (!bit(state, pivot)) continue;
    phase += law.phase + 2 * overlap(law.z, state);
    for (let w = 0; w < state.length; w++) state[w] = (state[w] ?? 0) ^ (law.x[w] ?? 0);
  }
  return phase & 3;
}

/** Compressed rows, written in order, entries of one column added up. */
function newRows(dimension: number) {
  const starts = new Uint32Array(dimension + 1);
  let columns = new Uint32Array(1024);
  let values = new Float64Array(1024);
  let used = 0;
  let row = 0;
  return {
    add(column: number, value: number): void {
      for (let k = starts[row] ?? 0; k < used; k++) {
        if (columns[k] !== column) continue;
        values[k] = (values[k] ?? 0) + value;
        return;
      }
      if (used === values.length) {
        const [c, v] = [new Uint32Array(2 * used), new Float64Array(2 * used)];
        c.set(columns);
        v.set(values);
        [columns, values] = [c, v];
      }
      columns[used] = column;
      values[used] = value;
      used++;
    },
    close(): void {
      row++;
      starts[row] = used;
    },
    done: (): RowForm => ({ dimension, starts, columns: columns.slice(0, used), values: values.slice(0, used) }),
  };
}
