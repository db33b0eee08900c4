import { and, asc, count, desc, eq, gt, isNull, sql } from 'drizzle-orm';
import type { Invitation, Invited } from '../../../shared/contracts/people.ts';
import type { GrantedRole } from '../../../shared/contracts/rights.ts';
import type { Asking } from '../connection.ts';
import { memberships, notebooks } from '../schema/notebooks.ts';
import { invitations } from '../schema/notices.ts';
import { identities, people } from '../schema/people.ts';
import type { NotebookStanding } from '../standing.ts';
import { emailProvider, personColumns } from './people.ts';

const { id, email, role, createdAt, expiresAt } = invitations;
const pending = and(isNull(invitations.endedAt), gt(invitations.expiresAt, sql`now()`));
const ended = { endedAt: sql`now()` };

export async function listInvitations({ db }: Asking, standing: NotebookStanding): Promise<Invitation[]> {
  const rows = await db
    .select({ id, email, role, by: personColumns, createdAt, expiresAt })
    .from(invitations)
    .leftJoin(people, eq(people.id, invitations.invitedBy))
    .where(and(eq(invitations.notebook, standing.on.notebook), pending))
    .orderBy(desc(invitations.createdAt), asc(invitations.email));
  return rows.map(({ createdAt: sent, expiresAt: until, ...row }) => ({
    ...row,
    sentAt: sent.toISOString(),
    until: until.toISOString(),
  }));
}

/** How many invitations a person sent within a day. */
export async function countInvitations({ db }: Asking, person: string): Promise<number> {
  const [row] = await db
    .select({ sent: count() })
    .from(invitations)
    .where(and(eq(invitations.invitedBy, person), gt(invitations.createdAt, sql`now() - interval '1 day'`)));
  return row?.sent ?? 0;
}

/** Puts an invitation in the place of one to the same address; returns its id. */
export async function putInvitation(
  { db }: Asking,
  standing: NotebookStanding,
  fields: { readonly email: string; readonly role: GrantedRole; readonly hash: string; readonly days: number },
): Promise<string> {
  const { notebook } = standing.on;
  const { days, ...rest } = fields;
  const before = and(eq(invitations.notebook, notebook), eq(invitations.email, fields.email));
  await db
    .update(invitations)
    .set(ended)
    .where(and(before, isNull(invitations.endedAt)));
  const [row] = await db
    .insert(invitations)
    .values({
      ...rest,
      notebook,
      invitedBy: standing.person,
      expiresAt: sql`now() + make_interval(days => ${days})`,
    })
    .returning({ id });
  if (row === undefined) throw new Error('an invitation was inserted and is not there');
  return row.id;
}

/** False if the notebook has no such invitation. */
export async function withdrawInvitation({ db }: Asking, standing: NotebookStanding, which: string): Promise<boolean> {
  const { rowCount } = await db
    .update(invitations)
    .set(ended)
    .where(and(eq(invitations.id, which), eq(invitations.notebook, standing.on.notebook), pending));
  return (rowCount ?? 0) > 0;
}

/** The person whose way in this address is; null if nobody's. */
export async function personOfAddress({ db }: Asking, address: string): Promise<string | null> {
  const [row] = await db
    .select({ person: identities.person })
    .from(identities)
    .where(and(eq(identities.provider, emailProvider), eq(identities.subject, address)));
  return row?.person ?? null;
}

export interface FoundInvitation extends Invited {
  readonly invitedBy: string | null;
}

function invited({ db }: Asking) {
  return db
    .select({
      id,
      notebook: { id: notebooks.id, title: notebooks.title },
      role,
      by: personColumns,
      email,
      expiresAt,
      invitedBy: invitations.invitedBy,
    })
    .from(invitations)
    .innerJoin(notebooks, eq(notebooks.id, invitations.notebook))
    .leftJoin(people, eq(people.id, invitations.invitedBy));
}

const foundOf = ({
  expiresAt: until,
  ...row
}: Omit<FoundInvitation, 'until'> & { readonly expiresAt: Date }): FoundInvitation => ({
  ...row,
  until: until.toISOString(),
});

/** Pending invitations to addresses that are a person's ways in. */
export async function listInvited(asking: Asking, person: string): Promise<FoundInvitation[]> {
  const own = sql`${invitations.email} in (select ${identities.subject} from ${identities}
    where ${identities.person} = ${person} and ${identities.provider} = ${emailProvider})`;
  const rows = await invited(asking).where(and(own, pending)).orderBy(desc(createdAt), asc(id));
  return rows.map(foundOf);
}

/** The pending invitation whose mail carries what has this hash; null for none. */
export async function findInvitation(asking: Asking, hash: string): Promise<FoundInvitation | null> {
  const [row] = await invited(asking).where(and(eq(invitations.hash, hash), pending));
  return row === undefined ? null : foundOf(row);
}

/** Takes an invitation out, once; false if another request was first. */
export async function takeInvitation({ db }: Asking, which: string): Promise<boolean> {
  const { rowCount } = await db
    .update(invitations)
    .set(ended)
    .where(and(eq(invitations.id, which), pending));
  return (rowCount ?? 0) > 0;
}

/** Makes a member the owner, and the owner a coauthor; false if that person is no member. */
export async function transferOwnership(
  { db }: Asking,
  { on: { notebook } }: NotebookStanding,
  person: string,
): Promise<boolean> {
  const which = (role: 'owner' | null) =>
    and(
      eq(memberships.notebook, notebook),
      role === null ? eq(memberships.person, person) : eq(memberships.role, role),
    );
  const [member] = await db.select({ role: memberships.role }).from(memberships).where(which(null));
  if (member === undefined) return false;
  await db.update(memberships).set({ role: 'coauthor' }).where(which('owner'));
  await db.update(memberships).set({ role: 'owner' }).where(which(null));
  return true;
}
