import type { Notebook } from '../../shared/contracts/notebooks.ts';
import type { Binned } from '../../shared/contracts/reviews.ts';
import { tell } from '../db/announce.ts';
import * as queries from '../db/queries/bin.ts';
import { notFound } from '../db/refusal.ts';
import { type NotebookStanding, type Standing, standingFor } from '../db/standing.ts';
import { type Context, personOf } from './context.ts';
import { readNotebook } from './notebooks.ts';

export async function binOf({ database }: Context, standing: Standing): Promise<{ items: Binned[] }> {
  return { items: await queries.listBin(database, personOf(standing)) };
}

/** Takes a notebook back out of the bin, with its people, editions and links. */
export async function restore(context: Context, standing: Standing, id: string): Promise<Notebook> {
  const person = personOf(standing);
  await context.database.transaction(async (tx) => {
    if (!(await queries.unbin(tx, person, id))) throw notFound();
    await tell(tx, person, 'account', {});
  });
  return readNotebook(context, await standingFor(context.database, person, id));
}

export async function deleteForGood({ database }: Context, standing: Standing, id: string): Promise<void> {
  if (!(await queries.deleteBinned(database, personOf(standing), id))) throw notFound();
}

/** Puts a notebook off one's own shelf, or back; nobody else sees a difference. */
export async function archive({ database }: Context, standing: NotebookStanding, archived: boolean): Promise<void> {
  if (!(await queries.setArchived(database, standing, archived))) throw notFound();
}
