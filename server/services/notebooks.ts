import { bounds } from '../../shared/contracts/common.ts';
import type { Body, Query } from '../../shared/contracts/endpoints.ts';
import type { Notebook, NotebookSummary } from '../../shared/contracts/notebooks.ts';
import type { Visibility } from '../../shared/contracts/rights.ts';
import { readUpload } from '../../shared/exports/upload.ts';
import { notebookToText, type PlainEntry } from '../../shared/notebook/text.ts';
import { announce } from '../db/announce.ts';
import type { Asking, Transaction } from '../db/connection.ts';
import type { Page } from '../db/page.ts';
import { getReading } from '../db/queries/editions.ts';
import { insertEntries, listEntries } from '../db/queries/entries.ts';
import { getWorkingText, insertForkBase } from '../db/queries/forks.ts';
import { countOwned, readLimits } from '../db/queries/limits.ts';
import * as queries from '../db/queries/notebooks.ts';
import { findAccount } from '../db/queries/people.ts';
import { Refusal } from '../db/refusal.ts';
import {
  actionsOf,
  may,
  type NotebookStanding,
  type Standing,
  standingFor,
  standingOnNotebook,
} from '../db/standing.ts';
import { type Context, personOf } from './context.ts';

export function shelf(
  { database }: Context,
  standing: Standing,
  search: Query<'listShelf'>,
): Promise<Page<NotebookSummary>> {
  return queries.listShelf(database, personOf(standing), search);
}

export function publicNotebooks(
  { database }: Context,
  standing: Standing,
  search: Query<'listPublic'>,
): Promise<Page<NotebookSummary>> {
  return queries.listPublic(database, standing.person, search);
}

/** A notebook with its entries, and what whoever asks may do with it. */
export function readNotebook({ database }: Context, standing: NotebookStanding): Promise<Notebook> {
  return compose(database, standing);
}

async function compose(asking: Asking, standing: NotebookStanding): Promise<Notebook> {
  const row = await queries.getNotebook(asking, standing);
  const entries = await listEntries(asking, standing);
  const links = may(standing, 'link') ? await queries.countLinks(asking, standing) : 0;
  const origin = await originFor(asking, standing, row);
  const { originNotebook: _notebook, originEdition: _edition, createdAt, changedAt, ...rest } = row;
  return {
    ...rest,
    createdAt: createdAt.toISOString(),
    changedAt: changedAt.toISOString(),
    origin,
    entries,
    links,
    may: actionsOf(standing),
  };
}

/** Where a fork came from, for those who may read that too. */
async function originFor(asking: Asking, asker: Standing, row: queries.NotebookRow): Promise<Notebook['origin']> {
  if (row.originNotebook === null) return null;
  const there = await standingOnNotebook(asking, asker, row.originNotebook);
  if (there === null || !may(there, 'read')) return null;
  const { title } = await queries.getNotebook(asking, there);
  return { notebook: row.originNotebook, title, edition: row.originEdition };
}

export async function createNotebook(
  { database }: Context,
  standing: Standing,
  { title, authors, entries }: Body<'createNotebook'>,
): Promise<Notebook> {
  return database.transaction((tx) => make(tx, standing, { title, authors, entries, origin: null }));
}

/** A notebook of a file: title and authors of its own, else those given or found. Throws `bad-input` with the lines that are wrong. */
export async function importNotebook(
  { database }: Context,
  standing: Standing,
  upload: Body<'importNotebook'>,
): Promise<Notebook> {
  const { title, authors, entries, faults } = readUpload(upload);
  const wrong = faults.filter((fault) => fault.severity === 'error');
  if (wrong.length > 0) {
    const places = wrong.map(({ line, column, message }) => ({ path: 'body.source', line, column, message }));
    throw new Refusal('bad-input', `Line ${String(wrong[0]?.line)}: ${wrong[0]?.message ?? ''}`, { places });
  }
  const own = authors.length === 0 ? undefined : authors;
  return database.transaction((tx) => make(tx, standing, { title, authors: own, entries, origin: null }));
}

/** A copy of one's own, of the working text or of one edition; it remembers what it began with. */
export async function forkNotebook(
  { database }: Context,
  standing: NotebookStanding,
  { edition = null, title }: { readonly edition?: number | null | undefined; readonly title?: string | undefined },
): Promise<Notebook> {
  return database.transaction(async (tx) => {
    const { notebook } = standing.on;
    const copied = edition === null ? await getWorkingText(tx, standing) : await editionText(tx, standing, edition);
    const ownTitle = title ?? copied.title;
    const made = await make(
      tx,
      { ...standing, on: null },
      { ...copied, title: ownTitle, origin: { notebook, edition } },
    );
    const base = copied.entries.map(({ id, kind, text }, at) => ({
      ...{ origin: id, own: made.entries[at]?.id ?? '', kind, text },
    }));
    await insertForkBase(tx, made.id, { title: copied.title, ownTitle, entries: base });
    return made;
  });
}

async function editionText(asking: Asking, standing: NotebookStanding, number: number) {
  const { content, entryIds } = await getReading(asking, standing, number);
  const { title, authors, entries } = content;
  return { title, authors, entries: entries.map((entry, at) => ({ ...entry, id: entryIds[at] ?? null })) };
}

async function workingText(
  asking: Asking,
  standing: NotebookStanding,
): Promise<{ title: string; authors: string[]; entries: PlainEntry[] }> {
  const { title, authors } = await queries.getNotebook(asking, standing);
  const entries = await listEntries(asking, standing);
  return { title, authors, entries: entries.map(({ kind, text }) => ({ kind, text })) };
}

interface Making {
  readonly title: string;
  /** Left out: the maker alone. */
  readonly authors?: readonly string[] | undefined;
  readonly entries: readonly PlainEntry[];
  readonly origin: queries.NotebookFields['origin'];
}

async function make(tx: Transaction, standing: Standing, { title, authors, entries, origin }: Making) {
  const person = personOf(standing);
  const { notebooksPerPerson: most } = await readLimits(tx);
  if ((await countOwned(tx, person)) >= most) {
    throw new Refusal('conflict', `A person has at most ${String(most)} notebooks here.`);
  }
  checkSize(
    entries.length,
    entries.reduce((sum, entry) => sum + entry.text.length, 0),
  );
  const long = entries.find((entry) => entry.text.length > bounds.entryCharacters);
  if (long !== undefined) throw tooLarge(`An entry holds at most ${String(bounds.entryCharacters)} characters.`);
  const own = authors ?? [(await findAccount(tx, person))?.name ?? ''];
  const notebook = await queries.insertNotebook(tx, person, { title, authors: own, origin });
  await insertEntries(tx, notebook, person, entries);
  return compose(tx, await standingFor(tx, person, notebook));
}

const tooLarge = (detail: string): Refusal => new Refusal('too-large', detail);

/** Throws `too-large` where a notebook would outgrow its bounds. */
export function checkSize(entries: number, characters: number): void {
  if (entries > bounds.entries) throw tooLarge(`A notebook holds at most ${String(bounds.entries)} entries.`);
  if (characters > bounds.sourceCharacters) {
    throw tooLarge(`A notebook holds at most ${String(bounds.sourceCharacters)} characters.`);
  }
}

/** Changes title, authors or visibility and tells those who look. */
export async function changeNotebook(
  { database }: Context,
  standing: NotebookStanding,
  { title, authors, visibility }: Body<'changeNotebook'> & { readonly visibility?: Visibility },
): Promise<Notebook> {
  return database.transaction(async (tx) => {
    await queries.updateNotebook(tx, standing, {
      ...(title === undefined ? {} : { title }),
      ...(authors === undefined ? {} : { authors }),
      ...(visibility === undefined ? {} : { visibility }),
    });
    await announce(tx, standing.on.notebook, 'notebook', {});
    return compose(tx, standing);
  });
}

/** Puts a notebook into its owner's bin, with its editions and links, which open nothing there. Forks of it stay. */
export async function deleteNotebook({ database }: Context, standing: NotebookStanding): Promise<void> {
  await database.transaction(async (tx) => {
    await queries.binNotebook(tx, standing);
    await announce(tx, standing.on.notebook, 'notebook', {});
  });
}

/** The working text as `.gw`. */
export async function exportNotebook({ database }: Context, standing: NotebookStanding): Promise<string> {
  return notebookToText(await workingText(database, standing));
}
