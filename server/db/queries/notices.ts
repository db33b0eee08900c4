import { and, count, desc, eq, inArray, isNull, sql } from 'drizzle-orm';
import type { Notice, NoticeKind, NoticeSettings } from '../../../shared/contracts/notices.ts';
import type { MailMode } from '../../../shared/contracts/people.ts';
import { type Role, roles } from '../../../shared/contracts/rights.ts';
import type { Asking } from '../connection.ts';
import { type Page, type PageAsked, pageFrom, readCursor } from '../page.ts';
import { memberships, notebooks } from '../schema/notebooks.ts';
import { notices, noticeSettings } from '../schema/notices.ts';
import { people } from '../schema/people.ts';
import { editions } from '../schema/work.ts';
import { personColumns } from './people.ts';

/** Someone who is to be told, and how mail about this notebook comes to them. */
export interface Told {
  readonly person: string;
  readonly email: string | null;
  readonly mail: MailMode;
}

/** Those of the given people whose accounts are open, with the way that news about the notebook reach them by mail. */
export async function listTold({ db }: Asking, persons: readonly string[], notebook: string | null): Promise<Told[]> {
  if (persons.length === 0) return [];
  const apart = and(
    eq(noticeSettings.person, people.id),
    notebook === null ? sql`false` : eq(noticeSettings.notebook, notebook),
  );
  return db
    .select({
      person: people.id,
      email: people.email,
      mail: sql<MailMode>`coalesce(${noticeSettings.mail}, ${people.noticeMail})`,
    })
    .from(people)
    .leftJoin(noticeSettings, apart)
    .where(and(inArray(people.id, [...persons]), isNull(people.deletedAt), isNull(people.suspendedAt)));
}

export interface NewNotice {
  readonly person: string;
  readonly kind: NoticeKind;
  readonly text: string;
  readonly actor: string | null;
  readonly notebook: string | null;
  readonly to: string;
  readonly digest: boolean;
}

export async function insertNotices({ db }: Asking, rows: readonly NewNotice[]): Promise<void> {
  if (rows.length > 0) await db.insert(notices).values([...rows]);
}

const noticeColumns = {
  id: notices.id,
  kind: notices.kind,
  text: notices.text,
  by: personColumns,
  notebook: { id: notebooks.id, title: notebooks.title },
  to: notices.to,
  at: notices.createdAt,
  readAt: notices.readAt,
};

export async function listNotices(
  { db }: Asking,
  person: string,
  { after, limit, show }: PageAsked & { readonly show: 'all' | 'unread' },
): Promise<Page<Notice>> {
  const from = readCursor(after);
  const older =
    from === null
      ? undefined
      : sql`(${notices.createdAt}, ${notices.id}) < (${from.at.toISOString()}::timestamptz, ${from.id}::uuid)`;
  const rows = await db
    .select(noticeColumns)
    .from(notices)
    .leftJoin(people, eq(people.id, notices.actor))
    .leftJoin(notebooks, eq(notebooks.id, notices.notebook))
    .where(and(eq(notices.person, person), show === 'unread' ? isNull(notices.readAt) : undefined, older))
    .orderBy(desc(notices.createdAt), desc(notices.id))
    .limit(limit + 1);
  return pageFrom(
    rows,
    limit,
    ({ at, id }) => ({ at, id }),
    ({ at, readAt, ...row }) => ({ ...row, at: at.toISOString(), read: readAt !== null }),
  );
}

export async function countUnread({ db }: Asking, person: string): Promise<number> {
  const [row] = await db
    .select({ unread: count() })
    .from(notices)
    .where(and(eq(notices.person, person), isNull(notices.readAt)));
  return row?.unread ?? 0;
}

/** Marks a person's notices as read: those of the ids, or all. */
export async function markRead({ db }: Asking, person: string, which: 'all' | readonly string[]): Promise<void> {
  if (which !== 'all' && which.length === 0) return;
  const some = which === 'all' ? undefined : inArray(notices.id, [...which]);
  // What was read here needs no mail any more.
  await db
    .update(notices)
    .set({ readAt: sql`now()`, digest: false })
    .where(and(eq(notices.person, person), isNull(notices.readAt), some));
}

export async function getNoticeSettings({ db }: Asking, person: string): Promise<NoticeSettings> {
  const [row] = await db.select({ mail: people.noticeMail }).from(people).where(eq(people.id, person));
  const apart = await db
    .select({ notebook: notebooks.id, title: notebooks.title, mail: noticeSettings.mail })
    .from(noticeSettings)
    .innerJoin(notebooks, eq(notebooks.id, noticeSettings.notebook))
    .where(eq(noticeSettings.person, person))
    .orderBy(notebooks.title, notebooks.id);
  return { mail: row?.mail ?? 'immediate', notebooks: apart };
}

export async function setNoticeMail({ db }: Asking, person: string, mail: MailMode): Promise<void> {
  await db.update(people).set({ noticeMail: mail }).where(eq(people.id, person));
}

/** Sets one notebook apart, or (null) has it like all others. Does nothing for a notebook that is gone. */
export async function setNotebookMail(
  { db }: Asking,
  person: string,
  notebook: string,
  mail: MailMode | null,
): Promise<void> {
  const which = and(eq(noticeSettings.person, person), eq(noticeSettings.notebook, notebook));
  if (mail === null) {
    await db.delete(noticeSettings).where(which);
    return;
  }
  await db.execute(sql`insert into ${noticeSettings} (person, notebook, mail)
    select ${people.id}, ${notebooks.id}, ${mail}::mail_mode from ${people}, ${notebooks}
    where ${people.id} = ${person} and ${notebooks.id} = ${notebook}
    on conflict (person, notebook) do update set mail = excluded.mail`);
}

/** All who have a role on a notebook. */
export const membersOf = (asking: Asking, notebook: string): Promise<string[]> =>
  peopleWithRole(asking, notebook, roles);

/** The people who have one of these roles on a notebook. */
export async function peopleWithRole({ db }: Asking, notebook: string, roles: readonly Role[]): Promise<string[]> {
  const rows = await db
    .select({ person: memberships.person })
    .from(memberships)
    .where(and(eq(memberships.notebook, notebook), inArray(memberships.role, [...roles])));
  return rows.map((row) => row.person);
}

/** Who published an edition, and so hears what became of its claims; null where the account is gone. */
export async function publisherOf({ db }: Asking, edition: string): Promise<string | null> {
  const [row] = await db.select({ person: editions.publishedBy }).from(editions).where(eq(editions.id, edition));
  return row?.person ?? null;
}
