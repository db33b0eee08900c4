import { and, count, eq, sql } from 'drizzle-orm';
import { type Limits, limitsSchema } from '../../../shared/contracts/steward.ts';
import type { Asking } from '../connection.ts';
import { memberships } from '../schema/notebooks.ts';
import { limits } from '../schema/notices.ts';
import { editions } from '../schema/work.ts';

/** What holds until a steward sets something else. */
const standard: Limits = {
  jobsPerPerson: 20,
  notebooksPerPerson: 10_000,
  invitationsPerDay: 50,
  accessTokensPerPerson: 20,
  openSignUp: true,
};

export async function readLimits({ db }: Asking): Promise<Limits> {
  const rows = await db.select().from(limits);
  const set = Object.fromEntries(
    rows.map(({ name, value }) => [name, name === 'openSignUp' ? value !== 0 : value] as const),
  );
  const parsed = limitsSchema.safeParse({ ...standard, ...set });
  return parsed.success ? parsed.data : standard;
}

export async function writeLimits({ db }: Asking, wanted: Limits): Promise<void> {
  const rows = Object.entries(wanted).map(([name, value]) => ({ name, value: Number(value) }));
  await db
    .insert(limits)
    .values(rows)
    .onConflictDoUpdate({ target: limits.name, set: { value: sql`excluded.value` } });
}

/** How many editions a person published whose claims are still to be computed. */
export async function countComputing({ db }: Asking, person: string): Promise<number> {
  const [row] = await db
    .select({ computing: count() })
    .from(editions)
    .where(and(eq(editions.publishedBy, person), eq(editions.status, 'computing')));
  return row?.computing ?? 0;
}

/** How many notebooks a person owns. */
export async function countOwned({ db }: Asking, person: string): Promise<number> {
  const [row] = await db
    .select({ owned: count() })
    .from(memberships)
    .where(and(eq(memberships.person, person), eq(memberships.role, 'owner')));
  return row?.owned ?? 0;
}
