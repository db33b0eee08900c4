import { and, eq, isNull, sql } from 'drizzle-orm';
import type { Person } from '../../../shared/contracts/people.ts';
import type { Asking } from '../connection.ts';
import { identities, people } from '../schema/people.ts';

/** The columns of a person that others may see. */
export const personColumns = { id: people.id, handle: people.handle, name: people.name };

export interface Account extends Person {
  readonly email: string | null;
  readonly steward: boolean;
}

export async function findAccount({ db }: Asking, id: string): Promise<Account | null> {
  const [row] = await db
    .select({ ...personColumns, email: people.email, steward: people.steward })
    .from(people)
    .where(eq(people.id, id));
  return row ?? null;
}

/** By handle, whatever its case. */
export async function findByHandle({ db }: Asking, handle: string): Promise<Person | null> {
  const [row] = await db
    .select(personColumns)
    .from(people)
    .where(and(eq(sql`lower(${people.handle})`, handle.toLowerCase()), isNull(people.deletedAt)));
  return row ?? null;
}

/** Provider of the identities that are addresses shown to be the person's; their subject is the address. */
export const emailProvider = 'email';

/** An account elsewhere, as its provider describes it. */
export interface Identity {
  readonly provider: string;
  /** The permanent id there. */
  readonly subject: string;
  readonly handle: string;
  readonly name: string;
  /** An address that the provider has found to be this person's; null if there is none. */
  readonly email: string | null;
}

/** Held to the end of the transaction, so that the same account does not become two people's. */
async function lockIdentity({ db }: Asking, provider: string, subject: string): Promise<void> {
  await db.execute(sql`select pg_advisory_xact_lock(hashtext(${`${provider} ${subject}`}))`);
}

/** Whose way in this is; null if nobody's. In a transaction the answer stays true to its end. */
export async function findByIdentity(asking: Asking, provider: string, subject: string): Promise<string | null> {
  await lockIdentity(asking, provider, subject);
  const [row] = await asking.db
    .select({ person: identities.person })
    .from(identities)
    .where(and(eq(identities.provider, provider), eq(identities.subject, subject)));
  return row?.person ?? null;
}

/** Makes an account elsewhere, or an address, a way in; false if it is one already. */
export async function insertIdentity(
  { db }: Asking,
  person: string,
  { provider, subject, label }: { readonly provider: string; readonly subject: string; readonly label: string },
): Promise<boolean> {
  const { rowCount } = await db.insert(identities).values({ provider, subject, person, label }).onConflictDoNothing();
  return (rowCount ?? 0) > 0;
}

/** What the person knows the account by. */
const labelOf = ({ provider, subject, handle }: Identity): string => (provider === emailProvider ? subject : handle);

/**
 * The person who signs in with this account; null if it is nobody's yet. Whoever has the account's address as a way in has the
 * account too, from now on.
 */
export async function findOrLinkIdentity(asking: Asking, identity: Identity): Promise<string | null> {
  const { provider, subject, email } = identity;
  const known = await findByIdentity(asking, provider, subject);
  if (known !== null) {
    const which = and(eq(identities.provider, provider), eq(identities.subject, subject));
    await asking.db
      .update(identities)
      .set({ label: labelOf(identity) })
      .where(which);
    return known;
  }
  const person = email === null ? null : await findByIdentity(asking, emailProvider, email);
  if (person !== null) await insertIdentity(asking, person, { provider, subject, label: labelOf(identity) });
  return person;
}

/** A new person with this account, and its address, as ways in. A handle that someone else has already gets a number. */
export async function insertPersonOf(asking: Asking, identity: Identity): Promise<string> {
  const { provider, subject, email } = identity;
  const person = await insertPerson(asking, identity);
  await insertIdentity(asking, person, { provider, subject, label: labelOf(identity) });
  if (email !== null) await insertIdentity(asking, person, { provider: emailProvider, subject: email, label: email });
  return person;
}

async function insertPerson({ db }: Asking, { handle, name, email }: Identity): Promise<string> {
  for (let number = 1; ; number += 1) {
    const own = number === 1 ? handle : `${handle}-${String(number)}`;
    const [row] = await db
      .insert(people)
      .values({ handle: own, name, email })
      .onConflictDoNothing()
      .returning({ id: people.id });
    if (row !== undefined) return row.id;
  }
}

export async function setSteward({ db }: Asking, person: string, steward: boolean): Promise<void> {
  await db.update(people).set({ steward }).where(eq(people.id, person));
}
