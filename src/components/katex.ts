import katex from 'katex/dist/katex.mjs';
import { counted } from './turns.ts';
import type { KatexOptions, TrustContext } from 'katex';

/**
 * KaTeX as every formula of the client uses it; stands in for the package `katex` (alias in vite.config.ts), so that
 * `react-katex` gets it too. The engine's own macros \px, \py, \pz mark an operator X, Y, Z; they alone may set a class.
 */
const macros = {
  '\\px': '\\htmlClass{pauli-x}{#1}',
  '\\py': '\\htmlClass{pauli-y}{#1}',
  '\\pz': '\\htmlClass{pauli-z}{#1}',
};
const trust = (context: TrustContext): boolean =>
  context.command === '\\htmlClass' && /^pauli-[xyz]$/.test(context.class);

/** Set formulas by their TeX: a page of a hundred terms is set once, and a keystroke sets only what it changed. */
const kept = new Map<string, string>();
const most = 4000;

const keyOf = (tex: string, options: KatexOptions): string =>
  `${options.displayMode ? 'd' : 'i'}${options.throwOnError ? 't' : 'f'}${tex}`;

/** Whether a formula in a line of text is known already, so that setting it costs nothing. */
export const isSet = (tex: string): boolean => kept.has(keyOf(tex, { throwOnError: true }));

/** HTML with MathML beside it. Throws KaTeX's ParseError when `throwOnError` and the TeX is not well formed. */
export function renderToString(tex: string, options: KatexOptions = {}): string {
  const key = keyOf(tex, options);
  const known = kept.get(key);
  if (known !== undefined) return known;
  // A copy of the macros: \gdef in one formula must not reach the next.
  const html = counted(() =>
    katex.renderToString(tex, {
      ...options,
      macros: { ...macros },
      trust,
      strict: 'ignore',
      maxSize: 20,
      maxExpand: 500,
    }),
  );
  if (kept.size >= most) kept.clear();
  kept.set(key, html);
  return html;
}

export const ParseError = katex.ParseError;
export default { renderToString, ParseError };
