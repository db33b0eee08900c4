import type { Body } from '../../shared/contracts/endpoints.ts';
import type { Changed, Entry, Hold } from '../../shared/contracts/notebooks.ts';
import { announce } from '../db/announce.ts';
import type { Transaction } from '../db/connection.ts';
import * as queries from '../db/queries/entries.ts';
import { updateNotebook } from '../db/queries/notebooks.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import { lockNotebook, type NotebookStanding } from '../db/standing.ts';
import { type Context, personOf } from './context.ts';
import { checkSize } from './notebooks.ts';

/** How long a hold lasts unless it is renewed. */
const holdSeconds = 45;

/** One change of entries: the notebook is locked, its time of change set, and those who look are told of `entry`. */
function change<T>(
  { database }: Context,
  standing: NotebookStanding,
  work: (tx: Transaction) => Promise<{ readonly answer: T; readonly entry: Entry | null }>,
): Promise<T> {
  return database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    const { answer, entry } = await work(tx);
    await updateNotebook(tx, standing);
    await announce(tx, standing.on.notebook, 'entries', {
      entry: entry?.id ?? null,
      version: entry?.version ?? null,
      by: standing.person,
    });
    return answer;
  });
}

async function entryOrNotFound(tx: Transaction, standing: NotebookStanding, id: string): Promise<Entry> {
  const entry = await queries.findEntry(tx, standing, id);
  if (entry === null) throw notFound();
  return entry;
}

/** Throws `held` if someone else writes in the entry. */
function refuseHeld(entry: Entry, standing: NotebookStanding): void {
  if (entry.hold !== null && entry.hold.by.id !== standing.person) {
    throw new Refusal('held', `${entry.hold.by.name} is writing in this entry.`, { hold: entry.hold });
  }
}

export function insertEntry(
  context: Context,
  standing: NotebookStanding,
  { id, kind, text, before }: Body<'insertEntry'>,
): Promise<Entry> {
  return change(context, standing, async (tx) => {
    const position = await queries.positionBefore(tx, standing, before);
    if (position === null) throw new Refusal('conflict', 'The entry to stand before is not there any more.');
    const size = await queries.sizeOfEntries(tx, standing);
    checkSize(size.entries + 1, size.characters + text.length);
    const made = await queries.insertEntry(tx, standing, { id, kind, text, position });
    // Asked again with an id that was inserted before: that entry is the answer.
    const entry = await queries.findEntry(tx, standing, made ?? id ?? '');
    if (entry === null) throw new Refusal('conflict', 'This id belongs to another entry.');
    return { answer: entry, entry: null };
  });
}

/** Saves a text over the version it started from. Throws `changed-meanwhile` with both texts, or `held`. */
export function saveEntry(
  context: Context,
  standing: NotebookStanding,
  id: string,
  version: number,
  { text, kind }: Body<'saveEntry'>,
): Promise<Entry> {
  return change(context, standing, async (tx) => {
    const current = await queries.findEntry(tx, standing, id);
    const same = current !== null && current.text === text && current.kind === (kind ?? current.kind);
    // What is to be saved stands there already: an answer that was lost, or the same change made twice.
    if (same) return { answer: current, entry: current };
    if (current?.version !== version) throw changedMeanwhile({ yours: { text, version }, theirs: current });
    refuseHeld(current, standing);
    const size = await queries.sizeOfEntries(tx, standing);
    checkSize(size.entries, size.characters - current.text.length + text.length);
    await queries.updateEntry(tx, standing, id, version, { text, kind: kind ?? current.kind });
    const entry = await entryOrNotFound(tx, standing, id);
    return { answer: entry, entry };
  });
}

const changedMeanwhile = (both: Changed): Refusal =>
  new Refusal(
    'changed-meanwhile',
    both.theirs === null
      ? 'This entry was deleted meanwhile. Your text is in this answer.'
      : 'This entry was changed meanwhile. Both texts are in this answer.',
    { ...both },
  );

/** Moves an entry before another, or to the end for null. */
export function moveEntry(
  context: Context,
  standing: NotebookStanding,
  id: string,
  before: string | null,
): Promise<{ order: string[] }> {
  return change(context, standing, async (tx) => {
    await entryOrNotFound(tx, standing, id);
    if (before !== id) {
      const position = await queries.positionBefore(tx, standing, before);
      if (position === null) throw new Refusal('conflict', 'The entry to stand before is not there any more.');
      await queries.moveEntry(tx, standing, id, position);
    }
    return { answer: { order: await queries.orderOfEntries(tx, standing) }, entry: null };
  });
}

export function deleteEntry(context: Context, standing: NotebookStanding, id: string): Promise<void> {
  return change(context, standing, async (tx) => {
    refuseHeld(await entryOrNotFound(tx, standing, id), standing);
    await queries.markDeleted(tx, standing, id);
    return { answer: undefined, entry: null };
  });
}

export function restoreEntry(
  context: Context,
  standing: NotebookStanding,
  id: string,
): Promise<{ entry: Entry; order: string[] }> {
  return change(context, standing, async (tx) => {
    // An entry that stands needs no restoring; asking twice is answered twice.
    await queries.markRestored(tx, standing, id);
    const entry = await entryOrNotFound(tx, standing, id);
    const size = await queries.sizeOfEntries(tx, standing);
    checkSize(size.entries, size.characters);
    return { answer: { entry, order: await queries.orderOfEntries(tx, standing) }, entry: null };
  });
}

/** Takes or renews the hold on an entry. Throws `held` while someone else has it. */
export function holdEntry({ database }: Context, standing: NotebookStanding, id: string): Promise<Hold> {
  return database.transaction(async (tx) => {
    const before = await entryOrNotFound(tx, standing, id);
    const taken = await queries.takeHold(tx, id, personOf(standing), holdSeconds);
    const { hold } = await entryOrNotFound(tx, standing, id);
    if (!taken || hold === null) {
      throw new Refusal('held', `${hold?.by.name ?? 'Someone else'} is writing in this entry.`, { hold });
    }
    // Renewing is news to nobody.
    if (before.hold === null) await announce(tx, standing.on.notebook, 'hold', { entry: id, hold });
    return hold;
  });
}

/** Gives one's own hold up; without one, nothing happens. */
export function releaseEntry({ database }: Context, standing: NotebookStanding, id: string): Promise<void> {
  return database.transaction(async (tx) => {
    await entryOrNotFound(tx, standing, id);
    const had = await queries.dropHold(tx, id, personOf(standing));
    if (had) await announce(tx, standing.on.notebook, 'hold', { entry: id, hold: null });
  });
}
