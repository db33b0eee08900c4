import type { Body, Query } from '../../shared/contracts/endpoints.ts';
import type { Collation, Sending, SendingSummary, Variant } from '../../shared/contracts/reviews.ts';
import { compareClaims } from '../../shared/notebook/compare-claims.ts';
import { piecesOf } from '../../shared/notebook/pieces.ts';
import { type FoundVariant, variantsOf, withVariant } from '../../shared/notebook/variants.ts';
import { announce } from '../db/announce.ts';
import type { Asking, Transaction } from '../db/connection.ts';
import * as entryQueries from '../db/queries/entries.ts';
import { getWorkingText, type Reading } from '../db/queries/forks.ts';
import { updateNotebook } from '../db/queries/notebooks.ts';
import * as queries from '../db/queries/variants.ts';
import type { Page } from '../db/page.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import { lockNotebook, type NotebookStanding } from '../db/standing.ts';
import { originOf } from './comparing.ts';
import type { Context } from './context.ts';
import { evaluate, sourceOf } from './evaluations.ts';
import { checkSize } from './notebooks.ts';
import { notify, peopleWithRole } from './notices.ts';

/** Sendings of one fork that may wait at the same time. */
const mostWaiting = 20;
/** Variants of one sending whose effect on the claims is computed. */
const mostComputed = 40;

type Effect = Pick<Variant, 'claims' | 'reason'>;
type Placed = Pick<Variant, 'kind' | 'entryKind' | 'entry' | 'after' | 'fork'>;

/**
 * What adopting each variant alone would do to the claims of the origin as it reads now. Prose says nothing to the engine; the rest
 * is asked for and comes by and by.
 */
async function effectsOf(
  asking: Asking,
  notebook: string,
  origin: Reading,
  variants: readonly Placed[],
): Promise<Effect[]> {
  const silent: Effect = { claims: [], reason: null };
  const sources = variants.map((variant, at) => {
    const wordsOnly =
      variant.kind === 'title' || (variant.entryKind === 'prose' && !replacesStatements(origin, variant));
    if (wordsOnly) return silent;
    if (at >= mostComputed) return { claims: null, reason: 'Too many variants were sent at once to compute this one.' };
    const entries = withVariant(origin.entries, variant);
    return entries === null ? { claims: null, reason: 'The entry is not there any more.' } : sourceOf(entries);
  });
  const texts = sources.filter((one) => typeof one === 'string');
  if (texts.length === 0) return sources.filter((one) => typeof one !== 'string');
  const [now, ...then] = await evaluate(asking, notebook, [sourceOf(origin.entries), ...texts]);
  let next = 0;
  return sources.map((one) => {
    if (typeof one !== 'string') return one;
    const adopted = then[next++];
    const reason = now?.reason ?? adopted?.reason ?? null;
    if (now?.report == null || adopted?.report == null) return { claims: null, reason };
    return { claims: compareClaims(now.report.claims, adopted.report.claims), reason: null };
  });
}

const replacesStatements = (origin: Reading, { entry }: Placed): boolean =>
  origin.entries.some((one) => one.id === entry && one.kind === 'statements');

async function foundIn(asking: Asking, standing: NotebookStanding) {
  const origin = await originOf(asking, standing);
  const fork = await getWorkingText(asking, standing);
  const reading = await getWorkingText(asking, origin.standing);
  return { origin, reading, found: variantsOf(origin.base, fork, reading) };
}

/** A fork beside its origin as both read now. */
export async function collationOf({ database }: Context, standing: NotebookStanding): Promise<Collation> {
  const { origin, reading, found } = await foundIn(database, standing);
  const effects = await effectsOf(database, standing.on.notebook, reading, found);
  return {
    origin: { id: origin.standing.on.notebook, title: reading.title, edition: origin.edition },
    variants: found.map((variant, at) => ({
      ...variant,
      pieces: piecesOf(variant.origin ?? '', variant.fork ?? ''),
      claims: effects[at]?.claims ?? null,
      reason: effects[at]?.reason ?? null,
    })),
  };
}

/** Sends variants with a letter to the origin's writers. Throws `conflict` if there are none. */
export function send(
  context: Context,
  standing: NotebookStanding,
  { letter, keys }: Body<'sendVariants'>,
): Promise<Sending> {
  return context.database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    const { origin, reading, found } = await foundIn(tx, standing);
    const chosen = keys === undefined ? found : found.filter(({ key }) => keys.includes(key));
    const lost = keys?.find((key) => !found.some((variant) => variant.key === key));
    if (lost !== undefined) throw new Refusal('conflict', 'One of these variants is none any more: look again.');
    if (chosen.length === 0) throw new Refusal('conflict', 'Nothing differs from the origin that could be sent.');
    if ((await queries.countWaiting(tx, standing)) >= mostWaiting) {
      throw new Refusal('too-many', 'Many variants of this fork wait already. Withdraw some, or wait for an answer.');
    }
    const to = origin.standing.on.notebook;
    const id = await queries.insertSending(tx, standing, {
      origin: to,
      edition: origin.edition,
      letter,
      variants: chosen,
    });
    await announce(tx, to, 'variants', { sending: id });
    await announce(tx, standing.on.notebook, 'variants', { sending: id });
    await notify(tx, {
      to: await peopleWithRole(tx, to, ['owner', 'coauthor']),
      kind: 'variants',
      text: `${countOf(chosen)} came for “${reading.title}”.`,
      by: standing.person,
      notebook: to,
      path: `/notebooks/${to}/variants/${id}`,
    });
    return sendingFor(tx, standing, id);
  });
}

const countOf = (found: readonly FoundVariant[]): string =>
  found.length === 1 ? 'One variant' : `${String(found.length)} variants`;

export function sendings(
  { database }: Context,
  standing: NotebookStanding,
  asked: Query<'listVariants'>,
): Promise<Page<SendingSummary>> {
  return queries.listSendings(database, standing, asked);
}

export function readSending({ database }: Context, standing: NotebookStanding, id: string): Promise<Sending> {
  return sendingFor(database, standing, id);
}

/** A sending with its readings; the origin's as it is now, and as it was where a variant is decided. */
async function sendingFor(asking: Asking, standing: NotebookStanding, id: string): Promise<Sending> {
  const summary = await queries.getSending(asking, standing, id);
  const rows = await queries.listVariants(asking, id);
  // Whoever sent them reads the origin through what they sent: it was theirs to read then, and is shown again only while it is.
  const reading = await originNow(asking, standing, summary);
  const open = rows.map((row) => (row.decision === null ? row : { ...row, kind: 'title' as const }));
  const effects =
    reading === null || summary.status !== 'waiting'
      ? rows.map(() => ({ claims: null, reason: null }))
      : await effectsOf(asking, standing.on.notebook, reading, open);
  const variants = rows.map(({ displaced, ...row }, at): Variant => {
    const origin = reading === null || row.decision === null ? originReading(reading, row) : displaced;
    const decidedEffect: Effect = { claims: null, reason: null };
    return {
      ...row,
      origin,
      pieces: piecesOf(origin ?? '', row.fork ?? ''),
      bothChanged: row.kind !== 'added' && origin !== row.base,
      ...(row.decision === null ? (effects[at] ?? decidedEffect) : decidedEffect),
    };
  });
  return { ...summary, variants };
}

async function originNow(
  asking: Asking,
  standing: NotebookStanding,
  { origin }: SendingSummary,
): Promise<Reading | null> {
  if (origin?.id === standing.on.notebook) return getWorkingText(asking, standing);
  try {
    return await getWorkingText(asking, (await originOf(asking, standing)).standing);
  } catch (error) {
    if (error instanceof Refusal) return null;
    throw error;
  }
}

function originReading(reading: Reading | null, { kind, entry }: Placed): string | null {
  if (kind === 'title') return reading?.title ?? null;
  return reading?.entries.find((one) => one.id === entry)?.text ?? null;
}

export async function withdraw({ database }: Context, standing: NotebookStanding, id: string): Promise<void> {
  await database.transaction(async (tx) => {
    const { origin } = await queries.getSending(tx, standing, id);
    if (!(await queries.withdrawSending(tx, standing, id))) throw notFound();
    await announce(tx, standing.on.notebook, 'variants', { sending: id });
    if (origin !== null) await announce(tx, origin.id, 'variants', { sending: id });
  });
}

/** Adopts a variant in the origin, or leaves it; what the origin read until then stays on record with the variant. */
export function decide(
  { database }: Context,
  standing: NotebookStanding,
  ids: { readonly sending: string; readonly variant: string },
  { what, reason, text }: Body<'decideVariant'>,
): Promise<Sending> {
  return database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    const summary = await queries.getSending(tx, standing, ids.sending);
    // From the fork they can be looked at, not decided.
    if (summary.origin?.id !== standing.on.notebook) throw notFound();
    if (summary.status === 'withdrawn')
      throw new Refusal('conflict', 'These variants were withdrawn by their senders.');
    const variant = (await queries.listVariants(tx, ids.sending)).find(({ id }) => id === ids.variant);
    if (variant === undefined) throw notFound();
    if (variant.decision !== null) throw new Refusal('conflict', 'This variant is decided.');
    const reading = await getWorkingText(tx, standing);
    const displaced = originReading(reading, variant);
    const adopted = what === 'left' ? null : (text ?? variant.fork);
    if (what === 'left' && reason.trim() === '') {
      throw new Refusal('bad-input', 'body.reason: Say why it is left; its author reads this.', {
        places: [{ path: 'body.reason', message: 'Say why it is left; its author reads this.' }],
      });
    }
    if (what === 'adopted') await adopt(tx, standing, variant, adopted);
    await queries.decideVariant(tx, standing, variant.id, { decision: what, reason, displaced, adopted });
    await tell(tx, standing, summary, what);
    return sendingFor(tx, standing, ids.sending);
  });
}

/** Writes the adopted reading into the origin. Throws `held` while someone writes there, `conflict` where the place is gone. */
async function adopt(
  tx: Transaction,
  standing: NotebookStanding,
  { kind, entryKind, entry, after }: queries.VariantRow,
  text: string | null,
): Promise<void> {
  if (kind === 'title') {
    const title = (text ?? '').replace(/\s+/g, ' ').trim().slice(0, 200);
    if (title !== '') await updateNotebook(tx, standing, { title });
    return announce(tx, standing.on.notebook, 'notebook', {});
  }
  if (kind === 'added') {
    const order = await entryQueries.orderOfEntries(tx, standing);
    const at = after === null ? 0 : order.indexOf(after) + 1;
    // Where its neighbour is gone, it goes to the end.
    const before = after !== null && at === 0 ? null : (order[at] ?? null);
    const position = await entryQueries.positionBefore(tx, standing, before);
    if (position === null) throw new Refusal('conflict', 'The place of this entry is not there any more.');
    await entryQueries.insertEntry(tx, standing, { kind: entryKind, text: text ?? '', position });
  } else await overwrite(tx, standing, entry ?? '', entryKind, text);
  const size = await entryQueries.sizeOfEntries(tx, standing);
  checkSize(size.entries, size.characters);
  await updateNotebook(tx, standing);
  await announce(tx, standing.on.notebook, 'entries', { entry: null, version: null, by: standing.person });
}

async function overwrite(
  tx: Transaction,
  standing: NotebookStanding,
  id: string,
  kind: 'prose' | 'statements',
  text: string | null,
): Promise<void> {
  const current = await entryQueries.findEntry(tx, standing, id);
  if (current === null) {
    throw new Refusal('conflict', 'The entry was deleted here. Restore it first, or leave the variant with a reason.');
  }
  if (current.hold !== null && current.hold.by.id !== standing.person) {
    throw new Refusal('held', `${current.hold.by.name} is writing in this entry.`, { hold: current.hold });
  }
  if (text === null) await entryQueries.markDeleted(tx, standing, id);
  else await entryQueries.updateEntry(tx, standing, id, current.version, { kind, text });
}

async function tell(
  tx: Transaction,
  standing: NotebookStanding,
  { id, origin, fork, by }: SendingSummary,
  what: 'adopted' | 'left',
): Promise<void> {
  await announce(tx, standing.on.notebook, 'variants', { sending: id });
  if (fork === null) return;
  await announce(tx, fork.id, 'variants', { sending: id });
  if (by === null) return;
  await notify(tx, {
    to: [by.id],
    kind: 'variants',
    text: `A variant of yours for “${origin?.title ?? ''}” was ${what === 'adopted' ? 'adopted' : 'left'}.`,
    by: standing.person,
    notebook: fork.id,
    path: `/notebooks/${fork.id}/variants/${id}`,
  });
}
