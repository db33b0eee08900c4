import { and, asc, eq, gt, isNotNull, isNull, lt, max, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { Entry, EntryKind } from '../../../shared/contracts/notebooks.ts';
import type { Asking } from '../connection.ts';
import { entries, holds } from '../schema/notebooks.ts';
import { people } from '../schema/people.ts';
import type { NotebookStanding } from '../standing.ts';
import { personColumns } from './people.ts';

const holder = alias(people, 'holder');
/** Positions of neighbours start this far apart. */
const gap = 1024;

function selectEntries({ db }: Asking) {
  return db
    .select({
      id: entries.id,
      kind: entries.kind,
      text: entries.text,
      version: entries.version,
      changedBy: personColumns,
      changedAt: entries.changedAt,
      holder: { id: holder.id, handle: holder.handle, name: holder.name },
      until: holds.until,
    })
    .from(entries)
    .leftJoin(people, eq(people.id, entries.changedBy))
    .leftJoin(holds, and(eq(holds.entry, entries.id), gt(holds.until, sql`now()`)))
    .leftJoin(holder, eq(holder.id, holds.person))
    .$dynamic();
}

type Row = Awaited<ReturnType<typeof selectEntries>>[number];

const entryOf = ({ holder: by, until, changedAt, ...row }: Row): Entry => ({
  ...row,
  changedAt: changedAt.toISOString(),
  hold: by === null || until === null ? null : { by, until: until.toISOString() },
});

const inNotebook = (standing: NotebookStanding) => eq(entries.notebook, standing.on.notebook);
const thatEntry = (standing: NotebookStanding, id: string) =>
  and(eq(entries.id, id), inNotebook(standing), isNull(entries.deletedAt));

/** The entries that stand in the notebook, in order. */
export async function listEntries(asking: Asking, standing: NotebookStanding): Promise<Entry[]> {
  const rows = await selectEntries(asking)
    .where(and(inNotebook(standing), isNull(entries.deletedAt)))
    .orderBy(asc(entries.position));
  return rows.map(entryOf);
}

/** One entry that stands in the notebook; null if there is none, or it was deleted. */
export async function findEntry(asking: Asking, standing: NotebookStanding, id: string): Promise<Entry | null> {
  const [row] = await selectEntries(asking).where(thatEntry(standing, id));
  return row === undefined ? null : entryOf(row);
}

export async function orderOfEntries({ db }: Asking, standing: NotebookStanding): Promise<string[]> {
  const rows = await db
    .select({ id: entries.id })
    .from(entries)
    .where(and(inNotebook(standing), isNull(entries.deletedAt)))
    .orderBy(asc(entries.position));
  return rows.map((row) => row.id);
}

/** How many entries stand in the notebook and how many characters they hold. */
export async function sizeOfEntries(
  { db }: Asking,
  standing: NotebookStanding,
): Promise<{ readonly entries: number; readonly characters: number }> {
  const [row] = await db
    .select({
      entries: sql<number>`count(*)::int`,
      characters: sql<number>`coalesce(sum(length(${entries.text})), 0)::int`,
    })
    .from(entries)
    .where(and(inNotebook(standing), isNull(entries.deletedAt)));
  return row ?? { entries: 0, characters: 0 };
}

export interface EntryFields {
  readonly kind: EntryKind;
  readonly text: string;
}

/** Entries of a notebook that has none yet, in order. */
export async function insertEntries(
  { db }: Asking,
  notebook: string,
  person: string,
  fields: readonly EntryFields[],
): Promise<void> {
  if (fields.length === 0) return;
  await db
    .insert(entries)
    .values(
      fields.map(({ kind, text }, at) => ({ kind, text, notebook, changedBy: person, position: (at + 1) * gap })),
    );
}

/** One entry at a position that positionBefore gave. An id that is taken inserts nothing. Returns the id. */
export async function insertEntry(
  { db }: Asking,
  standing: NotebookStanding,
  fields: EntryFields & { readonly id?: string | undefined; readonly position: number },
): Promise<string | null> {
  const { id, kind, text, position } = fields;
  const [row] = await db
    .insert(entries)
    .values({
      ...(id === undefined ? {} : { id }),
      notebook: standing.on.notebook,
      kind,
      text,
      position,
      changedBy: standing.person,
    })
    .onConflictDoNothing()
    .returning({ id: entries.id });
  return row?.id ?? null;
}

/**
 * A free position just before an entry, or at the end for null; moves all others apart if there is no room.
 * Null if that entry is not there. The notebook is locked meanwhile.
 */
export async function positionBefore(
  asking: Asking,
  standing: NotebookStanding,
  before: string | null,
): Promise<number | null> {
  const { db } = asking;
  if (before === null) {
    const [row] = await db
      .select({ last: max(entries.position) })
      .from(entries)
      .where(inNotebook(standing));
    return (row?.last ?? 0) + gap;
  }
  const room = await roomBefore(asking, standing, before);
  if (room === null) return null;
  if (room.upper - room.lower > 1) return Math.floor((room.lower + room.upper) / 2);
  await spread(asking, standing);
  return positionBefore(asking, standing, before);
}

/** The positions of an entry and of its predecessor, deleted ones counted; 0 if it is the first. */
async function roomBefore(
  { db }: Asking,
  standing: NotebookStanding,
  id: string,
): Promise<{ readonly lower: number; readonly upper: number } | null> {
  const [row] = await db.select({ upper: entries.position }).from(entries).where(thatEntry(standing, id));
  if (row === undefined) return null;
  const [before] = await db
    .select({ lower: max(entries.position) })
    .from(entries)
    .where(and(inNotebook(standing), lt(entries.position, row.upper)));
  return { upper: row.upper, lower: before?.lower ?? 0 };
}

/** Numbers all entries of the notebook anew, deleted ones too, in their order. */
async function spread({ db }: Asking, standing: NotebookStanding): Promise<void> {
  await db.execute(sql`update ${entries} set position = numbered.place * ${gap}
    from (select id, row_number() over (order by position, id) as place from ${entries}
      where ${inNotebook(standing)}) as numbered
    where ${entries.id} = numbered.id and ${inNotebook(standing)}`);
}

/** Saves an entry if it still has the version named; false if it has not, or is gone. */
export async function updateEntry(
  { db }: Asking,
  standing: NotebookStanding,
  id: string,
  version: number,
  fields: EntryFields,
): Promise<boolean> {
  const { rowCount } = await db
    .update(entries)
    .set({ ...fields, version: version + 1, changedBy: standing.person, changedAt: sql`now()` })
    .where(and(thatEntry(standing, id), eq(entries.version, version)));
  return rowCount === 1;
}

export async function moveEntry(
  { db }: Asking,
  standing: NotebookStanding,
  id: string,
  position: number,
): Promise<boolean> {
  const { rowCount } = await db.update(entries).set({ position }).where(thatEntry(standing, id));
  return rowCount === 1;
}

export async function markDeleted({ db }: Asking, standing: NotebookStanding, id: string): Promise<boolean> {
  const { rowCount } = await db
    .update(entries)
    .set({ deletedAt: sql`now()` })
    .where(thatEntry(standing, id));
  return rowCount === 1;
}

/** Undoes markDeleted; false if there is no such deleted entry. */
export async function markRestored({ db }: Asking, standing: NotebookStanding, id: string): Promise<boolean> {
  const { rowCount } = await db
    .update(entries)
    .set({ deletedAt: null })
    .where(and(eq(entries.id, id), inNotebook(standing), isNotNull(entries.deletedAt)));
  return rowCount === 1;
}

/** Takes or renews the hold on an entry; false while someone else has it. */
export async function takeHold({ db }: Asking, id: string, person: string, seconds: number): Promise<boolean> {
  const until = sql`now() + make_interval(secs => ${seconds})`;
  const { rowCount } = await db
    .insert(holds)
    .values({ entry: id, person, until })
    .onConflictDoUpdate({
      target: holds.entry,
      set: { person, until },
      setWhere: sql`${holds.person} = ${person} or ${holds.until} <= now()`,
    });
  return rowCount === 1;
}

/** Gives a person's hold up; false if they had none. */
export async function dropHold({ db }: Asking, id: string, person: string): Promise<boolean> {
  const { rowCount } = await db.delete(holds).where(and(eq(holds.entry, id), eq(holds.person, person)));
  return rowCount === 1;
}
