import { Coefficient } from '../algebra/numbers/coefficient.ts';
import * as Q from '../algebra/numbers/rational.ts';
import type { Rational } from '../algebra/numbers/rational.ts';
import { commonPeriod } from '../algebra/pauli/commutant.ts';
import { phaseCoefficient } from '../algebra/pauli/collect.ts';
import { collect, refineFamily, subtractOperators } from '../algebra/pauli/family.ts';
import { identityString, multiplyStrings, stringsCommute, translateString } from '../algebra/pauli/string.ts';
import { spinClasses } from '../algebra/pauli/vector.ts';
import type { Family, LocalString, Operator, Steps } from '../algebra/pauli/types.ts';
import type { Budget } from '../limits.ts';
import { closedClusters, type Cluster } from './clusters.ts';
import { groundSpace, Refused, type GroundSpace } from './ground-space.ts';
import { clusterCoefficient, functions, rationals, shapeKey, type ClusterShape, type Ring } from './scheme.ts';

export { Refused } from './ground-space.ts';

/** The effective Hamiltonian, order by order; `operator` is the sum. Constants are families without factors, for each unit cell. */
export interface Effective {
  readonly operator: Operator;
  /** orders[n]: what order n adds; orders[0]: the ground energy for each unit cell. */
  readonly orders: readonly Operator[];
  readonly clusters: number;
}

/** Most orders; the number of clusters grows exponentially. */
const mostOrder = 12;

/** Families of an operator with the period `steps`; constants apart. Throws Refused for what is not translated or not local. */
function localFamilies(operator: Operator, name: string): { families: Family[]; constants: Family[] } {
  if (operator.extended.length > 0) throw new Refused(`${name} holds a product over the whole lattice`);
  const constants = operator.families.filter((f) => f.string.factors.length === 0);
  const families = operator.families.filter((f) => f.string.factors.length > 0);
  if (families.some((f) => f.steps.some((m) => m === 0)))
    throw new Refused(`${name} holds a term that stands in one place`);
  return { families, constants };
}

/**
 * Degenerate perturbation theory for `model` = H0 + V in the ground space of `unperturbed` = H0, through `order` in V, on the infinite lattice: a sum over connected
 * clusters of terms of V, in the canonical scheme (`scheme.ts`), exact. Coefficients are rational functions of the couplings, valid for the signs that `signOf` gives to the coefficients of
 * H0. Strings are given by representatives of few spins modulo the terms of H0. Throws Refused (not commuting, frustrated, sign not known, not translated), BudgetSpent.
 */
export function effectiveHamiltonian(
  model: Operator,
  unperturbed: Operator,
  order: number,
  signOf: (c: Coefficient) => 1 | -1 | undefined,
  budget: Budget,
): Effective {
  if (!Number.isInteger(order) || order < 0 || order > mostOrder)
    throw new Refused(`the order is a whole number from 0 to ${String(mostOrder)}`);
  const options = { open: false, budget };
  const h0 = localFamilies(collect([unperturbed], options), 'H0');
  const v = localFamilies(subtractOperators(model, unperturbed, options), 'the perturbation');
  const [first] = [...h0.families, ...v.families];
  if (!first || h0.families.length === 0) throw new Refused('H0 holds no term');
  const dimension = first.steps.length;
  const period = commonPeriod([...h0.families, ...v.families], dimension);
  const classes = spinClasses([...h0.families, ...v.families].map((f) => f.string));
  const whole = localFamilies(collect([model], options), 'the model').families;
  const space = groundSpace(h0.families, period, classes, signOf, whole, budget);
  const perturbing = v.families.flatMap((family) => refineFamily(family, period));
  const clusters = closedClusters(
    perturbing.map((f) => f.string),
    space,
    order,
    budget,
  );
  const value = clusterValues(space, perturbing, budget);
  const sums: Family[][] = Array.from({ length: order + 1 }, () => []);
  sums[0]?.push(...h0.constants, ...groundEnergy(space, dimension));
  sums[1]?.push(...v.constants);
  for (const cluster of clusters) {
    const family = value(cluster);
    if (family) sums[cluster.members.length]?.push(family);
  }
  const orders = sums.map((families) => collect([{ families, extended: [] }], options));
  return { operator: collect(orders, options), orders, clusters: clusters.length };
}

/** −Σ |c| of all terms of H0 in the enlarged cell, as a constant for each unit cell. */
function groundEnergy({ terms, period }: GroundSpace, dimension: number): Family[] {
  const energy = terms.reduce((sum, t) => sum.sub(t.energy.mul(Coefficient.rational(1, 2))), Coefficient.zero);
  return [perCell(energy, period, dimension)];
}

/** A constant of each enlarged cell, as one of each unit cell. */
const perCell = (c: Coefficient, period: Steps, dimension: number): Family => ({
  coefficient: c.mul(
    Coefficient.rational(
      1,
      period.reduce((product, m) => product * m, 1),
    ),
  ),
  string: identityString,
  steps: Array<number>(dimension).fill(1),
  needs: [],
});

/** Energies of H0's terms: rational multiples of one unit where they are that, so that the series is calculated in rationals. */
function units(space: GroundSpace): { unit: Coefficient; multiples: Rational[] } | undefined {
  const [first] = space.terms;
  if (!first) return undefined;
  const multiples = space.terms.map(({ energy }) => energy.div(first.energy)?.asRational());
  return multiples.every((m) => m !== undefined) ? { unit: first.energy, multiples } : undefined;
}

/** What a cluster adds: its string, reduced, with its coefficient; undefined where it adds nothing. */
function clusterValues(
  space: GroundSpace,
  perturbing: readonly Family[],
  budget: Budget,
): (cluster: Cluster) => Family | undefined {
  const { period } = space;
  const shared = units(space);
  const known = new Map<string, Coefficient>();
  const coefficientOf = (shape: ClusterShape, terms: readonly number[], order: number): Coefficient => {
    const run = <T>(ring: Ring<T>, energies: readonly T[], into: (value: T) => Coefficient): Coefficient => {
      const key = shapeKey(ring, shape, energies);
      const old = known.get(key);
      if (old) return old;
      const found = into(clusterCoefficient(ring, shape, energies, budget));
      known.set(key, found);
      return found;
    };
    if (!shared)
      return run(
        functions,
        terms.map((t) => space.terms[t]?.energy ?? Coefficient.one),
        (value) => value,
      );
    const scale = shared.unit.pow(1 - order) ?? Coefficient.one;
    return run(
      rationals,
      terms.map((t) => shared.multiples[t] ?? Q.one),
      (r) => scale.mul(Coefficient.rational(r.num, r.den)),
    );
  };
  const place = (string: LocalString, cell: readonly number[]): LocalString =>
    translateString(
      string,
      cell.map((c, d) => c * (period[d] ?? 1)),
    );
  return ({ members }) => {
    const strings: LocalString[] = [];
    const multiplicities: number[] = [];
    let last = '';
    let couplings = Coefficient.one;
    for (const { string, cell } of members) {
      const family = perturbing[string];
      if (!family) continue;
      couplings = couplings.mul(family.coefficient);
      const key = `${String(string)}@${cell.join(',')}`;
      if (key === last) multiplicities[multiplicities.length - 1] = (multiplicities.at(-1) ?? 0) + 1;
      else {
        strings.push(place(family.string, cell));
        multiplicities.push(1);
      }
      last = key;
    }
    const { shape, terms } = shapeOf(space, strings, multiplicities);
    const amount = coefficientOf(shape, terms, members.length);
    if (amount.isZero()) return undefined;
    const product = strings.reduce<LocalString>(
      (all, s, k) => ((multiplicities[k] ?? 0) % 2 === 1 ? multiplyStrings(all, s) : all),
      identityString,
    );
    const string = space.reduced(product);
    const coefficient = amount.mul(couplings).mul(phaseCoefficient(string.phase));
    if (string.factors.length === 0) return perCell(coefficient, period, period.length);
    return { coefficient, string: { ...string, phase: 0 }, steps: period, needs: [] };
  };
}

/** Which strings anticommute and which terms of H0 they flip, in local numbers; and the numbers of those terms. */
function shapeOf(
  space: GroundSpace,
  strings: readonly LocalString[],
  multiplicities: readonly number[],
): { shape: ClusterShape; terms: number[] } {
  const anticommute = strings.map((a) =>
    strings.reduce((mask, b, i) => (stringsCommute(a, b) ? mask : mask | (1 << i)), 0),
  );
  const numbers = new Map<string, number>();
  const terms: number[] = [];
  const flips = strings.map((string) =>
    space.flips(string).map(({ term, cell }) => {
      const key = `${String(term)}@${cell.join(',')}`;
      const old = numbers.get(key);
      if (old !== undefined) return old;
      numbers.set(key, terms.length);
      terms.push(term);
      return terms.length - 1;
    }),
  );
  return { shape: { multiplicities, anticommute, flips }, terms };
}
