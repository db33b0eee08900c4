import type { Body, Query } from '../../shared/contracts/endpoints.ts';
import { type NotebookFile, notebookJsonSchema } from '../../shared/contracts/exchange.ts';
import type { Report } from '../../shared/contracts/report.ts';
import type { Preview } from '../../shared/contracts/reviews.ts';
import { article } from '../../shared/exports/article.ts';
import { bibtex, citationFile } from '../../shared/exports/citation.ts';
import { fileName, type Format, formats } from '../../shared/exports/formats.ts';
import { matrixMarket } from '../../shared/exports/matrix-market.ts';
import { notebookJson } from '../../shared/exports/notebook-json.ts';
import { openQasm } from '../../shared/exports/openqasm.ts';
import { pauliCsv } from '../../shared/exports/pauli-csv.ts';
import { readUpload } from '../../shared/exports/upload.ts';
import { joinEntries, notebookToText, placeOfLine } from '../../shared/notebook/text.ts';
import { getReading } from '../db/queries/editions.ts';
import { getWorkingText } from '../db/queries/forks.ts';
import { Refusal } from '../db/refusal.ts';
import type { NotebookStanding } from '../db/standing.ts';
import { EvaluationFailed, type Pool } from '../evaluation/pool.ts';
import type { Context } from './context.ts';
import { evaluate, sourceOf } from './evaluations.ts';
import { exportRemarks } from './remarks.ts';

/** What files need besides: a thread for what is answered at once. */
export interface FileContext extends Context {
  readonly quick: Pick<Pool, 'do' | 'derive'>;
}

export interface ExportedFile {
  readonly text: string;
  readonly name: string;
  readonly media: string;
}

interface Source {
  readonly content: Pick<NotebookFile, 'title' | 'authors' | 'entries'>;
  /** Null: it is not known yet. */
  readonly report: Report | null;
  readonly edition: NonNullable<NotebookFile['edition']> | null;
}

export interface ExportAsked extends Query<'exportEditionAs'> {
  readonly format: Format;
  /** Number of the edition; null where a link leads to it; undefined for the working text. */
  readonly edition: number | null | undefined;
  readonly base: string;
}

/** An edition, or the working text, in a format. Throws `conflict` where the format needs what is not there. */
export async function exportAs(
  context: FileContext,
  standing: NotebookStanding,
  { format, edition, base, of, size }: ExportAsked,
): Promise<ExportedFile> {
  const source =
    edition === undefined
      ? await workingSource(context, standing, formats[format].needs === 'report')
      : await editionSource(context, standing, edition, base);
  const text = await write(context, standing, source, { format, base, of: of ?? null, size: size ?? null });
  const name = fileName(source.content.title, source.edition?.number ?? null, format);
  return { text, name, media: formats[format].media };
}

async function editionSource(
  { database }: Context,
  standing: NotebookStanding,
  asked: number | null,
  base: string,
): Promise<Source> {
  const { content, report, number, hash, publishedAt } = await getReading(database, standing, asked);
  const address = `${base}/notebooks/${standing.on.notebook}/editions/${String(number)}`;
  return { content, report, edition: { number, hash, publishedAt: publishedAt.toISOString(), address } };
}

async function workingSource({ database }: Context, standing: NotebookStanding, evaluated: boolean): Promise<Source> {
  const { title, authors, entries } = await getWorkingText(database, standing);
  const content = { title, authors: [...authors], entries: entries.map(({ kind, text }) => ({ kind, text })) };
  if (!evaluated) return { content, report: null, edition: null };
  const [known] = await evaluate(database, standing.on.notebook, [sourceOf(content.entries)]);
  if (known?.status === 'failed') throw new Refusal('conflict', known.reason ?? 'The text could not be evaluated.');
  return { content, report: known?.report ?? null, edition: null };
}

type Writing = {
  readonly format: Format;
  readonly base: string;
  readonly of: string | null;
  readonly size: string | null;
};

async function write(
  context: FileContext,
  standing: NotebookStanding,
  source: Source,
  { format, base, of, size }: Writing,
): Promise<string> {
  const { content, report, edition } = source;
  switch (format) {
    case 'gw':
      return notebookToText(content);
    case 'json':
      return notebookJson({ format: 'gaugewright-notebook/1', ...content, edition, report: known(report, edition) });
    case 'article': {
      const head = edition === null ? null : { ...edition, date: edition.publishedAt };
      return article({ content, report: known(report, edition), edition: head });
    }
    case 'annotations':
      // Whoever came by a link sees one edition and not what is said about it.
      if (standing.on.linked !== null) throw new Refusal('not-allowed', 'Remarks are for the people of the notebook.');
      return `${JSON.stringify(await exportRemarks(context, standing, base), null, 2)}\n`;
    case 'bibtex':
    case 'cff': {
      if (edition === null) throw new Refusal('conflict', 'A working text cannot be cited: publish an edition.');
      const cited = { ...content, ...edition, edition: edition.number };
      return format === 'bibtex' ? bibtex(cited) : citationFile(cited);
    }
    default:
      return onCluster(context, sourceOf(content.entries), format, { of, size });
  }
}

function known(report: Report | null, edition: Source['edition']): Report {
  if (report !== null) return report;
  throw new Refusal(
    'conflict',
    edition === null
      ? 'The server evaluates this text now. Ask again when it is done.'
      : `The claims of edition ${String(edition.number)} are not sealed.`,
  );
}

async function onCluster(
  { quick }: FileContext,
  source: string,
  format: 'pauli-csv' | 'matrix-market' | 'openqasm',
  { of, size }: Pick<Writing, 'of' | 'size'>,
): Promise<string> {
  const what = format === 'openqasm' ? 'circuit' : 'model';
  const asked = { what, name: of, size } as const;
  const { cluster } = await quick.do({ kind: 'cluster', source, asked }).catch((error: unknown): never => {
    if (error instanceof EvaluationFailed) throw new Refusal('conflict', error.message);
    throw error;
  });
  if ('fault' in cluster) throw unusable(cluster.fault);
  if ('circuit' in cluster) return openQasm(cluster.circuit);
  if (format === 'pauli-csv') return pauliCsv(cluster.model);
  const written = matrixMarket(cluster.model);
  if ('fault' in written) throw unusable(written.fault);
  return written.text;
}

const unusable = (fault: string): Refusal => {
  const message = `${fault.charAt(0).toUpperCase()}${fault.slice(1)}`;
  return new Refusal('bad-input', message, { places: [{ path: 'query', message }] });
};

/** What an upload would become, with the problems that the engine finds in it. Stores nothing. */
export async function preview({ quick }: FileContext, upload: Body<'previewImport'>): Promise<Preview> {
  const read = readUpload(upload);
  if (read.faults.some((fault) => fault.severity === 'error')) return { ...read, problems: [] };
  const { text, lines } = joinEntries(read.entries);
  try {
    const { problems } = await quick.derive(text);
    return {
      ...read,
      problems: problems.slice(0, 200).map((problem) => {
        const place = placeOfLine(lines, problem.line);
        return { ...problem, line: place?.line ?? problem.line, entry: place?.entry ?? null };
      }),
    };
  } catch (error) {
    if (!(error instanceof EvaluationFailed)) throw error;
    // The file can be taken in all the same: what takes long is for the notebook's page to show.
    const caution = { line: 1, column: 1, message: error.message, severity: 'caution' as const };
    return { ...read, faults: [...read.faults, caution], problems: [] };
  }
}

/** The JSON Schema of the format `json`. */
export const jsonSchema = notebookJsonSchema;
