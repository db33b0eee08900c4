import type { Report } from '../../shared/contracts/report.ts';

/** What page and worker say to each other. Both come from one build; the number guards a page kept open over an update. */
export const protocol = 2;

/** `version` counts the texts of one page from 1. */
export interface Ask {
  readonly protocol: typeof protocol;
  readonly version: number;
  readonly text: string;
}

/**
 * An answer carries the version it answers, and which report on it this is: `part` 0 has all that is symbolic or known, each
 * later one a further numerical answer; `waiting` says how many are still under way.
 */
export type Answer = { readonly protocol: number; readonly version: number; readonly part: number } & (
  | { readonly kind: 'report'; readonly report: Report; readonly waiting: number }
  | { readonly kind: 'failed'; readonly message: string }
);

export const ask = (version: number, text: string): Ask => ({ protocol, version, text });
