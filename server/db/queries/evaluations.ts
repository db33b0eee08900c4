import { and, eq, inArray, lt, notExists, sql } from 'drizzle-orm';
import type { Report } from '../../../shared/contracts/report.ts';
import type { Asking } from '../connection.ts';
import { evaluations, evaluationWaits, reruns } from '../schema/reviews.ts';

/** What came of a text so far. */
export interface Evaluated {
  readonly id: string;
  readonly key: string;
  readonly status: 'computing' | 'done' | 'failed';
  readonly reason: string | null;
  readonly engine: string;
  readonly report: Report | null;
}

const columns = {
  id: evaluations.id,
  key: evaluations.key,
  status: evaluations.status,
  reason: evaluations.reason,
  engine: evaluations.engine,
  report: evaluations.report,
};

export interface AskedText {
  /** SHA-256 of the text. */
  readonly key: string;
  readonly text: string;
}

/**
 * What is known of texts, by key; those that were never asked are put in line, and the notebook is told when they are done.
 * Three statements, however many texts.
 */
export async function askEvaluations(
  { db }: Asking,
  engine: string,
  notebook: string,
  asked: readonly AskedText[],
): Promise<Map<string, Evaluated>> {
  // In one order, so that two who ask for the same texts do not wait for each other.
  const texts = [...new Map(asked.map((one) => [one.key, one])).values()].sort((a, b) => (a.key < b.key ? -1 : 1));
  if (texts.length === 0) return new Map();
  await db
    .insert(evaluations)
    .values(texts.map(({ key, text }) => ({ key, text, engine })))
    .onConflictDoUpdate({ target: [evaluations.key, evaluations.engine], set: { usedAt: sql`now()` } });
  const keys = texts.map(({ key }) => key);
  const rows = await db
    .select(columns)
    .from(evaluations)
    .where(and(inArray(evaluations.key, keys), eq(evaluations.engine, engine)));
  const open = rows.filter((row) => row.status === 'computing');
  if (open.length > 0) {
    await db
      .insert(evaluationWaits)
      .values(open.map(({ id }) => ({ evaluation: id, notebook })))
      .onConflictDoNothing();
  }
  return new Map(rows.map((row) => [row.key, row]));
}

/** Ids of texts that wait, the one that waits longest first. */
export async function listWaiting({ db }: Asking): Promise<string[]> {
  const rows = await db
    .select({ id: evaluations.id })
    .from(evaluations)
    .where(eq(evaluations.status, 'computing'))
    .orderBy(evaluations.askedAt)
    .limit(20);
  return rows.map((row) => row.id);
}

/** Begins an attempt at a text; null if it does not wait any more. `attempts` counts this one. */
export async function beginEvaluation(
  { db }: Asking,
  id: string,
): Promise<{ readonly text: string; readonly attempts: number; readonly engine: string } | null> {
  const [row] = await db
    .update(evaluations)
    .set({ attempts: sql`${evaluations.attempts} + 1` })
    .where(and(eq(evaluations.id, id), eq(evaluations.status, 'computing')))
    .returning({ text: evaluations.text, attempts: evaluations.attempts, engine: evaluations.engine });
  return row ?? null;
}

/** Takes an attempt back that was no fault of the text. */
export async function forgetAttempt({ db }: Asking, id: string): Promise<void> {
  await db
    .update(evaluations)
    .set({ attempts: sql`greatest(${evaluations.attempts} - 1, 0)` })
    .where(eq(evaluations.id, id));
}

/** Stores what came of a text; returns the notebooks that wait for it. */
export async function endEvaluation(
  { db }: Asking,
  id: string,
  end: { readonly report: Report } | { readonly reason: string },
): Promise<string[]> {
  const fields = 'report' in end ? ({ status: 'done', ...end } as const) : ({ status: 'failed', ...end } as const);
  await db
    .update(evaluations)
    .set(fields)
    .where(and(eq(evaluations.id, id), eq(evaluations.status, 'computing')));
  const waits = await db
    .delete(evaluationWaits)
    .where(eq(evaluationWaits.evaluation, id))
    .returning({ notebook: evaluationWaits.notebook });
  return waits.map((row) => row.notebook);
}

/** Drops what nobody needed for so many days, but for reruns, which stay with their edition. */
export async function forgetEvaluations({ db }: Asking, days: number): Promise<void> {
  const kept = db
    .select({ one: sql`1` })
    .from(reruns)
    .where(eq(reruns.evaluation, evaluations.id));
  await db
    .delete(evaluations)
    .where(and(lt(evaluations.usedAt, sql`now() - make_interval(days => ${days})`), notExists(kept)));
}
