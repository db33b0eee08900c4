import { and, asc, count, eq, gt, isNull, ne, sql } from 'drizzle-orm';
import type { AccountPage, Deletion, WayIn } from '../../../shared/contracts/people.ts';
import type { Asking } from '../connection.ts';
import { notFound, Refusal } from '../refusal.ts';
import { memberships, notebooks } from '../schema/notebooks.ts';
import { invitations, notices, noticeSettings } from '../schema/notices.ts';
import { accessTokens, identities, mailLinks, people, sessions } from '../schema/people.ts';
import { editions } from '../schema/work.ts';
import { emailProvider, personColumns } from './people.ts';

const wayOf = (provider: string): WayIn['way'] => (provider === emailProvider ? 'email' : 'github');

export async function getAccount({ db }: Asking, person: string): Promise<AccountPage> {
  const { affiliation, orcid, email, steward, createdAt } = people;
  const [row] = await db
    .select({ ...personColumns, affiliation, orcid, email, steward, createdAt })
    .from(people)
    .where(eq(people.id, person));
  if (row === undefined) throw notFound();
  const ways = await db
    .select()
    .from(identities)
    .where(eq(identities.person, person))
    .orderBy(asc(identities.createdAt), asc(identities.provider), asc(identities.subject));
  const { createdAt: since, ...rest } = row;
  return {
    ...rest,
    since: since.toISOString(),
    addresses: ways.filter(({ provider }) => provider === emailProvider).map(({ subject }) => subject),
    ways: ways.map(({ id, provider, subject, label, createdAt: at }) => ({
      id,
      way: wayOf(provider),
      label: label === '' ? subject : label,
      since: at.toISOString(),
    })),
  };
}

export interface AccountFields {
  readonly name?: string | undefined;
  readonly handle?: string | undefined;
  readonly affiliation?: string | null | undefined;
  readonly orcid?: string | null | undefined;
  readonly email?: string | null | undefined;
}

/** Throws `conflict` if someone else has the handle. */
export async function updateAccount({ db }: Asking, person: string, fields: AccountFields): Promise<void> {
  const { handle } = fields;
  if (handle !== undefined) {
    const [other] = await db
      .select({ id: people.id })
      .from(people)
      .where(and(eq(sql`lower(${people.handle})`, handle.toLowerCase()), ne(people.id, person)));
    if (other !== undefined) throw new Refusal('conflict', `Someone else is called @${handle}.`);
  }
  const given = Object.fromEntries(Object.entries(fields).filter(([, value]) => value !== undefined));
  if (Object.keys(given).length > 0) await db.update(people).set(given).where(eq(people.id, person));
}

/** Takes a way in away; false if the person has none of that id. The last one stays: throws `conflict`. */
export async function deleteWayIn({ db }: Asking, person: string, way: string): Promise<boolean> {
  // Locked, so that two that go at once do not leave none.
  await db.select({ id: people.id }).from(people).where(eq(people.id, person)).for('update');
  const own = await db.select({ id: identities.id }).from(identities).where(eq(identities.person, person));
  if (!own.some(({ id }) => id === way)) return false;
  if (own.length === 1) throw new Refusal('conflict', 'This is the only way in. Add another one first.');
  await db.delete(identities).where(eq(identities.id, way));
  return true;
}

export interface MailLink {
  readonly id: string;
  readonly email: string;
  readonly person: string | null;
  readonly to: string;
}

export async function insertMailLink(
  { db }: Asking,
  link: { readonly hash: string; readonly email: string; readonly person: string | null; readonly to: string },
  minutes: number,
): Promise<void> {
  await db.insert(mailLinks).values({ ...link, expiresAt: sql`now() + make_interval(mins => ${minutes})` });
}

/** How many links were sent to an address lately. */
export async function countMailLinks({ db }: Asking, email: string, minutes: number): Promise<number> {
  await db.execute(sql`select pg_advisory_xact_lock(hashtext(${`mail link ${email}`}))`);
  const [row] = await db
    .select({ links: count() })
    .from(mailLinks)
    .where(and(eq(mailLinks.email, email), gt(mailLinks.createdAt, sql`now() - make_interval(mins => ${minutes})`)));
  return row?.links ?? 0;
}

/**
 * The link of a hash, if it is good; in a transaction nobody else uses it meanwhile. `of`: those that sign in, or those that make
 * an address a way in.
 */
export async function findMailLink({ db }: Asking, hash: string, of: 'sign-in' | 'address'): Promise<MailLink | null> {
  const whose = of === 'sign-in' ? isNull(mailLinks.person) : sql`${mailLinks.person} is not null`;
  const { id, email, person, to } = mailLinks;
  const [row] = await db
    .select({ id, email, person, to })
    .from(mailLinks)
    .where(and(eq(mailLinks.hash, hash), isNull(mailLinks.usedAt), gt(mailLinks.expiresAt, sql`now()`), whose))
    .for('update');
  return row ?? null;
}

/** Uses a link up, and with it all others of its kind to the same address: one sign-in needs one. */
export async function useMailLink({ db }: Asking, { email, person }: MailLink): Promise<void> {
  const whose = person === null ? isNull(mailLinks.person) : eq(mailLinks.person, person);
  await db
    .update(mailLinks)
    .set({ usedAt: sql`now()` })
    .where(and(eq(mailLinks.email, email), isNull(mailLinks.usedAt), whose));
}

/** What deleting a person's account would do to the notebooks that they own. */
export async function getDeletion({ db }: Asking, person: string): Promise<Deletion> {
  const others = sql<number>`(select count(*)::int from ${memberships} as other
    where other.notebook = ${notebooks.id} and other.person <> ${person})`;
  const published = sql<number>`(select count(*)::int from ${editions} where ${editions.notebook} = ${notebooks.id})`;
  const rows = await db
    .select({ id: notebooks.id, title: notebooks.title, people: others, editions: published })
    .from(notebooks)
    .innerJoin(memberships, and(eq(memberships.notebook, notebooks.id), eq(memberships.role, 'owner')))
    .where(eq(memberships.person, person))
    .orderBy(asc(notebooks.title), asc(notebooks.id));
  return {
    goes: rows.filter((row) => row.people === 0).map(({ id, title, editions: n }) => ({ id, title, editions: n })),
    handOn: rows.filter((row) => row.people > 0).map(({ id, title, people: n }) => ({ id, title, people: n })),
  };
}

/**
 * Deletes what is a person's own. The row stays with nothing but the name, by which editions, remarks and verdicts of this person
 * go on to be signed.
 */
export async function deleteAccount({ db }: Asking, person: string, goes: readonly string[]): Promise<void> {
  for (const notebook of goes) await db.delete(notebooks).where(eq(notebooks.id, notebook));
  const addresses = db
    .select({ email: identities.subject })
    .from(identities)
    .where(and(eq(identities.person, person), eq(identities.provider, emailProvider)));
  await db.delete(invitations).where(sql`${invitations.email} in ${addresses}`);
  await db.delete(mailLinks).where(sql`${mailLinks.email} in ${addresses}`);
  await db.delete(memberships).where(eq(memberships.person, person));
  await db.delete(identities).where(eq(identities.person, person));
  await db.delete(accessTokens).where(eq(accessTokens.person, person));
  await db.delete(notices).where(eq(notices.person, person));
  await db.delete(noticeSettings).where(eq(noticeSettings.person, person));
  await db.delete(sessions).where(eq(sql`(${sessions.sess} -> 'passport' ->> 'user')`, person));
  await db
    .update(people)
    .set({
      handle: sql`'gone-' || left(${people.id}::text, 13)`,
      email: null,
      affiliation: null,
      orcid: null,
      steward: false,
      deletedAt: sql`now()`,
    })
    .where(eq(people.id, person));
}
