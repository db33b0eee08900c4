import type { Report } from '../../shared/contracts/report.ts';

/** What page and worker say to each other. Both come from one build; the number guards a page kept open over an update. */
export const protocol = 1;

/** `version` counts the texts of one page from 1; an answer carries the version it answers. */
export interface Ask {
  readonly protocol: typeof protocol;
  readonly version: number;
  readonly text: string;
}

export type Answer =
  | { readonly protocol: number; readonly version: number; readonly kind: 'report'; readonly report: Report }
  | { readonly protocol: number; readonly version: number; readonly kind: 'failed'; readonly message: string };

export const ask = (version: number, text: string): Ask => ({ protocol, version, text });
