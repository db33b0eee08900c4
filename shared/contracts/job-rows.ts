import { z } from 'zod';
import { idSchema, pageOf, pageQuery } from './common.ts';
import { answerSchema, askSchema, jobSchema, namesSchema } from './jobs.ts';
import { row } from './row.ts';

const ofJob = { of: 'installation', params: z.object({ job: idSchema }) } as const;

/** The rows about numerical questions that the server is to answer. A part of `endpoints`. */
export const jobRows = {
  /**
   * Hands a question to the server. The same question is computed once, whoever asks; an answer that is there already makes a job that is
   * done. 404 if the source does not ask it, 413 `too-large` with `estimate` and `limit` if it would not fit, 429 over the person's limit.
   */
  askQuestion: row('POST /api/jobs', {
    action: 'make',
    of: 'installation',
    body: askSchema,
    answer: jobSchema,
    status: 201,
  }),
  /** One's own, newest first. */
  listJobs: row('GET /api/jobs', {
    action: 'keep',
    of: 'installation',
    query: z.object({ ...pageQuery, show: z.enum(['all', 'open']).default('all') }),
    answer: pageOf(jobSchema),
  }),
  getJob: row('GET /api/jobs/:job', { ...ofJob, action: 'keep', answer: jobSchema }),
  /** What runs is ended unless someone else waits for it too. A job that has ended stays as it is. */
  cancelJob: row('POST /api/jobs/:job/cancel', { ...ofJob, action: 'make', answer: jobSchema }),
  /** Those of these questions (names, with commas between them) whose answers are there, whoever asked them. */
  getAnswers: row('GET /api/answers', {
    action: 'visit',
    of: 'installation',
    query: z.object({ questions: namesSchema }),
    answer: z.object({ items: z.array(answerSchema) }),
  }),
} as const;
