import { useState } from 'react';

/** Puts a text on the clipboard; where the browser refuses, the text is shown to be copied by hand. */
export function Copy({ words, text }: { words: string; text: () => string }) {
  const [state, setState] = useState<'copied' | { readonly shown: string } | null>(null);
  const copy = async () => {
    const value = text();
    try {
      await navigator.clipboard.writeText(value);
      setState('copied');
    } catch {
      setState({ shown: value });
    }
  };
  return (
    <>
      <button type="button" className="act" onClick={() => void copy()}>
        {words}
      </button>
      <span role="status" className="label">
        {state === 'copied' && 'copied'}
      </span>
      {state !== null && state !== 'copied' && (
        <textarea
          className="field text-field code"
          aria-label={`Text for: ${words}`}
          readOnly
          autoFocus
          rows={4}
          value={state.shown}
          onFocus={(event) => event.target.select()}
        />
      )}
    </>
  );
}
