import { z } from 'zod';
import { bounds, idSchema, plainText, timeSchema } from './common.ts';

/** Numerical questions that are handed to the server, and their answers. */

export const questionStates = ['waiting', 'working', 'done', 'failed', 'cancelled'] as const;
export type QuestionState = (typeof questionStates)[number];

/** The name of a question: SHA-256 of the engine's version and of all that the answer depends on. */
export const questionName = z.string().regex(/^[0-9a-f]{64}$/, 'This names no question.');

/** What answering would take, told beforehand; also in the problem `too-large`, as `estimate` beside `limit`. */
export const estimateSchema = z.object({
  operations: z.number(),
  bytes: z.number(),
  seconds: z.number(),
  /** In words: "dimension 65536". */
  words: z.string(),
});
export type Estimate = z.infer<typeof estimateSchema>;

export const jobSchema = z.object({
  id: idSchema,
  question: questionName,
  audit: z.string(),
  /** The audit as it is written, and the size it is asked on (empty where there is none). */
  text: z.string(),
  size: z.string(),
  /** Where the answer is waited for. */
  notebook: z.object({ id: idSchema, title: z.string() }).nullable(),
  state: z.enum(questionStates),
  /** 0 … 1, and what is being done. */
  done: z.number(),
  doing: z.string(),
  /** From the speed so far; null while it cannot be told. */
  remainingSeconds: z.number().nullable(),
  estimate: estimateSchema,
  /** Why it failed. */
  reason: z.string().nullable(),
  askedAt: timeSchema,
  begunAt: timeSchema.nullable(),
  endedAt: timeSchema.nullable(),
});
export type Job = z.infer<typeof jobSchema>;

/** A question of a source. `notebook`: whoever has it open is told when the answer is there. */
export const askSchema = z.object({
  source: plainText(bounds.sourceCharacters),
  question: questionName,
  notebook: idSchema.nullable().default(null),
});

/** The engine's findings on a question, which the engine of the same version takes as its own. */
export const answerSchema = z.object({ question: questionName, findings: z.array(z.record(z.string(), z.unknown())) });
export type Answered = z.infer<typeof answerSchema>;

/** Names in one request. */
export const mostNames = 50;
export const namesSchema = z
  .string()
  .max(65 * mostNames)
  .transform((text) => text.split(','))
  .pipe(z.array(questionName).min(1).max(mostNames));
