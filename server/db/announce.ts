import { sql } from 'drizzle-orm';
import type { z } from 'zod';
import type { liveEvents, LiveEvent } from '../../shared/contracts/notebooks.ts';
import type { personEvents, PersonEvent } from '../../shared/contracts/notices.ts';
import type { Asking } from './connection.ts';

/** The channel of NOTIFY that carries announcements to every server process. */
export const channel = 'gaugewright_live';

/** What is said on the channel. `present` carries no data: listeners look up who is there. */
export interface Announcement {
  readonly notebook: string;
  readonly event: LiveEvent;
  readonly data: unknown;
}

/** The same to one person, wherever they are. */
export interface Word {
  readonly person: string;
  readonly event: PersonEvent;
  readonly data: unknown;
}

type DataOf<E extends LiveEvent> = E extends 'present' ? null : z.input<(typeof liveEvents)[E]>;

/** Tells all who look at a notebook; inside a transaction it is told when that commits, and never if it does not. */
export async function announce<E extends LiveEvent>(
  { db }: Asking,
  notebook: string,
  event: E,
  data: DataOf<E>,
): Promise<void> {
  const said: Announcement = { notebook, event, data };
  await db.execute(sql`select pg_notify(${channel}, ${JSON.stringify(said)})`);
}

/** Tells one person, on all their open pages; as `announce`, when the transaction commits. */
export async function tell<E extends PersonEvent>(
  { db }: Asking,
  person: string,
  event: E,
  data: z.input<(typeof personEvents)[E]>,
): Promise<void> {
  const said: Word = { person, event, data };
  await db.execute(sql`select pg_notify(${channel}, ${JSON.stringify(said)})`);
}
