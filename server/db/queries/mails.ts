import { and, asc, count, desc, eq, gt, isNotNull, lt, sql } from 'drizzle-orm';
import type { QueuedMail } from '../../../shared/contracts/steward.ts';
import type { Asking } from '../connection.ts';
import { type Page, type PageAsked, pageFrom, readCursor } from '../page.ts';
import { mails, notices, type Stops } from '../schema/notices.ts';
import { people } from '../schema/people.ts';

/** Attempts after which a mail is given up; the pause doubles from fifteen seconds, so the last is half an hour later. */
const mostAttempts = 8;
const firstPauseSeconds = 15;

export interface NewMail {
  readonly to: string;
  readonly subject: string;
  /** Text in which `baseMark` stands for the address of the installation. */
  readonly text: string;
  readonly stops: Stops | null;
  /** After so many minutes it is not sent any more: what it carries would be of no use. */
  readonly minutes?: number;
}

export interface DueMail {
  readonly id: string;
  readonly to: string;
  readonly subject: string;
  readonly text: string;
  readonly stops: Stops | null;
  readonly attempts: number;
}

/** Puts a mail into the queue; it goes when the transaction commits. */
export async function insertMail({ db }: Asking, { minutes, ...mail }: NewMail): Promise<void> {
  const uselessAt = minutes === undefined ? null : sql`now() + make_interval(mins => ${minutes})`;
  await db.insert(mails).values({ ...mail, uselessAt });
}

/** How many mails went, or are to go, to an address lately. */
export async function countMailsTo({ db }: Asking, to: string, minutes: number): Promise<number> {
  const [row] = await db
    .select({ sent: count() })
    .from(mails)
    .where(and(eq(mails.to, to), gt(mails.createdAt, sql`now() - make_interval(mins => ${minutes})`)));
  return row?.sent ?? 0;
}

/**
 * Takes a mail that is due, for `leaseSeconds`: a sender that dies leaves it to be taken again. Null if none is due.
 * Counts the attempt, so that a mail that ends its sender is not tried for ever.
 */
export async function takeMail({ db }: Asking, leaseSeconds: number): Promise<DueMail | null> {
  const { rows } = await db.execute<DueMail & Record<string, unknown>>(sql`
    update ${mails} set attempts = attempts + 1, due_at = now() + make_interval(secs => ${leaseSeconds})
    where id = (select id from ${mails} where state = 'waiting' and due_at <= now() and text is not null and (useless_at is null or useless_at > now())
      order by due_at, created_at, id limit 1 for update skip locked)
    returning id, "to", subject, text, stops, attempts`);
  return rows[0] ?? null;
}

/** A mail that is sent is forgotten but for whom and when. */
export async function markSent({ db }: Asking, id: string): Promise<void> {
  await db
    .update(mails)
    .set({ state: 'sent', sentAt: sql`now()`, text: null, error: null })
    .where(eq(mails.id, id));
}

/** Tries again later, or gives up after the last attempt or where the other side refused for good. */
export async function markUnsent(
  { db }: Asking,
  { id, attempts }: DueMail,
  error: string,
  forGood: boolean,
): Promise<void> {
  const pause = firstPauseSeconds * 2 ** (attempts - 1);
  await db
    .update(mails)
    .set({
      error: error.slice(0, 500),
      ...(forGood || attempts >= mostAttempts
        ? { state: 'failed' as const }
        : { dueAt: sql`now() + make_interval(secs => ${pause})` }),
    })
    .where(eq(mails.id, id));
}

/** Gives up what would be of no use any more. */
export async function giveUpLate({ db }: Asking): Promise<void> {
  await db
    .update(mails)
    .set({ state: 'failed', text: null, error: 'It was not sent in time.' })
    .where(and(eq(mails.state, 'waiting'), lt(mails.uselessAt, sql`now()`)));
}

/** Mail of long ago is forgotten. */
export async function forgetMails({ db }: Asking): Promise<void> {
  await db.delete(mails).where(lt(mails.createdAt, sql`now() - interval '30 days'`));
}

type MailRow = typeof mails.$inferSelect;

const queuedOf = ({ createdAt, dueAt, sentAt, id, to, subject, state, attempts, error }: MailRow): QueuedMail => ({
  id,
  to,
  subject,
  state,
  attempts,
  error,
  createdAt: createdAt.toISOString(),
  dueAt: state === 'waiting' ? dueAt.toISOString() : null,
  sentAt: sentAt?.toISOString() ?? null,
});

/** The queue and what was sent lately, newest first. */
export async function listMails(
  { db }: Asking,
  { after, limit, state }: PageAsked & { readonly state?: QueuedMail['state'] | undefined },
): Promise<Page<QueuedMail>> {
  const from = readCursor(after);
  const older =
    from === null
      ? undefined
      : sql`(${mails.createdAt}, ${mails.id}) < (${from.at.toISOString()}::timestamptz, ${from.id}::uuid)`;
  const rows = await db
    .select()
    .from(mails)
    .where(and(older, state === undefined ? undefined : eq(mails.state, state)))
    .orderBy(desc(mails.createdAt), desc(mails.id))
    .limit(limit + 1);
  return pageFrom(rows, limit, ({ createdAt, id }) => ({ at: createdAt, id }), queuedOf);
}

/** Has a mail tried anew that was given up and not forgotten; null if it is none. */
export async function reopenMail({ db }: Asking, id: string): Promise<QueuedMail | null> {
  const [row] = await db
    .update(mails)
    .set({ state: 'waiting', attempts: 0, dueAt: sql`now()`, uselessAt: null })
    .where(and(eq(mails.id, id), eq(mails.state, 'failed'), isNotNull(mails.text)))
    .returning();
  return row === undefined ? null : queuedOf(row);
}

export interface Digest {
  readonly person: string;
  readonly email: string;
  readonly items: readonly { readonly text: string; readonly to: string }[];
}

/**
 * Takes what waits for the daily mail of one person, some of which is from before `until`; null if nobody's is due.
 * Runs in the transaction that puts the mail into the queue.
 */
export async function takeDigest({ db }: Asking, until: Date): Promise<Digest | null> {
  const [due] = await db
    .select({ person: people.id, email: people.email })
    .from(people)
    .where(
      sql`${people.email} is not null and ${people.deletedAt} is null and exists (select 1 from ${notices}
        where ${notices.person} = ${people.id} and ${notices.digest} and ${notices.createdAt} < ${until.toISOString()}::timestamptz)`,
    )
    .limit(1)
    .for('update', { skipLocked: true });
  if (due?.email == null) return null;
  const waiting = and(eq(notices.person, due.person), notices.digest);
  const items = await db
    .select({ text: notices.text, to: notices.to })
    .from(notices)
    .where(waiting)
    .orderBy(asc(notices.createdAt), asc(notices.id));
  await db.update(notices).set({ digest: false }).where(waiting);
  return { person: due.person, email: due.email, items };
}
