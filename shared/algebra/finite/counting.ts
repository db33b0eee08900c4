import { limits, newBudget, type Budget } from '../../limits.ts';
import { Coefficient } from '../numbers/coefficient.ts';
import * as Q from '../numbers/rational.ts';
import type { Rational } from '../numbers/rational.ts';
import { obeys, type RuleRelation } from '../pauli/rule.ts';
import { toPauli } from './string.ts';
import type { FiniteString } from './types.ts';

/** Σ weights[k] · n(sites[k]) in relation to the bound, n = 1 where a spin is excited. Sites are distinct. */
export interface LinearRule {
  readonly kind: 'linear';
  readonly sites: readonly number[];
  readonly weights: readonly Rational[];
  readonly relation: RuleRelation;
  readonly bound: Rational;
}
/** The patterns of bits on a few sites that are allowed: bit k of the index is site k. */
export interface TableRule {
  readonly kind: 'table';
  readonly sites: readonly number[];
  readonly allowed: Uint8Array;
}
export type CountingRule = LinearRule | TableRule;

/** Sites of a rule that is not a weighted sum of n. */
const mostTableSites = 16;

/**
 * A rule from a diagonal operator on a cluster (Z strings): linear if every string has at most one factor, a table of patterns otherwise. Throws RangeError if a
 * string is not diagonal, a weight is not rational, or a table would need more than 16 sites.
 */
export function countingRule(
  terms: readonly { readonly coefficient: Coefficient; readonly string: FiniteString }[],
  constant: Coefficient,
  relation: RuleRelation,
  bound: Coefficient,
): CountingRule {
  const strings = terms.map((t) => {
    const { phase, factors } = toPauli(t.string);
    if (factors.some((f) => f.pauli !== 'z')) throw new RangeError('a rule is diagonal: products of Z and n only');
    const weight = t.coefficient.mul(phase === 2 ? Coefficient.one.neg() : Coefficient.one).asRational();
    if (!weight || phase % 2 !== 0)
      throw new RangeError(`a rule needs rational weights, not ${t.coefficient.toText()}`);
    return { weight, sites: factors.map((f) => f.spin) };
  });
  const [start, goal] = [constant.asRational(), bound.asRational()];
  if (!start || !goal) throw new RangeError('a rule needs rational numbers');
  if (strings.some((s) => s.sites.length > 1)) return tableRule(strings, start, relation, bound);
  // Z = 1 − 2n
  const weights = new Map<number, Rational>();
  let rest = start;
  for (const { weight, sites } of strings) {
    rest = Q.add(rest, weight);
    for (const s of sites) weights.set(s, Q.add(weights.get(s) ?? Q.zero, Q.mul(weight, Q.rational(-2n))));
  }
  const kept = [...weights].filter(([, w]) => !Q.isZero(w));
  if (relation === 'even' || relation === 'odd') {
    if (kept.some(([, w]) => w.den !== 1n) || rest.den !== 1n) return tableRule(strings, start, relation, bound);
    const flipped = rest.num % 2n !== 0n;
    const parity: RuleRelation = flipped === (relation === 'odd') ? 'even' : 'odd';
    return {
      kind: 'linear',
      sites: kept.map(([s]) => s),
      weights: kept.map(([, w]) => w),
      relation: parity,
      bound: Q.zero,
    };
  }
  return {
    kind: 'linear',
    sites: kept.map(([s]) => s),
    weights: kept.map(([, w]) => w),
    relation,
    bound: Q.sub(goal, rest),
  };
}

function tableRule(
  strings: readonly { readonly weight: Rational; readonly sites: readonly number[] }[],
  start: Rational,
  relation: RuleRelation,
  bound: Coefficient,
): TableRule {
  const sites = [...new Set(strings.flatMap((s) => s.sites))].sort((a, b) => a - b);
  if (sites.length > mostTableSites)
    throw new RangeError(
      `a rule that multiplies spins may act on ${String(mostTableSites)} of them, not ${String(sites.length)}`,
    );
  const masks = strings.map((s) => s.sites.reduce((mask, spin) => mask ^ (1 << sites.indexOf(spin)), 0));
  const allowed = Uint8Array.from({ length: 2 ** sites.length }, (_, bits) => {
    const value = strings.reduce((sum, s, k) => {
      let odd = false;
      for (let both = bits & (masks[k] ?? 0); both !== 0; both &= both - 1) odd = !odd;
      return odd ? Q.sub(sum, s.weight) : Q.add(sum, s.weight);
    }, start);
    return obeys(Coefficient.rational(value.num, value.den), relation, bound) === true ? 1 : 0;
  });
  return { kind: 'table', sites, allowed };
}

/** How one rule is carried along: its state is one integer, 0 before any of its sites; `step` returns undefined where the rule can no longer hold. */
interface Tracker {
  readonly order: readonly number[];
  step(state: number, position: number, bit: 0 | 1): number | undefined;
}

/** Tracker of a rule whose sites come in the order `order` (positions into rule.sites). */
function tracker(rule: CountingRule, order: readonly number[]): Tracker {
  return rule.kind === 'table' ? tableTracker(rule, order) : linearTracker(rule, order);
}

function tableTracker(rule: TableRule, order: readonly number[]): Tracker {
  return {
    order,
    step(state, position, bit) {
      const next = state | (bit << (order[position] ?? 0));
      return position === order.length - 1 && rule.allowed[next] !== 1 ? undefined : next;
    },
  };
}

function linearTracker(rule: LinearRule, order: readonly number[]): Tracker {
  const scale = [...rule.weights, rule.bound].reduce((all, w) => (all * w.den) / Q.gcd(all, w.den), 1n);
  const whole = (r: Rational): number => {
    const n = Number((r.num * scale) / r.den);
    if (!Number.isSafeInteger(n)) throw new RangeError('the weights of a rule are too far apart to count with');
    return n;
  };
  const parity = rule.relation === 'even' || rule.relation === 'odd';
  const weights = order.map((k) => {
    const w = whole(rule.weights[k] ?? Q.zero);
    return parity ? Math.abs(w % 2) : w;
  });
  const bound = whole(rule.bound);
  // least and most that the sites after a position can add
  const tail = (pick: (w: number) => number): number[] => {
    const sums = [0];
    for (const w of [...weights].reverse()) sums.unshift((sums[0] ?? 0) + pick(w));
    return sums;
  };
  const [least, most] = [tail((w) => Math.min(w, 0)), tail((w) => Math.max(w, 0))];
  return {
    order,
    step(state, position, bit) {
      const sum = state + bit * (weights[position] ?? 0);
      const last = position === weights.length - 1;
      if (parity) return last && sum % 2 !== (rule.relation === 'odd' ? 1 : 0) ? undefined : sum % 2;
      const [low, high] = [sum + (least[position + 1] ?? 0), sum + (most[position + 1] ?? 0)];
      if (rule.relation !== '>=' && low > bound) return undefined;
      if (rule.relation !== '<=' && high < bound) return undefined;
      return sum;
    },
  };
}

/** An order of the sites in which few rules are half done at any time: greedy, from the site of fewest neighbours. */
function siteOrder(rules: readonly CountingRule[], budget: Budget): number[] {
  const rulesAt = new Map<number, number[]>();
  rules.forEach((rule, r) => {
    for (const s of rule.sites) rulesAt.set(s, [...(rulesAt.get(s) ?? []), r]);
  });
  const left = rules.map((rule) => rule.sites.length);
  const touched = rules.map(() => false);
  const age = rules.map(() => 0);
  const open = new Set<number>(rulesAt.keys());
  const order: number[] = [];
  while (open.size > 0) {
    const frontier = rules.flatMap((rule, r) =>
      touched[r] && (left[r] ?? 0) > 0 ? rule.sites.filter((s) => open.has(s)) : [],
    );
    let best = -1;
    let bestCost = Infinity;
    for (const s of frontier.length > 0 ? frontier : open) {
      const at = rulesAt.get(s) ?? [];
      budget.spend(1 + at.length);
      const opened = at.filter((r) => !touched[r] && (left[r] ?? 0) > 1).length;
      const closed = at.filter((r) => touched[r] && left[r] === 1).length;
      // among equals, finish what was begun first
      const oldest = at.reduce((a, r) => (touched[r] ? Math.min(a, age[r] ?? 0) : a), order.length);
      const size = frontier.length > 0 ? 0 : at.reduce((sum, r) => sum + (rules[r]?.sites.length ?? 0), 0);
      const cost = (opened - closed) * 1e6 + size * 1e3 + oldest;
      if (cost < bestCost) [best, bestCost] = [s, cost];
    }
    for (const r of rulesAt.get(best) ?? []) {
      if (!touched[r]) age[r] = order.length;
      touched[r] = true;
      left[r] = (left[r] ?? 0) - 1;
    }
    open.delete(best);
    order.push(best);
  }
  return order;
}

/**
 * Number of states of `spins` bits that obey all rules: a transfer along an order of the sites with one integer for each rule that is half done,
 * counts in BigInt. Exact; time and memory grow with the number of states of the half-done rules. Throws BudgetSpent.
 */
export function countStates(
  spins: number,
  rules: readonly CountingRule[],
  budget: Budget = newBudget(limits.operations, 'operations of counting'),
): bigint {
  for (const rule of rules) if (rule.sites.length === 0 && !holdsEmpty(rule)) return 0n;
  const used = rules.filter((r) => r.sites.length > 0);
  const order = siteOrder(used, budget);
  const rank = new Map(order.map((s, k) => [s, k]));
  const trackers = used.map((rule) =>
    tracker(
      rule,
      rule.sites
        .map((_, k) => k)
        .sort((a, b) => (rank.get(rule.sites[a] ?? 0) ?? 0) - (rank.get(rule.sites[b] ?? 0) ?? 0)),
    ),
  );
  // steps[k]: which rules see the k-th site, and as their how-manieth
  const steps: { rule: number; position: number }[][] = order.map(() => []);
  trackers.forEach((t, rule) => {
    t.order.forEach((k, position) => steps[rank.get(used[rule]?.sites[k] ?? 0) ?? 0]?.push({ rule, position }));
  });
  let active: number[] = [];
  let states = new Map<string, { readonly values: readonly number[]; count: bigint }>([
    ['', { values: [], count: 1n }],
  ]);
  for (const here of steps) {
    const begun = here.filter((s) => s.position === 0).map((s) => s.rule);
    const before = [...active, ...begun];
    const done = new Set(
      here.filter((s) => s.position === (trackers[s.rule]?.order.length ?? 0) - 1).map((s) => s.rule),
    );
    const seats = here.map((s) => ({ ...s, seat: before.indexOf(s.rule) }));
    const kept = before.flatMap((rule, seat) => (done.has(rule) ? [] : [seat]));
    const next = new Map<string, { readonly values: readonly number[]; count: bigint }>();
    for (const { values, count } of states.values())
      for (const bit of [0, 1] as const) {
        budget.spend(1 + before.length);
        const moved = [...values, ...begun.map(() => 0)];
        const fine = seats.every(({ rule, position, seat }) => {
          const value = trackers[rule]?.step(moved[seat] ?? 0, position, bit);
          if (value === undefined) return false;
          moved[seat] = value;
          return true;
        });
        if (!fine) continue;
        const left = kept.map((seat) => moved[seat] ?? 0);
        const key = left.join();
        const old = next.get(key);
        if (old) old.count += count;
        else next.set(key, { values: left, count });
      }
    states = next;
    active = kept.map((seat) => before[seat] ?? 0);
  }
  const total = [...states.values()].reduce((sum, s) => sum + s.count, 0n);
  return total << BigInt(spins - order.length);
}

function holdsEmpty(rule: CountingRule): boolean {
  if (rule.kind === 'table') return rule.allowed[0] === 1;
  return obeys(Coefficient.zero, rule.relation, Coefficient.rational(rule.bound.num, rule.bound.den)) === true;
}
