import type { Binder, Statement, Word } from '../../grammar/syntax.ts';
import { plainName, reserved } from '../../grammar/words.ts';
import type { Edit, Hover, TextPosition } from '../contracts/assist.ts';
import { newBudget } from '../limits.ts';
import { geometricWords } from './complete.ts';
import type { Program } from './evaluate.ts';
import { declaredWords } from './names.ts';
import { parseStatement } from './parse.ts';
import { say, whatIsIt, type Saying } from './problem.ts';
import { modelText } from './print-operator.ts';
import { helpOn } from './reference.ts';
import { layoutOf, type Layout } from './source.ts';
import type { Place } from './values.ts';
import { layoutAt, lineAt, wordAt } from './word-at.ts';

/** What an editor asks about a place in a source, as pure functions on a program; lines and columns count from 1. */
export { completions } from './complete.ts';
export { formatSource } from './print.ts';

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
    const geometric = (key === 'domain' || key === 'set' || key === 'cells') && geometricWords.has(first?.text ?? '');
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
function boundAt(
  one: Read,
  name: string,
  at: TextPosition,
): { readonly binder: Binder; readonly node: Node } | undefined {
  const offset = offsetOf(one.layout, at);
  return [...scopes(one.node)]
    .filter(
      ({ binder, node }) =>
        binder.variable.text === name && (node.start as number) <= offset && offset <= (node.end as number),
    )
    .at(-1);
}

const offsetOf = (layout: Layout, { line, column }: TextPosition): number => {
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
export function declaration(program: Program, at: TextPosition): Place | undefined {
  const { text } = wordAt(program.source, at);
  const name = plainName(text);
  const layout = layoutAt(program.source, at.line);
  const one = layout && read(layout);
  const bound = one && boundAt(one, name, at);
  if (one && bound) return placeOfWord(one, bound.binder.variable);
  return program.values.all.get(name)?.place;
}

/** What the word at a position is. */
export function hover(program: Program, at: TextPosition): Hover | undefined {
  const { text, place } = wordAt(program.source, at);
  if (text === '') return undefined;
  const name = plainName(text);
  const layout = layoutAt(program.source, at.line);
  const one = layout && read(layout);
  const bound = one && boundAt(one, name, at);
  if (bound && layout) {
    const { domain } = bound.binder;
    return { place, title: name, text: `A cell of ${layout.text.slice(domain.start, domain.end)}.`, name };
  }
  const line = lineAt(program.source, at.line);
  const suffix = line[place.column - 2] === '^' ? helpOn(`^${text}`, 'operator') : undefined;
  const topic = place.column === 1 ? 'statement' : undefined;
  const audit = /^audit\s+$/u.test(line.slice(0, place.column - 1)) ? helpOn(text, 'audit') : undefined;
  const value = topic || suffix || audit ? undefined : program.values.all.get(name);
  if (value) {
    const expands = value.what === 'model' && value.seams.length === 0 && value.place.line === at.line;
    const title = `${name}: ${whatIsIt[value.what] ?? value.what}`;
    return { place, title, text: value.text, name: value.name, ...(expands ? { expands } : {}) };
  }
  const help = suffix ?? audit ?? helpOn(text, topic) ?? helpOn(text);
  return help && { place, title: help.name, text: `${help.help}\n${help.example}` };
}

/** The edits that give the name at a position another name, all over the source; or why that cannot be. */
export function rename(program: Program, at: TextPosition, to: string): readonly Edit[] | Saying {
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

/** The edit that writes a model out term by term, in place of the statement that declares it at this position; its place spans lines. */
export function writeOut(program: Program, at: TextPosition): readonly Edit[] | Saying {
  const name = plainName(wordAt(program.source, at).text);
  const value = program.values.all.get(name);
  const layout = layoutAt(program.source, at.line);
  const own = value && layout && layout.line === value.place.line ? layout : undefined;
  const text = own && value?.what === 'model' ? modelText(value, program.values) : undefined;
  if (!own || text === undefined) return say.notWrittenOut(name);
  return [{ place: { line: own.line, column: 1, length: own.text.length }, text }];
}
