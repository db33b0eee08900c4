import { and, desc, eq, inArray, isNull, sql } from 'drizzle-orm';
import type { QuestionState } from '../../../shared/contracts/jobs.ts';
import type { Asking } from '../connection.ts';
import { type Page, type PageAsked, pageFrom, readCursor } from '../page.ts';
import { notFound } from '../refusal.ts';
import { jobs, questions } from '../schema/jobs.ts';
import { memberships, notebooks } from '../schema/notebooks.ts';

/** Questions that are handed to the server, the jobs that wait for them, and their answers. */

export interface QuestionFields {
  readonly name: string;
  readonly engine: string;
  readonly source: string;
  readonly audit: string;
  readonly text: string;
  readonly size: string;
  readonly operations: number;
  readonly bytes: number;
  readonly cost: string;
}

const isOpen = inArray(questions.state, ['waiting', 'working']);

/**
 * Puts a question, unless it is there; one that failed or was dropped is put again. True if somebody is to be sent to it. Locks the
 * question in either case, so that nobody drops it meanwhile.
 */
export async function putQuestion({ db }: Asking, fields: QuestionFields): Promise<boolean> {
  const made = await db
    .insert(questions)
    .values(fields)
    .onConflictDoUpdate({
      target: questions.name,
      set: {
        source: fields.source,
        state: 'waiting',
        attempts: 0,
        reason: null,
        endedAt: null,
        begunAt: null,
        createdAt: sql`now()`,
      },
      setWhere: inArray(questions.state, ['failed', 'cancelled']),
    })
    .returning({ name: questions.name });
  return made.length > 0;
}

/** A person's job on a question; there is one of each, asked anew if it is there. Returns the job's id. */
export async function putJob(
  { db }: Asking,
  {
    person,
    question,
    notebook,
  }: { readonly person: string; readonly question: string; readonly notebook: string | null },
): Promise<string> {
  const [row] = await db
    .insert(jobs)
    .values({ person, question, notebook })
    .onConflictDoUpdate({
      target: [jobs.question, jobs.person],
      set: { askedAt: sql`now()`, cancelledAt: null, notebook },
    })
    .returning({ id: jobs.id });
  if (row === undefined) throw new Error('a job was inserted and is not there');
  return row.id;
}

/** How many jobs of a person wait or are worked at. */
export async function countOpen({ db }: Asking, person: string): Promise<number> {
  const [row] = await db
    .select({ number: sql<number>`count(*)::int` })
    .from(jobs)
    .innerJoin(questions, eq(questions.name, jobs.question))
    .where(and(eq(jobs.person, person), isNull(jobs.cancelledAt), isOpen));
  return row?.number ?? 0;
}

const jobColumns = {
  id: jobs.id,
  question: jobs.question,
  audit: questions.audit,
  text: questions.text,
  size: questions.size,
  notebook: { id: notebooks.id, title: notebooks.title },
  state: sql<QuestionState>`case when ${jobs.cancelledAt} is null then ${questions.state} else 'cancelled' end`,
  done: questions.done,
  doing: questions.doing,
  begunAt: questions.begunAt,
  begunDone: questions.begunDone,
  /** By the database's clock, which also wrote the beginning. */
  working: sql<number>`extract(epoch from now() - ${questions.begunAt})::float8`,
  operations: questions.operations,
  bytes: questions.bytes,
  cost: questions.cost,
  reason: questions.reason,
  askedAt: jobs.askedAt,
  endedAt: sql<Date | null>`coalesce(${jobs.cancelledAt}, ${questions.endedAt})`.mapWith(jobs.askedAt),
};

/** A job's title of a notebook is for those who may read that notebook (still). */
const readable = (person: string) =>
  and(
    eq(notebooks.id, jobs.notebook),
    sql`(${notebooks.visibility} = 'public' or exists (select 1 from ${memberships}
      where ${memberships.notebook} = ${notebooks.id} and ${memberships.person} = ${person}))`,
  );

const jobRows = ({ db }: Asking, person: string) =>
  db
    .select(jobColumns)
    .from(jobs)
    .innerJoin(questions, eq(questions.name, jobs.question))
    .leftJoin(notebooks, readable(person));

export type JobRow = Awaited<ReturnType<typeof jobRows>>[number];

/** A person's jobs, newest first. */
export async function listJobs<Item>(
  asking: Asking,
  person: string,
  { after, limit, open }: PageAsked & { readonly open: boolean },
  itemOf: (row: JobRow) => Item,
): Promise<Page<Item>> {
  const cursor = readCursor(after);
  const older = cursor
    ? sql`(${jobs.askedAt}, ${jobs.id}) < (${cursor.at.toISOString()}::timestamptz, ${cursor.id}::uuid)`
    : undefined;
  const rows = await jobRows(asking, person)
    .where(and(eq(jobs.person, person), older, open ? and(isNull(jobs.cancelledAt), isOpen) : undefined))
    .orderBy(desc(jobs.askedAt), desc(jobs.id))
    .limit(limit + 1);
  return pageFrom(rows, limit, ({ askedAt, id }) => ({ at: askedAt, id }), itemOf);
}

/** One job of a person's own. Throws `not-found`. */
export async function getJob(asking: Asking, person: string, id: string): Promise<JobRow> {
  const [row] = await jobRows(asking, person).where(and(eq(jobs.person, person), eq(jobs.id, id)));
  if (row === undefined) throw notFound();
  return row;
}

/** Takes a job back if it has not ended; drops its question if nobody else waits for it. False if there was nothing to take back. */
export async function cancelJob({ db }: Asking, person: string, id: string): Promise<boolean> {
  const own = and(eq(jobs.id, id), eq(jobs.person, person), isNull(jobs.cancelledAt));
  const [job] = await db.select({ question: jobs.question }).from(jobs).where(own);
  if (job === undefined) return false;
  const which = and(eq(questions.name, job.question), isOpen);
  const [open] = await db.select({ name: questions.name }).from(questions).where(which).for('update');
  if (open === undefined) return false;
  await db
    .update(jobs)
    .set({ cancelledAt: sql`now()` })
    .where(own);
  const others = sql`exists (select 1 from ${jobs} where ${jobs.question} = ${questions.name} and ${jobs.cancelledAt} is null)`;
  await db
    .update(questions)
    .set({ state: 'cancelled', endedAt: sql`now()`, source: null })
    .where(and(which, sql`not ${others}`));
  return true;
}

export interface Found {
  readonly question: string;
  readonly findings: readonly unknown[];
}

/** The answers to those of these questions that have one. */
export async function findAnswers({ db }: Asking, names: readonly string[]): Promise<Found[]> {
  if (names.length === 0) return [];
  const rows = await db
    .select({ question: questions.name, findings: questions.findings })
    .from(questions)
    .where(and(inArray(questions.name, [...names]), eq(questions.state, 'done')));
  return rows.flatMap(({ question, findings }) => (findings ? [{ question, findings }] : []));
}

/** Keeps answers that were found on the way; those that are there stay. */
export async function keepAnswers(
  { db }: Asking,
  found: readonly (Omit<QuestionFields, 'source'> & Pick<Found, 'findings'>)[],
): Promise<void> {
  for (const fields of found) {
    await db
      .insert(questions)
      .values({ ...fields, source: null, state: 'done', done: 1, endedAt: sql`now()` })
      .onConflictDoNothing();
  }
}

// ---------------------------------------------------------------- for the job that answers

export interface Begun {
  readonly source: string;
  readonly operations: number;
  readonly bytes: number;
  readonly checkpoint: unknown;
  /** This attempt counted. */
  readonly attempts: number;
}

/** Begins an attempt at a question that is open; null if it is not (any more). */
export async function beginQuestion({ db }: Asking, name: string): Promise<Begun | null> {
  const from = sql`case when ${questions.checkpoint} is null then 0 else ${questions.done} end`;
  const { source, operations, bytes, checkpoint, attempts } = questions;
  const [row] = await db
    .update(questions)
    .set({
      state: 'working',
      attempts: sql`${attempts} + 1`,
      begunAt: sql`now()`,
      done: from,
      begunDone: from,
      doing: '',
    })
    .where(and(eq(questions.name, name), isOpen))
    .returning({ source, operations, bytes, checkpoint, attempts });
  return row?.source == null ? null : { ...row, source: row.source };
}

export interface HowFar {
  readonly done: number;
  readonly doing: string;
  readonly checkpoint?: unknown;
}

/** Writes how far a question is; a checkpoint is progress that lasts, so attempts count anew. False if it is not worked at any more. */
export async function sayHowFar({ db }: Asking, name: string, far: HowFar | null): Promise<boolean> {
  const which = and(eq(questions.name, name), eq(questions.state, 'working'));
  if (far === null) return (await db.select({ name: questions.name }).from(questions).where(which)).length === 1;
  const { done, doing, checkpoint } = far;
  const lasting = checkpoint === undefined ? {} : { checkpoint, attempts: 0 };
  const { rowCount } = await db
    .update(questions)
    .set({ done, doing, ...lasting })
    .where(which);
  return rowCount === 1;
}

/** Who waits for a question, and where. */
export interface Waits {
  readonly job: string;
  readonly person: string;
  readonly notebook: string | null;
}

/** Ends a question, with its answer or with the reason why there is none. Returns who waited, or null if it was not worked at any more. */
export async function endQuestion(
  { db }: Asking,
  name: string,
  end: { readonly findings: readonly unknown[] } | { readonly reason: string },
): Promise<{ readonly text: string; readonly seconds: number; readonly waits: readonly Waits[] } | null> {
  const done = 'findings' in end;
  const [row] = await db
    .update(questions)
    .set({
      ...(done ? { state: 'done', findings: end.findings, done: 1 } : { state: 'failed', reason: end.reason }),
      source: null,
      // What failed may be tried again and go on; what is done never.
      ...(done ? { checkpoint: null } : {}),
      endedAt: sql`now()`,
    })
    .where(and(eq(questions.name, name), eq(questions.state, 'working')))
    .returning({
      text: questions.text,
      seconds: sql<number>`extract(epoch from now() - ${questions.createdAt})::float8`,
    });
  if (row === undefined) return null;
  const waits = await db
    .select({ job: jobs.id, person: jobs.person, notebook: jobs.notebook })
    .from(jobs)
    .where(and(eq(jobs.question, name), isNull(jobs.cancelledAt)));
  return { ...row, waits };
}

/** Gives a question back, to be begun again: the worker is stopped in good order, which is no fault of the question. */
export async function giveBack({ db }: Asking, name: string): Promise<void> {
  await db
    .update(questions)
    .set({ state: 'waiting', begunAt: null, attempts: sql`greatest(${questions.attempts} - 1, 0)` })
    .where(and(eq(questions.name, name), eq(questions.state, 'working')));
}
