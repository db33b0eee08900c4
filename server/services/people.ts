import type { Me, Session } from '../../shared/contracts/people.ts';
import { tell } from '../db/announce.ts';
import { countUnread } from '../db/queries/notices.ts';
import { findAccount } from '../db/queries/people.ts';
import { endSession, endSessions, listSessions } from '../db/queries/sessions.ts';
import { notFound } from '../db/refusal.ts';
import { actionsOf, type Standing } from '../db/standing.ts';
import { type Context, personOf } from './context.ts';

export async function me({ database }: Context, standing: Standing): Promise<Me> {
  const account = standing.person === null ? null : await findAccount(database, standing.person);
  return {
    person: account && { ...account, unread: await countUnread(database, account.id) },
    may: actionsOf(standing),
  };
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
  await tell(database, personOf(standing), 'account', {});
}

/** Ends all of a person's sessions but the asking one. */
export async function endOtherSessions({ database }: Context, standing: Standing, current: string): Promise<void> {
  await endSessions(database, personOf(standing), current);
  await tell(database, personOf(standing), 'account', {});
}
