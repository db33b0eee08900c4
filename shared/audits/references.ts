import type { FiniteModel } from '../algebra/finite/types.ts';
import { Coefficient } from '../algebra/numbers/coefficient.ts';
import type { ReferenceValue, Subject, Values } from '../language/values.ts';
import { groundDegeneracy, groundOverlap } from '../spectra/observe.ts';
import type { Spectrum } from '../spectra/solve.ts';
import type { Means, Progress } from './audit.ts';
import { groundOf } from './ground.ts';
import { finiteSubject, lawConstraints, symmetryConstraint, type FiniteSubject } from './sector.ts';
import { Unanswerable } from './unanswerable.ts';

/** States that ground states are compared with. */
export interface Reference {
  /** The subject to solve: the model with the strings of the reference among its terms, so that both have one basis. */
  readonly subject: FiniteSubject;
  /** √ of the weight of the ground space in the reference's space, between 0 and 1. */
  overlap(ground: Spectrum): number;
  free(): void;
}

type Terms = FiniteModel['terms'];

/** The model with further strings, of coefficient zero: a basis depends on strings alone. */
function withStrings(subject: FiniteSubject, more: Terms): FiniteSubject {
  const zero = more.map(({ string }) => ({ coefficient: Coefficient.zero, string }));
  return { ...subject, model: { ...subject.model, terms: [...subject.model.terms, ...zero] } };
}

/** Minus the sum of signed strings: its ground space is where all of them have their declared values. */
function stabilizerTerms(values: Values, names: readonly string[], { cluster, table }: FiniteSubject): Terms {
  return names.flatMap((name) => {
    const value = values.find(name);
    const signed =
      value?.what === 'law'
        ? lawConstraints(cluster, table, value)
        : value?.what === 'symmetry'
          ? [symmetryConstraint(cluster, table, value)]
          : undefined;
    if (!signed) throw new Unanswerable(`${name} is not a law or a symmetry`, true);
    return signed.map((c) => ({ coefficient: Coefficient.rational(-c.value), string: c.string }));
  });
}

/** Overlap with the equal superposition of the states of an enumerated basis. */
function uniformOverlap(ground: Spectrum): number {
  const vectors = ground.space?.vectors.slice(0, groundDegeneracy(ground).degeneracy) ?? [];
  const weight = vectors.reduce((sum, { vector, block }) => {
    const half = block.real ? vector.length : vector.length / 2;
    let [re, im] = [0, 0];
    for (let k = 0; k < half; k++) re += vector.view[k] ?? 0;
    for (let k = half; k < vector.length; k++) im += vector.view[k] ?? 0;
    return sum + (re * re + im * im) / half;
  }, 0);
  return Math.sqrt(Math.min(1, weight));
}

function uniform(
  values: Values,
  state: ReferenceValue['state'] & { kind: 'uniform' },
  side: Subject,
  subject: FiniteSubject,
): Reference {
  const rules = side.sector.map((label) => label.name).filter((name) => values.find(name)?.what === 'rule');
  const same = rules.length > 0 && [...rules].sort().join() === [...state.rules].sort().join();
  // Each basis vector is then the sum, with equal weights, of the states of its orbit.
  const plain = subject.constraints.every(
    ({ string, value }) => value === 1 && string.z.every((w) => w === 0) && string.phase === 0,
  );
  if (!same || subject.images.length > 0)
    throw new Unanswerable(
      `the equal superposition of the states that obey ${state.rules.join(', ')} is compared in their sector: name them there, and no other rules`,
    );
  const diagonal = subject.constraints.every(({ string }) => string.x.every((w) => w === 0));
  if (!plain && !diagonal)
    throw new Unanswerable(
      'the equal superposition is compared in sectors of products of X at +1, or of products of Z',
    );
  return { subject, overlap: uniformOverlap, free: () => undefined };
}

/**
 * The reference named on a line: the ground space of another model in the same sector (at the declared couplings), the joint space of laws, or the
 * equal superposition of the states of a rule. Throws Unanswerable where bases do not match.
 */
export function* referenceOf(
  values: Values,
  name: string,
  side: Subject,
  subject: FiniteSubject,
  couplings: ReadonlyMap<string, number>,
  means: Means,
): Generator<Progress, Reference> {
  const value = values.find(name);
  if (value?.what === 'reference' && value.state.kind === 'uniform') return uniform(values, value.state, side, subject);
  let terms: Terms;
  if (value?.what === 'reference' && value.state.kind === 'stabilizer')
    terms = stabilizerTerms(values, value.state.laws, subject);
  else if (value?.what === 'model') {
    const other = finiteSubject(values, { ...side, name }, subject.cluster.size);
    const spins = (s: FiniteSubject): string => s.table.sites.map((site) => `${site.species} ${site.cell.kind}`).join();
    if (spins(other) !== spins(subject))
      throw new Unanswerable(`${name} and ${subject.name} do not live on the same spins`, true);
    terms = other.model.terms;
  } else throw new Unanswerable(`${name} is not a reference state or a model`, true);
  const whole = withStrings(subject, terms);
  const own: FiniteSubject = {
    ...subject,
    name,
    model: {
      ...subject.model,
      constant: Coefficient.zero,
      terms: [...subject.model.terms.map(({ string }) => ({ coefficient: Coefficient.zero, string })), ...terms],
    },
  };
  const ground = yield* groundOf(values, own, couplings, true, means, name);
  return {
    subject: whole,
    overlap: (other) => overlapOf(ground, other),
    free: () => ground.space?.free(),
  };
}

/** Overlap of two ground spaces; Unanswerable where one is real and the other is not, so that their bases differ. */
export function overlapOf(a: Spectrum, b: Spectrum): number {
  if (a.real !== b.real)
    throw new Unanswerable('one of the two models is real and the other is not; their states are not compared');
  return groundOverlap(a, b);
}
