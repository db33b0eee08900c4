import type { TextPlace, TextPosition } from '../contracts/assist.ts';
import { layoutOf, type Layout } from './source.ts';

const wordChars = /[A-Za-z0-9_\\\u0370-\u03ff]/u;

export const lineAt = (source: string, line: number): string => source.split(/\r\n|\n|\r/u)[line - 1] ?? '';

/** The word that touches a position; empty where none does. */
export function wordAt(
  source: string,
  { line, column }: TextPosition,
): { readonly text: string; readonly place: TextPlace } {
  const text = lineAt(source, line);
  let start = column - 1;
  let end = start;
  while (start > 0 && wordChars.test(text[start - 1] ?? '')) start--;
  while (end < text.length && wordChars.test(text[end] ?? '')) end++;
  return { text: text.slice(start, end), place: { line, column: start + 1, length: end - start } };
}

/** The statement that a line belongs to. */
export const layoutAt = (source: string, line: number): Layout | undefined =>
  layoutOf(source).statements.find((s) => s.line <= line && line < s.line + s.lines);
