import { and, asc, count, desc, eq, isNotNull, isNull, ne, sql, type SQL } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { NotebookSummary } from '../../../shared/contracts/notebooks.ts';
import type { Member } from '../../../shared/contracts/people.ts';
import type { GrantedRole, Visibility } from '../../../shared/contracts/rights.ts';
import type { Asking } from '../connection.ts';
import { type Page, pageFrom, readCursor } from '../page.ts';
import { notFound } from '../refusal.ts';
import { entries, memberships, notebooks } from '../schema/notebooks.ts';
import { people } from '../schema/people.ts';
import { editions, links } from '../schema/work.ts';
import { type NotebookStanding, stillStands } from '../standing.ts';
import { found, type Search } from './finding.ts';
import { personColumns } from './people.ts';

const ownership = alias(memberships, 'ownership');
const own = alias(memberships, 'own');

// In the list of columns, not joined: PostgreSQL works them out for the rows of the page alone.
const entryCount = sql<number>`(select count(*)::int from ${entries}
  where ${entries.notebook} = ${notebooks.id} and ${entries.deletedAt} is null)`;
const lastEdition = sql<number | null>`(select max(${editions.number}) from ${editions}
  where ${editions.notebook} = ${notebooks.id})`;

const summaryColumns = {
  id: notebooks.id,
  title: notebooks.title,
  authors: notebooks.authors,
  visibility: notebooks.visibility,
  owner: personColumns,
  role: own.role,
  changedAt: notebooks.changedAt,
  entries: entryCount,
  edition: lastEdition,
};

/** Notebooks with their owner and with the asking person's own role. */
function summaries({ db }: Asking, person: string | null) {
  const mine = person === null ? sql`false` : eq(own.person, person);
  return db
    .select(summaryColumns)
    .from(notebooks)
    .innerJoin(ownership, and(eq(ownership.notebook, notebooks.id), eq(ownership.role, 'owner')))
    .innerJoin(people, eq(people.id, ownership.person))
    .leftJoin(own, and(eq(own.notebook, notebooks.id), mine));
}

async function pageOfNotebooks(
  asking: Asking,
  person: string | null,
  search: Search,
  which: SQL | undefined,
): Promise<Page<NotebookSummary>> {
  const from = readCursor(search.after);
  const older =
    from === null
      ? undefined
      : sql`(${notebooks.changedAt}, ${notebooks.id}) < (${from.at.toISOString()}::timestamptz, ${from.id}::uuid)`;
  const rows = await summaries(asking, person)
    .where(and(isNull(notebooks.deletedAt), which, older, ...found(search)))
    .orderBy(desc(notebooks.changedAt), desc(notebooks.id))
    .limit(search.limit + 1);
  return pageFrom(
    rows,
    search.limit,
    ({ changedAt, id }) => ({ at: changedAt, id }),
    (row) => ({ ...row, changedAt: row.changedAt.toISOString() }),
  );
}

/** The notebooks on which a person has a role, newest change first. */
export function listShelf(
  asking: Asking,
  person: string,
  search: Search & { readonly whose: 'all' | 'own' | 'shared'; readonly state?: 'kept' | 'archived' },
): Promise<Page<NotebookSummary>> {
  const roles = { all: sql`${own.role} is not null`, own: eq(own.role, 'owner'), shared: ne(own.role, 'owner') };
  const states = { kept: isNull(own.archivedAt), archived: isNotNull(own.archivedAt) };
  const kept = search.state === undefined ? undefined : states[search.state];
  return pageOfNotebooks(asking, person, search, and(roles[search.whose], kept));
}

export function listPublic(asking: Asking, person: string | null, search: Search): Promise<Page<NotebookSummary>> {
  return pageOfNotebooks(asking, person, search, eq(notebooks.visibility, 'public'));
}

export interface NotebookRow extends Omit<NotebookSummary, 'changedAt' | 'entries'> {
  readonly createdAt: Date;
  readonly changedAt: Date;
  readonly originNotebook: string | null;
  readonly originEdition: number | null;
}

export async function getNotebook(asking: Asking, standing: NotebookStanding): Promise<NotebookRow> {
  const { id, title, authors, visibility, owner, role, changedAt, edition } = summaryColumns;
  const { createdAt, originNotebook, originEdition } = notebooks;
  const [row] = await asking.db
    .select({
      id,
      title,
      authors,
      visibility,
      owner,
      role,
      changedAt,
      edition,
      createdAt,
      originNotebook,
      originEdition,
    })
    .from(notebooks)
    .innerJoin(ownership, and(eq(ownership.notebook, notebooks.id), eq(ownership.role, 'owner')))
    .innerJoin(people, eq(people.id, ownership.person))
    .leftJoin(
      own,
      and(eq(own.notebook, notebooks.id), standing.person === null ? sql`false` : eq(own.person, standing.person)),
    )
    .where(eq(notebooks.id, standing.on.notebook));
  if (row === undefined) throw notFound();
  return row;
}

export interface NotebookFields {
  readonly title: string;
  readonly authors: readonly string[];
  readonly origin: { readonly notebook: string; readonly edition: number | null } | null;
}

/** A new private notebook with its owner; returns its id. Runs in a transaction. */
export async function insertNotebook({ db }: Asking, owner: string, fields: NotebookFields): Promise<string> {
  const { title, authors, origin } = fields;
  const [row] = await db
    .insert(notebooks)
    .values({
      title,
      authors: [...authors],
      originNotebook: origin?.notebook ?? null,
      originEdition: origin?.edition ?? null,
    })
    .returning({ id: notebooks.id });
  if (row === undefined) throw new Error('a notebook was inserted and is not there');
  await db.insert(memberships).values({ notebook: row.id, person: owner, role: 'owner' });
  return row.id;
}

/** Changes fields of a notebook and its time of change. */
export async function updateNotebook(
  { db }: Asking,
  standing: NotebookStanding,
  fields: { title?: string; authors?: string[]; visibility?: Visibility } = {},
): Promise<void> {
  const { rowCount } = await db
    .update(notebooks)
    .set({ ...fields, changedAt: sql`now()` })
    .where(stillStands(standing));
  if (rowCount === 0) throw notFound();
}

/** Puts a notebook into its owner's bin. */
export async function binNotebook({ db }: Asking, standing: NotebookStanding): Promise<void> {
  const { rowCount } = await db
    .update(notebooks)
    .set({ deletedAt: sql`now()` })
    .where(stillStands(standing));
  if (rowCount === 0) throw notFound();
}

/** How many share links to editions of the notebook are in force. */
export async function countLinks({ db }: Asking, standing: NotebookStanding): Promise<number> {
  const [row] = await db
    .select({ links: count() })
    .from(links)
    .innerJoin(editions, eq(editions.id, links.edition))
    .where(and(eq(editions.notebook, standing.on.notebook), isNull(links.revokedAt)));
  return row?.links ?? 0;
}

/** The people of a notebook: the owner first, then by role and name. */
export async function listMembers({ db }: Asking, standing: NotebookStanding): Promise<Member[]> {
  const rows = await db
    .select({ person: personColumns, role: memberships.role, since: memberships.since })
    .from(memberships)
    .innerJoin(people, eq(people.id, memberships.person))
    .where(eq(memberships.notebook, standing.on.notebook))
    .orderBy(asc(memberships.role), asc(people.name), asc(people.id));
  return rows.map((row) => ({ ...row, since: row.since.toISOString() }));
}

/** Gives a person a role; an owner keeps theirs, and false is returned. */
export function setMember(
  { db }: Asking,
  standing: NotebookStanding,
  person: string,
  role: GrantedRole,
): Promise<boolean> {
  return setMemberOf({ db }, standing.on.notebook, person, role);
}

/** The same for whoever was invited, before they stand anywhere on the notebook. */
export async function setMemberOf(
  { db }: Asking,
  notebook: string,
  person: string,
  role: GrantedRole,
): Promise<boolean> {
  const { rowCount } = await db
    .insert(memberships)
    .values({ notebook, person, role })
    .onConflictDoUpdate({
      target: [memberships.notebook, memberships.person],
      set: { role },
      setWhere: ne(memberships.role, 'owner'),
    });
  return (rowCount ?? 0) > 0;
}

/** Takes a person's role away, unless it is the owner's; false if there was none to take. */
export async function deleteMember({ db }: Asking, standing: NotebookStanding, person: string): Promise<boolean> {
  const { rowCount } = await db
    .delete(memberships)
    .where(
      and(
        eq(memberships.notebook, standing.on.notebook),
        eq(memberships.person, person),
        ne(memberships.role, 'owner'),
      ),
    );
  return (rowCount ?? 0) > 0;
}
