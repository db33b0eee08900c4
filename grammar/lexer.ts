import moo from 'moo';
import { greekNames, pasted, plainName, reserved } from './words.ts';

/**
 * Tokens of one statement. `offset` counts characters from the statement's first; `text` is what the grammar compares
 * with its literals (pasted forms in their plain spelling), `value` the one spelling of a name.
 */
export interface Token {
  readonly type: string;
  readonly text: string;
  readonly value: string;
  readonly offset: number;
  /** Length as written. */
  readonly length: number;
}

/** Types of tokens. `call`: a word before `(`; `label`, `labelcall`: a number after a dot; `rule`: a body line begins. */
const types: ReadonlySet<string> = new Set([
  ...[
    'word',
    'call',
    'label',
    'labelcall',
    'number',
    'imaginary',
    'ket',
    'spin',
    'symbol',
    'reserved',
    'rule',
    'error',
  ],
]);

const raw = moo.compile({
  space: { match: /[ \t\r\n\u00a0\u2000-\u200b\u202f\u3000\ufeff]+/u, lineBreaks: true },
  comment: /#[^\n]*/u,
  ket: /\|[ \t]*[01]+[ \t]*[>⟩〉]/u,
  spin: /\^[ \t]*(?:\{[ \t]*[xyzn+\-−–][ \t]*\}|[xyzn+\-−–])(?=[ \t]*\[)/u,
  imaginary: /[0-9]+(?:\.[0-9]+)?i(?![A-Za-z0-9_])/u,
  number: /[0-9]+(?:\.[0-9]+)?(?:[eE][+\-−]?[0-9]+)?/u,
  word: /\\?[A-Za-z_\u0370-\u03ffµ][A-Za-z0-9_\u0370-\u03ffµ]*/u,
  symbol: /\.\.|…|=>|⇒|→|↦|==|!=|<=|>=|≤|≥|≠|--|[-+*/%^()[\]{},:.=<>~∼−–×·⋅∗]/u,
  error: moo.error,
});

/** How a statement is read: sizes such as `4x4` are taken apart in `sizes`; `plain` marks no calls. */
export interface Reading {
  readonly sizes: boolean;
  readonly plain: boolean;
  /** Offsets at which a body line begins, ascending. */
  readonly rules: readonly number[];
  /** Reading stops after this many tokens. */
  readonly most: number;
}

const typeOfWord = (token: moo.Token, next: moo.Token | undefined, plain: boolean): string => {
  if (reserved.has(token.text)) return 'reserved';
  if (token.text.startsWith('\\') && !greekNames.has(token.text.slice(1))) return 'error';
  return !plain && next?.text === '(' ? 'call' : 'word';
};

const spinLetter = (text: string): string => text.replace(/[\^{}\s]/gu, '').replace(/[−–]/u, '-');

/** Takes `x4x4` after a number apart: x, 4, x, 4. */
function* sizeParts(token: moo.Token): Generator<Token> {
  let offset = token.offset;
  for (const part of token.text.match(/x|[0-9]+/gu) ?? []) {
    const type = part === 'x' ? 'word' : 'number';
    yield { type, text: part, value: part, offset, length: part.length };
    offset += part.length;
  }
}

/** Tokens of a statement; white space and comments are left out. Characters of no token come as one of type `error`. */
export function tokensOf(text: string, reading: Reading): Token[] {
  raw.reset(text);
  const found: moo.Token[] = [];
  for (const token of raw) {
    if (token.type !== 'space' && token.type !== 'comment') found.push(token);
    if (found.length >= reading.most) break;
  }
  const out: Token[] = [];
  let rule = 0;
  found.forEach((token, k) => {
    const start = reading.rules[rule];
    if (start !== undefined && token.offset >= start) {
      rule++;
      out.push({ type: 'rule', text: '\n', value: '\n', offset: token.offset, length: 0 });
    }
    const before = found[k - 1];
    const after = found[k + 1];
    // a line of a body that begins with a bracket is no argument of the line before it
    const next = after && after.offset >= (reading.rules[rule] ?? Infinity) ? undefined : after;
    const glued = before?.type === 'number' && before.offset + before.text.length === token.offset;
    if (reading.sizes && glued && token.type === 'word' && /^(?:x[0-9]+)*x?$/u.test(token.text)) {
      out.push(...sizeParts(token));
      return;
    }
    let type = token.type ?? 'error';
    let spelled = token.text;
    if (type === 'word') type = typeOfWord(token, next, reading.plain);
    else if (type === 'number' && before?.text === '.')
      type = !reading.plain && next?.text === '(' ? 'labelcall' : 'label';
    else if (type === 'symbol') spelled = pasted.get(spelled) ?? spelled;
    else if (type === 'number') spelled = spelled.replace('−', '-');
    const value =
      type === 'spin' ? spinLetter(spelled) : type === 'ket' ? spelled.replace(/[^01]/gu, '') : plainName(spelled);
    const length = type === 'error' && token.type === 'error' ? 1 : token.text.length;
    out.push({ type, text: type === 'ket' ? 'ket' : spelled, value, offset: token.offset, length });
  });
  return out;
}

/** Feeds tokens that were made beforehand to nearley, which wants a lexer it can reset with its input. */
class Feed {
  private tokens: readonly Token[] = [];
  private at = 0;
  /** nearley's type says string; `tokens` is handed over through `give`. */
  reset(_data: string): void {
    this.at = 0;
  }
  give(tokens: readonly Token[]): void {
    this.tokens = tokens;
  }
  next(): Token | undefined {
    return this.tokens[this.at++];
  }
  save(): undefined {
    return undefined;
  }
  formatError(): string {
    return 'unexpected token';
  }
  has(type: string): boolean {
    return types.has(type);
  }
}

export const lexer = new Feed();
