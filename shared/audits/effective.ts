import type { Coefficient } from '../algebra/numbers/coefficient.ts';
import { MissingValue } from '../algebra/numbers/coefficient.ts';
import type { Family, Operator } from '../algebra/pauli/types.ts';
import { effectiveHamiltonian, Refused, type Effective } from '../effective/series.ts';
import type { Values } from '../language/values.ts';
import { BudgetSpent, newBudget } from '../limits.ts';
import { stringPhrase } from '../maps/phrases.ts';
import { coefficientText } from '../typeset/coefficients.ts';
import type { TypesetContext } from '../typeset/context.ts';
import { typesetContext } from '../typeset/declarations.ts';
import { operatorTex } from '../typeset/operators.ts';
import type { Audit, Finding, Question } from './audit.ts';
import { couplingValues, openFinding } from './numeric.ts';
import { keyOf } from './question.ts';

/** Elementary steps of one series. */
const mostSteps = 400_000_000;

const sources = [
  'Canonical effective Hamiltonian: J. des Cloizeaux, Nucl. Phys. 20, 321 (1960); M. Takahashi, J. Phys. C 10, 1289 (1977).',
  'The same as the Schrieffer–Wolff transformation: S. Bravyi, D. DiVincenzo, D. Loss, Ann. Phys. 326, 2793 (2011).',
];

const isConstant = (family: Family): boolean => family.string.factors.length === 0;

/** The part of an operator that is a number for each unit cell. */
const constantOf = (operator: Operator): Coefficient | undefined =>
  operator.families
    .filter(isConstant)
    .reduce<Coefficient | undefined>((sum, f) => sum?.add(f.coefficient) ?? f.coefficient, undefined);

const withoutConstants = (operator: Operator): Operator => ({
  families: operator.families.filter((f) => !isConstant(f)),
  extended: operator.extended,
});

/** Number of a coefficient for the declared couplings; null where one has no value. */
function valueOf(c: Coefficient, couplings: ReadonlyMap<string, number>): number | null {
  try {
    return c.toFloat(couplings).re;
  } catch (error) {
    if (error instanceof MissingValue) return null;
    throw error;
  }
}

/** "Jz > 0": what was taken of a coefficient of H0. */
function signWords(c: Coefficient, sign: 1 | -1): string {
  const { numerator } = c.parts();
  const minus = numerator.length === 1 && (numerator[0]?.num ?? 0n) < 0n;
  return `${(minus ? c.neg() : c).toText()} ${sign > 0 === minus ? '<' : '>'} 0`;
}

interface Asked {
  readonly model: Operator;
  readonly unperturbed: Operator;
  readonly order: number;
}

function asked({ statement, values }: Question): Asked | string {
  const [subject] = statement.subjects;
  const model = values.find(subject?.name ?? '');
  const unperturbed = values.find(statement.from ?? '');
  if (model?.what !== 'model') return `${subject?.name ?? 'the subject'} is not a model`;
  if (model.seams.length > 0) return `${model.name} has a seam; the infinite lattice has none`;
  if (unperturbed?.what !== 'model') return `${statement.from ?? 'what stands behind from'} is not a model`;
  return { model: model.operator, unperturbed: unperturbed.operator, order: statement.order ?? 2 };
}

function decide(question: Question): readonly Finding[] {
  const { statement, values } = question;
  const name = statement.subjects[0]?.name ?? '';
  const from = statement.from ?? '';
  const words = `${name} to order ${String(statement.order ?? 2)} in the ground space of ${from}`;
  const ask = asked(question);
  if (typeof ask === 'string') return [openFinding(words, ask)];
  const couplings = couplingValues(values);
  const signs = new Map<string, string>();
  const signOf = (c: Coefficient): 1 | -1 | undefined => {
    const value = valueOf(c, couplings);
    if (value === null || value === 0) return undefined;
    const sign = value > 0 ? 1 : -1;
    if (!c.isConstant()) signs.set(c.key(), signWords(c, sign));
    return sign;
  };
  try {
    const budget = newBudget(mostSteps, 'steps of a series');
    const found = effectiveHamiltonian(ask.model, ask.unperturbed, ask.order, signOf, budget);
    return [finding(words, found, values, couplings, [...signs.values()], ask.order)];
  } catch (error) {
    if (error instanceof Refused) return [openFinding(words, `${from}: ${error.message}`)];
    if (error instanceof BudgetSpent) return [openFinding(words, `${error.message}; take a lower order`)];
    throw error;
  }
}

function finding(
  words: string,
  found: Effective,
  values: Values,
  couplings: ReadonlyMap<string, number>,
  signs: readonly string[],
  order: number,
): Finding {
  const context = typesetContext(values, { named: false });
  const family = values.lattice?.family;
  if (!context || !family) return openFinding(words, 'no lattice is declared');
  const operator = withoutConstants(found.operator);
  const constant = constantOf(found.operator);
  const firstOrder = (one: Family): number => found.orders.findIndex((o) => o.families.some((f) => sameTerm(f, one)));
  const terms = operator.families.map((one) => ({
    tex: termTex(one, context),
    coefficient: one.coefficient.toText(),
    value: valueOf(one.coefficient, couplings),
    string: stringPhrase(one.string, family),
    orbit: one.string.factors.map(({ species, cell, pauli }) => ({ species, cell, pauli })),
    steps: one.steps,
    order: firstOrder(one),
  }));
  const list = terms.map((t) => `${t.coefficient} × ${t.string}`).join('; ');
  // Order by order: the collected constant is one long fraction.
  const constants = found.orders.map(constantOf).filter((c): c is Coefficient => c !== undefined && !c.isZero());
  const each = `${constants.length === 0 ? '0' : joined(constants.map((c) => c.toText()))} for each unit cell`;
  const besides = terms.length > 0 && constants.length > 0 ? `, besides ${each}` : '';
  const sums = [
    ...(terms.length > 0 ? [operatorTex(operator, context)] : []),
    ...(constants.length > 0 ? [`${joined(constants.map(coefficientText))} \\text{ for each unit cell}`] : []),
  ];
  return {
    evidence: { kind: 'exact on', sizes: ['the infinite lattice'] },
    statement: `${words}: ${terms.length === 0 ? `a constant, ${each}` : list}${besides}`,
    tex: `H_{\\mathrm{eff}} = ${sums.length === 0 ? '0' : joined(sums)}`,
    figures: {
      terms,
      constant: constant?.toText() ?? '0',
      constantValue: constant ? valueOf(constant, couplings) : 0,
      order,
      byOrder: found.orders.map((o) => withoutConstants(o).families.length),
      clusters: found.clusters,
      scheme: 'canonical (des Cloizeaux, Schrieffer–Wolff)',
    },
    cautions: [
      ...(signs.length > 0 ? [`taken for ${[...new Set(signs)].join(', ')}`] : []),
      'strings stand for their class modulo the terms of the unperturbed model; another representative may carry the other sign',
      `on tori that are not longer than ${String(order)} steps of the perturbation, processes that wind around add further terms`,
    ],
    sources,
  };
}

/** A sum of signed texts. */
const joined = (texts: readonly string[]): string => texts.join(' + ').replaceAll('+ -', '- ');

const termTex = (one: Family, context: TypesetContext): string =>
  operatorTex({ families: [one], extended: [] }, context);

const sameTerm = (a: Family, b: Family): boolean =>
  JSON.stringify([a.string.factors, a.steps]) === JSON.stringify([b.string.factors, b.steps]);

export const effective: Audit = {
  name: 'effective',
  help: 'What does a model do in the ground space of a simpler one? Perturbation theory on the infinite lattice, with exact coefficients.',
  example: 'audit effective compass from strong order 4',
  questions: (statement, values) => [
    {
      audit: 'effective',
      statement,
      values,
      size: undefined,
      part: '',
      key: keyOf(statement, values, '', ['coupling', 'spins']),
    },
  ],
  cost: ({ statement }) => ({
    operations: mostSteps,
    bytes: 2e8,
    words: `a series to order ${String(statement.order ?? 2)}`,
  }),
  // eslint-disable-next-line require-yield -- exact: answered in one go
  *decide(question) {
    return decide(question);
  },
};
