import type { Me, Session } from '../../shared/contracts/people.ts';
import type { Database } from '../db/connection.ts';
import { findAccount, type Identity, personOfIdentity } from '../db/queries/people.ts';
import { endSession, listSessions } from '../db/queries/sessions.ts';
import { notFound } from '../db/refusal.ts';
import { actionsOf, type Standing } from '../db/standing.ts';
import { type Context, personOf } from './context.ts';

/** Name of the stand-in for GitHub among providers: its invented account numbers are nobody's at the real one. */
export const standInProvider = 'github-stand-in';

export async function me({ database }: Context, standing: Standing): Promise<Me> {
  const account = standing.person === null ? null : await findAccount(database, standing.person);
  return { person: account && { ...account, unread: 0 }, may: actionsOf(standing) };
}

/** The person who signs in with an account elsewhere; made at the first time. Returns the person's id. */
export function signIn(database: Database, identity: Identity): Promise<string> {
  return database.transaction((tx) => personOfIdentity(tx, identity));
}

export async function sessionsOf(
  { database }: Context,
  standing: Standing,
  current: string,
): Promise<{ items: Session[] }> {
  const rows = await listSessions(database, personOf(standing), current);
  return { items: rows.map((row) => ({ ...row, until: row.until.toISOString() })) };
}

export async function endSessionOf({ database }: Context, standing: Standing, session: string): Promise<void> {
  if (!(await endSession(database, personOf(standing), session))) throw notFound();
}
