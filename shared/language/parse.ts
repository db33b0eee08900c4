import nearley from 'nearley';
import { lexer, tokensOf, type Reading, type Token } from '../../grammar/lexer.ts';
import compiled from '../../grammar/operator.grammar.ts';
import type { Statement } from '../../grammar/syntax.ts';
import { statementKeywords } from '../../grammar/words.ts';
import { limits, type Budget } from '../limits.ts';
import { explain, type Expected } from './parse-faults.ts';
import { say, type Fault } from './problem.ts';
import { isKeyword, type Layout } from './source.ts';

/** What one statement says, or the first thing that is wrong with its form. */
export type Parsed = { readonly node: Statement } | { readonly fault: Fault };

/** Words and signs of one statement. */
const mostTokens = 20_000;
/** Elementary steps that reading one token stands for. */
const tokenCost = 10;

const grammar = nearley.Grammar.fromCompiled(compiled);
const closing: Readonly<Record<string, string>> = { '(': ')', '[': ']', '{': '}' };

/** First fault of brackets or characters, found before parsing so that depth is bounded and the place is the right one. */
function scan(tokens: readonly Token[]): Fault | undefined {
  const open: Token[] = [];
  // words that nest without a bracket: `sum(…) sum(…) …`, `not not …`
  let nested = 0;
  const at = (token: Token): { start: number; end: number } => ({
    start: token.offset,
    end: token.offset + token.length,
  });
  for (const token of tokens) {
    if (token.type === 'error')
      return {
        ...(token.text.startsWith('\\') ? say.unknownTex(token.text) : say.character([...token.text][0] ?? '')),
        ...at(token),
      };
    if (/^(?:sum|prod|not|inverse)$/u.test(token.text) && ++nested > limits.nesting)
      return { ...say.tooDeep(), ...at(token) };
    if (token.type === 'rule' || /^[-+,]$/u.test(token.text)) nested = 0;
    if (token.type !== 'symbol') continue;
    if (closing[token.text] !== undefined) {
      open.push(token);
      if (open.length > limits.nesting) return { ...say.tooDeep(), ...at(token) };
    } else if (token.text === ')' || token.text === ']' || token.text === '}') {
      const last = open.pop();
      if (!last) return { ...say.strayClose(token.text), ...at(token) };
      const wanted = closing[last.text] ?? '';
      if (wanted !== token.text) return { ...say.wrongClose(last.text, token.text, wanted), ...at(token) };
    }
  }
  const last = open.pop();
  return last && { ...say.unclosed(last.text, closing[last.text] ?? ''), ...at(last) };
}

interface Column {
  readonly scannable: readonly { readonly rule: { readonly symbols: readonly unknown[] }; readonly dot: number }[];
}

/** What could have stood at a column of nearley's table: literals and types of tokens. */
function expectedAt(parser: nearley.Parser, column: number): Expected[] {
  const { table } = parser as unknown as { table: readonly Column[] };
  const symbols = (table[column]?.scannable ?? []).map((state) => state.rule.symbols[state.dot]);
  return symbols.filter((s): s is Expected => typeof s === 'object' && s !== null);
}

const readingOf = ({ keyword, rules }: Layout): Reading => ({
  sizes: keyword === 'lattice' || keyword === 'audit',
  plain: keyword === 'lattice',
  rules,
  most: mostTokens + 1,
});

/**
 * Parses one statement. Nested or repeated sums and products cost nearley nothing special, but depth of brackets does
 * cost the walks that follow, so it is bounded first. Spends from the budget; throws BudgetSpent only.
 */
export function parseStatement(layout: Layout, budget: Budget): Parsed {
  const { text, keyword } = layout;
  if (!isKeyword(keyword)) {
    const word = /^[A-Za-z_]+/u.exec(keyword)?.[0] ?? keyword.slice(0, 20);
    return { fault: { ...say.keyword(word, statementKeywords), start: 0, end: word.length } };
  }
  const tokens = tokensOf(text, readingOf(layout));
  const over = tokens[mostTokens];
  if (over) return { fault: { ...say.tooManyTokens(mostTokens), start: over.offset, end: over.offset + over.length } };
  const broken = scan(tokens);
  if (broken) return { fault: broken };
  budget.spend(tokens.length * tokenCost);
  const parser = new nearley.Parser(grammar, { lexer: lexer as unknown as nearley.Lexer });
  lexer.give(tokens);
  try {
    // The lexer hands out the tokens it was given; the text only tells nearley that there is something to read.
    parser.feed('.');
  } catch (error) {
    const token = (error as { token?: Token }).token;
    if (!token) throw error;
    const index = tokens.indexOf(token);
    return { fault: explain(layout, tokens, index, expectedAt(parser, index)) };
  }
  const node = parser.results[0] as Statement | undefined;
  if (!node) return { fault: explain(layout, tokens, tokens.length, expectedAt(parser, tokens.length)) };
  return { node };
}

/** Number of parses of a statement; anything but one is a fault of the grammar. For tests. */
export function countParses(layout: Layout): number {
  const parser = new nearley.Parser(grammar, { lexer: lexer as unknown as nearley.Lexer });
  lexer.give(tokensOf(layout.text, readingOf(layout)));
  parser.feed('.');
  return parser.results.length;
}
