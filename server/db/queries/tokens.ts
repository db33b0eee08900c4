import { and, count, desc, eq, gt, isNull, or, sql } from 'drizzle-orm';
import type { AccessToken } from '../../../shared/contracts/people.ts';
import type { Scope } from '../../../shared/contracts/rights.ts';
import type { Asking } from '../connection.ts';
import { accessTokens, people } from '../schema/people.ts';
import type { Asker } from '../standing.ts';

type Row = typeof accessTokens.$inferSelect;

const tokenOf = ({ id, name, scopes, begins, createdAt, expiresAt, usedAt }: Row): AccessToken => ({
  id,
  name,
  scopes,
  begins,
  createdAt: createdAt.toISOString(),
  expiresAt: expiresAt?.toISOString() ?? null,
  usedAt: usedAt?.toISOString() ?? null,
});

const inForce = and(
  isNull(accessTokens.revokedAt),
  or(isNull(accessTokens.expiresAt), gt(accessTokens.expiresAt, sql`now()`)),
);

/** A person's tokens that were not revoked, newest first; those whose time is over too. */
export async function listTokens({ db }: Asking, person: string): Promise<AccessToken[]> {
  const rows = await db
    .select()
    .from(accessTokens)
    .where(and(eq(accessTokens.person, person), isNull(accessTokens.revokedAt)))
    .orderBy(desc(accessTokens.createdAt), desc(accessTokens.id));
  return rows.map(tokenOf);
}

export async function countTokens({ db }: Asking, person: string): Promise<number> {
  const [row] = await db
    .select({ tokens: count() })
    .from(accessTokens)
    .where(and(eq(accessTokens.person, person), inForce));
  return row?.tokens ?? 0;
}

export async function insertToken(
  { db }: Asking,
  person: string,
  fields: {
    readonly name: string;
    readonly scopes: readonly Scope[];
    readonly hash: string;
    readonly begins: string;
    readonly days: number | null;
  },
): Promise<AccessToken> {
  const { days, scopes, ...rest } = fields;
  const [row] = await db
    .insert(accessTokens)
    .values({
      ...rest,
      person,
      scopes: [...scopes],
      expiresAt: days === null ? null : sql`now() + make_interval(days => ${days})`,
    })
    .returning();
  if (row === undefined) throw new Error('a token was inserted and is not there');
  return tokenOf(row);
}

/** False if the person has no such token in force. */
export async function revokeToken({ db }: Asking, person: string, id: string): Promise<boolean> {
  const { rowCount } = await db
    .update(accessTokens)
    .set({ revokedAt: sql`now()` })
    .where(and(eq(accessTokens.id, id), eq(accessTokens.person, person), isNull(accessTokens.revokedAt)));
  return (rowCount ?? 0) > 0;
}

/** Who asks with a token of this hash; null if it is not in force, or the account closed. */
export async function askerByToken({ db }: Asking, hash: string): Promise<Asker | null> {
  const [row] = await db
    .select({ id: accessTokens.id, person: people.id, steward: people.steward, scopes: accessTokens.scopes })
    .from(accessTokens)
    .innerJoin(people, eq(people.id, accessTokens.person))
    .where(and(eq(accessTokens.hash, hash), inForce, isNull(people.suspendedAt), isNull(people.deletedAt)));
  if (row === undefined) return null;
  // To the minute: a script that asks often writes seldom.
  await db
    .update(accessTokens)
    .set({ usedAt: sql`now()` })
    .where(
      and(
        eq(accessTokens.id, row.id),
        sql`(${accessTokens.usedAt} is null or ${accessTokens.usedAt} < now() - interval '1 minute')`,
      ),
    );
  const { person, steward, scopes } = row;
  return { person, steward, scopes };
}
