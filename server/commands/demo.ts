import { openDatabase } from '../db/connection.ts';
import { findByHandle } from '../db/queries/people.ts';
import { type NotebookStanding, onInstallation, standingFor } from '../db/standing.ts';
import { openQueue } from '../evaluation/queue.ts';
import { inventedFork, type InventedNotebook, inventedNotebooks, inventedRemarks } from '../fakes/notebooks.ts';
import { inventedPeople, inventedSteward } from '../fakes/people.ts';
import type { Context } from '../services/context.ts';
import { publish } from '../services/editions.ts';
import { insertEntry, saveEntry } from '../services/entries.ts';
import { addMember } from '../services/members.ts';
import { changeNotebook, forkNotebook, importNotebook, readNotebook } from '../services/notebooks.ts';
import { makeRemark, reply } from '../services/remarks.ts';
import { signIn, standInProvider } from '../services/sign-in.ts';
import { send } from '../services/variants.ts';
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
  await writeRemarks(context, first, personOf);
  await writeVariants(context, first, personOf(copier));
}

/** The first notebook is under review: remarks by its referee wait for its writers. */
async function writeRemarks(
  context: Context,
  on: NotebookStanding,
  personOf: (login: string) => string,
): Promise<void> {
  const { entries } = await readNotebook(context, on);
  for (const { by, at, text, answer } of inventedRemarks) {
    const entry = entries.find((one) => one.text.includes(at))?.id;
    if (entry === undefined) throw new Error(`the demonstration has no entry with ${at}`);
    const standing = await standingFor(context.database, personOf(by), on.on.notebook);
    const subject = { what: 'entry', entry, quote: null } as const;
    const { id } = await makeRemark(context, standing, { subject, text });
    if (answer === undefined) continue;
    const other = await standingFor(context.database, personOf(answer.by), on.on.notebook);
    await reply(context, other, id, answer.text);
  }
}

/** A reading group's copy differs from the first notebook, and what differs was sent to its writers. */
async function writeVariants(context: Context, origin: NotebookStanding, person: string): Promise<void> {
  const reader = await standingFor(context.database, person, origin.on.notebook);
  const { title, edition, change, letter } = inventedFork;
  const { id, entries } = await forkNotebook(context, reader, { edition, title });
  const standing = await standingFor(context.database, person, id);
  const entry = entries.find((one) => one.text.includes(change.from));
  if (entry === undefined) throw new Error('the demonstration changes an entry that is not there');
  const text = entry.text.replace(change.from, change.to);
  await saveEntry(context, standing, entry.id, entry.version, { text });
  await send(context, standing, { letter });
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
