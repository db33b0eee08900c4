import { HighlightStyle, StreamLanguage, type StringStream, syntaxHighlighting } from '@codemirror/language';
import { Tag } from '@lezer/highlight';
import { reserved, statementKeywords } from '../../../grammar/words.ts';

/** How the operator language is inked while it is typed: X, Y, Z in their inks, keywords quiet, names in the text's ink. */

const tags = {
  x: Tag.define(),
  y: Tag.define(),
  z: Tag.define(),
  keyword: Tag.define(),
  number: Tag.define(),
  comment: Tag.define(),
};

const keywords: ReadonlySet<string> = new Set(statementKeywords);

interface Place {
  /** Whether the statement's keyword is still to come: at column 1. */
  readonly start: boolean;
}

function token(stream: StringStream): string | null {
  if (stream.eatSpace()) return null;
  if (stream.match(/^#.*/)) return 'comment';
  // An operator takes the ink of its letter, name and exponent together: s^x, σ^{z}.
  const operator = stream.match(
    /^\\?[A-Za-z_\u0370-\u03ff][\w\u0370-\u03ff]*\s*\^\s*\{?\s*([xyz])\s*\}?(?=\s*\[)/,
  ) as RegExpMatchArray | null;
  if (operator) return operator[1] ?? null;
  if (stream.match(/^\d+(\.\d+)?([eE][+-]?\d+)?i?/)) return 'number';
  const first = stream.sol();
  const word = stream.match(/^\\?[A-Za-z_\u0370-\u03ff][\w\u0370-\u03ff]*/) as RegExpMatchArray | null;
  if (word) return reserved.has(word[0]) || (first && keywords.has(word[0])) ? 'keyword' : null;
  stream.next();
  return null;
}

const language = StreamLanguage.define<Place>({
  name: 'operator language',
  startState: () => ({ start: true }),
  token: (stream) => token(stream),
  languageData: { commentTokens: { line: '#' } },
  tokenTable: tags,
});

const inks = HighlightStyle.define([
  { tag: tags.x, color: 'var(--x)' },
  { tag: tags.y, color: 'var(--y)' },
  { tag: tags.z, color: 'var(--z)' },
  { tag: tags.keyword, color: 'var(--quiet)' },
  { tag: tags.comment, color: 'var(--quiet)', fontStyle: 'italic' },
]);

export const operatorLanguage = [language, syntaxHighlighting(inks)];
