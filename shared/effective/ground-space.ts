import { monomials, type LaurentVector } from '../algebra/f2/laurent.ts';
import { LaurentModule } from '../algebra/f2/module.ts';
import type { Coefficient } from '../algebra/numbers/coefficient.ts';
import { modulo } from '../algebra/pauli/collect.ts';
import { commuteOrbits, type Orbit } from '../algebra/pauli/commutation.ts';
import { canonicalFamily, refineFamily } from '../algebra/pauli/family.ts';
import { oddShifts } from '../algebra/pauli/overlaps.ts';
import {
  bodyKey,
  classKey,
  identityString,
  multiplyStrings,
  translateString,
  weight,
} from '../algebra/pauli/string.ts';
import { newFrame, type SpinClass } from '../algebra/pauli/vector.ts';
import type { Family, LocalString, Phase, Steps } from '../algebra/pauli/types.ts';
import { Coefficient as Exact } from '../algebra/numbers/coefficient.ts';
import type { Budget } from '../limits.ts';

/** Why a Hamiltonian has no ground space that this method can take, in one sentence. */
export class Refused extends Error {}

/** One term of H0 on the enlarged cell: in the ground space `string` is +1, and flipping it costs `energy` = 2 |c|. */
export interface GroundTerm {
  readonly string: LocalString;
  readonly energy: Coefficient;
}

/** A term of H0 by its number and enlarged cell. */
export interface Flip {
  readonly term: number;
  readonly cell: readonly number[];
}

/** The common eigenspace of commuting Pauli terms in which each has its lowest value, on the infinite lattice. */
export interface GroundSpace {
  readonly period: Steps;
  readonly terms: readonly GroundTerm[];
  /** Terms of H0 that anticommute with a string. */
  flips(string: LocalString): Flip[];
  /** A string of few spins that acts on the ground space as this one does; the identity (with its sign) where it is a constant there. */
  reduced(string: LocalString): LocalString;
}

const negated = (string: LocalString): LocalString => ({ ...string, phase: ((string.phase + 2) % 4) as Phase });

/**
 * The ground space of Σ c S over translated families. `signOf` tells the sign of a coefficient for the declared values, undefined where it
 * is not known. `kept`: a string that commutes with these families is preferred among equally short ones. Throws Refused where terms do not commute, a sign is not known, or the lowest values of all terms
 * exclude one another by a local relation; BudgetSpent.
 */
export function groundSpace(
  families: readonly Family[],
  period: Steps,
  classes: readonly SpinClass[],
  signOf: (c: Coefficient) => 1 | -1 | undefined,
  kept: readonly Orbit[],
  budget: Budget,
): GroundSpace {
  const dimension = period.length;
  for (const [k, a] of families.entries())
    for (const b of families.slice(k))
      if (commuteOrbits(a, b, budget).commutes !== true) throw new Refused('its terms do not commute with one another');
  const terms = families.flatMap((family) => {
    const sign = signOf(family.coefficient);
    if (!sign)
      throw new Refused(
        `the sign of ${family.coefficient.toText()} is not known: give its couplings a value other than 0`,
      );
    const lowest = sign > 0 ? negated(family.string) : family.string;
    const energy = family.coefficient.mul(Exact.rational(2 * sign));
    return refineFamily({ ...family, string: lowest }, period).map(({ string }): GroundTerm => ({ string, energy }));
  });
  const frame = newFrame(classes, period);
  const vectors = terms.map(({ string }) => frame.toVector(string));
  const module = new LaurentModule(vectors, dimension, 2 * frame.count, budget);
  const multiplied = (coefficients: LaurentVector): LocalString =>
    coefficients.reduce<LocalString>((product, p, k) => {
      const { string } = terms[k] ?? { string: identityString };
      return monomials(p, dimension).reduce(
        (all, e) =>
          multiplyStrings(
            all,
            translateString(
              string,
              e.map((c, d) => c * (period[d] ?? 1)),
            ),
          ),
        product,
      );
    }, identityString);
  for (const relation of module.syzygies())
    if (multiplied(relation).phase !== 0)
      throw new Refused('its terms are frustrated: by a local product of them not all can have their lowest value');

  const flips = (string: LocalString): Flip[] =>
    terms.flatMap(({ string: term }, k) =>
      oddShifts(string, term, budget).flatMap((shift) =>
        shift.every((c, d) => modulo(c, period[d] ?? 1) === 0)
          ? [{ term: k, cell: shift.map((c, d) => c / (period[d] ?? 1)) }]
          : [],
      ),
    );

  const cache = new Map<string, LocalString>();
  const reduced = (string: LocalString): LocalString => {
    if (string.factors.length === 0) return string;
    const key = bodyKey(string);
    const bare: LocalString = { phase: 0, factors: string.factors };
    let found = cache.get(key);
    if (!found) {
      const inside = module.decompose(frame.toVector(bare));
      // Π terms = i^k bare = +1, so bare = i^(−k)
      found = inside.inside
        ? { phase: ((4 - multiplied(inside.coefficients).phase) % 4) as Phase, factors: [] }
        : lightest(bare, terms, period, kept, budget);
      cache.set(key, found);
    }
    return { ...found, phase: ((found.phase + string.phase) % 4) as Phase };
  };
  return { period, terms, flips, reduced };
}

/** Strings looked at on the way to a light one, and how much heavier than the first they may be. */
const mostLooked = 3_000;
const slack = 1;

/** Terms, moved so that they share a spin with the string. */
function touching(string: LocalString, terms: readonly GroundTerm[], period: Steps): LocalString[] {
  const found = new Map<string, LocalString>();
  terms.forEach(({ string: term }, k) => {
    for (const f of string.factors)
      for (const g of term.factors) {
        if (classKey(f) !== classKey(g)) continue;
        const by = f.cell.offset.map((c, d) => c - (g.cell.offset[d] ?? 0));
        if (by.every((c, d) => modulo(c, period[d] ?? 1) === 0))
          found.set(`${String(k)}@${by.join(',')}`, translateString(term, by));
      }
  });
  return [...found.values()];
}

/** The lightest string found among products with terms (all +1); of equally light ones one that commutes with `kept`, then the first in order. */
function lightest(
  start: LocalString,
  terms: readonly GroundTerm[],
  period: Steps,
  kept: readonly Orbit[],
  budget: Budget,
): LocalString {
  const seen = new Map<string, LocalString>([[bodyKey(start), start]]);
  let frontier = [start];
  let least = weight(start);
  while (frontier.length > 0 && seen.size < mostLooked) {
    const next: LocalString[] = [];
    for (const string of frontier)
      for (const term of touching(string, terms, period)) {
        budget.spend(1 + string.factors.length);
        const product = multiplyStrings(term, string);
        if (weight(product) > least + slack || seen.has(bodyKey(product)) || seen.size >= mostLooked) continue;
        seen.set(bodyKey(product), product);
        least = Math.min(least, weight(product));
        next.push(product);
      }
    frontier = next.filter((s) => weight(s) <= least + slack);
  }
  const light = [...seen.values()].filter((s) => weight(s) === least);
  const free = light.length > 1 ? light.filter((s) => commutesWithAll(s, period, kept, budget)) : light;
  const text = (s: LocalString): string =>
    bodyKey(canonicalFamily({ coefficient: Exact.one, string: s, steps: period, needs: [] }, false).string);
  const [best] = (free.length > 0 ? free : light)
    .map((s) => ({ s, key: text(s) }))
    .sort((a, b) => (a.key < b.key ? -1 : 1));
  return best?.s ?? start;
}

const commutesWithAll = (string: LocalString, period: Steps, orbits: readonly Orbit[], budget: Budget): boolean =>
  orbits.every((orbit) => commuteOrbits({ string, steps: period }, orbit, budget).commutes === true);
