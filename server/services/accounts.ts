import type { AccessToken, AccountPage, Deletion } from '../../shared/contracts/people.ts';
import type { Scope } from '../../shared/contracts/rights.ts';
import { announce, tell } from '../db/announce.ts';
import type { Database } from '../db/connection.ts';
import * as queries from '../db/queries/accounts.ts';
import { readLimits } from '../db/queries/limits.ts';
import { insertMail } from '../db/queries/mails.ts';
import { getNoticeSettings, listNotices } from '../db/queries/notices.ts';
import { listShelf } from '../db/queries/notebooks.ts';
import { emailProvider, findAccount, findByIdentity, type Identity, insertIdentity } from '../db/queries/people.ts';
import { listSessions } from '../db/queries/sessions.ts';
import * as tokens from '../db/queries/tokens.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import { type Standing, standingFor } from '../db/standing.ts';
import { addressLetter } from '../mail/letters.ts';
import { type Context, type House, personOf } from './context.ts';
import { exportNotebook } from './notebooks.ts';
import { newSecret, secretHash } from './secrets.ts';

const addressMinutes = 60;
const linksAnHour = 5;

export function accountOf({ database }: Context, standing: Standing): Promise<AccountPage> {
  return queries.getAccount(database, personOf(standing));
}

/** Changes the profile; mail goes only to an address that was shown to be the person's. */
export function changeAccount(
  { database }: Context,
  standing: Standing,
  fields: queries.AccountFields,
): Promise<AccountPage> {
  const person = personOf(standing);
  return database.transaction(async (tx) => {
    if (fields.email !== undefined && fields.email !== null) {
      const { addresses } = await queries.getAccount(tx, person);
      if (!addresses.includes(fields.email)) {
        throw new Refusal('conflict', 'Add this address as a way in first: a mail to it has to be answered.');
      }
    }
    await queries.updateAccount(tx, person, fields);
    await tell(tx, person, 'account', {});
    return queries.getAccount(tx, person);
  });
}

/** Sends a mail to an address that is to become a way in. The answer is the same whosever it is. */
export function addAddress(
  { database }: Context,
  house: House,
  standing: Standing,
  email: string,
): Promise<{ minutes: number }> {
  if (house.mail === 'none') throw new Refusal('unavailable', 'This installation sends no mail.');
  const person = personOf(standing);
  return database.transaction(async (tx) => {
    if ((await queries.countMailLinks(tx, email, 60)) < linksAnHour) {
      const secret = newSecret();
      await queries.insertMailLink(tx, { hash: secretHash(secret), email, person, to: '/account' }, addressMinutes);
      const handle = (await findAccount(tx, person))?.handle ?? '';
      const letter = addressLetter(secret, addressMinutes, handle);
      await insertMail(tx, { ...letter, to: email, stops: null, minutes: addressMinutes });
    }
    return { minutes: addressMinutes };
  });
}

/** Makes an address a way in, by what its mail carries; only for the person who asked for it. */
export function confirmAddress({ database }: Context, standing: Standing, token: string): Promise<AccountPage> {
  const person = personOf(standing);
  return database.transaction(async (tx) => {
    const link = await queries.findMailLink(tx, secretHash(token), 'address');
    if (link === null || link.person !== person) {
      const words =
        'This link was used, is too old, or belongs to another account. Sign in to the one that asked for it.';
      throw new Refusal('not-found', words);
    }
    const identity = { provider: emailProvider, subject: link.email, label: link.email };
    refuseTaken(await findByIdentity(tx, emailProvider, link.email), person, 'address');
    await insertIdentity(tx, person, identity);
    await queries.useMailLink(tx, link);
    const { email } = await queries.getAccount(tx, person);
    if (email === null) await queries.updateAccount(tx, person, { email: link.email });
    await tell(tx, person, 'account', {});
    return queries.getAccount(tx, person);
  });
}

/** Makes an account elsewhere a way in of someone who is signed in. Throws `conflict` if it is another person's. */
export function linkIdentity(database: Database, person: string, identity: Identity): Promise<void> {
  return database.transaction(async (tx) => {
    const { provider, subject, handle } = identity;
    refuseTaken(await findByIdentity(tx, provider, subject), person, 'account');
    await insertIdentity(tx, person, { provider, subject, label: handle });
    await tell(tx, person, 'account', {});
  });
}

function refuseTaken(whose: string | null, person: string, what: string): void {
  if (whose === null || whose === person) return;
  throw new Refusal('conflict', `This ${what} is the way in of another person here. Delete that account first.`);
}

export function removeWayIn({ database }: Context, standing: Standing, way: string): Promise<AccountPage> {
  const person = personOf(standing);
  return database.transaction(async (tx) => {
    if (!(await queries.deleteWayIn(tx, person, way))) throw notFound();
    const { addresses, email } = await queries.getAccount(tx, person);
    // Mail goes to no address that is not the person's any more.
    if (email !== null && !addresses.includes(email)) {
      await queries.updateAccount(tx, person, { email: addresses[0] ?? null });
    }
    return queries.getAccount(tx, person);
  });
}

/** Longest part of an export that is taken at once. */
const pageSize = 100;

/** All that is kept about a person: profile, ways in, sessions, tokens, notices, and their notebooks as `.gw` texts. */
export async function exportAccount(
  context: Context,
  standing: Standing,
  current: string,
): Promise<{ format: string } & Record<string, unknown>> {
  const { database } = context;
  const person = personOf(standing);
  const notebooks: unknown[] = [];
  for (let after: string | undefined, more = true; more;) {
    const page = await listShelf(database, person, { q: '', whose: 'all', limit: pageSize, after });
    for (const { id, title, role } of page.items) {
      const source =
        role === 'owner' ? await exportNotebook(context, await standingFor(database, person, id)) : undefined;
      notebooks.push({ id, title, role, ...(source === undefined ? {} : { source }) });
    }
    after = page.next ?? undefined;
    more = page.next !== null;
  }
  const notices: unknown[] = [];
  for (let after: string | undefined, more = true; more;) {
    const page = await listNotices(database, person, { show: 'all', limit: pageSize, after });
    notices.push(...page.items);
    after = page.next ?? undefined;
    more = page.next !== null;
  }
  const sessions = await listSessions(database, person, current);
  return {
    format: 'gaugewright-account/1',
    account: await queries.getAccount(database, person),
    sessions: sessions.map(({ browser, since, until }) => ({ browser, since, until: until.toISOString() })),
    tokens: await tokens.listTokens(database, person),
    noticeSettings: await getNoticeSettings(database, person),
    notices,
    notebooks,
  };
}

export function deletionOf({ database }: Context, standing: Standing): Promise<Deletion> {
  return queries.getDeletion(database, personOf(standing));
}

/** Deletes the account. Editions, remarks and verdicts stay signed with the name. */
export function deleteAccount({ database }: Context, standing: Standing, handle: string): Promise<void> {
  const person = personOf(standing);
  return database.transaction(async (tx) => {
    const account = await findAccount(tx, person);
    if (account === null) throw notFound();
    if (handle.replace(/^@/, '').toLowerCase() !== account.handle.toLowerCase()) {
      throw new Refusal('bad-input', `Type your handle, ${account.handle}, to delete the account.`);
    }
    const { goes, handOn } = await queries.getDeletion(tx, person);
    if (handOn.length > 0) {
      const words = `Other people have a role on “${handOn[0]?.title ?? ''}”: give it another owner, or delete it, first.`;
      throw new Refusal('conflict', words, { handOn });
    }
    for (const { id } of goes) await announce(tx, id, 'notebook', {});
    await queries.deleteAccount(
      tx,
      person,
      goes.map(({ id }) => id),
    );
    await tell(tx, person, 'account', {});
  });
}

const prefix = 'gwt_';

export async function tokensOf({ database }: Context, standing: Standing): Promise<{ items: AccessToken[] }> {
  return { items: await tokens.listTokens(database, personOf(standing)) };
}

/** A new token; its secret is in this answer and nowhere else. */
export function createToken(
  { database }: Context,
  standing: Standing,
  { name, scopes, days }: { readonly name: string; readonly scopes: readonly Scope[]; readonly days: number | null },
): Promise<AccessToken & { secret: string }> {
  const person = personOf(standing);
  return database.transaction(async (tx) => {
    const { accessTokensPerPerson: most } = await readLimits(tx);
    if ((await tokens.countTokens(tx, person)) >= most) {
      throw new Refusal('conflict', `A person has at most ${String(most)} tokens here. Revoke one first.`);
    }
    const secret = `${prefix}${newSecret()}`;
    const begins = secret.slice(0, prefix.length + 4);
    const unique = [...new Set(scopes)];
    const token = await tokens.insertToken(tx, person, {
      name,
      scopes: unique,
      days,
      begins,
      hash: secretHash(secret),
    });
    return { ...token, secret };
  });
}

export async function revokeToken({ database }: Context, standing: Standing, id: string): Promise<void> {
  if (!(await tokens.revokeToken(database, personOf(standing), id))) throw notFound();
}
