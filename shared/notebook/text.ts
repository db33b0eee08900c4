import type { EntryKind } from '../contracts/notebooks.ts';

/**
 * A notebook is its `.gw` text. Statements stand as they are; what the operator language does not know stands in comments
 * with a mark of their own, so that every parser of the language skips them:
 *
 *   #@ title Gauging a magnet     the title, and `#@ author NAME` once for each author, before the first entry
 *   #: A line of prose            prose, line by line
 *   #~                            a border between two entries of statements
 *
 * One blank line stands at each border and belongs to no entry. A line of statements that itself begins with such a mark
 * is written with a backslash after its `#` (and one more if it has some already).
 */

export interface PlainEntry {
  readonly kind: EntryKind;
  readonly text: string;
}

export interface NotebookText {
  readonly title: string | null;
  readonly authors: readonly string[];
  readonly entries: readonly PlainEntry[];
}

/** Lines of an entry in the whole text, from 1, both included. An entry of statements with no text has one empty line. */
export interface Lines {
  readonly first: number;
  readonly last: number;
}

export interface JoinedText {
  readonly text: string;
  /** The lines of each entry, in their order. */
  readonly lines: readonly Lines[];
}

const border = '#~';
const marked = /^#\\*[:~@]/;
const escaped = /^#\\+[:~@]/;

const proseLine = (line: string): string => (line === '' ? '#:' : `#: ${line}`);
const statementsLine = (line: string): string => (marked.test(line) ? `#\\${line.slice(1)}` : line);
const fromProseLine = (line: string): string => line.slice(line.startsWith('#: ') ? 3 : 2);
const fromStatementsLine = (line: string): string => (escaped.test(line) ? `#${line.slice(2)}` : line);
const isProse = (line: string): boolean => line.startsWith('#:');

/** Joins entries to one text, with their lines. Line ends are \n; the text ends with one unless there are no entries. */
export function joinEntries(entries: readonly PlainEntry[]): JoinedText {
  return joined([], entries);
}

/** The whole notebook as a `.gw` text, title and authors included. */
export function notebookToText(notebook: NotebookText): string {
  const head = notebook.title === null ? [] : [`#@ title ${notebook.title}`];
  return joined([...head, ...notebook.authors.map((author) => `#@ author ${author}`)], notebook.entries).text;
}

function joined(head: readonly string[], entries: readonly PlainEntry[]): JoinedText {
  const written: string[] = [...head];
  const lines: Lines[] = [];
  entries.forEach((entry, at) => {
    const before = entries[at - 1];
    if (before !== undefined || head.length > 0) written.push('');
    if (before?.kind === 'statements' && entry.kind === 'statements') written.push(border, '');
    const own = entry.text.split('\n').map(entry.kind === 'prose' ? proseLine : statementsLine);
    lines.push({ first: written.length + 1, last: written.length + own.length });
    for (const line of own) written.push(line);
  });
  return { text: written.length === 0 ? '' : `${written.join('\n')}\n`, lines };
}

/**
 * Cuts a text into title, authors and entries: the inverse of notebookToText and of joinEntries.
 * Of a text that was written by hand, only blank lines at borders are lost.
 */
export function notebookFromText(text: string): NotebookText {
  const { title, authors, rest } = cutHead(linesOf(text));
  const entries: PlainEntry[] = [];
  let start = 0;
  while (start < rest.length) {
    let end = start;
    const prose = isProse(rest[start] ?? '');
    while (end < rest.length && isProse(rest[end] ?? '') === prose) end += 1;
    const block = rest.slice(start, end);
    if (prose) entries.push({ kind: 'prose', text: block.map(fromProseLine).join('\n') });
    else entries.push(...statementsOf(block, start > 0, end < rest.length));
    start = end;
  }
  return { title, authors, entries };
}

function linesOf(text: string): readonly string[] {
  if (text === '') return [];
  const unix = text.replace(/^\uFEFF/, '').replace(/\r\n?/g, '\n');
  return (unix.endsWith('\n') ? unix.slice(0, -1) : unix).split('\n');
}

interface Cut {
  readonly title: string | null;
  readonly authors: readonly string[];
  readonly rest: readonly string[];
}

function cutHead(lines: readonly string[]): Cut {
  let length = 0;
  while (lines[length]?.startsWith('#@') === true) length += 1;
  const head = lines.slice(0, length);
  const values = (name: string): string[] =>
    head.filter((line) => line.startsWith(`#@ ${name} `)).map((line) => line.slice(name.length + 4).trim());
  // The blank line after the head belongs to it.
  const skip = length > 0 && lines[length] === '' ? length + 1 : length;
  return { title: values('title')[0] ?? null, authors: values('author'), rest: lines.slice(skip) };
}

/** The entries in lines between two runs of prose; `after`, `before` say whether prose stands above and below. */
function statementsOf(block: readonly string[], after: boolean, before: boolean): PlainEntry[] {
  const parts: string[][] = [[]];
  for (const line of block) {
    if (line === border) parts.push([]);
    else parts[parts.length - 1]?.push(line);
  }
  return parts.flatMap((part, at) => {
    const first = (after || at > 0) && part[0] === '' ? 1 : 0;
    const end = part.length > first && (before || at < parts.length - 1) && part.at(-1) === '' ? -1 : undefined;
    const own = part.slice(first, end);
    return own.length === 0 ? [] : [{ kind: 'statements' as const, text: own.map(fromStatementsLine).join('\n') }];
  });
}

/**
 * Reads a text that comes from anywhere: one with marks as notebookFromText does; one without (a plain operator-language
 * file) is divided into steps. There a run of comment lines that begins a paragraph becomes prose, and every further
 * paragraph whose first line stands in column 1 an entry of statements. Comments and statements all stay.
 */
export function readAnyText(text: string): NotebookText {
  const lines = linesOf(text);
  if (lines.some((line) => isProse(line) || line === border || line.startsWith('#@'))) return notebookFromText(text);
  const entries: PlainEntry[] = [];
  for (const paragraph of paragraphs(lines)) {
    const length = paragraph.findIndex((line) => !line.startsWith('#'));
    const comments = length === -1 ? paragraph : paragraph.slice(0, length);
    const statements = length === -1 ? [] : paragraph.slice(length);
    // Comments above an indented line stand inside a statement.
    const inside = statements[0]?.startsWith(' ') === true;
    if (comments.length > 0 && !inside) {
      entries.push({ kind: 'prose', text: comments.map((line) => line.replace(/^# ?/, '')).join('\n') });
    }
    const own = inside ? paragraph : statements;
    const last = entries.at(-1);
    if (own.length === 0) continue;
    if (/^\s/.test(statements[0] ?? '') && last?.kind === 'statements') {
      entries[entries.length - 1] = { kind: 'statements', text: `${last.text}\n\n${own.join('\n')}` };
    } else entries.push({ kind: 'statements', text: own.join('\n') });
  }
  return { title: null, authors: [], entries };
}

function paragraphs(lines: readonly string[]): string[][] {
  const found: string[][] = [[]];
  for (const line of lines) {
    if (line.trim() === '') found.push([]);
    else found[found.length - 1]?.push(line);
  }
  return found.filter((paragraph) => paragraph.length > 0);
}

/** The entry that a line of the joined text belongs to, and the line within it, both counted as JoinedText counts; null at a border. */
export function placeOfLine(
  lines: readonly Lines[],
  line: number,
): { readonly entry: number; readonly line: number } | null {
  const entry = lines.findIndex((span) => span.first <= line && line <= span.last);
  const span = lines[entry];
  return span === undefined ? null : { entry, line: line - span.first + 1 };
}
