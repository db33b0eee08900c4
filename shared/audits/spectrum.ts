import { sizeText } from '../lattice/cluster.ts';
import type { Size } from '../lattice/cells.ts';
import type { Subject } from '../language/values.ts';
import type { Spectrum } from '../spectra/solve.ts';
import type { Audit, Finding, Means, Progress, Question } from './audit.ts';
import { standing } from './grades.ts';
import { differenceHint } from './level-hints.ts';
import { failureFinding, levelsOf, sizesOf, spectrumQuestion, subjectCost } from './numeric.ts';
import { asPart } from './progress.ts';
import { keyOf } from './question.ts';
import { finiteSubject, subjectWords } from './sector.ts';

const defaultLevels = 6;

/** Levels of both sides that can be held against each other: the last multiplet whole on both, else K of each. */
function compared(
  left: Spectrum,
  right: Spectrum,
  levels: number,
): { left: readonly number[]; right: readonly number[] } {
  const whole = [left, right].every((side) => side.multiplets.at(-1)?.complete === true);
  return whole
    ? { left: left.energies, right: right.energies }
    : { left: left.energies.slice(0, levels), right: right.energies.slice(0, levels) };
}

/** Largest distance that rounding and residuals leave open between level k of either side. */
function allowance(left: Spectrum, right: Spectrum, k: number): number {
  const scale = Math.max(1, Math.abs(left.energies[0] ?? 0), Math.abs(right.energies[0] ?? 0));
  return (left.residuals[k] ?? 0) + (right.residuals[k] ?? 0) + 1e-11 * scale;
}

function verdict(words: string, size: Size, left: Spectrum, right: Spectrum, levels: number): Finding {
  const { left: a, right: b } = compared(left, right, levels);
  const shared = Math.min(a.length, b.length);
  const differences = a.slice(0, shared).map((level, k) => Math.abs(level - (b[k] ?? 0)));
  const maxDifference = Math.max(0, ...differences);
  const bound = Math.max(0, ...differences.map((_, k) => allowance(left, right, k)));
  const figures = {
    size: sizeText(size),
    left: a,
    right: b,
    maxDifference,
    residual: Math.max(...left.residuals, ...right.residuals),
    leftDimension: left.dimension,
    rightDimension: right.dimension,
    all: a.length === left.dimension && b.length === right.dimension,
    method: left.method === right.method ? left.method : `${left.method}, ${right.method}`,
  };
  const at = `on ${sizeText(size)}`;
  const first = differences.findIndex((difference, k) => difference > allowance(left, right, k));
  if (first >= 0 || a.length !== b.length) {
    const hint = differenceHint(a, b, left.dimension, right.dimension);
    const where =
      first >= 0
        ? `level ${String(first + 1)} is ${(a[first] ?? 0).toFixed(9)} on the left and ${(b[first] ?? 0).toFixed(9)} on the right`
        : `the left has ${String(a.length)} levels where the right has ${String(b.length)}`;
    return {
      evidence: { kind: 'counterexample' },
      statement: `the levels of ${words} differ ${at}`,
      figures,
      witness: {
        level: first >= 0 ? first + 1 : shared + 1,
        left: a[first] ?? null,
        right: b[first] ?? null,
        suggests: hint,
        words: hint ? `${where}; ${hint}` : where,
      },
    };
  }
  const many = a.length === 1 ? 'level' : `${String(a.length)} levels`;
  const count = figures.all ? (a.length === 1 ? 'the only level' : `all ${many}`) : `the lowest ${many}`;
  return {
    evidence: { kind: 'residuals', tolerance: bound, largest: maxDifference, sizes: [sizeText(size)] },
    statement: `${count} of ${words} ${a.length === 1 ? 'agrees' : 'agree'} ${at}, within ${maxDifference.toExponential(1)}`,
    figures,
    cautions: figures.all ? [standing.cluster] : [standing.levels, standing.cluster],
  };
}

function* decide(question: Question, means: Means): Generator<Progress, readonly Finding[]> {
  const { statement, values, size } = question;
  const [left] = statement.subjects;
  const right = statement.against;
  if (!left || !right || !size) return [];
  const levels = statement.levels ?? defaultLevels;
  const words = `${subjectWords(values, left)} and ${subjectWords(values, right)}`;
  const solved = function* (side: Subject): Generator<Progress, { spectrum: Spectrum; notes: readonly string[] }> {
    const subject = finiteSubject(values, side, size);
    const spectrum = yield* levelsOf(
      spectrumQuestion(values, subject, levels),
      subject,
      means,
      `${side.name} on ${sizeText(size)}`,
    );
    return { spectrum, notes: sideNotes(side.name, subject.model.notes, spectrum) };
  };
  try {
    const a = yield* asPart(solved(left), 0, 1 / 2);
    const b = yield* asPart(solved(right), 1 / 2, 1 / 2);
    const finding = verdict(words, size, a.spectrum, b.spectrum, levels);
    return [{ ...finding, cautions: [...(finding.cautions ?? []), ...a.notes, ...b.notes] }];
  } catch (error) {
    return [failureFinding(`the levels of ${words} on ${sizeText(size)}`, values, error)];
  }
}

/** Notes about wrapping that are listed one by one. */
const mostNotes = 4;

/** What wrapping did to a model, and which of its terms a rule projects. */
export function sideNotes(name: string, notes: readonly string[], spectrum: Spectrum): string[] {
  const leaving = spectrum.leaving.length;
  const projected =
    leaving === 0 ? [] : [`${name} is taken as PHP: ${String(leaving)} terms lead out of the states of its sector`];
  const more = notes.length - mostNotes;
  const shown = more > 1 ? [...notes.slice(0, mostNotes), `and ${String(more)} more terms of this kind`] : notes;
  return [...shown.map((note) => `${name}: ${note}`), ...projected];
}

export const spectrum: Audit = {
  name: 'spectrum',
  help: 'Do two models have the same lowest levels, each in its sector? One claim for each size.',
  example: 'audit spectrum ising [flip = +1] ~ gauge [flat = +1, w1 = +1, w2 = +1] on 2 x 2, 3 x 3 levels 8',
  questions: (statement, values) =>
    sizesOf(statement.sizes, values).map((size) => ({
      audit: 'spectrum',
      statement,
      values,
      size,
      part: '',
      key: keyOf(statement, values, '', ['coupling'], size),
    })),
  cost({ statement, values, size }) {
    const sides = [...statement.subjects, ...(statement.against ? [statement.against] : [])];
    const costs = size ? sides.map((side) => subjectCost(values, side, size, statement.levels ?? defaultLevels)) : [];
    return {
      operations: costs.reduce((sum, cost) => sum + cost.operations, 0),
      bytes: Math.max(0, ...costs.map((cost) => cost.bytes)),
      words: costs.map((cost) => cost.words).join('; '),
    };
  },
  decide,
};
