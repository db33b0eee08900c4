import { and, desc, eq, ne, sql } from 'drizzle-orm';
import type { Asking } from '../connection.ts';
import { sessions } from '../schema/people.ts';

export interface SessionRow {
  readonly id: string;
  readonly current: boolean;
  readonly browser: string;
  readonly since: string;
  readonly until: Date;
}

/** What a session is called outside: its own id opens it and stays secret. */
const publicId = sql<string>`encode(sha256(${sessions.sid}::bytea), 'hex')`;
const ofPerson = (person: string) => eq(sql`(${sessions.sess} -> 'passport' ->> 'user')`, person);

/** A person's sessions that have not expired, the one that ends last first. `current` is the id of the asking one. */
export async function listSessions({ db }: Asking, person: string, current: string): Promise<SessionRow[]> {
  const rows = await db
    .select({ id: publicId, sid: sessions.sid, sess: sessions.sess, until: sessions.expire })
    .from(sessions)
    .where(and(ofPerson(person), sql`${sessions.expire} > now()`))
    .orderBy(desc(sessions.expire), sessions.sid);
  return rows.map(({ id, sid, sess, until }) => ({
    id,
    current: sid === current,
    browser: sess.browser ?? '',
    since: sess.since ?? until.toISOString(),
    until,
  }));
}

/** Ends one of a person's sessions; false if there is none of that id. */
export async function endSession({ db }: Asking, person: string, id: string): Promise<boolean> {
  const { rowCount } = await db.delete(sessions).where(and(ofPerson(person), eq(publicId, id)));
  return (rowCount ?? 0) > 0;
}

/** Ends all of a person's sessions, but the one of this id if one is given. */
export async function endSessions({ db }: Asking, person: string, but?: string): Promise<void> {
  await db.delete(sessions).where(and(ofPerson(person), but === undefined ? undefined : ne(sessions.sid, but)));
}
