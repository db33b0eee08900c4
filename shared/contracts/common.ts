import { z } from 'zod';

/** Bounds of what is stored; whatever exceeds them is refused with the bound in the message. */
export const bounds = {
  /** Characters of one entry. */
  entryCharacters: 200_000,
  /** Entries of one notebook. */
  entries: 2_000,
  /** Characters of an imported source, and of one notebook's text. */
  sourceCharacters: 1_000_000,
  /** Rows of one page of a list. */
  page: 100,
} as const;

/** Text that can be stored and hashed: no NUL, no lone surrogates; line ends become \n. */
export const plainText = (most: number) =>
  z
    .string()
    .max(most)
    .refine((text) => !text.includes('\u0000') && !/\p{Surrogate}/u.test(text), {
      message: 'The text holds a character that cannot be stored (NUL or half of a surrogate pair).',
    })
    .transform((text) => text.replace(/\r\n?/g, '\n'));

/** One line of text, trimmed and not empty. */
export const oneLine = (most: number) =>
  plainText(most)
    .transform((text) => text.replace(/\s+/g, ' ').trim())
    .refine((text) => text.length > 0, { message: 'This cannot be empty.' });

export const idSchema = z.uuid();
/** ISO 8601 in UTC. */
export const timeSchema = z.string();

/** Which page of a list: rows after a cursor that the page before named in `next`. */
export const pageQuery = {
  after: z.string().max(200).optional(),
  limit: z.coerce.number().int().min(1).max(bounds.page).default(30),
};
export const pageOf = <Item extends z.ZodType>(item: Item) =>
  z.object({ items: z.array(item), next: z.string().nullable() });

/**
 * What a request that went wrong is answered with (RFC 9457, application/problem+json). `code` is stable and for programs;
 * `title` and `detail` are sentences for people. Further members belong to some codes: see `problemCodes`.
 */
export const requestProblemSchema = z.looseObject({
  type: z.string(),
  title: z.string(),
  status: z.number().int(),
  detail: z.string().optional(),
  instance: z.string().optional(),
  code: z.string(),
});
export type RequestProblem = z.infer<typeof requestProblemSchema>;

export const problemCodes = [
  'bad-input', // 400; `places`: [{ path, message }]
  'sign-in-needed', // 401
  'not-allowed', // 403
  'not-found', // 404
  'conflict', // 409
  'changed-meanwhile', // 412; `yours`, `theirs` (both texts: see changedSchema)
  'too-large', // 413
  'held', // 423; `hold`
  'version-needed', // 428
  'too-many', // 429; `retryAfter` in seconds
  'failed', // 500
  'unavailable', // 503
] as const;
export type ProblemCode = (typeof problemCodes)[number];
