import type { Token } from '../../grammar/lexer.ts';
import { say, type Fault, type Saying } from './problem.ts';
import type { Layout } from './source.ts';

/** A terminal of the compiled grammar. */
export interface Expected {
  readonly literal?: string;
  readonly type?: string;
}

const inWords: Readonly<Record<string, string>> = {
  word: 'a name',
  call: 'a name',
  label: 'a number',
  labelcall: 'a number',
  number: 'a number',
  imaginary: 'a number',
  ket: 'a ket such as |01>',
  rule: 'an indented line',
  spin: '^x, ^y or ^z with its cell',
};
/** Said only where nothing plainer is expected. */
const dull = new Set(['+', '-', '*', '/', '%', '^', '.', 'sum', 'prod', 'sqrt', '{', '}', 'hc']);

/** What was expected, in words, plainest first, at most six. */
function words(expected: readonly Expected[]): string[] {
  const all = new Set<string>();
  for (const { literal, type } of expected) {
    if (literal !== undefined && !dull.has(literal)) all.add(`"${literal}"`);
    else if (type !== undefined && type !== 'spin' && inWords[type] !== undefined) all.add(inWords[type]);
  }
  const found = [...all];
  return found.length > 6 ? found.filter((w) => w.startsWith('a ')) : found;
}

const comparisons = new Set(['==', '!=', '<', '<=', '>', '>=', '=']);
const takes = (expected: readonly Expected[], ...texts: readonly string[]): boolean =>
  expected.some((e) => e.literal !== undefined && texts.includes(e.literal));
const takesName = (expected: readonly Expected[]): boolean => expected.some((e) => e.type === 'word');

/** Whether a token stands inside the bracket of a `where`. */
function inCondition(tokens: readonly Token[], index: number): boolean {
  for (let k = index - 1, depth = 0; k >= 0; k--) {
    const text = tokens[k]?.text;
    if (text === ')' || text === ']') depth++;
    else if (text === '(' || text === '[') depth--;
    else if (text === 'where' && depth <= 0) return true;
    else if (text === ',' && depth === 0) return false;
  }
  return false;
}

/** The likeliest mistake behind a token that does not fit. */
function likely(layout: Layout, tokens: readonly Token[], index: number, expected: readonly Expected[]): Saying {
  const token = tokens[index] as Token;
  const before = tokens[index - 1];
  const named = token.type === 'rule' ? 'The end of the line' : `"${token.text}"`;
  if (before?.text === '^' && /^(?:word|call)$/u.test(token.type)) {
    const species = tokens[index - 2]?.value ?? 's';
    if (/^[xyzn]$/u.test(token.text)) return say.spinWithoutCell(species, token.text);
    return tokens[index + 1]?.text === '[' ? say.noSpinOperator(species, token.text) : say.exponentForm();
  }
  if (before?.text === '^' && /^[+-]$/u.test(token.text))
    return say.spinWithoutCell(tokens[index - 2]?.value ?? 's', token.text);
  if (/^[+-]$/u.test(before?.text ?? '') && tokens[index - 2]?.text === '^')
    return say.spinWithoutCell(tokens[index - 3]?.value ?? 's', before?.text ?? '+');
  if (token.text === 'hc') return say.strayHc();
  if (before?.text === 'hc') return say.strayHc();
  if (token.text === '=' && inCondition(tokens, index) && takes(expected, '==')) return say.equality();
  if (comparisons.has(token.text) && inCondition(tokens, index) && !takes(expected, '==')) return say.chained();
  if (token.text === '.' && (tokens[index + 1]?.type === 'label' || before?.type === 'number')) return say.decimal();
  if (token.text === '..' && before?.type === 'number' && layout.keyword !== 'audit') return say.decimal();
  if (/^[+-]$/u.test(token.text) && before && !takes(expected, '+'))
    return before.text === ')' ? say.emptySum('sum or product') : say.straySign(token.text);
  if (token.type === 'reserved' && takesName(expected) && !takes(expected, '*')) return say.reservedName(token.text);
  if (layout.keyword === 'audit' && token.type === 'call') return say.auditName();
  if (layout.keyword === 'map' && token.type === 'rule' && index > 2 && !takes(expected, 'from')) {
    const rest = words(expected);
    return say.expected(named, rest, rest.includes('"=>"') ? 'Each line reads LEFT => RIGHT for c: CELLS.' : '');
  }
  return say.expected(named, words(expected));
}

/** Why a statement does not parse: at token `index`, or at its end. */
export function explain(layout: Layout, tokens: readonly Token[], index: number, expected: readonly Expected[]): Fault {
  const token = tokens[index];
  if (token) {
    const length = token.type === 'rule' ? 1 : token.length;
    const place = { start: token.offset, end: token.offset + length };
    return { ...likely(layout, tokens, index, expected), ...place };
  }
  const last = tokens.at(-1);
  const end = last ? last.offset + last.length : layout.text.length;
  const place = { start: end, end: end + 1 };
  if (/^[xyzn]$/u.test(last?.text ?? '') && tokens.at(-2)?.text === '^')
    return { ...say.spinWithoutCell(tokens.at(-3)?.value ?? 's', last?.text ?? 'x'), ...place };
  if (/^[+-]$/u.test(last?.text ?? '') && tokens.at(-2)?.text === '^')
    return { ...say.spinWithoutCell(tokens.at(-3)?.value ?? 's', last?.text ?? '+'), ...place };
  if (
    expected.length > 0 &&
    expected.every((e) => e.type === 'rule' || e.literal !== undefined) &&
    expected.some((e) => e.type === 'rule')
  )
    return { ...say.missingBody(`This ${layout.keyword}`), ...place };
  if (layout.keyword === 'map' && takes(expected, 'then') && tokens.length <= 4) return { ...say.aliasMap(), ...place };
  return { ...say.unfinished(layout.keyword, words(expected)), ...place };
}
