import type { Invitation, Invited, Member } from '../../shared/contracts/people.ts';
import type { GrantedRole } from '../../shared/contracts/rights.ts';
import { announce, tell } from '../db/announce.ts';
import type { Transaction } from '../db/connection.ts';
import * as queries from '../db/queries/invitations.ts';
import { readLimits } from '../db/queries/limits.ts';
import { countMailsTo, insertMail } from '../db/queries/mails.ts';
import { getNotebook, listMembers } from '../db/queries/notebooks.ts';
import { setMemberOf } from '../db/queries/notebooks.ts';
import { findAccount } from '../db/queries/people.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import { lockNotebook, type NotebookStanding, type Standing } from '../db/standing.ts';
import { invitationLetter } from '../mail/letters.ts';
import { type Context, personOf } from './context.ts';
import { notify } from './notices.ts';
import { newSecret, secretHash } from './secrets.ts';

const days = 14;
/** Mails that were not asked for by their recipient, to one address within an hour. */
const mailsAnHour = 10;

type Which = { readonly token: string } | { readonly invitation: string };

export async function invitationsOf(
  { database }: Context,
  standing: NotebookStanding,
): Promise<{ items: Invitation[] }> {
  return { items: await queries.listInvitations(database, standing) };
}

/** Invites by mail. Whether anyone here has the address is not said: the invitation waits until it is accepted. */
export function invite(
  { database }: Context,
  standing: NotebookStanding,
  email: string,
  role: GrantedRole,
): Promise<Invitation> {
  return database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    const by = personOf(standing);
    const { invitationsPerDay } = await readLimits(tx);
    const sent = await queries.countInvitations(tx, by);
    if (sent >= invitationsPerDay || (await countMailsTo(tx, email, 60)) >= mailsAnHour) {
      throw new Refusal('too-many', 'That were many invitations. Try again tomorrow.', { retryAfter: 86_400 });
    }
    const secret = newSecret();
    const id = await queries.putInvitation(tx, standing, { email, role, hash: secretHash(secret), days });
    const { title } = await getNotebook(tx, standing);
    const name = (await findAccount(tx, by))?.name ?? '';
    await insertMail(tx, {
      ...invitationLetter({ token: secret, by: name, title, role, days }),
      to: email,
      stops: null,
      minutes: days * 24 * 60,
    });
    const known = await queries.personOfAddress(tx, email);
    if (known !== null) await noteFor(tx, known, { by, name, title, role, notebook: standing.on.notebook });
    await announce(tx, standing.on.notebook, 'notebook', {});
    const made = (await queries.listInvitations(tx, standing)).find((one) => one.id === id);
    if (made === undefined) throw notFound();
    return made;
  });
}

/** In the product only: the invitation's own mail is on its way. */
async function noteFor(
  tx: Transaction,
  person: string,
  given: { by: string; name: string; title: string; role: string; notebook: string },
): Promise<void> {
  await notify(tx, {
    to: [person],
    kind: 'invitation',
    text: `${given.name} invites you to “${given.title}”, as ${given.role}.`,
    by: given.by,
    // Not of the notebook: it may not be read before the invitation is accepted.
    notebook: null,
    path: '/shelf',
    mail: false,
  });
}

export async function withdrawInvitation(
  { database }: Context,
  standing: NotebookStanding,
  invitation: string,
): Promise<void> {
  if (!(await queries.withdrawInvitation(database, standing, invitation))) throw notFound();
  await announce(database, standing.on.notebook, 'notebook', {});
}

export async function invitedOf({ database }: Context, standing: Standing): Promise<{ items: Invited[] }> {
  return { items: await queries.listInvited(database, personOf(standing)) };
}

export async function lookAtInvitation({ database }: Context, token: string): Promise<Invited> {
  const found = await queries.findInvitation(database, secretHash(token));
  if (found === null) throw gone();
  return found;
}

const gone = (): Refusal =>
  new Refusal('not-found', 'This invitation was accepted, withdrawn or is too old. Ask who sent it for another.');

async function find(tx: Transaction, person: string, which: Which): Promise<queries.FoundInvitation> {
  const found =
    'token' in which
      ? await queries.findInvitation(tx, secretHash(which.token))
      : (await queries.listInvited(tx, person)).find((one) => one.id === which.invitation);
  if (found === undefined || found === null) throw gone();
  return found;
}

/** Accepts an invitation as the person signed in. */
export function acceptInvitation(
  { database }: Context,
  standing: Standing,
  which: Which,
): Promise<{ notebook: string }> {
  const person = personOf(standing);
  return database.transaction(async (tx) => {
    const found = await find(tx, person, which);
    if (!(await acceptFor(tx, person, found))) throw gone();
    return { notebook: found.notebook.id };
  });
}

/** Gives a person the role that an invitation promises, and tells who sent it; false if it was used meanwhile. */
export async function acceptFor(
  tx: Transaction,
  person: string,
  { id, notebook, role, invitedBy }: queries.FoundInvitation,
): Promise<boolean> {
  if (!(await queries.takeInvitation(tx, id))) return false;
  await setMemberOf(tx, notebook.id, person, role);
  await announce(tx, notebook.id, 'notebook', {});
  await tell(tx, person, 'account', {});
  await answered(tx, person, invitedBy, notebook, `accepted your invitation to “${notebook.title}”, as ${role}.`);
  return true;
}

export function declineInvitation({ database }: Context, standing: Standing, which: Which): Promise<void> {
  const person = personOf(standing);
  return database.transaction(async (tx) => {
    const { id, invitedBy, notebook } = await find(tx, person, which);
    if (!(await queries.takeInvitation(tx, id))) throw gone();
    await announce(tx, notebook.id, 'notebook', {});
    await answered(tx, person, invitedBy, notebook, `declined your invitation to “${notebook.title}”.`);
  });
}

async function answered(
  tx: Transaction,
  person: string,
  invitedBy: string | null,
  notebook: { readonly id: string },
  words: string,
): Promise<void> {
  if (invitedBy === null) return;
  const name = (await findAccount(tx, person))?.name ?? 'Someone';
  await notify(tx, {
    to: [invitedBy],
    kind: 'invitation',
    text: `${name} ${words}`,
    by: person,
    notebook: notebook.id,
    path: `/notebooks/${notebook.id}`,
  });
}

/** Makes a member the owner; who was it stays as coauthor. */
export function transferNotebook(
  { database }: Context,
  standing: NotebookStanding,
  person: string,
): Promise<{ items: Member[] }> {
  return database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    if (person === standing.person) throw new Refusal('conflict', 'You are the owner already.');
    if (!(await queries.transferOwnership(tx, standing, person))) {
      throw new Refusal('conflict', 'Only someone who has a role on the notebook can become its owner.');
    }
    const { title } = await getNotebook(tx, standing);
    const by = personOf(standing);
    const name = (await findAccount(tx, by))?.name ?? 'Its owner';
    await notify(tx, {
      to: [person],
      kind: 'invitation',
      text: `${name} made you the owner of “${title}”.`,
      by,
      notebook: standing.on.notebook,
      path: `/notebooks/${standing.on.notebook}`,
    });
    await announce(tx, standing.on.notebook, 'notebook', {});
    return { items: await listMembers(tx, standing) };
  });
}
