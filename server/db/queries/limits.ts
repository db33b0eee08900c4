import { sql } from 'drizzle-orm';
import { type Limits, limitsSchema } from '../../../shared/contracts/steward.ts';
import type { Asking } from '../connection.ts';
import { limits } from '../schema/notices.ts';

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
