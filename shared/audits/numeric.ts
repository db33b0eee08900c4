import { MissingValue } from '../algebra/numbers/coefficient.ts';
import { toText } from '../algebra/finite/string.ts';
import type { Subject, Values } from '../language/values.ts';
import { BudgetSpent } from '../limits.ts';
import { sizeText } from '../lattice/cluster.ts';
import type { Size } from '../lattice/cells.ts';
import { NotHermitian } from '../spectra/hamiltonian.ts';
import { costOf, solve, solveLimits, type SolveFault, type Spectrum, type SpectrumQuestion } from '../spectra/solve.ts';
import { stringPhrase } from '../maps/phrases.ts';
import type { Cost, Finding, Means, Progress } from './audit.ts';
import { finiteSubject, subjectWords, type FiniteSubject } from './sector.ts';
import { Unanswerable } from './unanswerable.ts';

/** Values of the couplings as numbers; symbolic ones are left out, and asked for when a coefficient needs them. */
export function couplingValues(values: Values): Map<string, number> {
  const numbers = new Map<string, number>();
  for (const value of values.all.values())
    if (value.what === 'coupling' && value.value) numbers.set(value.name, value.value.toFloat(new Map()).re);
  return numbers;
}

/** A finding that leaves the claim open, with its reason. */
export const openFinding = (statement: string, reason: string, figures: Record<string, unknown> = {}): Finding => ({
  evidence: { kind: 'reason', reason },
  statement,
  figures,
});

const big = (n: number): string => (n < 1e4 ? String(n) : n.toExponential(1));
export const costWords = (cost: {
  readonly dimension: number;
  readonly bytes: number;
  readonly operations: number;
}): string =>
  `dimension ${String(cost.dimension)}, about ${String(Math.ceil(cost.bytes / 2 ** 20))} MiB and ${big(cost.operations)} multiplications`;

/** What a fault of the solver means, as a finding: a term that leaves the sector refutes, the rest stays open or is a problem. */
export class Fault extends Error {
  readonly fault: SolveFault;
  readonly subject: FiniteSubject;
  constructor(fault: SolveFault, subject: FiniteSubject) {
    super(fault.code);
    this.name = 'Fault';
    this.fault = fault;
    this.subject = subject;
  }
}

/** A constraint by its label and the spins it acts on. */
const constraintWords = ({ constraints }: FiniteSubject, k: number): string => constraints[k]?.label ?? 'a label';

function faultSentence(
  fault: SolveFault,
  subject: FiniteSubject,
): { readonly reason: string; readonly isProblem: boolean } {
  const size = sizeText(subject.cluster.size);
  switch (fault.code) {
    case 'constraints clash':
      return {
        reason: `${constraintWords(subject, fault.constraints[0])} and ${constraintWords(subject, fault.constraints[1])} do not commute with each other, so no sector has both (${size})`,
        isProblem: true,
      };
    case 'no state':
      return {
        reason: `the sector holds no state on ${size}: the labels contradict each other at ${constraintWords(subject, fault.constraint)}`,
        isProblem: true,
      };
    case 'not Hermitian':
      return {
        reason: `${constraintWords(subject, fault.constraint)} is not Hermitian on ${size}: factors that anticommute meet on one spin`,
        isProblem: true,
      };
    case 'rules allow no state':
      return { reason: `the rules allow no state on ${size}`, isProblem: true };
    case 'rule broken by constraint':
      return {
        reason: `${constraintWords(subject, fault.constraint)} does not keep the rules, so no sector has both`,
        isProblem: true,
      };
    case 'too many states':
      return {
        reason: `the sector has more than ${String(fault.limit)} states on ${size}; take a smaller size`,
        isProblem: false,
      };
    case 'constraint leaves image':
      return {
        reason: `${constraintWords(subject, fault.constraint)} does not act within the image of ${subject.imageNames.join(', ')}, so no sector has both (${size})`,
        isProblem: true,
      };
    case 'constraint is too wide':
      return {
        reason: `${constraintWords(subject, fault.constraint)} mixes more than ${String(fault.limit)} states of the image on ${size}; take a smaller size`,
        isProblem: false,
      };
    case 'rule crosses image':
      return {
        reason: `a rule of the sector does not have one value on each state of the image of ${subject.imageNames.join(', ')}; name the rule or the map, not both`,
        isProblem: true,
      };
    case 'blocks share a spin':
      return {
        reason: `blocks of ${subject.imageNames.join(', ')} share a spin on ${size}, so they have no common image`,
        isProblem: true,
      };
    case 'too many spins':
      return {
        reason: `${String(fault.spins)} spins are left in the sector on ${size}; name more symmetries or take a smaller size`,
        isProblem: false,
      };
    case 'too large':
      return {
        reason: `needs ${costWords(fault.cost)}, over the limit of ${big(fault.limit)} ${fault.what}`,
        isProblem: false,
      };
    case 'not converged':
      return {
        reason: `the eigensolver found ${String(fault.found)} levels and stopped after ${String(fault.products)} products`,
        isProblem: false,
      };
    case 'term leaves':
      return { reason: `a term does not commute with ${constraintWords(subject, fault.constraint)}`, isProblem: false };
  }
}

/** A term of the model against a label of its sector: the claim is refuted with the pair. */
function leavingFinding(statement: string, fault: Fault, family: Values['lattice']): Finding | undefined {
  if (fault.fault.code !== 'term leaves' || !family) return undefined;
  const { subject } = fault;
  const term = subject.model.terms[fault.fault.term];
  const constraint = subject.constraints[fault.fault.constraint];
  const size = sizeText(subject.cluster.size);
  const words = `a term of ${subject.name} anticommutes with ${constraint?.label ?? 'a label'} on ${size}: ${term ? named(term.string, subject, family) : ''} against ${constraint ? named(constraint.string, subject, family) : ''}`;
  return {
    evidence: { kind: 'counterexample' },
    statement: `${statement}: refused, the model does not commute with its sector`,
    figures: { size },
    witness: { term: term ? toText(term.string) : '', label: constraint?.label ?? '', words },
  };
}

function named(
  string: FiniteSubject['model']['terms'][number]['string'],
  subject: FiniteSubject,
  lattice: NonNullable<Values['lattice']>,
): string {
  const factors = pauliFactors(string).flatMap(({ spin, pauli }) => {
    const site = subject.table.sites[spin];
    return site ? [{ ...site, pauli }] : [];
  });
  return stringPhrase({ phase: 0, factors }, lattice.family);
}

/** Pauli matrices of a finite string, by spin. */
export function pauliFactors(string: {
  readonly n: number;
  readonly x: Uint32Array;
  readonly z: Uint32Array;
}): { spin: number; pauli: 'x' | 'y' | 'z' }[] {
  const factors: { spin: number; pauli: 'x' | 'y' | 'z' }[] = [];
  for (let spin = 0; spin < string.n; spin++) {
    const x = ((string.x[spin >>> 5] ?? 0) >>> (spin & 31)) & 1;
    const z = ((string.z[spin >>> 5] ?? 0) >>> (spin & 31)) & 1;
    if (x || z) factors.push({ spin, pauli: x && z ? 'y' : x ? 'x' : 'z' });
  }
  return factors;
}

/** The question to the solver that a subject on a size is. Throws Unanswerable. */
export function spectrumQuestion(
  values: Values,
  subject: FiniteSubject,
  levels: number,
  couplings: ReadonlyMap<string, number> = couplingValues(values),
): SpectrumQuestion {
  const { model, constraints, rules, images } = subject;
  return { model, constraints, rules, images, values: couplings, levels };
}

/** Cost of a subject at a size, as far as it can be told; refusals count as cheap, so that deciding says why. */
export function subjectCost(values: Values, subject: Subject, size: Size, levels: number): Cost {
  try {
    const told = costOf(spectrumQuestion(values, finiteSubject(values, subject, size), levels), {
      limits: { bytes: Infinity, operations: Infinity, spins: 30, states: 4_000_000 },
    });
    if (!told.ok) return { operations: 0, bytes: 0, words: told.fault.code };
    return { operations: told.cost.operations, bytes: told.cost.bytes, words: costWords(told.cost) };
  } catch (error) {
    if (
      error instanceof Unanswerable ||
      error instanceof MissingValue ||
      error instanceof NotHermitian ||
      error instanceof BudgetSpent
    )
      return { operations: 0, bytes: 0, words: error.message };
    throw error;
  }
}

/** Lowest levels of a subject; throws Fault where the solver refuses. */
export function* levelsOf(
  question: SpectrumQuestion,
  subject: FiniteSubject,
  means: Means,
  doing: string,
): Generator<Progress, Spectrum> {
  const { kernel, limit } = means;
  const limits = {
    operations: Math.max(limit.operations, solveLimits.operations),
    bytes: Math.max(limit.bytes, solveLimits.bytes),
  };
  const run = solve(question, { kernel, limits });
  try {
    for (;;) {
      const step = run.next();
      if (step.done) {
        if (!step.value.ok) throw new Fault(step.value.fault, subject);
        return step.value.value;
      }
      yield { done: step.value.done, doing };
    }
  } finally {
    // Stopped from outside: the solver gives its memory back.
    run.return(undefined as never);
  }
}

/**
 * Turns what can go wrong in a numerical answer into a finding: missing values and limits leave the claim open, a model that
 * leaves its sector refutes it. Errors of the source carry `problem` in their figures' place. Everything else is thrown on.
 */
export function failureFinding(statement: string, values: Values, error: unknown): Finding {
  if (error instanceof Fault) {
    const leaving = leavingFinding(statement, error, values.lattice);
    if (leaving) return leaving;
    const { reason, isProblem } = faultSentence(error.fault, error.subject);
    return {
      ...openFinding(statement, reason, { size: sizeText(error.subject.cluster.size) }),
      ...(isProblem ? { problem: reason } : {}),
    };
  }
  if (error instanceof Unanswerable)
    return { ...openFinding(statement, error.message), ...(error.isProblem ? { problem: error.message } : {}) };
  if (error instanceof MissingValue) return { ...openFinding(statement, error.message), problem: error.message };
  if (error instanceof NotHermitian || error instanceof BudgetSpent) return openFinding(statement, error.message);
  throw error;
}

/** Sizes that a line asks for; the declared one without `on`. */
export const sizesOf = (sizes: readonly Size[], values: Values): readonly Size[] =>
  sizes.length > 0 ? sizes : values.lattice ? [values.lattice.size] : [];

export { subjectWords, finiteSubject };
