import 'katex/dist/katex.min.css';
import { memo } from 'react';
import { InlineMath } from 'react-katex';

/**
 * A formula from TeX, set to the text around it, with MathML beside the drawn form.
 * `display` gives sums their limits above and below. TeX that KaTeX cannot read is shown as typed.
 */
export const Formula = memo(function Formula({ tex, display = false }: { tex: string; display?: boolean }) {
  return (
    <InlineMath
      math={display ? `\\displaystyle ${tex}` : tex}
      renderError={() => <span className="code">{tex}</span>}
    />
  );
});

/** One run of a sentence: words, or the TeX between two dollar signs. */
export type Run = { readonly math: boolean; readonly text: string };

/** Cuts a sentence at its $…$; a dollar sign without a partner, or behind a backslash, stays a dollar sign. */
export function runsOf(sentence: string): readonly Run[] {
  const runs: Run[] = [];
  const add = (math: boolean, text: string) => {
    if (text !== '') runs.push({ math, text: math ? text : text.replace(/\\\$/g, '$') });
  };
  let from = 0;
  for (const match of sentence.matchAll(/(?<!\\)\$((?:\\.|[^$\\])+?)\$/g)) {
    add(false, sentence.slice(from, match.index));
    add(true, match[1] ?? '');
    from = match.index + match[0].length;
  }
  add(false, sentence.slice(from));
  return runs;
}

/** A sentence in which $…$ is mathematics. */
export function Sentence({ text }: { text: string }) {
  return (
    <>
      {runsOf(text).map((run, k) => (run.math ? <Formula key={k} tex={run.text} /> : <span key={k}>{run.text}</span>))}
    </>
  );
}
