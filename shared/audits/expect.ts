import { sizeText } from '../lattice/cluster.ts';
import { groundDegeneracy, groundMean } from '../spectra/observe.ts';
import type { Audit, Finding, Means, Progress, Question } from './audit.ts';
import { standing } from './grades.ts';
import { groundCost, groundOf, meanBound, meanTerms, measured } from './ground.ts';
import { couplingValues, failureFinding, sizesOf } from './numeric.ts';
import { keyOf } from './question.ts';
import { finiteSubject, subjectWords, type FiniteSubject } from './sector.ts';
import { sideNotes } from './spectrum.ts';

/** True if a term acts on three spins of links or more: a loop or a star, of which readers like to conclude too much. */
export const isLoop = ({ table }: FiniteSubject, operator: ReturnType<typeof measured>): boolean =>
  operator.terms.some(({ string }) => {
    let links = 0;
    for (let spin = 0; spin < string.n; spin++) {
      const acts = (((string.x[spin >>> 5] ?? 0) | (string.z[spin >>> 5] ?? 0)) >>> (spin & 31)) & 1;
      if (acts && table.sites[spin]?.cell.kind === 'links') links++;
    }
    return links >= 3;
  });

function* decide({ statement, values, size }: Question, means: Means): Generator<Progress, readonly Finding[]> {
  const [side] = statement.subjects;
  const name = statement.quantity ?? '';
  if (!side || !size) return [];
  const at = sizeText(size);
  const words = `the mean of ${name} in the ground space of ${subjectWords(values, side)} on ${at}`;
  try {
    const subject = finiteSubject(values, side, size);
    const operator = measured(values, name, subject);
    const couplings = couplingValues(values);
    const { terms, constant, weight } = meanTerms(name, operator, couplings);
    const spectrum = yield* groundOf(values, subject, couplings, true, means, `${side.name} on ${at}`);
    try {
      const value = groundMean(spectrum, terms, constant);
      const { degeneracy } = groundDegeneracy(spectrum);
      const bound = meanBound(spectrum, weight);
      return [
        {
          evidence: { kind: 'residuals', tolerance: bound, largest: Math.max(...spectrum.residuals), sizes: [at] },
          statement: `${words} is ${value.toFixed(9)}`,
          figures: {
            size: at,
            value,
            degeneracy,
            energy: spectrum.energies[0] ?? null,
            bound,
            dimension: spectrum.dimension,
          },
          cautions: [
            ...(degeneracy > 1
              ? [
                  `averaged over the ${String(degeneracy)} ground states, so that it does not depend on a choice among them`,
                ]
              : []),
            ...(isLoop(subject, operator) ? [standing.loops] : []),
            standing.cluster,
            ...sideNotes(side.name, subject.model.notes, spectrum),
          ],
        },
      ];
    } finally {
      spectrum.space?.free();
    }
  } catch (error) {
    return [failureFinding(words, values, error)];
  }
}

export const expect: Audit = {
  name: 'expect',
  help: 'What is the mean of an operator in the ground space of a model? One claim for each size; an operator with a parameter stands for the cell at the origin.',
  example: 'audit expect W in ground of M [flip = +1] on 3 x 3',
  questions: (statement, values) =>
    sizesOf(statement.sizes, values).map((size) => ({
      audit: 'expect',
      statement,
      values,
      size,
      part: '',
      key: keyOf(statement, values, '', ['coupling', 'spins'], size),
    })),
  cost({ statement, values, size }) {
    const [side] = statement.subjects;
    if (!side || !size) return { operations: 0, bytes: 0, words: '' };
    return groundCost(values, () => finiteSubject(values, side, size), couplingValues(values));
  },
  decide,
};
