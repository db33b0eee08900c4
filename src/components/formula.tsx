import 'katex/dist/katex.min.css';
import { memo, useEffect, useRef, useState } from 'react';
import { flushSync } from 'react-dom';
import { InlineMath } from 'react-katex';
import { isSet } from './katex.ts';
import { awaitTurn, hasRoom, setAll } from './turns.ts';

window.addEventListener('beforeprint', () => flushSync(setAll));

/**
 * A formula from TeX, set to the text around it, with MathML beside the drawn form.
 * `display` gives sums their limits above and below. TeX that KaTeX cannot read is shown as typed.
 * On a long page a formula waits for its turn (`turns.ts`); one that has been set is set again at once when it changes.
 */
export const Formula = memo(function Formula({ tex, display = false }: { tex: string; display?: boolean }) {
  const math = display ? `\\displaystyle ${tex}` : tex;
  const [due, setDue] = useState(() => hasRoom() || isSet(math));
  const place = useRef<HTMLSpanElement>(null);
  useEffect(() => {
    if (due || !place.current) return;
    return awaitTurn(place.current, () => setDue(true));
  }, [due]);
  if (!due)
    return (
      <span ref={place} className="unset" aria-hidden="true">
        {'\u2007'.repeat(Math.min(24, 2 + Math.ceil(tex.length / 6)))}
      </span>
    );
  return <InlineMath math={math} renderError={() => <span className="code">{tex}</span>} />;
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
