import { and, desc, eq, gt, isNotNull, lte, sql } from 'drizzle-orm';
import type { Binned } from '../../../shared/contracts/reviews.ts';
import type { Asking } from '../connection.ts';
import { memberships, notebooks } from '../schema/notebooks.ts';
import { editions } from '../schema/work.ts';
import type { NotebookStanding } from '../standing.ts';

/** Days that a deleted notebook can be restored. */
export const binDays = 30;

const keptSince = sql`now() - make_interval(days => ${binDays})`;

/** A person's own notebooks in the bin, last deleted first. */
export async function listBin({ db }: Asking, person: string): Promise<Binned[]> {
  const rows = await db
    .select({
      id: notebooks.id,
      title: notebooks.title,
      editions: sql<number>`(select count(*)::int from ${editions} where ${editions.notebook} = ${notebooks.id})`,
      deletedAt: notebooks.deletedAt,
    })
    .from(notebooks)
    .innerJoin(memberships, and(eq(memberships.notebook, notebooks.id), eq(memberships.role, 'owner')))
    .where(and(eq(memberships.person, person), gt(notebooks.deletedAt, keptSince)))
    .orderBy(desc(notebooks.deletedAt), desc(notebooks.id))
    .limit(500);
  return rows.flatMap(({ deletedAt, ...row }) => {
    if (deletedAt === null) return [];
    const until = new Date(deletedAt.getTime() + binDays * 86_400_000);
    return [{ ...row, deletedAt: deletedAt.toISOString(), until: until.toISOString() }];
  });
}

const ownBinned = (person: string, id: string) =>
  and(
    eq(notebooks.id, id),
    isNotNull(notebooks.deletedAt),
    sql`exists (select 1 from ${memberships} where ${memberships.notebook} = ${notebooks.id}
      and ${memberships.person} = ${person} and ${memberships.role} = 'owner')`,
  );

/** Takes one's own notebook out of the bin; false if it is not there. */
export async function unbin({ db }: Asking, person: string, id: string): Promise<boolean> {
  const { rowCount } = await db
    .update(notebooks)
    .set({ deletedAt: null })
    .where(and(ownBinned(person, id), gt(notebooks.deletedAt, keptSince)));
  return rowCount === 1;
}

/** Deletes one's own notebook in the bin for good; false if it is not there. */
export async function deleteBinned({ db }: Asking, person: string, id: string): Promise<boolean> {
  const { rowCount } = await db.delete(notebooks).where(ownBinned(person, id));
  return rowCount === 1;
}

/** Deletes what has lain in the bin for its time. */
export async function purgeBin({ db }: Asking): Promise<void> {
  await db.delete(notebooks).where(and(isNotNull(notebooks.deletedAt), lte(notebooks.deletedAt, keptSince)));
}

/** Puts a notebook off a person's shelf, or back. */
export async function setArchived({ db }: Asking, standing: NotebookStanding, archived: boolean): Promise<boolean> {
  const { rowCount } = await db
    .update(memberships)
    .set({ archivedAt: archived ? sql`now()` : null })
    .where(and(eq(memberships.notebook, standing.on.notebook), eq(memberships.person, standing.person ?? '')));
  return rowCount === 1;
}
