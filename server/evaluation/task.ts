import type { ClusterAnswer, OnCluster } from '../../shared/derivation/cluster.ts';
import type { Answers } from '../../shared/derivation/derive.ts';
import type { Asked, Choice, Finding } from '../../shared/derivation/asked.ts';
import type { Report } from '../../shared/contracts/report.ts';

export type { Answers, Asked };

/** What an evaluation thread is asked, and what it says. All of it is plain data. */

/** Operations in a second of one thread, for estimates: measured on lattices of 16 to 20 spins, in the middle of a wide range. */
export const speed = 1e9;

export interface Limit {
  readonly operations: number;
  readonly bytes: number;
}

export type Task =
  /** The whole report of a source, with the answers to its questions that are known already. */
  | { readonly kind: 'derive'; readonly source: string; readonly known?: Answers; readonly seconds?: number }
  /** The numerical questions of a source. */
  | { readonly kind: 'list'; readonly source: string; readonly choice?: Choice }
  /** The answer to one of them. */
  | {
      readonly kind: 'answer';
      readonly source: string;
      readonly question: string;
      readonly limit: Limit;
      readonly choice?: Choice;
      readonly from?: unknown;
    }
  /** A model or circuit of a source on a finite cluster. */
  | { readonly kind: 'cluster'; readonly source: string; readonly asked: OnCluster };

export interface ThreadProgress {
  readonly done: number;
  readonly doing: string;
  /** The newest there is; undefined while there is none. */
  readonly checkpoint?: unknown;
}

export type Said =
  | { readonly progress: ThreadProgress }
  | { readonly report: Report; readonly found?: Answers }
  | { readonly asked: readonly Asked[] }
  | Answer
  | { readonly cluster: ClusterAnswer }
  | { readonly failure: string };

/** Findings on a question; null where the source does not ask it. `open`: why they leave something undecided. */
export interface Answer {
  readonly findings: readonly Finding[] | null;
  readonly open?: string | undefined;
}

/** What each kind of task comes to. */
export interface Results {
  readonly derive: { readonly report: Report; readonly found?: Answers };
  readonly list: { readonly asked: readonly Asked[] };
  readonly answer: Answer;
  readonly cluster: { readonly cluster: ClusterAnswer };
}
