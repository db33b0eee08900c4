import { newBudget, type Budget } from '../../limits.ts';
import type { Offset } from '../../lattice/cells.ts';
import { shownForAllSizes, type AllSizes } from '../f2/all-sizes.ts';
import { Coefficient } from '../numbers/coefficient.ts';
import { amplitudesOf } from './amplitudes.ts';
import { lcmOf, modulo, residueCount, residues } from './collect.ts';
import { classKey, siteKey, translateString } from './string.ts';
import type { Family, LocalString, Site, Steps } from './types.ts';

/**
 * Whether an operator keeps a diagonal rule, on the infinite lattice.
 *
 * The operator is grouped by what it flips: all strings with one x part form ONE move, whose amplitude is a function of the bits nearby (sums such as
 * |00><11| are many strings and one move). A move keeps the rule if in every local configuration in which its amplitude does not vanish and all instances of the rule that it
 * touches hold, they hold afterwards. Instances that it does not touch do not change. So the move keeps the rule in every state.
 * On a torus the same holds as soon as no two images of one move touch one instance: from extents larger than the move with the instances that it touches; a
 * state of the torus is a periodic state of the infinite lattice. Derived here.
 */
export interface LinearRule {
  /** Σ weight × bit over these spins (the bit is 1 where Z = −1), in whole numbers. */
  readonly weights: readonly { readonly site: Site; readonly weight: number }[];
  readonly steps: Steps;
  readonly relation: '==' | '<=' | '>=' | 'even' | 'odd';
  readonly bound: number;
}

/** A local configuration that obeys every instance that the move touches, and breaks one of them by moving. */
export interface Leak {
  readonly flip: readonly Site[];
  /** The families whose strings make up the move, by index. */
  readonly families: readonly number[];
  /** Bits before the move. */
  readonly before: readonly { readonly site: Site; readonly bit: 0 | 1 }[];
  readonly amplitude: Coefficient;
  readonly broken: {
    readonly rule: number;
    readonly sites: readonly Site[];
    readonly before: number;
    readonly after: number;
  };
}

export type Keeping =
  | { readonly kept: true; readonly moves: number; readonly evidence: AllSizes }
  /** `leak`: one that the caller accepted, or undefined: `reason` says why it is not known. */
  | {
      readonly kept: false;
      readonly moves: number;
      readonly leaving: readonly number[];
      readonly leak: Leak | undefined;
      readonly reason: string;
    };

/** Spins on which the amplitude of one move may depend. */
const mostAmplitudeSpins = 16;
/** Local configurations of one move that are offered to the caller. */
const mostOffers = 24;

const moved = (site: Site, by: Offset): Site => ({
  species: site.species,
  cell: { ...site.cell, offset: site.cell.offset.map((c, d) => c + (by[d] ?? 0)) },
});

const flipped = (string: LocalString): Site[] => string.factors.filter((f) => f.pauli !== 'z');

interface Placed {
  readonly family: number;
  readonly string: LocalString;
  /** Lowest corner of what it flips. */
  readonly corner: Offset;
  readonly shape: string;
}

const negative = (offset: Offset): number[] => offset.map((c) => -c);

function place(families: readonly Family[]): Placed[] {
  return families.flatMap((family, k) => {
    const sites = flipped(family.string);
    if (sites.length === 0) return [];
    const corner = family.steps.map((_, d) => Math.min(...sites.map((s) => s.cell.offset[d] ?? 0)));
    const shape = sites.map((s) => siteKey(moved(s, negative(corner)))).join(' ');
    return [{ family: k, string: family.string, corner, shape }];
  });
}

interface Move {
  readonly flip: readonly Site[];
  readonly terms: readonly { readonly family: number; readonly string: LocalString }[];
}

/** All moves, one for each place modulo the period; along directions in which a term stands in one place only, also that place. */
function movesOf(families: readonly Family[], period: Steps, budget: Budget): Move[] {
  const placed = place(families);
  const moves = new Map<string, Move>();
  for (const p of placed) {
    const steps = families[p.family]?.steps ?? [];
    const repeats = steps.map((m, d) => (m === 0 ? 1 : (period[d] ?? m) / m));
    residueCount(repeats);
    for (const k of residues(repeats)) {
      budget.spend();
      const at = p.corner.map((c, d) => (steps[d] ? modulo(c + (k[d] ?? 0) * (steps[d] ?? 0), period[d] ?? 1) : c));
      const key = `${p.shape}|${at.map((c, d) => `${steps[d] ? '*' : '.'}${String(c)}`).join(',')}`;
      if (moves.has(key)) continue;
      const terms = placed.flatMap((q) => {
        budget.spend();
        if (q.shape !== p.shape) return [];
        const own = families[q.family]?.steps ?? [];
        const stands = at.every((c, d) => {
          const m = own[d] ?? 0;
          const apart = c - (q.corner[d] ?? 0);
          return m === 0 ? (steps[d] ?? 0) === 0 && apart === 0 : apart % m === 0;
        });
        const by = at.map((c, d) => c - (q.corner[d] ?? 0));
        return stands ? [{ family: q.family, string: translateString(q.string, by) }] : [];
      });
      const [first] = terms;
      if (first) moves.set(key, { flip: flipped(first.string), terms });
    }
  }
  return [...moves.values()];
}

interface Instance {
  readonly rule: number;
  readonly sites: readonly Site[];
  readonly weights: readonly number[];
}

/** Instances of the rules that hold one of the spins with weight, by key. */
function touching(spins: readonly Site[], rules: readonly LinearRule[]): Map<string, Instance> {
  const found = new Map<string, Instance>();
  rules.forEach((rule, k) => {
    for (const { site } of rule.weights)
      for (const f of spins) {
        if (classKey(site) !== classKey(f)) continue;
        const by = f.cell.offset.map((c, d) => c - (site.cell.offset[d] ?? 0));
        if (!by.every((c, d) => c % Math.max(rule.steps[d] ?? 1, 1) === 0)) continue;
        found.set(`${String(k)}|${by.join(',')}`, {
          rule: k,
          sites: rule.weights.map((w) => moved(w.site, by)),
          weights: rule.weights.map((w) => w.weight),
        });
      }
  });
  return found;
}

/** Of the instances that the move does not touch those that lie within the spins: they hold before and after, and rule out local configurations. */
function within(
  spins: ReadonlyMap<string, Site>,
  touched: ReadonlyMap<string, Instance>,
  rules: readonly LinearRule[],
): Instance[] {
  return [...touching([...spins.values()], rules)].flatMap(([key, instance]) =>
    !touched.has(key) && instance.sites.every((s) => spins.has(siteKey(s))) ? [instance] : [],
  );
}

/** Whether a sum obeys a relation. */
export function obeys(relation: LinearRule['relation'], sum: number, bound: number): boolean {
  switch (relation) {
    case '==':
      return sum === bound;
    case '<=':
      return sum <= bound;
    case '>=':
      return sum >= bound;
    case 'even':
      return modulo(sum, 2) === 0;
    case 'odd':
      return modulo(sum, 2) === 1;
  }
}

/** Whether a sum that later spins still change by least … most can obey it. */
function mayObey(rule: LinearRule, sum: number, rest: { least: number; most: number; odd: boolean }): boolean {
  switch (rule.relation) {
    case '==':
      return sum + rest.least <= rule.bound && sum + rest.most >= rule.bound;
    case '<=':
      return sum + rest.least <= rule.bound;
    case '>=':
      return sum + rest.most >= rule.bound;
    default:
      return rest.odd || obeys(rule.relation, sum, 0);
  }
}

/** Local configurations that leave, one after the other. */
function* leaks(
  move: Move,
  families: readonly Family[],
  rules: readonly LinearRule[],
  spins: readonly Site[],
  inAmplitude: number,
  instances: readonly Instance[],
  judged: number,
  budget: Budget,
): Generator<Leak> {
  const terms = move.terms.map(({ family, string }) => ({
    coefficient: families[family]?.coefficient ?? Coefficient.zero,
    string,
  }));
  const amplitude = amplitudesOf(terms, spins.slice(0, inAmplitude), budget);
  const numberOf = new Map(spins.map((s, k) => [siteKey(s), k]));
  const flips = new Set(move.flip.map(siteKey));
  const forms = instances.map((instance) => {
    const weights = new Map<number, number>();
    instance.sites.forEach((s, k) => {
      const spin = numberOf.get(siteKey(s)) ?? 0;
      weights.set(spin, (weights.get(spin) ?? 0) + (instance.weights[k] ?? 0));
    });
    const entries = [...weights].filter(([, w]) => w !== 0).sort((a, b) => a[0] - b[0]);
    // what spins from the k-th on may add
    const rest = Array.from({ length: spins.length + 1 }, (_, depth) => {
      const later = entries.filter(([spin]) => spin >= depth).map(([, w]) => w);
      return {
        least: later.reduce((sum, w) => sum + Math.min(w, 0), 0),
        most: later.reduce((sum, w) => sum + Math.max(w, 0), 0),
        odd: later.some((w) => w % 2 !== 0),
      };
    });
    return { instance, rule: rules[instance.rule], weights, rest };
  });
  const bits = new Uint8Array(spins.length);
  const sums = forms.map(() => 0);
  let here = Coefficient.zero;
  function* descend(depth: number): Generator<Leak> {
    budget.spend(1 + forms.length);
    if (depth === inAmplitude) {
      here = amplitude([...bits.subarray(0, inAmplitude)].reduce((sum, b, k) => sum + b * 2 ** k, 0));
      if (here.isZero()) return;
    }
    if (depth === spins.length) {
      for (const [k, { instance, rule, weights }] of forms.entries()) {
        const before = sums[k] ?? 0;
        const after = [...weights].reduce(
          (sum, [spin, w]) =>
            flips.has(siteKey(spins[spin] ?? move.flip[0]!)) ? sum + w * (1 - 2 * (bits[spin] ?? 0)) : sum,
          before,
        );
        if (!rule || instance.rule >= judged || obeys(rule.relation, after, rule.bound)) continue;
        yield {
          flip: move.flip,
          families: [...new Set(move.terms.map((t) => t.family))],
          before: spins.map((site, s) => ({ site, bit: bits[s] === 1 ? 1 : 0 })),
          amplitude: here,
          broken: { rule: instance.rule, sites: instance.sites, before, after },
        };
        return;
      }
      return;
    }
    for (const value of [0, 1]) {
      bits[depth] = value;
      forms.forEach(({ weights }, k) => (sums[k] = (sums[k] ?? 0) + value * (weights.get(depth) ?? 0)));
      if (
        forms.every(
          ({ rule, rest }, k) =>
            !rule || mayObey(rule, sums[k] ?? 0, rest[depth + 1] ?? { least: 0, most: 0, odd: false }),
        )
      )
        yield* descend(depth + 1);
      forms.forEach(({ weights }, k) => (sums[k] = (sums[k] ?? 0) - value * (weights.get(depth) ?? 0)));
    }
    bits[depth] = 0;
  }
  yield* descend(0);
}

/**
 * Does the sum of the families keep the first `judged` rules, in states that obey all of them? `accept` is offered local configurations that leave, until it takes one (it may extend
 * them to a whole allowed state); if it takes none, the answer is not known. Throws BudgetSpent. Rules must be translated in every direction.
 */
export function keepsRules(
  families: readonly Family[],
  rules: readonly LinearRule[],
  accept: (leak: Leak) => boolean,
  judged: number = rules.length,
  budget: Budget = newBudget(),
): Keeping {
  const dimension = rules[0]?.steps.length ?? families[0]?.steps.length ?? 0;
  const period = [...families, ...rules].reduce<number[]>(
    (all, { steps }) => all.map((m, d) => lcmOf(m, Math.max(steps[d] ?? 1, 1))),
    Array<number>(dimension).fill(1),
  );
  const from = Array<number>(dimension).fill(1);
  const leaving = new Set<number>();
  let [taken, reason]: [Leak | undefined, string] = [undefined, ''];
  const moves = movesOf(families, period, budget);
  for (const move of moves) {
    const touched = touching(move.flip, rules);
    const spins = new Map<string, Site>();
    const take = (site: Site): void => void spins.set(siteKey(site), { species: site.species, cell: site.cell });
    for (const { string } of move.terms) string.factors.forEach(take);
    const inAmplitude = spins.size;
    for (const instance of touched.values()) instance.sites.forEach(take);
    const instances = [...touched.values(), ...within(spins, touched, rules)];
    const sites = [...spins.values()];
    from.forEach((f, d) => {
      const along = sites.map((s) => s.cell.offset[d] ?? 0);
      from[d] = Math.max(f, Math.max(...along) - Math.min(...along) + 1);
    });
    if (touched.size === 0) continue;
    if (inAmplitude > mostAmplitudeSpins) {
      reason = `the amplitude of a move depends on ${String(inAmplitude)} spins; at most ${String(mostAmplitudeSpins)} are tabulated`;
      move.terms.forEach((t) => leaving.add(t.family));
      continue;
    }
    let offers = 0;
    for (const leak of leaks(move, families, rules, sites, inAmplitude, instances, judged, budget)) {
      leak.families.forEach((f) => leaving.add(f));
      if (taken) break;
      if (accept(leak)) taken = leak;
      else reason = 'a local configuration leads out of the rule, but no whole state that holds it was found';
      if (taken || ++offers >= mostOffers) break;
    }
  }
  if (leaving.size > 0)
    return { kept: false, moves: moves.length, leaving: [...leaving].sort((a, b) => a - b), leak: taken, reason };
  return { kept: true, moves: moves.length, evidence: shownForAllSizes(from, period) };
}
