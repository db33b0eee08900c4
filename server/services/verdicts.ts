import type { Body } from '../../shared/contracts/endpoints.ts';
import type { Rerun, Verdict } from '../../shared/contracts/reviews.ts';
import { compareClaims } from '../../shared/notebook/compare-claims.ts';
import { varyText } from '../../shared/notebook/vary.ts';
import { announce } from '../db/announce.ts';
import type { Transaction } from '../db/connection.ts';
import { getReading } from '../db/queries/editions.ts';
import * as queries from '../db/queries/verdicts.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import { lockNotebook, type NotebookStanding } from '../db/standing.ts';
import { type Context, personOf } from './context.ts';
import { evaluate, sourceOf } from './evaluations.ts';
import { notify, peopleWithRole } from './notices.ts';

/** Reruns of one person that may be under way. */
const mostReruns = 10;

/** Verdicts on one edition; on all editions for null, newest first. */
export async function verdictsOf(
  { database }: Context,
  standing: NotebookStanding,
  number: number | null,
): Promise<{ items: Verdict[] }> {
  if (number !== null) await getReading(database, standing, number);
  return { items: await queries.listVerdicts(database, standing, number) };
}

async function sealedEdition(tx: Transaction, standing: NotebookStanding, number: number) {
  const edition = await getReading(tx, standing, number);
  if (edition.report === null) {
    throw new Refusal('conflict', `The claims of edition ${String(number)} are not sealed.`);
  }
  return { ...edition, report: edition.report };
}

/**
 * A referee's word on an edition, or on one of its claims. Throws `not-allowed` for one who has written in the notebook, whatever
 * their role is by now, and `conflict` before the claims are sealed.
 */
export function judge(
  { database }: Context,
  standing: NotebookStanding,
  { edition: number, claim }: { readonly edition: number; readonly claim: string | null },
  { word, reason }: Body<'judgeEdition'>,
): Promise<Verdict> {
  return database.transaction(async (tx) => {
    await lockNotebook(tx, standing);
    const edition = await sealedEdition(tx, standing, number);
    if (await queries.hasWritten(tx, standing)) {
      throw new Refusal('not-allowed', 'You have written in this notebook: a verdict on it is for others to give.');
    }
    if (claim !== null && (await queries.findClaim(tx, edition.editionId, claim)) === null) throw notFound();
    const given = await queries.giveVerdict(tx, standing, { edition: edition.editionId, claim, word, reason });
    if (given === null) throw notFound();
    const { notebook } = standing.on;
    await announce(tx, notebook, 'verdicts', { edition: number });
    const about = `edition ${String(number)} of “${edition.notebookTitle}”`;
    await notify(tx, {
      to: await peopleWithRole(tx, notebook, ['owner', 'coauthor']),
      kind: 'verdict',
      text: claim === null ? `A verdict on ${about} was given: ${word}.` : `A claim of ${about} was judged: ${word}.`,
      by: standing.person,
      notebook,
      path: `/notebooks/${notebook}/editions/${String(number)}`,
    });
    return given;
  });
}

export async function takeVerdictBack(
  { database }: Context,
  standing: NotebookStanding,
  number: number,
  verdict: string,
): Promise<void> {
  await database.transaction(async (tx) => {
    if (!(await queries.deleteVerdict(tx, standing, number, verdict))) throw notFound();
    await announce(tx, standing.on.notebook, 'verdicts', { edition: number });
  });
}

/** Has the server compute a claim again, with other sizes or couplings, or all claims by the engine of today. */
export function rerun(
  { database }: Context,
  standing: NotebookStanding,
  number: number,
  { claim, ...variation }: Body<'rerunClaims'>,
): Promise<Rerun> {
  return database.transaction(async (tx) => {
    const edition = await sealedEdition(tx, standing, number);
    if ((await queries.countOpenReruns(tx, personOf(standing))) >= mostReruns) {
      throw new Refusal('too-many', 'Several of your reruns are under way. Wait until some are done.');
    }
    const source = sourceOf(edition.content.entries);
    const text =
      claim === undefined ? whole(source, variation) : await varied(tx, edition.editionId, claim, source, variation);
    const [evaluation] = await evaluate(tx, standing.on.notebook, [text]);
    if (evaluation === undefined) throw new Error('a text was asked for and is not there');
    const made = { edition: edition.editionId, claim: claim ?? null, variation, evaluation: evaluation.id };
    const id = await queries.insertRerun(tx, standing, made);
    const [row] = await queries.listReruns(tx, standing, number, id);
    if (row === undefined) throw notFound();
    return rerunOf(row, edition.report.claims);
  });
}

function whole(source: string, { sizes, couplings }: Rerun['variation']): string {
  if (sizes === undefined && couplings === undefined) return source;
  throw wrong('claim', 'Name the claim that is to be computed with other sizes or couplings.');
}

async function varied(
  tx: Transaction,
  edition: string,
  claim: string,
  source: string,
  variation: Rerun['variation'],
): Promise<string> {
  const sealed = await queries.findClaim(tx, edition, claim);
  if (sealed === null) throw notFound();
  const made = varyText(source, sealed.line, variation);
  if ('text' in made) return made.text;
  throw wrong('sizes', made.fault);
}

const wrong = (place: string, message: string): Refusal =>
  new Refusal('bad-input', message, { places: [{ path: `body.${place}`, message }] });

function rerunOf({ report, line, ...row }: queries.RerunRow, sealed: Parameters<typeof compareClaims>[0]): Rerun {
  const claims = report?.claims ?? [];
  const own = line === null ? claims : claims.filter((claim) => claim.line === line);
  return {
    ...row,
    claims: own,
    problems: report?.problems ?? [],
    differences: row.claim === null && report !== null ? compareClaims(sealed, claims) : [],
  };
}

export async function rerunsOf(
  { database }: Context,
  standing: NotebookStanding,
  number: number,
): Promise<{ items: Rerun[] }> {
  const { report } = await getReading(database, standing, number);
  const rows = await queries.listReruns(database, standing, number);
  return { items: rows.map((row) => rerunOf(row, report?.claims ?? [])) };
}
