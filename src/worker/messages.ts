import type { AssistAnswer, AssistQuestion } from '../../shared/contracts/assist.ts';
import type { Report } from '../../shared/contracts/report.ts';

/** What page and worker say to each other. Both come from one build; the number guards a page kept open over an update. */
export const protocol = 4;

/** `version` counts the texts of one page from 1. */
export interface Ask {
  readonly kind: 'report';
  readonly protocol: typeof protocol;
  readonly version: number;
  readonly text: string;
}

/** The engine's findings on questions by their names, from the server: plain data of the same version of the engine. */
export type Learned = Readonly<Record<string, readonly unknown[]>>;

/** Answers from elsewhere, for the texts that are asked about from now on. */
export interface Learn {
  readonly kind: 'learn';
  readonly protocol: typeof protocol;
  readonly answers: Learned;
}

/** What an editor asks about a place in a text; answered at once, between two slices of whatever is under way. */
export interface AskHelp {
  readonly kind: 'help';
  readonly protocol: typeof protocol;
  readonly id: number;
  readonly text: string;
  readonly question: AssistQuestion;
}

/**
 * An answer carries the version it answers, and which report on it this is: `part` 0 has all that is symbolic or known, each
 * later one a further numerical answer; `waiting` says how many are still under way.
 */
export type Answer = { readonly protocol: number; readonly version: number; readonly part: number } & (
  | { readonly kind: 'report'; readonly report: Report; readonly waiting: number }
  | { readonly kind: 'failed'; readonly message: string }
);

/** The answer to AskHelp of the same id; null when the engine could not read the text. */
export interface HelpAnswer {
  readonly kind: 'help';
  readonly id: number;
  readonly answer: AssistAnswer | null;
}

export const learn = (answers: Learned): Learn => ({ kind: 'learn', protocol, answers });

export const ask = (version: number, text: string): Ask => ({ kind: 'report', protocol, version, text });
