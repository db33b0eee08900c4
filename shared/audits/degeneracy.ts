import { sizeText } from '../lattice/cluster.ts';
import type { Size } from '../lattice/cells.ts';
import type { Subject, Values } from '../language/values.ts';
import type { Spectrum } from '../spectra/solve.ts';
import type { Audit, Finding, Means, Progress, Question } from './audit.ts';
import { standing } from './grades.ts';
import { failureFinding, levelsOf, sizesOf, spectrumQuestion, subjectCost } from './numeric.ts';
import { keyOf } from './question.ts';
import { finiteSubject, subjectWords } from './sector.ts';
import { sideNotes } from './spectrum.ts';

/** Levels asked for at first, and at most when the ground multiplet is larger than that. */
const firstLevels = 6;
const mostLevels = 96;

/** A whole ground multiplet and the level above it; asks for more levels until it has both. */
export function* groundMultiplet(
  values: Values,
  side: Subject,
  size: Size,
  means: Means,
  couplings?: ReadonlyMap<string, number>,
): Generator<Progress, { spectrum: Spectrum; notes: readonly string[] }> {
  const subject = finiteSubject(values, side, size);
  const doing = `${side.name} on ${sizeText(size)}`;
  for (let levels = firstLevels; ; levels = Math.min(2 * levels, mostLevels)) {
    const spectrum = yield* levelsOf(spectrumQuestion(values, subject, levels, couplings), subject, means, doing);
    const whole = spectrum.multiplets[0]?.complete === true && spectrum.multiplets.length > 1;
    if (whole || spectrum.energies.length >= spectrum.dimension || levels >= mostLevels)
      return { spectrum, notes: sideNotes(side.name, subject.model.notes, spectrum) };
  }
}

function finding(words: string, size: Size, spectrum: Spectrum, notes: readonly string[]): Finding {
  const [ground, next] = spectrum.multiplets;
  const at = sizeText(size);
  if (!ground || (!ground.complete && spectrum.energies.length < spectrum.dimension))
    return {
      evidence: {
        kind: 'reason',
        reason: `more than ${String(spectrum.energies.length)} levels are degenerate; the multiplet was not found whole`,
      },
      statement: `the ground space of ${words} on ${at}`,
      figures: { size: at },
    };
  const energy = ground.energy;
  const gap = next ? next.energy - energy : null;
  const states = ground.multiplicity === 1 ? 'one ground state' : `${String(ground.multiplicity)} ground states`;
  const above = gap === null ? 'no level above' : `gap ${gap.toFixed(9)}`;
  return {
    evidence: {
      kind: 'residuals',
      tolerance: spectrum.residuals[0] ?? 0,
      largest: Math.max(...spectrum.residuals),
      sizes: [at],
    },
    statement: `${words} has ${states} on ${at}, energy ${energy.toFixed(9)}, ${above}`,
    figures: {
      size: at,
      energy,
      degeneracy: ground.multiplicity,
      gap,
      dimension: spectrum.dimension,
      residual: Math.max(...spectrum.residuals),
      method: spectrum.method,
    },
    cautions: [standing.cluster, ...notes],
  };
}

function* decide({ statement, values, size }: Question, means: Means): Generator<Progress, readonly Finding[]> {
  const [side] = statement.subjects;
  if (!side || !size) return [];
  const words = subjectWords(values, side);
  try {
    const { spectrum, notes } = yield* groundMultiplet(values, side, size, means);
    return [finding(words, size, spectrum, notes)];
  } catch (error) {
    return [failureFinding(`the ground space of ${words} on ${sizeText(size)}`, values, error)];
  }
}

export const degeneracy: Audit = {
  name: 'degeneracy',
  help: 'How many ground states does a model have in a sector, and how far is the next level? One claim for each size.',
  example: 'audit degeneracy code on 2 x 2, 3 x 3',
  questions: (statement, values) =>
    sizesOf(statement.sizes, values).map((size) => ({
      audit: 'degeneracy',
      statement,
      values,
      size,
      part: '',
      key: keyOf(statement, values, '', ['coupling'], size),
    })),
  cost({ statement, values, size }) {
    const [side] = statement.subjects;
    return side && size ? subjectCost(values, side, size, firstLevels) : { operations: 0, bytes: 0, words: '' };
  },
  decide,
};
