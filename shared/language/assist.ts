import type { Binder, Statement, Word } from '../../grammar/syntax.ts';
import { plainName, reserved } from '../../grammar/words.ts';
import { cellKinds } from '../lattice/cells.ts';
import { geometryTable } from '../lattice/geometry.ts';
import { newBudget } from '../limits.ts';
import type { Program } from './evaluate.ts';
import { declaredWords } from './names.ts';
import { parseStatement } from './parse.ts';
import { say, whatIsIt, type Saying } from './problem.ts';
import { helpOn, reference, type HelpRecord } from './reference.ts';
import { layoutOf, type Layout } from './source.ts';
import type { Place } from './values.ts';

/** What an editor asks about a place in a source, as pure functions on a program; lines and columns count from 1. */
export interface Position {
  readonly line: number;
  readonly column: number;
}

export interface Completion {
  readonly label: string;
  /** What it is, in words. */
  readonly detail: string;
  readonly help: string;
}
export interface Completions {
  /** The word that a completion replaces. */
  readonly replace: Place;
  readonly options: readonly Completion[];
}
export interface Hover {
  readonly place: Place;
  readonly title: string;
  readonly text: string;
}
export interface Edit {
  readonly place: Place;
  readonly text: string;
}

const wordChars = /[A-Za-z0-9_\\\u0370-\u03ff]/u;

/** The word that touches a position, if one does. */
function wordAt(source: string, { line, column }: Position): { readonly text: string; readonly place: Place } {
  const text = source.split(/\r\n|\n|\r/u)[line - 1] ?? '';
  let start = column - 1;
  let end = start;
  while (start > 0 && wordChars.test(text[start - 1] ?? '')) start--;
  while (end < text.length && wordChars.test(text[end] ?? '')) end++;
  return { text: text.slice(start, end), place: { line, column: start + 1, length: end - start } };
}

const layoutAt = (source: string, line: number): Layout | undefined =>
  layoutOf(source).statements.find((s) => s.line <= line && line < s.line + s.lines);

interface Read {
  readonly layout: Layout;
  readonly node: Statement;
}

function read(layout: Layout): Read | undefined {
  const parsed = parseStatement(layout, newBudget());
  return 'node' in parsed ? { layout, node: parsed.node } : undefined;
}

const placeOfWord = ({ layout }: Read, word: { readonly start: number; readonly end: number }): Place => {
  const before = layout.text.slice(0, word.start);
  return {
    line: layout.line + before.split('\n').length - 1,
    column: word.start - before.lastIndexOf('\n'),
    length: word.end - word.start,
  };
};

// ------------------------------------------------------------------ words of a statement that are names

/** Keys of nodes whose words are no names: families, gates, labels of cells, bound variables. */
const noNames = new Set(['family', 'boundary', 'gate', 'audit', 'variable', 'label', 'type', 'lines']);
const setWords: ReadonlySet<string> = new Set([...cellKinds, ...geometryTable.map((f) => f.name)]);
type Node = Readonly<Record<string, unknown>>;
const isNode = (value: unknown): value is Node => typeof value === 'object' && value !== null;
const isWord = (value: unknown): value is Word => isNode(value) && typeof value.text === 'string' && !('type' in value);

/** Every word of a node that may be a declared or bound name; in the position of a set, geometric words are none. */
function* names(value: unknown, key = ''): Generator<Word> {
  if (Array.isArray(value)) {
    for (const one of value) yield* names(one, key);
    return;
  }
  if (!isNode(value) || noNames.has(key)) return;
  if (isWord(value)) {
    yield value;
    return;
  }
  if (Array.isArray(value.words)) {
    const first = value.words[0] as Word | undefined;
    const geometric = (key === 'domain' || key === 'set' || key === 'cells') && setWords.has(first?.text ?? '');
    if (first && !geometric) yield first;
    return;
  }
  for (const [inner, part] of Object.entries(value)) {
    // a call or name that stands as a set hands that position on to its path
    const position = inner === 'path' && (key === 'domain' || key === 'set') ? key : inner;
    yield* names(part, position);
  }
}

/** Binders of a node with the node in which their variable is known. */
function* scopes(value: unknown): Generator<{ readonly binder: Binder; readonly node: Node }> {
  if (Array.isArray(value)) {
    for (const one of value) yield* scopes(one);
    return;
  }
  if (!isNode(value)) return;
  const own = [
    ...((value.binders as readonly Binder[] | undefined) ?? []),
    ...(isNode(value.binder) ? [value.binder as unknown as Binder] : []),
  ];
  const head = value.head as { readonly parameter?: Binder } | undefined;
  for (const binder of [...own, ...(head?.parameter ? [head.parameter] : [])]) yield { binder, node: value };
  for (const part of Object.values(value)) yield* scopes(part);
}

/** The binder of a variable that a position stands in, innermost. */
function boundAt(one: Read, name: string, at: Position): { readonly binder: Binder; readonly node: Node } | undefined {
  const offset = offsetOf(one.layout, at);
  return [...scopes(one.node)]
    .filter(
      ({ binder, node }) =>
        binder.variable.text === name && (node.start as number) <= offset && offset <= (node.end as number),
    )
    .at(-1);
}

const offsetOf = (layout: Layout, { line, column }: Position): number => {
  const before = layout.text.split('\n').slice(0, line - layout.line);
  return before.reduce((n, text) => n + text.length + 1, 0) + column - 1;
};

/** All words that stand for one bound variable. */
const uses = ({ binder, node }: { readonly binder: Binder; readonly node: Node }): Word[] => {
  const found = [binder.variable, ...[...names(node)].filter((w) => w.text === binder.variable.text)];
  return [...new Map(found.map((w) => [w.start, w])).values()].sort((a, b) => a.start - b.start);
};

// ------------------------------------------------------------------ the four questions

/** Where the name at a position is declared or bound; undefined where it is no such name. */
export function declaration(program: Program, at: Position): Place | undefined {
  const { text } = wordAt(program.source, at);
  const name = plainName(text);
  const layout = layoutAt(program.source, at.line);
  const one = layout && read(layout);
  const bound = one && boundAt(one, name, at);
  if (one && bound) return placeOfWord(one, bound.binder.variable);
  return program.values.all.get(name)?.place;
}

/** What the word at a position is. */
export function hover(program: Program, at: Position): Hover | undefined {
  const { text, place } = wordAt(program.source, at);
  if (text === '') return undefined;
  const name = plainName(text);
  const layout = layoutAt(program.source, at.line);
  const one = layout && read(layout);
  const bound = one && boundAt(one, name, at);
  if (bound && layout) {
    const { domain } = bound.binder;
    return { place, title: name, text: `A cell of ${layout.text.slice(domain.start, domain.end)}.` };
  }
  const line = program.source.split(/\r\n|\n|\r/u)[at.line - 1] ?? '';
  const suffix = line[place.column - 2] === '^' ? helpOn(`^${text}`, 'operator') : undefined;
  const topic = place.column === 1 ? 'statement' : undefined;
  const audit = /^audit\s+$/u.test(line.slice(0, place.column - 1)) ? helpOn(text, 'audit') : undefined;
  const value = topic || suffix || audit ? undefined : program.values.all.get(name);
  if (value) return { place, title: `${name}: ${whatIsIt[value.what] ?? value.what}`, text: value.text };
  const help = suffix ?? audit ?? helpOn(text, topic) ?? helpOn(text);
  return help && { place, title: help.name, text: `${help.help}\n${help.example}` };
}

const asCompletion = (r: HelpRecord): Completion => ({ label: r.name, detail: r.topic, help: r.help });
const ofTopic = (...topics: readonly HelpRecord['topic'][]): Completion[] =>
  reference.filter((r) => topics.includes(r.topic)).map(asCompletion);

/** Declared names before a line. */
const declared = (program: Program, line: number): Completion[] =>
  [...program.values.all.values()]
    .filter((v) => v.place.line < line)
    .map((v) => ({ label: v.name, detail: whatIsIt[v.what] ?? v.what, help: v.text }));

function optionsAt(program: Program, at: Position, before: string): Completion[] {
  if (/^\S*$/u.test(before)) return ofTopic('statement');
  if (/\^$/u.test(before)) return ofTopic('operator').map((c) => ({ ...c, label: c.label.slice(1) }));
  if (/^audit\s+$/u.test(before)) return ofTopic('audit');
  if (/^lattice\s+$/u.test(before)) return ofTopic('lattice');
  if (/(?::|\bon|\bin)\s*$/u.test(before) && !/^audit/u.test(before)) return ofTopic('cells', 'geometry');
  // the statement may be half written: its bound variables are read off its text
  const text = layoutAt(program.source, at.line)?.text ?? before;
  const bound = [...text.matchAll(/([A-Za-z_]\w*)\s*:/gu)].map((m) => ({
    label: m[1] ?? '',
    detail: 'a bound cell',
    help: '',
  }));
  const own = /^audit/u.test(text) ? [] : ofTopic('expression', 'geometry', 'cells');
  return [...bound, ...declared(program, at.line), ...own];
}

/** What may stand at a position, beginning with what is written of it already; in order of use: bound cells, names, words. */
export function completions(program: Program, at: Position): Completions {
  const line = program.source.split(/\r\n|\n|\r/u)[at.line - 1] ?? '';
  const whole = wordAt(program.source, at);
  const replace = { ...whole.place, length: at.column - whole.place.column };
  const typed = line.slice(replace.column - 1, at.column - 1);
  const options = optionsAt(program, at, line.slice(0, replace.column - 1)).filter((c) =>
    c.label.toLowerCase().startsWith(typed.toLowerCase()),
  );
  return { replace, options: [...new Map(options.map((c) => [c.label, c])).values()] };
}

/** The edits that give the name at a position another name, all over the source; or why that cannot be. */
export function rename(program: Program, at: Position, to: string): readonly Edit[] | Saying {
  const name = plainName(wordAt(program.source, at).text);
  const wanted = plainName(to);
  if (!/^[A-Za-z_]\w*$/u.test(wanted)) return say.character(to);
  if (reserved.has(wanted)) return say.reservedName(wanted);
  const other = program.values.all.get(wanted);
  if (other && wanted !== name) return say.twice(wanted, other.place.line);
  const all = layoutOf(program.source).statements.flatMap((layout) => {
    const one = read(layout);
    return one ? [one] : [];
  });
  const here = all.find(({ layout: l }) => l.line <= at.line && at.line < l.line + l.lines);
  const bound = here && boundAt(here, name, at);
  if (here && bound) {
    const clash = [...scopes(here.node)].some((s) => s.binder.variable.text === wanted);
    if (clash && wanted !== name) return say.rebound(wanted);
    return uses(bound).map((w) => ({ place: placeOfWord(here, w), text: to }));
  }
  if (!program.values.all.has(name)) return say.unknownName(name, undefined);
  const hidden = all.find((one) => [...scopes(one.node)].some((s) => s.binder.variable.text === wanted));
  if (hidden) return say.hides(wanted);
  return all.flatMap((one) => {
    const found = [...declaredWords(one.node), ...names(one.node)].filter((w) => w.text === name);
    const once = [...new Map(found.map((w) => [w.start, w])).values()].sort((a, b) => a.start - b.start);
    return once.map((w) => ({ place: placeOfWord(one, w), text: to }));
  });
}
