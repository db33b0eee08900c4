import { createHash, randomBytes } from 'node:crypto';
import { canonical } from '../../shared/contracts/canonical.ts';
import type { Edition, EditionContent, EditionSummary, Link } from '../../shared/contracts/editions.ts';
import { notebookToText } from '../../shared/notebook/text.ts';
import { announce } from '../db/announce.ts';
import type { Transaction } from '../db/connection.ts';
import * as queries from '../db/queries/editions.ts';
import { countComputing, readLimits } from '../db/queries/limits.ts';
import { listEntries } from '../db/queries/entries.ts';
import { getNotebook } from '../db/queries/notebooks.ts';
import type { Page, PageAsked } from '../db/page.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import { lockNotebook, type NotebookStanding } from '../db/standing.ts';
import { type Context, personOf } from './context.ts';

/** SHA-256 of the canonical JSON (RFC 8785) of an edition's content, as 64 hex digits. */
export const hashOf = (content: EditionContent): string =>
  createHash('sha256').update(canonical(content), 'utf8').digest('hex');

/** Seals the working text as the next edition and asks for its claims. Throws `conflict` if nothing changed since the last. */
export function publish(context: Context, standing: NotebookStanding, summary: string): Promise<EditionSummary> {
  return context.database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    await refuseTooMany(tx, standing);
    const { title, authors } = await getNotebook(tx, standing);
    const entries = await listEntries(tx, standing);
    if (entries.length === 0)
      throw new Refusal('conflict', 'There is nothing to publish: the notebook has no entries.');
    const content: EditionContent = {
      format: 'gaugewright-edition/1',
      title,
      authors,
      entries: entries.map(({ kind, text }) => ({ kind, text })),
    };
    const hash = hashOf(content);
    const last = await queries.lastEdition(tx, standing);
    if (last.hash === hash) {
      throw new Refusal('conflict', `Nothing changed since edition ${String(last.number)}.`, { edition: last.number });
    }
    const number = last.number + 1;
    const fields = { number, summary, content, entryIds: entries.map((entry) => entry.id), hash };
    const id = await queries.insertEdition(tx, standing, fields);
    await context.askForClaims(tx, id);
    await announce(tx, standing.on.notebook, 'edition', { number, status: 'computing' });
    return queries.getEditionSummary(tx, standing, number);
  });
}

/** One person's editions do not keep those of all others waiting. */
async function refuseTooMany(tx: Transaction, standing: NotebookStanding): Promise<void> {
  const { jobsPerPerson: most } = await readLimits(tx);
  if ((await countComputing(tx, personOf(standing))) < most) return;
  throw new Refusal(
    'conflict',
    `The claims of ${String(most)} editions of yours are being computed. Let some end first.`,
  );
}

/** Asks again for the claims of an edition that failed. Throws `conflict` for any other. */
export function evaluateAgain(context: Context, standing: NotebookStanding, number: number): Promise<EditionSummary> {
  return context.database.transaction(async (tx) => {
    const id = await queries.reopenEdition(tx, standing, number);
    const summary = await queries.getEditionSummary(tx, standing, number);
    if (id === null) throw new Refusal('conflict', `The claims of edition ${String(number)} did not fail.`);
    await context.askForClaims(tx, id);
    await announce(tx, standing.on.notebook, 'edition', { number, status: 'computing' });
    return summary;
  });
}

export function editionsOf(
  { database }: Context,
  standing: NotebookStanding,
  page: PageAsked,
): Promise<Page<EditionSummary>> {
  return queries.listEditions(database, standing, page);
}

/** One edition; `number` null where a share link leads to it. */
export function readEdition(
  { database }: Context,
  standing: NotebookStanding,
  number: number | null,
): Promise<Edition> {
  return queries.getEdition(database, standing, number);
}

/** The edition as a `.gw` text; `number` null where a share link leads to it. */
export async function exportEdition(
  { database }: Context,
  standing: NotebookStanding,
  number: number | null,
): Promise<string> {
  return notebookToText(await queries.getContent(database, standing, number));
}

export async function linksOf({ database }: Context, standing: NotebookStanding): Promise<{ items: Link[] }> {
  return { items: await queries.listLinks(database, standing) };
}

/** A link that opens one edition to whoever has it, until it is revoked. Its token has 192 random bits. */
export function createLink({ database }: Context, standing: NotebookStanding, edition: number): Promise<Link> {
  return database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    return queries.insertLink(tx, standing, edition, randomBytes(24).toString('base64url'));
  });
}

export async function revokeLink({ database }: Context, standing: NotebookStanding, link: string): Promise<void> {
  if (!(await queries.revokeLink(database, standing, link))) throw notFound();
}
