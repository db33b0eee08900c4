import { and, asc, eq, inArray, isNull, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { Person } from '../../../shared/contracts/people.ts';
import type { RemarkSubject } from '../../../shared/contracts/reviews.ts';
import type { Asking } from '../connection.ts';
import { notFound } from '../refusal.ts';
import { memberships } from '../schema/notebooks.ts';
import { people } from '../schema/people.ts';
import { remarks } from '../schema/reviews.ts';
import { editions } from '../schema/work.ts';
import type { NotebookStanding } from '../standing.ts';
import { personColumns } from './people.ts';

const settler = alias(people, 'settler');

export interface RemarkRow {
  readonly id: string;
  readonly parent: string | null;
  readonly by: Person | null;
  readonly text: string | null;
  readonly mentions: readonly string[];
  readonly subject: RemarkSubject | null;
  readonly entry: string | null;
  readonly madeOn: number | null;
  readonly createdAt: Date;
  readonly editedAt: Date | null;
  readonly settledBy: Person | null;
  readonly settledAt: Date | null;
}

const select = ({ db }: Asking) =>
  db
    .select({
      id: remarks.id,
      parent: remarks.parent,
      by: personColumns,
      text: remarks.text,
      mentions: remarks.mentions,
      subject: remarks.subject,
      entry: remarks.entry,
      madeOn: remarks.madeOn,
      createdAt: remarks.createdAt,
      editedAt: remarks.editedAt,
      settledBy: { id: settler.id, handle: settler.handle, name: settler.name },
      settledAt: remarks.settledAt,
    })
    .from(remarks)
    .leftJoin(people, eq(people.id, remarks.by))
    .leftJoin(settler, eq(settler.id, remarks.settledBy))
    .$dynamic();

/** All remarks and replies of a notebook, oldest first. */
export function listRemarks(asking: Asking, standing: NotebookStanding): Promise<RemarkRow[]> {
  return select(asking)
    .where(eq(remarks.notebook, standing.on.notebook))
    .orderBy(asc(remarks.createdAt), asc(remarks.id));
}

/** One remark or reply. Throws `not-found`. */
export async function getRemark(asking: Asking, standing: NotebookStanding, id: string): Promise<RemarkRow> {
  const [row] = await select(asking).where(and(eq(remarks.id, id), eq(remarks.notebook, standing.on.notebook)));
  if (row === undefined) throw notFound();
  return row;
}

export interface NewRemark {
  readonly parent: string | null;
  readonly text: string;
  readonly mentions: readonly string[];
  readonly subject: RemarkSubject | null;
  readonly madeOn: number | null;
}

export async function insertRemark({ db }: Asking, standing: NotebookStanding, made: NewRemark): Promise<string> {
  const [row] = await db
    .insert(remarks)
    .values({
      ...made,
      mentions: [...made.mentions],
      entry: made.subject?.entry ?? null,
      notebook: standing.on.notebook,
      by: standing.person,
    })
    .returning({ id: remarks.id });
  if (row === undefined) throw new Error('a remark was made and is not there');
  return row.id;
}

const own = (standing: NotebookStanding, id: string) =>
  and(eq(remarks.id, id), eq(remarks.notebook, standing.on.notebook), eq(remarks.by, standing.person ?? ''));

/** Another text by its author; false if it is another's. */
export async function rewordRemark(
  { db }: Asking,
  standing: NotebookStanding,
  id: string,
  fields: { readonly text: string; readonly mentions: readonly string[] },
): Promise<boolean> {
  const { rowCount } = await db
    .update(remarks)
    .set({ text: fields.text, mentions: [...fields.mentions], editedAt: sql`now()` })
    .where(own(standing, id));
  return rowCount === 1;
}

/** Opens or settles a remark; false if it is a reply. */
export async function settleRemark(
  { db }: Asking,
  standing: NotebookStanding,
  id: string,
  settled: boolean,
): Promise<boolean> {
  const { rowCount } = await db
    .update(remarks)
    .set(settled ? { settledBy: standing.person, settledAt: sql`now()` } : { settledBy: null, settledAt: null })
    .where(and(eq(remarks.id, id), eq(remarks.notebook, standing.on.notebook), isNull(remarks.parent)));
  return rowCount === 1;
}

/** Takes one's own remark back: the row where nobody answered, else its text; false if it is another's. */
export async function takeRemarkBack({ db }: Asking, standing: NotebookStanding, id: string): Promise<boolean> {
  const answered = sql`exists (select 1 from ${remarks} as reply where reply.parent = ${remarks.id})`;
  const emptied = await db
    .update(remarks)
    .set({ text: null, mentions: [] })
    .where(and(own(standing, id), answered));
  if (emptied.rowCount === 1) return true;
  const { rowCount } = await db.delete(remarks).where(own(standing, id));
  return rowCount === 1;
}

/** People of the notebook among these handles, whatever their case: whom a text can mention. */
export async function findMentioned(
  { db }: Asking,
  standing: NotebookStanding,
  handles: readonly string[],
): Promise<string[]> {
  if (handles.length === 0) return [];
  const rows = await db
    .select({ id: people.id })
    .from(people)
    .innerJoin(memberships, eq(memberships.person, people.id))
    .where(
      and(
        eq(memberships.notebook, standing.on.notebook),
        inArray(
          sql`lower(${people.handle})`,
          handles.map((handle) => handle.toLowerCase()),
        ),
      ),
    );
  return rows.map((row) => row.id);
}

export async function listPeople({ db }: Asking, ids: readonly string[]): Promise<Person[]> {
  if (ids.length === 0) return [];
  return db
    .select(personColumns)
    .from(people)
    .where(inArray(people.id, [...ids]));
}

/** The last edition in which each of these entries stands. */
export async function lastEditionsOf(
  { db }: Asking,
  standing: NotebookStanding,
  entries: readonly string[],
): Promise<Map<string, number>> {
  if (entries.length === 0) return new Map();
  const wanted = sql.join(
    entries.map((id) => sql`${id}::uuid`),
    sql`, `,
  );
  const { rows } = await db.execute<{ entry: string; number: number }>(sql`
    select wanted.entry, max(${editions.number}) as number from unnest(array[${wanted}]) as wanted(entry)
    join ${editions} on ${editions.notebook} = ${standing.on.notebook} and wanted.entry = any(${editions.entryIds})
    group by wanted.entry`);
  return new Map(rows.map((row) => [row.entry, row.number]));
}
