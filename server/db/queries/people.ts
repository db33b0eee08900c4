import { and, eq, sql } from 'drizzle-orm';
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
    .where(eq(sql`lower(${people.handle})`, handle.toLowerCase()));
  return row ?? null;
}

/** An account elsewhere, as its provider describes it. */
export interface Identity {
  readonly provider: string;
  /** The permanent id there. */
  readonly subject: string;
  readonly handle: string;
  readonly name: string;
  readonly email: string | null;
}

/**
 * The person who signs in with this account; made at the first time. A handle that someone else has already gets a number.
 * Two first sign-ins at once make one person.
 */
export async function personOfIdentity({ db }: Asking, identity: Identity): Promise<string> {
  const which = and(eq(identities.provider, identity.provider), eq(identities.subject, identity.subject));
  // Held to the end of the transaction, so that the same account does not sign in for the first time twice.
  await db.execute(sql`select pg_advisory_xact_lock(hashtext(${`${identity.provider} ${identity.subject}`}))`);
  const [known] = await db.select({ person: identities.person }).from(identities).where(which);
  if (known !== undefined) return known.person;
  const person = await insertPerson({ db }, identity);
  await db.insert(identities).values({ provider: identity.provider, subject: identity.subject, person });
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
