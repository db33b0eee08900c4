import type { Finding, Means, Progress, Question } from '../audits/audit.ts';
import { openFinding } from '../audits/numeric.ts';
import type { Claim, Problem, Report } from '../contracts/report.ts';
import { evaluateSource, type Program } from '../language/evaluate.ts';
import { buildMap } from '../maps/registry.ts';
import type { Kernel } from '../spectra/kernel/kernel.ts';
import { plainKernel } from '../spectra/kernel/plain.ts';
import { answerOf, findingsOf, questionsOf } from './questions.ts';
import { reportOf } from './report.ts';

/** Largest cost of one question that is answered at once: about a minute of one core, and half of a small machine's memory. */
const defaultLimit: Means['limit'] = { operations: 5e11, bytes: 2 ** 30 };

export interface DerivationOptions {
  readonly kernel?: Kernel;
  /** Questions that cost more stand open, with their cost. */
  readonly limit?: Means['limit'];
}

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
}

/** Answers of earlier runs that are kept besides those of the current text. */
const keptAnswers = 400;

/** Audits that are put off until the first report stands, because they may take long. */
const numerical = new Set(['spectrum', 'degeneracy', 'expect', 'scan', 'count', 'effective', 'symmetries']);

/** A road from source to report that keeps what did not change between one text and the next. */
export function newDerivation(options: DerivationOptions = {}): Derivation {
  const means: Means = { kernel: options.kernel ?? plainKernel, limit: options.limit ?? defaultLimit };
  const answers = new Map<string, readonly Finding[]>();
  let program: Program | undefined;

  const remember = (key: string, findings: readonly Finding[]): void => {
    answers.delete(key);
    answers.set(key, findings);
    if (answers.size <= keptAnswers) return;
    const [oldest] = answers.keys();
    if (oldest !== undefined) answers.delete(oldest);
  };

  function* answer(question: Question): Generator<Step, void> {
    const run = findingsOf(question, means);
    try {
      for (;;) {
        const step = run.next();
        if (step.done) return remember(question.key, step.value);
        yield { kind: 'progress', progress: step.value, line: question.statement.place.line };
      }
    } finally {
      run.return([]);
    }
  }

  function report(of: Program, questions: readonly Question[]): Report {
    const claims: Claim[] = [];
    const problems: Problem[] = [];
    for (const question of questions) {
      const known = answers.get(question.key);
      const made = answerOf(question, known ?? [openFinding(question.statement.text, 'being computed')]);
      claims.push(...made.claims);
      problems.push(...made.problems);
    }
    return reportOf(of, claims, problems);
  }

  function* run(text: string): Generator<Step, Report> {
    program = evaluateSource(text, { buildMap }, program);
    const { audits, values } = program;
    const questions = audits.flatMap((statement) => questionsOf(statement, values));
    const unknown = questions.filter((question) => !answers.has(question.key));
    const now = unknown.filter((question) => !numerical.has(question.audit));
    const later = unknown.filter((question) => numerical.has(question.audit));
    for (const question of now) yield* answer(question);
    for (const [k, question] of later.entries()) {
      yield { kind: 'report', report: report(program, questions), waiting: later.length - k };
      if (!answers.has(question.key)) yield* answer(question);
    }
    return report(program, questions);
  }

  return {
    run,
    derive(text) {
      const steps = run(text);
      for (;;) {
        const step = steps.next();
        if (step.done) return step.value;
      }
    },
  };
}
