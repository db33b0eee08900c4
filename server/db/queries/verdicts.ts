import { and, asc, desc, eq, sql, type SQL } from 'drizzle-orm';
import type { Claim, Report } from '../../../shared/contracts/report.ts';
import type { Rerun, Variation, Verdict } from '../../../shared/contracts/reviews.ts';
import type { Asking } from '../connection.ts';
import { entries } from '../schema/notebooks.ts';
import { people } from '../schema/people.ts';
import { evaluations, reruns, verdicts } from '../schema/reviews.ts';
import { claims, editions } from '../schema/work.ts';
import type { NotebookStanding } from '../standing.ts';
import { personColumns } from './people.ts';

async function select({ db }: Asking, which: SQL | undefined): Promise<Verdict[]> {
  const rows = await db
    .select({
      id: verdicts.id,
      by: personColumns,
      edition: editions.number,
      claim: verdicts.claim,
      word: verdicts.word,
      reason: verdicts.reason,
      at: verdicts.createdAt,
      changedAt: verdicts.changedAt,
    })
    .from(verdicts)
    .innerJoin(editions, eq(editions.id, verdicts.edition))
    .leftJoin(claims, eq(claims.id, verdicts.claim))
    .leftJoin(people, eq(people.id, verdicts.by))
    .where(which)
    // The whole first, then claim by claim.
    .orderBy(desc(editions.number), sql`${claims.ordinal} asc nulls first`, asc(verdicts.createdAt), asc(verdicts.id));
  return rows.map((row) => ({
    ...row,
    at: row.at.toISOString(),
    changedAt: row.changedAt?.toISOString() ?? null,
  }));
}

/** Verdicts on one edition, or on all editions of the notebook for null. */
export function listVerdicts(asking: Asking, standing: NotebookStanding, number: number | null): Promise<Verdict[]> {
  const here = eq(editions.notebook, standing.on.notebook);
  return select(asking, number === null ? here : and(here, eq(editions.number, number)));
}

export interface Judged {
  /** Id of the edition, as a query of this notebook gave it. */
  readonly edition: string;
  readonly claim: string | null;
  readonly word: Verdict['word'];
  readonly reason: string;
}

/** Gives a verdict, or replaces one's own on the same; returns it. */
export async function giveVerdict(asking: Asking, standing: NotebookStanding, judged: Judged): Promise<Verdict | null> {
  const { word, reason } = judged;
  const target =
    judged.claim === null ? [verdicts.edition, verdicts.by] : [verdicts.edition, verdicts.claim, verdicts.by];
  const targetWhere = judged.claim === null ? sql`${verdicts.claim} is null` : sql`${verdicts.claim} is not null`;
  const [row] = await asking.db
    .insert(verdicts)
    .values({ ...judged, by: standing.person })
    .onConflictDoUpdate({ target, targetWhere, set: { word, reason, changedAt: sql`now()` } })
    .returning({ id: verdicts.id });
  const [given] = row === undefined ? [] : await select(asking, eq(verdicts.id, row.id));
  return given ?? null;
}

/** Takes one's own verdict back; false if there is none. */
export async function deleteVerdict(
  { db }: Asking,
  standing: NotebookStanding,
  number: number,
  id: string,
): Promise<boolean> {
  const own = db
    .select({ id: editions.id })
    .from(editions)
    .where(and(eq(editions.notebook, standing.on.notebook), eq(editions.number, number)));
  const { rowCount } = await db
    .delete(verdicts)
    .where(and(eq(verdicts.id, id), eq(verdicts.by, standing.person ?? ''), sql`${verdicts.edition} in (${own})`));
  return rowCount === 1;
}

/** Whether a person has written in the notebook: changed an entry that stands, or published an edition. */
export async function hasWritten({ db }: Asking, standing: NotebookStanding): Promise<boolean> {
  const { notebook } = standing.on;
  const { rows } = await db.execute<{ written: boolean }>(sql`select
    exists (select 1 from ${entries} where ${entries.notebook} = ${notebook} and ${entries.changedBy} = ${standing.person}
      and ${entries.deletedAt} is null)
    or exists (select 1 from ${editions} where ${editions.notebook} = ${notebook}
      and ${editions.publishedBy} = ${standing.person}) as written`);
  return rows[0]?.written === true;
}

/** A sealed claim of an edition; null if it is not that edition's. */
export async function findClaim(
  { db }: Asking,
  edition: string,
  id: string,
): Promise<(Claim & { readonly id: string }) | null> {
  const [row] = await db
    .select()
    .from(claims)
    .where(and(eq(claims.id, id), eq(claims.edition, edition)));
  return row ?? null;
}

export interface RerunRow extends Omit<Rerun, 'claims' | 'problems' | 'differences'> {
  readonly report: Report | null;
  /** Line of the claim that was computed again. */
  readonly line: number | null;
}

/** What was computed again of an edition, newest first; the last hundred. */
export async function listReruns(
  { db }: Asking,
  standing: NotebookStanding,
  number: number,
  only?: string,
): Promise<RerunRow[]> {
  const here = and(eq(editions.notebook, standing.on.notebook), eq(editions.number, number));
  const rows = await db
    .select({
      id: reruns.id,
      edition: editions.number,
      claim: reruns.claim,
      line: claims.line,
      variation: reruns.variation,
      by: personColumns,
      at: reruns.askedAt,
      status: evaluations.status,
      reason: evaluations.reason,
      engine: evaluations.engine,
      report: evaluations.report,
    })
    .from(reruns)
    .innerJoin(editions, eq(editions.id, reruns.edition))
    .innerJoin(evaluations, eq(evaluations.id, reruns.evaluation))
    .leftJoin(claims, eq(claims.id, reruns.claim))
    .leftJoin(people, eq(people.id, reruns.by))
    .where(and(here, only === undefined ? undefined : eq(reruns.id, only)))
    .orderBy(desc(reruns.askedAt), desc(reruns.id))
    .limit(100);
  return rows.map((row) => ({ ...row, at: row.at.toISOString() }));
}

export interface NewRerun {
  readonly edition: string;
  readonly claim: string | null;
  readonly variation: Variation;
  readonly evaluation: string;
}

export async function insertRerun({ db }: Asking, standing: NotebookStanding, made: NewRerun): Promise<string> {
  const [row] = await db
    .insert(reruns)
    .values({ ...made, by: standing.person })
    .returning({ id: reruns.id });
  if (row === undefined) throw new Error('a rerun was asked for and is not there');
  return row.id;
}

/** How many of a person's reruns are not done. */
export async function countOpenReruns({ db }: Asking, person: string): Promise<number> {
  const [row] = await db
    .select({ open: sql<number>`count(*)::int` })
    .from(reruns)
    .innerJoin(evaluations, eq(evaluations.id, reruns.evaluation))
    .where(and(eq(reruns.by, person), eq(evaluations.status, 'computing')));
  return row?.open ?? 0;
}
