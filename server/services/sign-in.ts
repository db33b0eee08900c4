import type { Database, Transaction } from '../db/connection.ts';
import { countMailLinks, findMailLink, insertMailLink, useMailLink } from '../db/queries/accounts.ts';
import { findInvitation } from '../db/queries/invitations.ts';
import { readLimits } from '../db/queries/limits.ts';
import { insertMail } from '../db/queries/mails.ts';
import { emailProvider, findOrLinkIdentity, type Identity, insertPersonOf, setSteward } from '../db/queries/people.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import { askerFor } from '../db/standing.ts';
import { signInLetter } from '../mail/letters.ts';
import type { Context, House } from './context.ts';
import { acceptFor } from './invitations.ts';
import { newSecret, secretHash } from './secrets.ts';

/** Name of the stand-in for GitHub among providers: its invented account numbers are nobody's at the real one. */
export const standInProvider = 'github-stand-in';

const linkMinutes = 20;
/** Links that one address gets within an hour; further ones are not sent, and nobody is told. */
const linksAnHour = 5;

/**
 * The person who signs in with an account elsewhere; made at the first time. Returns the person's id. Throws `not-allowed` where
 * the account is closed, or new and the installation takes none.
 */
export function signIn(database: Database, house: Pick<House, 'stewards'>, identity: Identity): Promise<string> {
  return database.transaction(async (tx) => {
    const known = await findOrLinkIdentity(tx, identity);
    if (known === null) await refuseNew(tx);
    return arrive(tx, house, identity, known ?? (await insertPersonOf(tx, identity)));
  });
}

async function refuseNew(tx: Transaction): Promise<void> {
  const { openSignUp } = await readLimits(tx);
  if (!openSignUp) throw new Refusal('not-allowed', 'New people come in by invitation here.');
}

async function arrive(
  tx: Transaction,
  { stewards }: Pick<House, 'stewards'>,
  { provider, handle, email }: Identity,
  person: string,
): Promise<string> {
  const asker = await askerFor(tx, person);
  if (asker === null) throw new Refusal('not-allowed', 'This account is closed. Ask a steward of this installation.');
  const called = [email, provider === 'github' ? `github:${handle.toLowerCase()}` : null];
  if (!asker.steward && stewards.some((steward) => called.includes(steward))) await setSteward(tx, person, true);
  return person;
}

/** Sends a one-time link to an address. The answer is the same whether anyone has the address or not. */
export function askForLink(
  { database }: Context,
  house: House,
  { email, to = '/' }: { readonly email: string; readonly to?: string | undefined },
): Promise<{ minutes: number }> {
  if (house.mail === 'none') throw new Refusal('unavailable', 'This installation sends no mail.');
  return database.transaction(async (tx) => {
    if ((await countMailLinks(tx, email, 60)) < linksAnHour) {
      const secret = newSecret();
      await insertMailLink(tx, { hash: secretHash(secret), email, person: null, to }, linkMinutes);
      await insertMail(tx, { ...signInLetter(secret, linkMinutes), to: email, stops: null, minutes: linkMinutes });
    }
    return { minutes: linkMinutes };
  });
}

/** A handle from a name: its letters without marks, and hyphens. */
function handleFrom(name: string): string {
  const plain = name
    .normalize('NFKD')
    .replace(/\p{M}/gu, '')
    .toLowerCase()
    .replace(/[^a-z0-9]+/g, '-')
    .slice(0, 30)
    .replace(/^-+|-+$/g, '');
  return plain === '' ? 'person' : plain;
}

/**
 * Who signs in with what a mail carries, and the page to go to. It is used up, unless the person is new and gave no name: then
 * `conflict` is thrown with `nameNeeded`. Throws `not-found` for what is unknown, used or too old.
 */
export function useLink(
  { database }: Context,
  house: House,
  { token, name }: { readonly token: string; readonly name?: string | undefined },
): Promise<{ person: string; to: string }> {
  return database.transaction(async (tx) => {
    const hash = secretHash(token);
    const link = await findMailLink(tx, hash, 'sign-in');
    const invitation = link === null ? await findInvitation(tx, hash) : null;
    const email = link?.email ?? invitation?.email;
    if (email === undefined)
      throw new Refusal('not-found', 'This link was used already, or is too old. Ask for another.');
    const identity = { provider: emailProvider, subject: email, handle: email, name: name ?? '', email };
    const known = await findOrLinkIdentity(tx, identity);
    if (known === null && invitation === null) await refuseNew(tx);
    if (known === null && name === undefined) {
      throw new Refusal('conflict', 'Say first by which name others are to know you.', { nameNeeded: true, email });
    }
    const fresh = { ...identity, handle: handleFrom(name ?? '') };
    const person = await arrive(tx, house, identity, known ?? (await insertPersonOf(tx, fresh)));
    if (link !== null) {
      await useMailLink(tx, link);
      return { person, to: link.to };
    }
    if (invitation === null || !(await acceptFor(tx, person, invitation))) throw notFound();
    return { person, to: `/notebooks/${invitation.notebook.id}` };
  });
}
