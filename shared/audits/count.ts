import { countingRule, countStates, type CountingRule } from '../algebra/finite/counting.ts';
import { isHermitian, isIdentity, pauliPhase, toPauli } from '../algebra/finite/string.ts';
import type { SiteTable } from '../algebra/finite/types.ts';
import { siteTable, wrapString } from '../algebra/finite/wrap.ts';
import * as Q from '../algebra/numbers/rational.ts';
import { translateString } from '../algebra/pauli/string.ts';
import type { RuleValue, Subject, Values } from '../language/values.ts';
import { shifted } from '../lattice/cells.ts';
import { sizeText, type Cluster } from '../lattice/cluster.ts';
import { BudgetSpent, newBudget } from '../limits.ts';
import type { Audit, Finding, Question } from './audit.ts';
import { openFinding, sizesOf } from './numeric.ts';
import { keyOf } from './question.ts';
import {
  clusterOf,
  lawConstraints,
  speciesCells,
  speciesOfOperator,
  symmetryConstraint,
  type SectorConstraint,
} from './sector.ts';
import { Unanswerable } from './unanswerable.ts';

/** Elementary steps of one count. */
const mostSteps = 60_000_000;

/** Instances of a rule on a cluster; terms that an open edge cuts are left out of their sums. Throws Unanswerable. */
function ruleInstances(cluster: Cluster, table: SiteTable, rule: RuleValue): CountingRule[] {
  return rule.families.flatMap(({ operator, steps, needs, anchor }) => {
    if (!cluster.admits(steps))
      throw new Unanswerable(
        `rule ${rule.name} repeats by ${steps.join(' x ')} cells, which does not fit on ${sizeText(cluster.size)}`,
      );
    return cluster.orbit(steps, anchor.offset, anchor.offset).flatMap((by): CountingRule[] => {
      if ([anchor, ...needs].some((cell) => cluster.number(shifted(cell, by)) === undefined)) return [];
      const terms = operator.families.flatMap((family) => {
        const string = wrapString(table, cluster, translateString(family.string, by), { needs: family.needs, by });
        return string ? [{ coefficient: family.coefficient, string }] : [];
      });
      const constants = terms.filter(({ string }) => isIdentity(string));
      const zero = rule.bound.sub(rule.bound);
      const constant = constants.reduce(
        (sum, { coefficient, string }) => (pauliPhase(string) === 2 ? sum.sub(coefficient) : sum.add(coefficient)),
        zero,
      );
      try {
        const rest = terms.filter(({ string }) => !isIdentity(string));
        return [countingRule(rest, constant, rule.relation, rule.bound)];
      } catch (error) {
        if (error instanceof RangeError) throw new Unanswerable(`rule ${rule.name}: ${error.message}`, true);
        throw error;
      }
    });
  });
}

/** A product of Z's that has a value, as a parity of bits. Throws Unanswerable for strings that flip. */
function parityRule({ label, string, value }: SectorConstraint, size: string): CountingRule {
  const { factors } = toPauli(string);
  if (!isHermitian(string) || factors.some(({ pauli }) => pauli !== 'z'))
    throw new Unanswerable(
      `${label} is not diagonal on ${size}: basis states are counted, so it has to be a product of Z's`,
      true,
    );
  const minus = (pauliPhase(string) === 2) !== (value === -1);
  return {
    kind: 'linear',
    sites: factors.map(({ spin }) => spin),
    weights: factors.map(() => Q.one),
    relation: minus ? 'odd' : 'even',
    bound: Q.zero,
  };
}

function speciesOf(values: Values, subjects: readonly Subject[]): Set<string> {
  const names = new Set<string>();
  for (const { name } of subjects) {
    const value = values.find(name);
    if (value?.what === 'rule') for (const family of value.families) speciesOfOperator(family.operator, names);
    else if (value?.what === 'law')
      for (const { string } of value.families) for (const factor of string.factors) names.add(factor.species);
    else if (value?.what === 'symmetry')
      for (const { string } of value.extended.parts) for (const factor of string.factors) names.add(factor.species);
    else throw new Unanswerable(`${name} is not a rule, a law or a symmetry`, true);
  }
  return names;
}

/** How many basis states of the spins that the names speak of obey all of them on a cluster, exactly. Throws Unanswerable, BudgetSpent. */
function countOn(values: Values, subjects: readonly Subject[], cluster: Cluster): { count: bigint; spins: number } {
  const table = siteTable(cluster, speciesCells(values, speciesOf(values, subjects)));
  const size = sizeText(cluster.size);
  const rules = subjects.flatMap(({ name }): CountingRule[] => {
    const value = values.find(name);
    if (value?.what === 'rule') return ruleInstances(cluster, table, value);
    if (value?.what === 'law') return lawConstraints(cluster, table, value).map((c) => parityRule(c, size));
    if (value?.what === 'symmetry') return [parityRule(symmetryConstraint(cluster, table, value), size)];
    return [];
  });
  const spins = table.sites.length;
  return { count: countStates(spins, rules, newBudget(mostSteps, 'steps of counting')), spins };
}

function decide({ statement, values, size }: Question): readonly Finding[] {
  const names = statement.subjects.map(({ name }) => name).join(', ');
  if (!size) return [];
  const at = sizeText(size);
  const words = `the states that obey ${names} on ${at}`;
  try {
    const { count, spins } = countOn(values, statement.subjects, clusterOf(values, size));
    const plain = count <= BigInt(Number.MAX_SAFE_INTEGER);
    return [
      {
        evidence: { kind: 'exact on', sizes: [at] },
        statement: `${String(count)} of the 2^${String(spins)} basis states obey ${names} on ${at}`,
        figures: { size: at, count: plain ? Number(count) : String(count), spins },
      },
    ];
  } catch (error) {
    if (error instanceof BudgetSpent)
      return [openFinding(words, `${error.message}; take a smaller size`, { size: at })];
    if (!(error instanceof Unanswerable)) throw error;
    return [
      { ...openFinding(words, error.message, { size: at }), ...(error.isProblem ? { problem: error.message } : {}) },
    ];
  }
}

export const count: Audit = {
  name: 'count',
  help: 'How many basis states obey a diagonal rule, such as one dimer at each vertex? Counted exactly, one claim for each size.',
  example: 'audit count one on 4 x 4, 8 x 8',
  questions: (statement, values) =>
    sizesOf(statement.sizes, values).map((size) => ({
      audit: 'count',
      statement,
      values,
      size,
      part: '',
      key: keyOf(statement, values, '', ['spins'], size),
    })),
  cost: () => ({ operations: mostSteps, bytes: 5e7, words: 'exact counting' }),
  // eslint-disable-next-line require-yield -- exact: answered in one go
  *decide(question) {
    return decide(question);
  },
};
