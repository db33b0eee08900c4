import { z } from 'zod';
import { idSchema, pageQuery, plainText } from './common.ts';
import type { Action } from './rights.ts';

/** Header that every request other than GET carries, with any value: a foreign page cannot add it without asking. */
export const writeHeader = 'x-gaugewright';

type Method = 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE';

/**
 * One thing that the server can be asked. `of` says whose rights decide the action: the installation's, those on the notebook
 * in `:notebook`, or those that a share link's `:token` gives. `form`: what the answer is, `json`, `text` (text/plain) or `events`
 * (server-sent events, see liveEvents). `ifMatch`: the request names the version it started from in If-Match ("3").
 * Unreadable things are 404, readable ones on which the action is not allowed 403 (401 for visitors).
 */
export interface Endpoint<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType, A extends z.ZodType> {
  readonly method: Method;
  readonly path: string;
  readonly action: Action;
  readonly of: 'installation' | 'notebook' | 'link';
  readonly params: P;
  readonly query: Q;
  readonly body: B;
  readonly answer: A;
  readonly status: 200 | 201 | 202 | 204;
  readonly form: 'json' | 'text' | 'events';
  readonly ifMatch: boolean;
}

export const none = z.object({});
type None = typeof none;
export const silence = z.void();

type Given<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType, A extends z.ZodType> = Pick<
  Endpoint<P, Q, B, A>,
  'action' | 'of' | 'answer'
> &
  Partial<Omit<Endpoint<P, Q, B, A>, 'method' | 'path' | 'action' | 'of' | 'answer'>>;

export function row<
  A extends z.ZodType,
  P extends z.ZodType = None,
  Q extends z.ZodType = None,
  B extends z.ZodType = None,
>(what: `${Method} /${string}`, given: Given<P, Q, B, A>): Endpoint<P, Q, B, A> {
  const [method, path] = what.split(' ') as [Method, string];
  const defaults = { params: none, query: none, body: none, status: 200, form: 'json', ifMatch: false };
  // The cast stands for the default type arguments, which TypeScript cannot tie to the default values.
  return { ...defaults, ...given, method, path } as unknown as Endpoint<P, Q, B, A>;
}

export const ofNotebook = { of: 'notebook', params: z.object({ notebook: idSchema }) } as const;
export const ofEntry = { of: 'notebook', params: z.object({ notebook: idSchema, entry: idSchema }) } as const;
export const editionNumber = z.coerce.number().int().min(1).max(2_000_000_000);
export const ofEdition = { of: 'notebook', params: z.object({ notebook: idSchema, edition: editionNumber }) } as const;
export const ofLink = { of: 'link', params: z.object({ token: z.string().max(100) }) } as const;
/** What every list that can be searched takes. */
export const search = { ...pageQuery, q: plainText(200).default('') };
