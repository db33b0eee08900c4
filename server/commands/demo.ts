import { openDatabase } from '../db/connection.ts';
import { findByHandle } from '../db/queries/people.ts';
import { type NotebookStanding, onInstallation, standingFor } from '../db/standing.ts';
import { openQueue } from '../evaluation/queue.ts';
import { type InventedNotebook, inventedNotebooks } from '../fakes/notebooks.ts';
import { inventedPeople, inventedSteward } from '../fakes/people.ts';
import type { Context } from '../services/context.ts';
import { publish } from '../services/editions.ts';
import { insertEntry } from '../services/entries.ts';
import { addMember } from '../services/members.ts';
import { changeNotebook, forkNotebook, importNotebook } from '../services/notebooks.ts';
import { signIn, standInProvider } from '../services/sign-in.ts';
import { runOnce } from '../program.ts';
import type { Settings } from '../settings.ts';

/**
 * Writes the demonstration: the people of an invented institute and their notebooks, made by the same services as anyone's.
 * Does nothing unless the stand-in for GitHub is on, since nobody else could be these people, nor a second time: what a
 * visitor changed or deleted stays so.
 */
export async function writeDemo(settings: Settings): Promise<void> {
  if (!settings.fakes.includes('github')) return;
  const trouble = (error: unknown): void => void process.stderr.write(`${String(error)}\n`);
  const database = openDatabase(settings, trouble);
  try {
    if ((await findByHandle(database, inventedPeople[0].login)) !== null) return;
    const queue = await openQueue(database, { seconds: settings.evaluation.seconds, supervise: false }, trouble);
    try {
      // In one transaction, so that it is there whole or not at all.
      await database.transaction((tx) =>
        write({ database: { ...database, db: tx.db, transaction: (work) => work(tx) }, askForClaims: queue.ask }),
      );
    } finally {
      await queue.close();
    }
  } finally {
    await database.close();
  }
}

/** Whose copy of the first notebook stands for a reading group. */
const copier = 'tvasara';

async function write(context: Context): Promise<void> {
  const ids = new Map<string, string>();
  for (const { id, login, name, email } of inventedPeople) {
    const identity = { provider: standInProvider, subject: String(id), handle: login, name, email };
    ids.set(login, await signIn(context.database, { stewards: [inventedSteward] }, identity));
  }
  const personOf = (login: string): string => {
    const id = ids.get(login);
    if (id === undefined) throw new Error(`the demonstration knows no ${login}`);
    return id;
  };
  const standings: NotebookStanding[] = [];
  for (const notebook of inventedNotebooks) {
    standings.push(await writeNotebook(context, notebook, personOf(notebook.owner)));
  }
  const [first] = standings;
  if (first === undefined) return;
  const reader = await standingFor(context.database, personOf(copier), first.on.notebook);
  await forkNotebook(context, reader, { edition: 1, title: 'Reading group: bonds of the uneven magnet' });
}

async function writeNotebook(context: Context, notebook: InventedNotebook, owner: string): Promise<NotebookStanding> {
  const asker = onInstallation({ person: owner, steward: false });
  const { id } = await importNotebook(context, asker, { source: notebook.source });
  const standing = await standingFor(context.database, owner, id);
  if (notebook.summary !== null) await publish(context, standing, notebook.summary);
  if (notebook.then !== undefined) {
    for (const entry of notebook.then.add) await insertEntry(context, standing, { ...entry, before: null });
    await publish(context, standing, notebook.then.summary);
  }
  for (const { handle, role } of notebook.people) await addMember(context, standing, handle, role);
  if (notebook.visibility !== 'private') {
    await changeNotebook(context, standing, { visibility: notebook.visibility });
  }
  return standing;
}

runOnce(import.meta.url, writeDemo);
