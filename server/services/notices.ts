import type { Notice, NoticeKind, NoticeSettings } from '../../shared/contracts/notices.ts';
import type { MailMode } from '../../shared/contracts/people.ts';
import { tell } from '../db/announce.ts';
import type { Asking } from '../db/connection.ts';
import type { Page, PageAsked } from '../db/page.ts';
import { insertMail } from '../db/queries/mails.ts';
import * as queries from '../db/queries/notices.ts';
import type { NotebookStanding, Standing } from '../db/standing.ts';
import { noticeLetter } from '../mail/letters.ts';
import { readStopToken } from '../mail/stops.ts';
import { type Context, personOf } from './context.ts';

/** What happened, and whom it concerns. */
export interface News {
  /** Ids of people; who did it is left out, and so is whoever has no account any more. */
  readonly to: readonly string[];
  readonly kind: NoticeKind;
  /** One sentence, whole in itself. */
  readonly text: string;
  readonly by: string | null;
  readonly notebook: string | null;
  /** A page of ours to read on, `/notebooks/…`. */
  readonly path: string;
  /** False: in the product only, where a mail of its own is sent. */
  readonly mail?: boolean;
}

/**
 * Tells people in the product, on their open pages at once, and by mail as each of them wants it. Runs in the transaction of
 * what happened, so that nobody is told of what did not.
 */
export async function notify(tx: Asking, { to, kind, text, by, notebook, path, mail = true }: News): Promise<void> {
  const persons = [...new Set(to)].filter((person) => person !== by);
  const told = (await queries.listTold(tx, persons, notebook)).map((one) => (mail ? one : { ...one, email: null }));
  await queries.insertNotices(
    tx,
    told.map(({ person, email, mail: how }) => ({
      person,
      kind,
      text,
      actor: by,
      notebook,
      to: path,
      digest: how === 'daily' && email !== null,
    })),
  );
  for (const { person, email, mail: how } of told) {
    if (how === 'immediate' && email !== null) {
      await insertMail(tx, { ...noticeLetter(text, path), to: email, stops: { person, notebook } });
    }
    await tell(tx, person, 'notices', { unread: await queries.countUnread(tx, person) });
  }
}

/** Tells whoever published an edition what became of its claims: `outcome` ends the sentence. */
export async function notifyPublisher(
  tx: Asking,
  edition: { readonly id: string; readonly notebook: string; readonly number: number; readonly title: string },
  outcome: string,
): Promise<void> {
  const person = await queries.publisherOf(tx, edition.id);
  await notify(tx, {
    to: person === null ? [] : [person],
    kind: 'job',
    text: `The claims of edition ${String(edition.number)} of “${edition.title}” ${outcome}`,
    by: null,
    notebook: edition.notebook,
    path: `/notebooks/${edition.notebook}/editions/${String(edition.number)}`,
  });
}

/** The people who have one of these roles on a notebook, to be told something. */
export const peopleWithRole = queries.peopleWithRole;

export function noticesOf(
  { database }: Context,
  standing: Standing,
  page: PageAsked & { readonly show: 'all' | 'unread' },
): Promise<Page<Notice>> {
  return queries.listNotices(database, personOf(standing), page);
}

export function readNotices(
  { database }: Context,
  standing: Standing,
  which: 'all' | readonly string[],
): Promise<{ unread: number }> {
  const person = personOf(standing);
  return database.transaction(async (tx) => {
    await queries.markRead(tx, person, which);
    const unread = await queries.countUnread(tx, person);
    await tell(tx, person, 'notices', { unread });
    return { unread };
  });
}

export function settingsOf({ database }: Context, standing: Standing): Promise<NoticeSettings> {
  return queries.getNoticeSettings(database, personOf(standing));
}

export async function setNoticeMail(
  { database }: Context,
  standing: Standing,
  mail: MailMode,
): Promise<NoticeSettings> {
  await queries.setNoticeMail(database, personOf(standing), mail);
  return queries.getNoticeSettings(database, personOf(standing));
}

/** How notices about one notebook come by mail; null: as all others. */
export async function followNotebook(
  { database }: Context,
  standing: NotebookStanding,
  mail: MailMode | null,
): Promise<NoticeSettings> {
  await queries.setNotebookMail(database, personOf(standing), standing.on.notebook, mail);
  return queries.getNoticeSettings(database, personOf(standing));
}

/** What a mail's link stops; null where it is not one of ours. */
export const readStop = readStopToken;

/** What one click in a mail does: no more mail about this notebook, or (null) no more about anything. */
export async function stopMail(
  { database }: Pick<Context, 'database'>,
  { person, notebook }: { readonly person: string; readonly notebook: string | null },
): Promise<void> {
  if (notebook === null) await queries.setNoticeMail(database, person, 'off');
  else await queries.setNotebookMail(database, person, notebook, 'off');
}
