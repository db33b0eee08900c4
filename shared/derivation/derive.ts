import type { Finding, Means, Progress, Question } from '../audits/audit.ts';
import { openFinding } from '../audits/numeric.ts';
import type { Claim, Problem, Report } from '../contracts/report.ts';
import { evaluateSource, type Program } from '../language/evaluate.ts';
import { buildMap } from '../maps/registry.ts';
import type { Kernel } from '../spectra/kernel/kernel.ts';
import { plainKernel } from '../spectra/kernel/plain.ts';
import { type Choice, chosenQuestions, isPortable, nameOf, numerical } from './asked.ts';
import { answerOf, findingsOf } from './questions.ts';
import { reportOf } from './report.ts';

/** Largest cost of one question that is answered at once: about a minute of one core, and half of a small machine's memory. */
export const standardLimit: Means['limit'] = { operations: 5e11, bytes: 2 ** 30 };

export interface DerivationOptions {
  readonly kernel?: Kernel;
  /** Questions that cost more stand open, with their cost and the name by which others can be asked for them. */
  readonly limit?: Means['limit'];
  /** What of a source is asked; all of it where nothing is said. */
  readonly choice?: Choice;
  /** Asked before each question of the first report: once true, what is left of them comes after it, like the numbers. */
  readonly hurried?: () => boolean;
  /** True when there is no time left: what is not answered by then stands open. */
  readonly late?: () => boolean;
}

/** Answers that came from elsewhere, or go there, by the names of their questions. */
export type Answers = Readonly<Record<string, readonly Finding[]>>;

/** What a run gives on its way: a report in which some claims may still be under way, or progress of the one being computed. */
export type Step =
  | { readonly kind: 'report'; readonly report: Report; readonly waiting: number }
  | { readonly kind: 'progress'; readonly progress: Progress; readonly line: number };

export interface Derivation {
  /** The whole report of a source; everything is answered that fits the limit. */
  derive(text: string): Report;
  /**
   * The same in slices: first a report with all that is symbolic, exact or known from before, then one more after each
   * numerical answer. To stop, do not go on (and call `return`). The value at the end is the whole report.
   */
  run(text: string): Generator<Step, Report>;
  /** Takes answers that were found elsewhere, by the same version of the engine; they come before own ones. */
  learn(answers: Answers): void;
  /** Numerical answers to the last text that were found here and that others can use. */
  found(): Answers;
}

/** Answers of earlier runs that are kept besides those of the current text. */
const keptAnswers = 400;

function keep(answers: Map<string, readonly Finding[]>, key: string, findings: readonly Finding[]): void {
  answers.delete(key);
  answers.set(key, findings);
  if (answers.size <= keptAnswers) return;
  const [oldest] = answers.keys();
  if (oldest !== undefined) answers.delete(oldest);
}

/** A road from source to report that keeps what did not change between one text and the next. */
export function newDerivation(options: DerivationOptions = {}): Derivation {
  const means: Means = { kernel: options.kernel ?? plainKernel, limit: options.limit ?? standardLimit };
  const choice = options.choice ?? {};
  const answers = new Map<string, readonly Finding[]>();
  const learned = new Map<string, readonly Finding[]>();
  let program: Program | undefined;
  let last: readonly Question[] = [];

  const known = (question: Question): readonly Finding[] | undefined =>
    (numerical.has(question.audit) && learned.size > 0 ? learned.get(nameOf(question)) : undefined) ??
    answers.get(question.key);

  function* answer(question: Question): Generator<Step, void> {
    const run = findingsOf(question, means);
    try {
      for (;;) {
        if (options.late?.() === true) return;
        const step = run.next();
        if (step.done) return keep(answers, question.key, step.value);
        yield { kind: 'progress', progress: step.value, line: question.statement.place.line };
      }
    } finally {
      run.return([]);
    }
  }

  const waitingWords = (): string =>
    options.late?.() === true ? 'not reached in the time that this evaluation had' : 'being computed';

  function report(of: Program, questions: readonly Question[]): Report {
    const claims: Claim[] = [];
    const problems: Problem[] = [];
    for (const question of questions) {
      const findings = known(question) ?? [openFinding(question.statement.text, waitingWords())];
      const made = answerOf(question, findings);
      const elsewhere = findings.some(({ tooDear }) => tooDear !== undefined) ? { question: nameOf(question) } : {};
      claims.push(...made.claims.map((claim) => ({ ...claim, ...elsewhere })));
      problems.push(...made.problems);
    }
    return reportOf(of, claims, problems);
  }

  function* run(text: string): Generator<Step, Report> {
    program = evaluateSource(text, { buildMap }, program);
    const questions = chosenQuestions(program, choice);
    last = questions;
    const unknown = questions.filter((question) => known(question) === undefined);
    const now = unknown.filter((question) => !numerical.has(question.audit));
    const later = unknown.filter((question) => numerical.has(question.audit));
    const putOff: Question[] = [];
    for (const question of now)
      if (options.hurried?.() === true) putOff.push(question);
      else yield* answer(question);
    const rest = [...putOff, ...later];
    for (const [k, question] of rest.entries()) {
      yield { kind: 'report', report: report(program, questions), waiting: rest.length - k };
      if (known(question) === undefined) yield* answer(question);
    }
    return report(program, questions);
  }

  return {
    run,
    learn(given) {
      for (const [name, findings] of Object.entries(given)) keep(learned, name, findings);
    },
    found() {
      const own = last.filter(({ audit, key }) => numerical.has(audit) && isPortable(answers.get(key) ?? []));
      return Object.fromEntries(own.map((question) => [nameOf(question), answers.get(question.key) ?? []]));
    },
    derive(text) {
      const steps = run(text);
      for (;;) {
        const step = steps.next();
        if (step.done) return step.value;
      }
    },
  };
}
