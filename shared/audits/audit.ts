import type { Claim, Grade } from '../contracts/report.ts';
import type { AllSizes } from '../algebra/f2/all-sizes.ts';
import type { Kernel } from '../spectra/kernel/kernel.ts';
import type { Size } from '../lattice/cells.ts';
import type { AuditStatement, Values } from '../language/values.ts';

/**
 * An audit is one record in one module: what a line asks, what that would cost, and how it is decided.
 * Nobody writes a grade: `decide` returns evidence of a kind, and the kind decides (`grades.ts`).
 */
export type Evidence =
  | { readonly kind: 'all sizes'; readonly proof: readonly AllSizes[] }
  | { readonly kind: 'exact on'; readonly sizes: readonly string[] }
  | {
      readonly kind: 'residuals';
      readonly tolerance: number;
      readonly largest: number;
      readonly sizes: readonly string[];
    }
  | { readonly kind: 'counterexample' }
  | { readonly kind: 'reason'; readonly reason: string };

export interface Finding {
  readonly evidence: Evidence;
  readonly statement: string;
  readonly tex?: string;
  readonly figures: Readonly<Record<string, unknown>>;
  readonly witness?: Readonly<Record<string, unknown>>;
  readonly cautions?: readonly string[];
  readonly sources?: readonly string[];
  /** Set where the line itself is in error (labels of one sector that clash, a coupling without value): a problem besides. */
  readonly problem?: string;
  /** Set where the question was not begun because it costs more than the means allow: others may have more. */
  readonly tooDear?: Cost;
}

/** What answering would take; symbolic questions cost next to nothing. */
export interface Cost {
  /** Elementary floating or word operations. */
  readonly operations: number;
  readonly bytes: number;
  /** In words: "dimension 65536". */
  readonly words: string;
}

export interface Progress {
  /** 0 … 1 */
  readonly done: number;
  readonly doing: string;
  /** What a later run can go on from (`Means.from`), as plain data; to be copied before the run goes on. */
  readonly checkpoint?: unknown;
}

/** A question: one for each claim, whole in itself. `key` is canonical text of all that the answer depends on. */
export interface Question {
  readonly audit: string;
  readonly statement: AuditStatement;
  readonly values: Values;
  readonly size: Size | undefined;
  readonly part: string;
  readonly key: string;
}

export interface Means {
  readonly kernel: Kernel;
  /** Largest cost that is answered here and now; dearer questions stand open with their cost. */
  readonly limit: { readonly operations: number; readonly bytes: number };
  /** The last checkpoint that this question yielded before it was broken off; plain data, and none for a fresh start. */
  readonly from?: unknown;
}

export interface Audit {
  readonly name: string;
  readonly help: string;
  readonly example: string;
  questions(statement: AuditStatement, values: Values): readonly Question[];
  cost(question: Question): Cost;
  decide(question: Question, means: Means): Generator<Progress, readonly Finding[]>;
}

export type GradeOf = (evidence: Evidence) => Grade;
export type { Claim };
