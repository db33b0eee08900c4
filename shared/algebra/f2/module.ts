import { BudgetSpent, limits, newBudget, type Budget } from '../../limits.ts';
import { shownForAllSizes, type AllSizes } from './all-sizes.ts';
import { GroebnerBasis } from './groebner.ts';
import {
  add,
  addVectors,
  antipode,
  combine,
  equalVectors,
  isZero,
  isZeroVector,
  normalised,
  shift,
  vectorKey,
  vectorWeight,
  zero,
  zeroVector,
  type Laurent,
  type LaurentVector,
} from './laurent.ts';

/** Target = Σ coefficients[g] · generators[g]. `least`: no combination has fewer monomials (shown by exhausting the smaller ones). */
export interface Decomposition {
  readonly inside: true;
  readonly coefficients: LaurentVector;
  readonly least: boolean;
}
/** There is no combination, of any size (shown by a Gröbner basis). */
export interface NoDecomposition {
  readonly inside: false;
}

/** Steps spent on combinations of few monomials before the Gröbner basis is asked, and after it has answered that there is one. */
const quickSteps = 20_000;
const searchSteps = 300_000;
/** Most monomials of a combination that the quick search looks for. */
const mostSearched = 24;

/**
 * A module over the Laurent polynomials over F2, given by generators of `length` components in `dimension` variables (1 to 3). Relations and
 * membership are exact; nothing is computed before it is asked for. Everything throws BudgetSpent.
 */
export class LaurentModule {
  readonly generators: readonly LaurentVector[];
  readonly dimension: number;
  readonly length: number;
  private readonly budget: Budget;
  private cachedBasis: GroebnerBasis | undefined;
  private cachedSyzygies: readonly LaurentVector[] | undefined;

  constructor(
    generators: readonly LaurentVector[],
    dimension: number,
    length: number,
    budget: Budget = newBudget(limits.operations, 'operations of Laurent algebra'),
  ) {
    this.generators = generators;
    this.dimension = dimension;
    this.length = length;
    this.budget = budget;
  }

  private basis(): GroebnerBasis {
    this.cachedBasis ??= new GroebnerBasis(this.generators, this.dimension, this.length, this.budget);
    return this.cachedBasis;
  }

  /** True if the vector is a combination of the generators. */
  contains(vector: LaurentVector): boolean {
    return isZeroVector(vector) || this.basis().express(vector) !== undefined;
  }

  /** Relations Σ c_g v_g = 0 that generate all of them, light ones first, superfluous ones left out where the budget allows. */
  syzygies(): readonly LaurentVector[] {
    this.cachedSyzygies ??= fewerGenerators(this.basis().syzygies, this.dimension, this.generators.length, this.budget);
    return this.cachedSyzygies;
  }

  /** A combination of the generators that gives the target, of fewest monomials among those found; or that there is none. */
  decompose(target: LaurentVector): Decomposition | NoDecomposition {
    const quick = this.search(target, mostSearched, newBudget(quickSteps));
    if (quick.found) return { inside: true, coefficients: quick.found, least: true };
    const any = this.basis().express(target);
    if (!any) return { inside: false };
    const light = this.lighter(any);
    const below = this.search(target, vectorWeight(light) - 1, newBudget(searchSteps));
    return { inside: true, coefficients: below.found ?? light, least: below.found !== undefined || below.exhausted };
  }

  /** Evidence, for every size, that a combination gives the target; undefined if it does not. */
  verify(coefficients: LaurentVector, target: LaurentVector): AllSizes | undefined {
    const sum = combine(coefficients, this.generators, this.length);
    const ones = Array<number>(this.dimension).fill(1);
    // wrapping is a ring homomorphism, so an identity of Laurent vectors holds on every torus
    return equalVectors(sum, target) ? shownForAllSizes(ones, ones) : undefined;
  }

  /**
   * The lightest combination of at most `most` monomials, by iterative deepening: some generator has to cancel the highest monomial that is left.
   * `exhausted`: there is none; neither: the steps ran out.
   */
  private search(target: LaurentVector, most: number, steps: Budget): { found?: LaurentVector; exhausted: boolean } {
    const heaviest = Math.max(1, ...this.generators.map(vectorWeight));
    try {
      for (let weight = Math.ceil(vectorWeight(target) / heaviest); weight <= most; weight++) {
        const found = this.deepen(target, weight, heaviest, steps);
        if (found) return { found, exhausted: false };
      }
      return { exhausted: true };
    } catch (error) {
      if (!(error instanceof BudgetSpent)) throw error;
      return { exhausted: false };
    }
  }

  private deepen(rest: LaurentVector, left: number, heaviest: number, steps: Budget): LaurentVector | undefined {
    const weight = vectorWeight(rest);
    if (weight === 0) return zeroVector(this.generators.length);
    if (weight > left * heaviest) return undefined;
    const component = this.narrowest(rest);
    const top = rest[component]?.at(-1) ?? 0;
    for (const [g, generator] of this.generators.entries())
      for (const m of generator[component] ?? []) {
        steps.spend(1 + (weight >>> 2));
        const by = top - m;
        const next = rest.map((p, k) => add(p, shift(generator[k] ?? zero, by)));
        const found = this.deepen(next, left - 1, heaviest, steps);
        if (found) return found.map((p, k) => (k === g ? add(p, [by]) : p));
      }
    return undefined;
  }

  /** The component, not zero in `rest`, with fewest ways to cancel a monomial. */
  private narrowest(rest: LaurentVector): number {
    let best = -1;
    let fewest = Infinity;
    rest.forEach((p, c) => {
      if (isZero(p)) return;
      const ways = this.generators.reduce((sum, g) => sum + (g[c]?.length ?? 0), 0);
      if (ways < fewest) [best, fewest] = [c, ways];
    });
    return best;
  }

  /** Relations added as long as one makes the combination lighter. */
  private lighter(coefficients: LaurentVector): LaurentVector {
    let best = coefficients;
    for (let again = true; again;) {
      again = false;
      for (const syzygy of this.syzygies())
        for (const by of alignments(syzygy, best)) {
          this.budget.spend(1 + vectorWeight(best));
          const next = addVectors(
            best,
            syzygy.map((p) => shift(p, by)),
          );
          if (vectorWeight(next) < vectorWeight(best)) {
            best = next;
            again = true;
          }
        }
    }
    return best;
  }
}

/** Shifts that bring some monomial of a onto one of b, component by component. */
function alignments(a: LaurentVector, b: LaurentVector): number[] {
  const shifts = new Set<number>();
  a.forEach((p, c) => {
    for (const m of p) for (const n of b[c] ?? []) shifts.add(n - m);
  });
  return [...shifts];
}

/**
 * A generating set of the module that `vectors` generate, light vectors first, without those that the lighter ones generate. Where that would cost too much
 * the rest is kept as it is.
 */
export function fewerGenerators(
  vectors: readonly LaurentVector[],
  dimension: number,
  length: number,
  budget: Budget = newBudget(limits.operations, 'operations of Laurent algebra'),
): LaurentVector[] {
  const distinct = new Map<string, LaurentVector>();
  for (const v of vectors) {
    if (isZeroVector(v)) continue;
    const form = normalised(v, dimension);
    distinct.set(vectorKey(form), form);
  }
  const sorted = reducedPairs([...distinct.values()], dimension, budget).sort(
    (a, b) => vectorWeight(a) - vectorWeight(b),
  );
  const kept: LaurentVector[] = [];
  const cost = newBudget(Math.min(Math.max(budget.left >>> 2, 0), 4_000_000), 'operations of leaving out relations');
  for (const [k, v] of sorted.entries()) {
    try {
      if (kept.length === 0 || !new LaurentModule(kept, dimension, length, cost).contains(v)) kept.push(v);
    } catch (error) {
      if (!(error instanceof BudgetSpent)) throw error;
      return [...kept, ...sorted.slice(k)];
    }
  }
  return kept;
}

/** Each vector made lighter by translates of the others, as far as single ones do. */
function reducedPairs(vectors: readonly LaurentVector[], dimension: number, budget: Budget): LaurentVector[] {
  let current = [...vectors];
  if (current.length > 200) return current;
  for (let again = true; again;) {
    again = false;
    current = current.filter((v) => !isZeroVector(v)).sort((a, b) => vectorWeight(a) - vectorWeight(b));
    for (let i = 0; i < current.length; i++)
      for (let j = 0; j < i; j++) {
        const light = current[j] ?? [];
        for (const by of alignments(light, current[i] ?? [])) {
          const heavy = current[i] ?? [];
          budget.spend(1 + vectorWeight(heavy));
          const next = addVectors(
            heavy,
            light.map((p) => shift(p, by)),
          );
          if (vectorWeight(next) < vectorWeight(heavy)) {
            current[i] = next;
            again = true;
          }
        }
      }
  }
  return current.map((v) => normalised(v, dimension));
}

/** The transposed matrix with x -> 1/x: rows become columns. */
export const dagger = (rows: readonly LaurentVector[], length: number): LaurentVector[] =>
  Array.from({ length }, (_, c) => rows.map((row): Laurent => antipode(row[c] ?? zero)));

/**
 * Vectors w of `length` components with Σ_c row[c] · w[c] = 0 for every row: the kernel of a matrix (rows × length), as generators.
 * It is the module of relations among the columns.
 */
export function kernel(
  rows: readonly LaurentVector[],
  dimension: number,
  length: number,
  budget?: Budget,
): readonly LaurentVector[] {
  const columns = Array.from({ length }, (_, c) => rows.map((row) => row[c] ?? zero));
  return new LaurentModule(columns, dimension, rows.length, budget).syzygies();
}
