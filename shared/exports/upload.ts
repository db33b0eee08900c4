import { bounds } from '../contracts/common.ts';
import { notebookFileSchema } from '../contracts/exchange.ts';
import type { Preview, uploadForms } from '../contracts/reviews.ts';
import { type PlainEntry, readAnyText } from '../notebook/text.ts';
import { jsonPlaces, lineOf } from './json-places.ts';
import { readPauliCsv } from './pauli-csv.ts';

type Form = (typeof uploadForms)[number];
type Upload = Omit<Preview, 'problems'>;
type Read = Pick<Upload, 'authors' | 'entries' | 'faults'> & { readonly title: string | null };

/** Which form a text has, by how it begins. */
export function formOf(source: string): Form {
  const first = source.replace(/^\uFEFF/, '').trimStart();
  if (first.startsWith('{')) return 'json';
  const line = first.split('\n').find((one) => one.trim() !== '' && !one.startsWith('#')) ?? '';
  const csv = /^"?(re|coefficient)"?\s*,/i.test(line) || /^[-+.\d]+(e[-+]?\d+)?\s*,/i.test(line);
  return csv ? 'pauli-csv' : 'gw';
}

/** Reads a file that is to become a notebook. Faults say line and column; nothing is thrown. */
export function readUpload({
  form,
  title,
  source,
}: {
  readonly form?: Form | undefined;
  readonly title?: string | undefined;
  readonly source: string;
}): Upload {
  const chosen = form ?? formOf(source);
  const read = readers[chosen](source);
  const own = cutTitle(read.title) ?? title ?? cutTitle(firstWords(read.entries)) ?? 'Imported notebook';
  return { ...read, form: chosen, title: own, faults: [...read.faults, ...tooLarge(read.entries)] };
}

const readers: Readonly<Record<Form, (source: string) => Read>> = {
  gw: (source) => {
    const { title, authors, entries } = readAnyText(source);
    return { title, authors: [...authors], entries: [...entries], faults: [] };
  },
  json: readJson,
  'pauli-csv': readPauliCsv,
};

function readJson(source: string): Read {
  const text = source.replace(/^\uFEFF/, '');
  const { places, fault } = jsonPlaces(text);
  const nothing = { title: null, authors: [], entries: [] };
  const at = (offset: number, message: string) => ({ ...lineOf(text, offset), message, severity: 'error' as const });
  if (fault !== null) return { ...nothing, faults: [at(fault.at, `This is no JSON: ${fault.message}.`)] };
  const parsed = notebookFileSchema.omit({ report: true, edition: true }).safeParse(JSON.parse(text));
  if (!parsed.success) {
    const faults = parsed.error.issues.map(({ path, message }) => {
      const where = path.map(String);
      // A name that is missing has no place; the value that should hold it has.
      while (where.length > 0 && !places.has(`/${where.join('/')}`)) where.pop();
      const offset = places.get(where.length === 0 ? '' : `/${where.join('/')}`) ?? 0;
      return at(offset, `${path.length === 0 ? 'The file' : path.map(String).join('.')}: ${message}`);
    });
    return { ...nothing, faults };
  }
  const { title, authors, entries } = parsed.data;
  return {
    title,
    authors,
    entries: entries.map(({ kind, text: own }) => ({ kind, text: own.replace(/\r\n?/g, '\n') })),
    faults: [],
  };
}

function tooLarge(entries: readonly PlainEntry[]): Upload['faults'] {
  const fault = (message: string): Upload['faults'] => [{ line: 1, column: 1, message, severity: 'error' }];
  if (entries.length > bounds.entries) return fault(`A notebook holds at most ${String(bounds.entries)} entries.`);
  const long = entries.findIndex((entry) => entry.text.length > bounds.entryCharacters);
  if (long === -1) return [];
  return fault(`Entry ${String(long + 1)} is longer than ${String(bounds.entryCharacters)} characters.`);
}

const firstWords = (entries: readonly PlainEntry[]): string | null =>
  entries
    .find((entry) => entry.kind === 'prose')
    ?.text.split('\n')
    .find((line) => line.trim() !== '')
    ?.replace(/^#+\s*/, '') ?? null;

function cutTitle(text: string | null): string | null {
  const line = text?.replace(/\s+/g, ' ').trim() ?? '';
  if (line === '') return null;
  const characters = Array.from(line);
  return characters.length <= 200 ? line : `${characters.slice(0, 199).join('')}…`;
}
