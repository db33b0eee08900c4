import { and, asc, desc, eq, isNull, lt, max, sql } from 'drizzle-orm';
import type { Edition, EditionContent, EditionSummary, Link, SealedClaim } from '../../../shared/contracts/editions.ts';
import type { Report } from '../../../shared/contracts/report.ts';
import type { Asking } from '../connection.ts';
import { type Page, type PageAsked } from '../page.ts';
import { notFound } from '../refusal.ts';
import { notebooks } from '../schema/notebooks.ts';
import { people } from '../schema/people.ts';
import { claims, editions, links } from '../schema/work.ts';
import type { NotebookStanding } from '../standing.ts';
import { personColumns } from './people.ts';

const counted = sql<Record<string, number>>`(select coalesce(json_object_agg(counted.grade, counted.number), '{}')
  from (select ${claims.grade} as grade, count(*)::int as number from ${claims}
    where ${claims.edition} = ${editions.id} group by ${claims.grade}) as counted)`;

const summaryColumns = {
  number: editions.number,
  summary: editions.summary,
  hash: editions.hash,
  publishedBy: personColumns,
  publishedAt: editions.publishedAt,
  status: editions.status,
  reason: editions.reason,
  engine: editions.engine,
  sealedAt: editions.sealedAt,
  grades: counted,
};

type SummaryRow = Omit<EditionSummary, 'publishedAt' | 'sealedAt'> & {
  readonly publishedAt: Date;
  readonly sealedAt: Date | null;
};

const summaryOf = (row: SummaryRow): EditionSummary => ({
  ...row,
  publishedAt: row.publishedAt.toISOString(),
  sealedAt: row.sealedAt?.toISOString() ?? null,
});

/** The edition of a number, or, for one who came by a link, the linked edition whatever the number. */
const thatEdition = ({ on }: NotebookStanding, number: number | null) =>
  on.linked === null
    ? and(eq(editions.notebook, on.notebook), eq(editions.number, number ?? 0))
    : and(eq(editions.notebook, on.notebook), eq(editions.id, on.linked));

/** The editions of a notebook, newest first; the cursor is the last number shown. */
export async function listEditions(
  { db }: Asking,
  standing: NotebookStanding,
  { after, limit }: PageAsked,
): Promise<Page<EditionSummary>> {
  const last = after === undefined || !/^\d{1,9}$/.test(after) ? undefined : lt(editions.number, Number(after));
  const rows = await db
    .select(summaryColumns)
    .from(editions)
    .leftJoin(people, eq(people.id, editions.publishedBy))
    .where(and(eq(editions.notebook, standing.on.notebook), last))
    .orderBy(desc(editions.number))
    .limit(limit + 1);
  const shown = rows.slice(0, limit);
  return { items: shown.map(summaryOf), next: rows.length > limit ? String(shown.at(-1)?.number) : null };
}

export async function getEditionSummary(
  { db }: Asking,
  standing: NotebookStanding,
  number: number,
): Promise<EditionSummary> {
  const [row] = await db
    .select(summaryColumns)
    .from(editions)
    .leftJoin(people, eq(people.id, editions.publishedBy))
    .where(thatEdition(standing, number));
  if (row === undefined) throw notFound();
  return summaryOf(row);
}

/** One edition with all that was sealed; `number` is not asked about where a link leads. Throws `not-found`. */
export async function getEdition(
  { db }: Asking,
  standing: NotebookStanding,
  number: number | null,
): Promise<Edition & { readonly editionId: string }> {
  const [row] = await db
    .select({
      ...summaryColumns,
      editionId: editions.id,
      notebook: { id: notebooks.id, title: notebooks.title },
      content: editions.content,
      entryIds: editions.entryIds,
      report: editions.report,
    })
    .from(editions)
    .innerJoin(notebooks, eq(notebooks.id, editions.notebook))
    .leftJoin(people, eq(people.id, editions.publishedBy))
    .where(thatEdition(standing, number));
  if (row === undefined) throw notFound();
  const sealed = await db.select().from(claims).where(eq(claims.edition, row.editionId)).orderBy(asc(claims.ordinal));
  return { ...row, ...summaryOf(row), claims: sealed };
}

/** The content of one edition alone. Throws `not-found`. */
export async function getContent(
  { db }: Asking,
  standing: NotebookStanding,
  number: number | null,
): Promise<EditionContent> {
  const [row] = await db.select({ content: editions.content }).from(editions).where(thatEdition(standing, number));
  if (row === undefined) throw notFound();
  return row.content;
}

/** What an edition reads, for comparing and exporting: content, ids, sealed report. Throws `not-found`. */
export async function getReading({ db }: Asking, standing: NotebookStanding, number: number | null) {
  const [row] = await db
    .select({
      editionId: editions.id,
      number: editions.number,
      content: editions.content,
      entryIds: editions.entryIds,
      hash: editions.hash,
      publishedAt: editions.publishedAt,
      report: editions.report,
      status: editions.status,
      notebookTitle: notebooks.title,
    })
    .from(editions)
    .innerJoin(notebooks, eq(notebooks.id, editions.notebook))
    .where(thatEdition(standing, number));
  if (row === undefined) throw notFound();
  return row;
}

/** Number and hash of the newest edition; number 0 if there is none. */
export async function lastEdition(
  { db }: Asking,
  standing: NotebookStanding,
): Promise<{ readonly number: number; readonly hash: string | null }> {
  const own = eq(editions.notebook, standing.on.notebook);
  const newest = db
    .select({ number: max(editions.number) })
    .from(editions)
    .where(own);
  const [row] = await db
    .select({ number: editions.number, hash: editions.hash })
    .from(editions)
    .where(and(own, eq(editions.number, sql`(${newest})`)));
  return row ?? { number: 0, hash: null };
}

export interface EditionFields {
  readonly number: number;
  readonly summary: string;
  readonly content: EditionContent;
  readonly entryIds: readonly string[];
  readonly hash: string;
}

/** A new edition whose claims are still to be computed; returns its id. The notebook is locked meanwhile. */
export async function insertEdition(
  { db }: Asking,
  standing: NotebookStanding,
  fields: EditionFields,
): Promise<string> {
  const [row] = await db
    .insert(editions)
    .values({
      ...fields,
      entryIds: [...fields.entryIds],
      notebook: standing.on.notebook,
      publishedBy: standing.person,
    })
    .returning({ id: editions.id });
  if (row === undefined) throw new Error('an edition was inserted and is not there');
  return row.id;
}

/** Sets a failed edition back to computing; returns its id, or null if it has not failed. */
export async function reopenEdition(
  { db }: Asking,
  standing: NotebookStanding,
  number: number,
): Promise<string | null> {
  const [row] = await db
    .update(editions)
    .set({ status: 'computing', reason: null, attempts: 0 })
    .where(and(thatEdition(standing, number), eq(editions.status, 'failed')))
    .returning({ id: editions.id });
  return row?.id ?? null;
}

export interface Unsealed {
  readonly notebook: string;
  readonly number: number;
  readonly content: EditionContent;
  readonly entryIds: readonly string[];
}

/** For the job that seals: an edition whose claims are still to be computed; null if there is none (any more). */
export async function findUnsealed({ db }: Asking, id: string): Promise<Unsealed | null> {
  const { notebook, number, content, entryIds } = editions;
  const [row] = await db
    .select({ notebook, number, content, entryIds })
    .from(editions)
    .where(and(eq(editions.id, id), eq(editions.status, 'computing')));
  return row ?? null;
}

/** A statement has at most 65535 values (PostgreSQL's protocol), and a claim has sixteen. */
const rowsAtOnce = 2_000;

/** For the job that seals: claims, report and status at once, in the caller's transaction; false if it was done before. */
export async function sealEdition(
  { db }: Asking,
  id: string,
  report: Report,
  sealed: readonly Omit<SealedClaim, 'id'>[],
): Promise<boolean> {
  const which = and(eq(editions.id, id), eq(editions.status, 'computing'));
  const [held] = await db.select({ id: editions.id }).from(editions).where(which).for('update');
  if (held === undefined) return false;
  const rows = sealed.map((claim, ordinal) => ({ ...claim, edition: id, ordinal }));
  for (let from = 0; from < rows.length; from += rowsAtOnce) {
    await db.insert(claims).values(rows.slice(from, from + rowsAtOnce));
  }
  await db
    .update(editions)
    .set({ status: 'sealed', report, engine: report.engine, sealedAt: sql`now()`, reason: null })
    .where(which);
  return true;
}

/** For the job that seals: says why it could not; false if the edition is not waiting any more. */
export async function failEdition({ db }: Asking, id: string, reason: string): Promise<boolean> {
  const { rowCount } = await db
    .update(editions)
    .set({ status: 'failed', reason })
    .where(and(eq(editions.id, id), eq(editions.status, 'computing')));
  return rowCount === 1;
}

/** Share links in force, newest first. */
export async function listLinks({ db }: Asking, standing: NotebookStanding): Promise<Link[]> {
  const rows = await db
    .select({ id: links.id, edition: editions.number, token: links.token, createdAt: links.createdAt })
    .from(links)
    .innerJoin(editions, eq(editions.id, links.edition))
    .where(and(eq(editions.notebook, standing.on.notebook), isNull(links.revokedAt)))
    .orderBy(desc(links.createdAt), asc(links.id));
  return rows.map((row) => ({ ...row, createdAt: row.createdAt.toISOString() }));
}

/** A share link to an edition of the notebook. Throws `not-found` if there is no edition of that number. */
export async function insertLink(
  { db }: Asking,
  standing: NotebookStanding,
  number: number,
  token: string,
): Promise<Link> {
  const [edition] = await db.select({ id: editions.id }).from(editions).where(thatEdition(standing, number));
  if (edition === undefined) throw notFound();
  const [row] = await db
    .insert(links)
    .values({ edition: edition.id, token, createdBy: standing.person })
    .returning({ id: links.id, createdAt: links.createdAt });
  if (row === undefined) throw new Error('a link was inserted and is not there');
  return { id: row.id, edition: number, token, createdAt: row.createdAt.toISOString() };
}

/** Revokes a link for good; false if there is none in force. */
export async function revokeLink({ db }: Asking, standing: NotebookStanding, id: string): Promise<boolean> {
  const own = db.select({ id: editions.id }).from(editions).where(eq(editions.notebook, standing.on.notebook));
  const { rowCount } = await db
    .update(links)
    .set({ revokedAt: sql`now()` })
    .where(and(eq(links.id, id), isNull(links.revokedAt), sql`${links.edition} in (${own})`));
  return rowCount === 1;
}

/** Counts one more attempt at an edition's claims (or takes one back); returns how many there were. */
export async function countAttempt({ db }: Asking, id: string, by: 1 | -1): Promise<number> {
  const [row] = await db
    .update(editions)
    .set({ attempts: sql`${editions.attempts} + ${by}` })
    .where(and(eq(editions.id, id), eq(editions.status, 'computing')))
    .returning({ attempts: editions.attempts });
  return row?.attempts ?? 0;
}
