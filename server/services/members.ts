import type { Member } from '../../shared/contracts/people.ts';
import type { GrantedRole } from '../../shared/contracts/rights.ts';
import { announce, tell } from '../db/announce.ts';
import type { Transaction } from '../db/connection.ts';
import { deleteMember, getNotebook, listMembers, setMember } from '../db/queries/notebooks.ts';
import { findAccount, findByHandle } from '../db/queries/people.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import { lockNotebook, type NotebookStanding } from '../db/standing.ts';
import { type Context, personOf } from './context.ts';
import { notify } from './notices.ts';

export async function membersOf({ database }: Context, standing: NotebookStanding): Promise<{ items: Member[] }> {
  return { items: await listMembers(database, standing) };
}

/** Gives the person of a handle a role on the notebook, or another one than before. */
export function addMember(
  { database }: Context,
  standing: NotebookStanding,
  handle: string,
  role: GrantedRole,
): Promise<Member> {
  return database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    const person = await findByHandle(tx, handle);
    if (person === null)
      throw new Refusal('conflict', `Nobody here is called ${handle}. They have to sign in once first.`);
    const member = await giveRole(tx, standing, person.id, role);
    const { title } = await getNotebook(tx, standing);
    const by = personOf(standing);
    const { name } = (await findAccount(tx, by)) ?? { name: 'The owner' };
    const { notebook } = standing.on;
    const text = `${name} lets you in on “${title}”, as ${role}.`;
    const path = `/notebooks/${notebook}`;
    await notify(tx, { to: [person.id], kind: 'invitation', text, by, notebook, path });
    return member;
  });
}

/** Gives someone who has a role on the notebook another one. */
export function changeMember(
  { database }: Context,
  standing: NotebookStanding,
  person: string,
  role: GrantedRole,
): Promise<Member> {
  return database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    const members = await listMembers(tx, standing);
    if (!members.some((member) => member.person.id === person)) throw notFound();
    return giveRole(tx, standing, person, role);
  });
}

async function giveRole(
  tx: Transaction,
  standing: NotebookStanding,
  person: string,
  role: GrantedRole,
): Promise<Member> {
  if (!(await setMember(tx, standing, person, role))) {
    throw new Refusal('conflict', 'The owner of a notebook has no other role on it.');
  }
  await announce(tx, standing.on.notebook, 'notebook', {});
  await tell(tx, person, 'account', {});
  const member = (await listMembers(tx, standing)).find((one) => one.person.id === person);
  if (member === undefined) throw notFound();
  return member;
}

export function removeMember({ database }: Context, standing: NotebookStanding, person: string): Promise<void> {
  return database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    if (!(await deleteMember(tx, standing, person))) throw notFound();
    await tell(tx, person, 'account', {});
    await announce(tx, standing.on.notebook, 'notebook', {});
  });
}

/** Gives up one's own role. */
export function leave({ database }: Context, standing: NotebookStanding): Promise<void> {
  return database.transaction(async (tx) => {
    if (!(await deleteMember(tx, standing, personOf(standing)))) throw notFound();
    await announce(tx, standing.on.notebook, 'notebook', {});
  });
}
