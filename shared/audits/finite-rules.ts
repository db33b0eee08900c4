import type { Coefficient } from '../algebra/numbers/coefficient.ts';
import type { SiteTable } from '../algebra/finite/types.ts';
import type { Family } from '../algebra/pauli/types.ts';
import type { RuleValue } from '../language/values.ts';
import type { Cluster } from '../lattice/cluster.ts';
import { shifted, type Cell } from '../lattice/cells.ts';
import type { DiagonalRule } from '../spectra/bases/enumerated.ts';
import { fitting, Unanswerable } from './unanswerable.ts';

/** An exact rational or integer constant as a number; rules count in these. */
function numberOf(coefficient: Coefficient, rule: string): number {
  if (!coefficient.isConstant() || !coefficient.isReal())
    throw new Unanswerable(`rule ${rule} has the coefficient ${coefficient.toText()}; counts take plain numbers`, true);
  return coefficient.toFloat(new Map()).re;
}

interface Linear {
  readonly weights: Map<number, number>;
  constant: number;
}

/** Adds coefficient × Z-string to a linear form in bits: c Z = c − 2 c b. */
function addTerm(form: Linear, family: Family, by: readonly number[], table: SiteTable, rule: string): boolean {
  const { string } = family;
  const weight = numberOf(family.coefficient, rule);
  const [factor, ...more] = string.factors;
  if (!factor) {
    form.constant += weight;
    return true;
  }
  if (more.length > 0 || factor.pauli !== 'z')
    throw new Unanswerable(`rule ${rule} is not a sum of n's: each term takes one spin and is diagonal`, true);
  const sign = string.phase === 2 ? -1 : 1;
  const spin = table.number({ species: factor.species, cell: shifted(factor.cell, by) });
  if (spin === undefined) return factor.optional === true;
  form.constant += sign * weight;
  form.weights.set(spin, (form.weights.get(spin) ?? 0) - 2 * sign * weight);
  return true;
}

const lowHigh = (cells: readonly Cell[], dimension: number): [number[], number[]] => {
  const along = (pick: (...n: number[]) => number): number[] =>
    Array.from({ length: dimension }, (_, d) => (cells.length === 0 ? 0 : pick(...cells.map((c) => c.offset[d] ?? 0))));
  return [along(Math.min), along(Math.max)];
};

/** Exchanges even and odd when the constant of the form is odd, and moves it to the bound otherwise. */
function related(rule: RuleValue, form: Linear): DiagonalRule {
  const entries = [...form.weights].filter(([, weight]) => weight !== 0);
  const sites = entries.map(([site]) => site);
  const weights = entries.map(([, weight]) => weight);
  if (rule.relation === 'even' || rule.relation === 'odd') {
    const turned = Math.round(form.constant) % 2 !== 0;
    const other = rule.relation === 'even' ? 'odd' : 'even';
    return { sites, weights, relation: turned ? other : rule.relation, bound: 0 };
  }
  return { sites, weights, relation: rule.relation, bound: numberOf(rule.bound, rule.name) - form.constant };
}

/**
 * A rule on a cluster, one for each cell of its domain that stands there. A family's optional factors are left out where
 * an open edge cuts them. Throws Unanswerable for a rule that is not linear in bits or does not fit the size.
 */
export function diagonalRules(cluster: Cluster, table: SiteTable, rule: RuleValue): DiagonalRule[] {
  return fitting(`rule ${rule.name}`, cluster, () =>
    rule.families.flatMap((family) => instances(cluster, table, rule, family)),
  );
}

function instances(
  cluster: Cluster,
  table: SiteTable,
  rule: RuleValue,
  family: RuleValue['families'][number],
): DiagonalRule[] {
  if (!cluster.admits(family.steps))
    throw new Unanswerable(`rule ${rule.name} does not fit on this size: its period is ${family.steps.join(' x ')}`);
  const [low, high] = lowHigh([family.anchor], cluster.dimension);
  const rules: DiagonalRule[] = [];
  for (const by of cluster.orbit(family.steps, low, high)) {
    if ([family.anchor, ...family.needs].some((cell) => cluster.number(shifted(cell, by)) === undefined)) continue;
    const form: Linear = { weights: new Map(), constant: 0 };
    for (const term of family.operator.families) {
      // A term of a sum stands only where its own cells do.
      if (term.needs.some((cell) => cluster.number(shifted(cell, by)) === undefined)) continue;
      addTerm(form, term, by, table, rule.name);
    }
    rules.push(related(rule, form));
  }
  return rules;
}
