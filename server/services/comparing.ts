import type { Query } from '../../shared/contracts/endpoints.ts';
import type { Comparison } from '../../shared/contracts/reviews.ts';
import type { Report } from '../../shared/contracts/report.ts';
import { type ComparedEntry, compareEntries, compareReports } from '../../shared/notebook/compare.ts';
import type { Asking } from '../db/connection.ts';
import { getReading } from '../db/queries/editions.ts';
import { findOrigin, type ForkBase, getWorkingText } from '../db/queries/forks.ts';
import { Refusal } from '../db/refusal.ts';
import { may, type NotebookStanding, type Standing, standingOnNotebook } from '../db/standing.ts';
import type { Context } from './context.ts';
import { evaluate, sourceOf } from './evaluations.ts';

interface Side {
  readonly head: Comparison['left'];
  readonly entries: readonly ComparedEntry[];
  /** The sealed report; null: it is to be asked for. */
  readonly report: Report | null;
  readonly source: string;
}

/** Two readings beside each other; as physics as soon as the server knows the reports of both. */
export async function compare(
  { database }: Context,
  standing: NotebookStanding,
  { left, right }: Query<'compare'>,
): Promise<Comparison> {
  const origin = left === 'origin' || right === 'origin' ? await originOf(database, standing) : null;
  const sides = [
    await sideOf(database, standing, left, origin),
    await sideOf(database, standing, right, origin),
  ] as const;
  const waiting = sides.filter((side) => side.report === null).map((side) => side.source);
  const found = await evaluate(database, standing.on.notebook, waiting);
  const reports = sides.map((side) => {
    const known = side.report === null ? found[waiting.indexOf(side.source)] : undefined;
    return { report: side.report ?? known?.report ?? null, reason: known?.reason ?? null };
  });
  const [mine, theirs] = [reports[0]?.report ?? null, reports[1]?.report ?? null];
  const heads = sides.map((side, at) => ({ ...side.head, problems: errorsIn(reports[at]?.report ?? null) }));
  const differences = compareEntries(sides[0].entries, sides[1].entries);
  return {
    left: heads[0] ?? sides[0].head,
    right: heads[1] ?? sides[1].head,
    entries: differences.filter(({ kind }) => kind === 'prose'),
    source: differences.filter(({ kind }) => kind === 'statements'),
    physics: mine === null || theirs === null ? null : compareReports(mine, theirs),
    reason: reports.map(({ reason }) => reason).find((reason) => reason !== null) ?? null,
  };
}

const errorsIn = (report: Report | null): number | null =>
  report === null ? null : report.problems.filter((problem) => problem.severity === 'error').length;

export interface Origin {
  readonly standing: NotebookStanding;
  readonly edition: number | null;
  readonly base: ForkBase;
}

/** The origin of a fork, for one who may read it. Throws `conflict` where there is none to be read. */
export async function originOf(asking: Asking, standing: NotebookStanding): Promise<Origin> {
  const found = await findOrigin(asking, standing);
  if (found === null) throw new Refusal('conflict', 'This notebook is no fork, or what it was made from is gone.');
  const asker: Standing = { ...standing, on: null };
  const there = await standingOnNotebook(asking, asker, found.notebook);
  if (there === null || !may(there, 'read')) {
    throw new Refusal('conflict', 'The notebook that this is a fork of is not open to you any more.');
  }
  return { standing: there, edition: found.edition, base: found.base };
}

/** A fork's entries under the ids that the origin has for them. */
function underOriginsIds(entries: readonly ComparedEntry[], origin: Origin | null): ComparedEntry[] {
  const origins = new Map(origin?.base.entries.map((entry) => [entry.own, entry.origin]));
  return entries.map((entry) => ({ ...entry, id: origins.get(entry.id ?? '') ?? entry.id }));
}

async function sideOf(asking: Asking, standing: NotebookStanding, name: string, origin: Origin | null): Promise<Side> {
  if (name === 'origin') {
    if (origin === null) throw new Refusal('conflict', 'This notebook is no fork.');
    return origin.edition === null
      ? workingSide(asking, origin.standing, 'origin', null)
      : editionSide(asking, origin.standing, 'origin', origin.edition, null);
  }
  if (name === 'draft') return workingSide(asking, standing, 'draft', origin);
  return editionSide(asking, standing, name, Number(name), origin);
}

async function workingSide(
  asking: Asking,
  standing: NotebookStanding,
  name: string,
  origin: Origin | null,
): Promise<Side> {
  const reading = await getWorkingText(asking, standing);
  const { title, authors } = reading;
  const notebook = { id: standing.on.notebook, title };
  return {
    head: { name, notebook, edition: null, title, authors: [...authors], problems: null },
    entries: underOriginsIds(reading.entries, origin),
    report: null,
    source: sourceOf(reading.entries),
  };
}

async function editionSide(
  asking: Asking,
  standing: NotebookStanding,
  name: string,
  number: number,
  origin: Origin | null,
): Promise<Side> {
  const { content, entryIds, report, notebookTitle } = await getReading(asking, standing, number);
  const { title, authors } = content;
  const notebook = { id: standing.on.notebook, title: notebookTitle };
  return {
    head: { name, notebook, edition: number, title, authors, problems: null },
    entries: underOriginsIds(
      content.entries.map((entry, at) => ({ ...entry, id: entryIds[at] ?? null })),
      origin,
    ),
    report,
    source: sourceOf(content.entries),
  };
}
