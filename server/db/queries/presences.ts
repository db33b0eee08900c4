import { and, eq, gt, lt, sql } from 'drizzle-orm';
import type { Person } from '../../../shared/contracts/people.ts';
import type { Asking } from '../connection.ts';
import { memberships, presences } from '../schema/notebooks.ts';
import { people } from '../schema/people.ts';
import { personColumns } from './people.ts';

/** A presence that was not renewed for this long counts for nothing: its process is gone. */
const staleSeconds = 70;
const fresh = sql`now() - make_interval(secs => ${staleSeconds})`;

export interface Presence {
  readonly connection: string;
  readonly notebook: string;
  readonly person: string;
}

/** Says that a person's connection is open; renews it if it was said before. */
export async function sayPresent({ db }: Asking, presence: Presence): Promise<void> {
  await db
    .insert(presences)
    .values(presence)
    .onConflictDoUpdate({ target: presences.connection, set: { seenAt: sql`now()` } });
}

export async function sayGone({ db }: Asking, connection: string): Promise<void> {
  await db.delete(presences).where(eq(presences.connection, connection));
}

/** The members of a notebook who have it open now, each once, by name. */
export async function listPresent({ db }: Asking, notebook: string): Promise<Person[]> {
  return db
    .selectDistinct(personColumns)
    .from(presences)
    .innerJoin(people, eq(people.id, presences.person))
    .innerJoin(memberships, and(eq(memberships.notebook, presences.notebook), eq(memberships.person, people.id)))
    .where(and(eq(presences.notebook, notebook), gt(presences.seenAt, fresh)))
    .orderBy(people.name, people.id);
}

/** Removes what processes that died left behind. */
export async function clearStale({ db }: Asking): Promise<void> {
  await db.delete(presences).where(lt(presences.seenAt, fresh));
}
