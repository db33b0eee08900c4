import type { Body, Query } from '../../shared/contracts/endpoints.ts';
import type { Answered, Estimate, Job } from '../../shared/contracts/jobs.ts';
import { tell } from '../db/announce.ts';
import type { Page } from '../db/page.ts';
import * as queries from '../db/queries/jobs.ts';
import { readLimits } from '../db/queries/limits.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import { may, type Standing, standingOnNotebook } from '../db/standing.ts';
import { EvaluationFailed } from '../evaluation/pool.ts';
import { speed } from '../evaluation/task.ts';
import { engineVersion } from '../evaluation/version.ts';
import { type Context, personOf, type Questions } from './context.ts';

export interface AskingContext extends Context {
  readonly questions: Questions;
}

type Cost = Pick<queries.JobRow, 'operations' | 'bytes' | 'cost'>;

const estimateOf = ({ operations, bytes, cost }: Cost): Estimate => ({
  operations,
  bytes,
  seconds: operations / speed,
  words: cost,
});

/** Below this share of the whole the speed says little. */
const telling = 0.01;

/** Seconds that are left at the speed of the present attempt; null while it cannot be told. */
export function remainingSeconds(row: Pick<queries.JobRow, 'state' | 'done' | 'begunDone' | 'working'>): number | null {
  const made = row.done - row.begunDone;
  if (row.state !== 'working' || made < telling || row.working <= 0) return null;
  return (row.working * (1 - row.done)) / made;
}

const jobOf = (row: queries.JobRow): Job => ({
  ...row,
  remainingSeconds: remainingSeconds(row),
  estimate: estimateOf(row),
  askedAt: row.askedAt.toISOString(),
  begunAt: row.begunAt?.toISOString() ?? null,
  endedAt: row.endedAt?.toISOString() ?? null,
});

/** Hands a question of a source to the workers, or finds that it is asked or answered already. */
export async function askQuestion(
  { database, questions }: AskingContext,
  standing: Standing,
  { source, question, notebook }: Body<'askQuestion'>,
): Promise<Job> {
  const person = personOf(standing);
  if (notebook !== null) {
    const there = await standingOnNotebook(database, standing, notebook);
    if (there === null || !may(there, 'read')) throw notFound();
  }
  const asked = await questions.find(source, question).catch((error: unknown) => {
    if (error instanceof EvaluationFailed && error.why === 'stopped') throw new Refusal('unavailable', error.message);
    throw error instanceof EvaluationFailed ? new Refusal('bad-input', error.message) : error;
  });
  if (asked === undefined) throw new Refusal('not-found', 'This source does not ask this question.');
  const { audit, text, size, cost } = asked;
  const { operations, bytes, words } = cost;
  const estimate = estimateOf({ operations, bytes, cost: words });
  const { limit } = questions;
  if (operations > limit.operations || bytes > limit.bytes) throw tooLarge(estimate, limit);
  return database.transaction(async (tx) => {
    const { jobsPerPerson: most } = await readLimits(tx);
    const fields = { name: question, engine: engineVersion, source, audit, text, size, operations, bytes, cost: words };
    const fresh = await queries.putQuestion(tx, fields);
    const id = await queries.putJob(tx, { person, question, notebook });
    if ((await queries.countOpen(tx, person)) > most) {
      throw new Refusal('too-many', `At most ${String(most)} of your questions can wait at a time.`, { most });
    }
    if (fresh) await questions.ask(tx, question);
    await tell(tx, person, 'job', { job: id });
    return jobOf(await queries.getJob(tx, person, id));
  });
}

function tooLarge(estimate: Estimate, limit: Questions['limit']): Refusal {
  const gibibytes = (bytes: number): string => `${(bytes / 2 ** 30).toPrecision(2)} GiB`;
  const needs = `about ${duration(estimate.seconds)} and ${gibibytes(estimate.bytes)}`;
  const has = `${duration(limit.operations / speed)} and ${gibibytes(limit.bytes)}`;
  return new Refusal('too-large', `This would take ${needs} (${estimate.words}); the limit is ${has}.`, {
    estimate,
    limit: { ...limit, seconds: limit.operations / speed },
  });
}

/** A time in words, in the unit that suits it. */
export function duration(seconds: number): string {
  const units = [
    ['days', 86_400],
    ['hours', 3_600],
    ['minutes', 60],
  ] as const;
  const [unit, length] = units.find(([, long]) => seconds >= 2 * long) ?? (['seconds', 1] as const);
  const number = seconds / length;
  return `${number >= 1e4 ? number.toExponential(0) : String(Math.max(1, Math.round(number)))} ${unit}`;
}

export function jobsOf(
  { database }: Context,
  standing: Standing,
  { show, ...page }: Query<'listJobs'>,
): Promise<Page<Job>> {
  return queries.listJobs(database, personOf(standing), { ...page, open: show === 'open' }, jobOf);
}

export async function readJob({ database }: Context, standing: Standing, job: string): Promise<Job> {
  return jobOf(await queries.getJob(database, personOf(standing), job));
}

/** Takes a job back; the worker that is at it ends it within a second. */
export function cancelJob({ database }: Context, standing: Standing, job: string): Promise<Job> {
  const person = personOf(standing);
  return database.transaction(async (tx) => {
    if (await queries.cancelJob(tx, person, job)) await tell(tx, person, 'job', { job });
    return jobOf(await queries.getJob(tx, person, job));
  });
}

export async function answersTo({ database }: Context, names: readonly string[]): Promise<{ items: Answered[] }> {
  const found = await queries.findAnswers(database, names);
  return { items: found.map(({ question, findings }) => ({ question, findings: findings as Answered['findings'] })) };
}
