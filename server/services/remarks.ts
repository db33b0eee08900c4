import type { Body, Query } from '../../shared/contracts/endpoints.ts';
import type { Person } from '../../shared/contracts/people.ts';
import type { Remark, RemarkSubject, Reply } from '../../shared/contracts/reviews.ts';
import { annotationsOf } from '../../shared/exports/annotations.ts';
import { announce } from '../db/announce.ts';
import type { Asking, Transaction } from '../db/connection.ts';
import { getReading } from '../db/queries/editions.ts';
import { getWorkingText } from '../db/queries/forks.ts';
import * as queries from '../db/queries/remarks.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import { lockNotebook, type NotebookStanding } from '../db/standing.ts';
import type { Context } from './context.ts';
import { notify, peopleWithRole } from './notices.ts';

const handlesIn = (text: string): string[] => [
  ...new Set(
    [...text.matchAll(/(?<![\w@/.])@([a-z0-9](?:[a-z0-9-]{0,37}[a-z0-9])?)/gi)].map(([, handle = '']) => handle),
  ),
];

function replyOf(row: queries.RemarkRow, people: ReadonlyMap<string, Person>): Reply {
  return {
    id: row.id,
    by: row.by,
    text: row.text,
    mentions: row.mentions.flatMap((id) => people.get(id) ?? []),
    at: row.createdAt.toISOString(),
    editedAt: row.editedAt?.toISOString() ?? null,
  };
}

/** Remarks with their replies, where they stand now, in the order of their entries; few queries, however many there are. */
async function compose(
  asking: Asking,
  standing: NotebookStanding,
  rows: readonly queries.RemarkRow[],
): Promise<Remark[]> {
  const mentioned = [...new Set(rows.flatMap((row) => row.mentions))];
  const people = new Map((await queries.listPeople(asking, mentioned)).map((person) => [person.id, person]));
  const { entries } = await getWorkingText(asking, standing);
  const place = new Map(entries.map((entry, at) => [entry.id, at]));
  const heads = rows.filter((row) => row.parent === null && row.subject !== null);
  const about = [...new Set(heads.flatMap((row) => row.entry ?? []))];
  const editions = await queries.lastEditionsOf(asking, standing, about);
  const replies = new Map<string, queries.RemarkRow[]>();
  for (const row of rows) if (row.parent !== null) replies.set(row.parent, [...(replies.get(row.parent) ?? []), row]);
  const remarks = heads.flatMap((row): (Remark & { readonly place: number })[] => {
    const { subject, entry } = row;
    if (subject === null) return [];
    const at = place.get(entry ?? '');
    return [
      {
        ...replyOf(row, people),
        subject,
        state: row.settledAt === null ? 'open' : 'settled',
        settledBy: row.settledBy,
        settledAt: row.settledAt?.toISOString() ?? null,
        madeOn: row.madeOn,
        stands: at === undefined ? 'gone' : standsIn(subject, entries[at]?.text ?? ''),
        edition: editions.get(entry ?? '') ?? row.madeOn,
        replies: (replies.get(row.id) ?? []).map((reply) => replyOf(reply, people)),
        place: at ?? Number.POSITIVE_INFINITY,
      },
    ];
  });
  return remarks
    .sort((a, b) => (a.place === b.place ? (a.at < b.at ? -1 : 1) : a.place - b.place))
    .map(({ place: _place, ...remark }) => remark);
}

/** Words that a remark quotes may go while their entry stays; terms and claims are known to whoever evaluates the text. */
const standsIn = (subject: RemarkSubject, text: string): 'here' | 'changed' =>
  subject.what === 'entry' && subject.quote !== null && !text.includes(subject.quote.exact) ? 'changed' : 'here';

export async function remarksOf(
  { database }: Context,
  standing: NotebookStanding,
  { state, edition }: Query<'listRemarks'>,
): Promise<{ items: Remark[] }> {
  const all = await compose(database, standing, await queries.listRemarks(database, standing));
  const inEdition = edition === undefined ? null : new Set((await getReading(database, standing, edition)).entryIds);
  const items = all
    .filter((remark) => state === 'all' || remark.state === state)
    .filter((remark) => inEdition === null || remark.madeOn === edition || inEdition.has(remark.subject.entry));
  return { items };
}

async function remarkFor(tx: Asking, standing: NotebookStanding, id: string): Promise<Remark> {
  const remark = (await compose(tx, standing, await queries.listRemarks(tx, standing))).find((one) => one.id === id);
  if (remark === undefined) throw notFound();
  return remark;
}

/** Makes a remark on an entry that stands in the working text, or in the edition named. Throws `conflict` if it stands there not. */
export function makeRemark(
  { database }: Context,
  standing: NotebookStanding,
  { subject, text, edition }: Body<'makeRemark'>,
): Promise<Remark> {
  return database.transaction(async (tx) => {
    const there =
      edition === undefined
        ? (await getWorkingText(tx, standing)).entries.map((entry) => entry.id)
        : (await getReading(tx, standing, edition)).entryIds;
    if (!there.includes(subject.entry)) throw new Refusal('conflict', 'What this speaks of is not there any more.');
    const mentions = await queries.findMentioned(tx, standing, handlesIn(text));
    const made = { parent: null, text, mentions, subject, madeOn: edition ?? null };
    const id = await queries.insertRemark(tx, standing, made);
    await tell(tx, standing, id, { mentions, others: await writers(tx, standing), what: 'A remark was made on' });
    return remarkFor(tx, standing, id);
  });
}

const writers = (tx: Asking, { on }: NotebookStanding): Promise<string[]> =>
  peopleWithRole(tx, on.notebook, ['owner', 'coauthor']);

export function reply({ database }: Context, standing: NotebookStanding, parent: string, text: string): Promise<Reply> {
  return database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    const head = await queries.getRemark(tx, standing, parent);
    if (head.parent !== null) throw new Refusal('conflict', 'Answer the remark itself, not an answer to it.');
    const mentions = await queries.findMentioned(tx, standing, handlesIn(text));
    const id = await queries.insertRemark(tx, standing, { parent, text, mentions, subject: null, madeOn: null });
    const thread = (await queries.listRemarks(tx, standing)).filter(
      (row) => row.id === parent || row.parent === parent,
    );
    const others = thread.flatMap((row) => row.by?.id ?? []);
    await tell(tx, standing, parent, { mentions, others, what: 'A remark was answered in' });
    return replyFor(tx, standing, id);
  });
}

async function replyFor(tx: Asking, standing: NotebookStanding, id: string): Promise<Reply> {
  const row = await queries.getRemark(tx, standing, id);
  const people = await queries.listPeople(tx, row.mentions);
  return replyOf(row, new Map(people.map((person) => [person.id, person])));
}

/** Another text; who is mentioned in it and was not before is told. */
export function reword({ database }: Context, standing: NotebookStanding, id: string, text: string): Promise<Reply> {
  return database.transaction(async (tx) => {
    const before = await queries.getRemark(tx, standing, id);
    const mentions = await queries.findMentioned(tx, standing, handlesIn(text));
    if (!(await queries.rewordRemark(tx, standing, id, { text, mentions }))) throw notTheirs();
    const further = mentions.filter((person) => !before.mentions.includes(person));
    await tell(tx, standing, before.parent ?? id, { mentions: further, others: [], what: 'A remark was made on' });
    return replyFor(tx, standing, id);
  });
}

const notTheirs = (): Refusal => new Refusal('not-allowed', 'This was written by someone else.');

export function settle(
  { database }: Context,
  standing: NotebookStanding,
  id: string,
  state: 'open' | 'settled',
): Promise<Remark> {
  return database.transaction(async (tx) => {
    if (!(await queries.settleRemark(tx, standing, id, state === 'settled'))) throw notFound();
    await announce(tx, standing.on.notebook, 'remarks', { remark: id });
    return remarkFor(tx, standing, id);
  });
}

export async function takeBack({ database }: Context, standing: NotebookStanding, id: string): Promise<void> {
  await database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    const { parent } = await queries.getRemark(tx, standing, id);
    if (!(await queries.takeRemarkBack(tx, standing, id))) throw notTheirs();
    await announce(tx, standing.on.notebook, 'remarks', { remark: parent });
  });
}

/** Tells those who look, those who are mentioned, and the others concerned; nobody twice. */
async function tell(
  tx: Transaction,
  standing: NotebookStanding,
  remark: string,
  { mentions, others, what }: { mentions: readonly string[]; others: readonly string[]; what: string },
): Promise<void> {
  const { notebook } = standing.on;
  await announce(tx, notebook, 'remarks', { remark });
  const { title } = await getWorkingText(tx, standing);
  const common = { by: standing.person, notebook, path: `/notebooks/${notebook}?remark=${remark}` };
  await notify(tx, { ...common, to: mentions, kind: 'mention', text: `You were mentioned in “${title}”.` });
  const rest = others.filter((person) => !mentions.includes(person));
  await notify(tx, { ...common, to: rest, kind: 'remark', text: `${what} “${title}”.` });
}

/** All remarks as W3C Web Annotations; `base` is the address that people know the installation by. */
export async function exportRemarks({ database }: Context, standing: NotebookStanding, base: string) {
  const remarks = await compose(database, standing, await queries.listRemarks(database, standing));
  return annotationsOf(remarks, { base, notebook: standing.on.notebook });
}
