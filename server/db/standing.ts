import { and, eq, isNull, sql, type SQL } from 'drizzle-orm';
import type { Scope } from '../../shared/contracts/rights.ts';
import { actionsOf, may, scopesOf, type Standing } from '../rights.ts';
import type { Asking } from './connection.ts';
import { notFound } from './refusal.ts';
import { memberships, notebooks } from './schema/notebooks.ts';
import { people } from './schema/people.ts';
import { editions, links } from './schema/work.ts';

export { actionsOf, may, scopesOf, type Standing };

/** A standing on a notebook. Queries that touch a notebook take one of these, so that a bare id reaches none of them. */
export interface NotebookStanding extends Standing {
  readonly on: NonNullable<Standing['on']>;
}

/** Who asks. A steward's mark is read with the standing, so that it takes effect at once. */
export interface Asker {
  readonly person: string | null;
  readonly steward: boolean;
  /** What the access token is good for that was shown; left out where a person asks from a page. */
  readonly scopes?: readonly Scope[];
}

export const visitor: Asker = { person: null, steward: false };

export const onInstallation = (asker: Asker): Standing => ({ ...asker, on: null });

/** Where someone stands on a notebook; null if there is no such notebook, or it lies in the bin. One round trip. */
export async function standingOnNotebook(
  { db }: Asking,
  asker: Asker,
  notebook: string,
): Promise<NotebookStanding | null> {
  const own = and(
    eq(memberships.notebook, notebooks.id),
    asker.person === null ? sql`false` : eq(memberships.person, asker.person),
  );
  const [row] = await db
    .select({ visibility: notebooks.visibility, role: memberships.role })
    .from(notebooks)
    .leftJoin(memberships, own)
    .where(and(eq(notebooks.id, notebook), isNull(notebooks.deletedAt)));
  return row === undefined ? null : { ...asker, on: { notebook, ...row, linked: null } };
}

/** Where someone stands who holds a share link: on one edition; null if the link is unknown or revoked. */
export async function standingByLink({ db }: Asking, asker: Asker, token: string): Promise<NotebookStanding | null> {
  const [row] = await db
    .select({ notebook: notebooks.id, visibility: notebooks.visibility, linked: editions.id })
    .from(links)
    .innerJoin(editions, eq(editions.id, links.edition))
    .innerJoin(notebooks, eq(notebooks.id, editions.notebook))
    .where(and(eq(links.token, token), isNull(links.revokedAt), isNull(notebooks.deletedAt)));
  return row === undefined ? null : { ...asker, on: { ...row, role: null } };
}

/** The standing of the product's own commands and of a person acting through them; throws `not-found`. */
export async function standingFor(asking: Asking, person: string, notebook: string): Promise<NotebookStanding> {
  const standing = await standingOnNotebook(asking, { person, steward: false }, notebook);
  if (standing === null) throw notFound();
  return standing;
}

/**
 * SQL condition on a row of `notebooks`: that the standing is still what it was when the action was allowed.
 * Writes carry it, so that a role taken away meanwhile takes effect.
 */
export function stillStands(standing: NotebookStanding): SQL | undefined {
  const { notebook, role } = standing.on;
  if (role === null || standing.person === null) return eq(notebooks.id, notebook);
  return and(
    eq(notebooks.id, notebook),
    sql`exists (select 1 from ${memberships} where ${memberships.notebook} = ${notebooks.id}
      and ${memberships.person} = ${standing.person} and ${memberships.role} = ${role})`,
  );
}

/** Locks the notebook for the rest of the transaction, if the standing still holds; throws `not-found` if it does not. */
export async function lockNotebook({ db }: Asking, standing: NotebookStanding): Promise<void> {
  const rows = await db.select({ id: notebooks.id }).from(notebooks).where(stillStands(standing)).for('update');
  if (rows.length === 0) throw notFound();
}

/** Who a person is to the installation; null if the account is gone or closed. */
export async function askerFor({ db }: Asking, person: string): Promise<Asker | null> {
  const open = and(eq(people.id, person), isNull(people.suspendedAt), isNull(people.deletedAt));
  const [row] = await db.select({ steward: people.steward }).from(people).where(open);
  return row === undefined ? null : { person, steward: row.steward };
}
