import { type FormEvent, useId, useState } from 'react';
import { Formula } from '../../components/formula.tsx';
import type { Explained } from './explained.ts';

/** What can be done with the name at the caret; each resolves to why it was not done, or null. */
export interface WordActs {
  /** Writes what the problem on the caret's line names as its fix. */
  readonly fix: () => void;
  readonly declared: () => void;
  readonly rename: (to: string) => Promise<string | null>;
  readonly writeOut: () => void;
  readonly layOut: () => void;
  readonly folds: (way: 'all' | 'none') => void;
}

interface Props {
  /** The name at the caret. */
  readonly at: Explained | undefined;
  /** The fix that the problem at the caret names. */
  readonly fix: string | undefined;
  readonly acts: () => WordActs | undefined;
}

/** Under the open source, like a footnote: what the name at the caret is, set in type, and what can be done with it. */
export function Word({ at, fix, acts }: Props) {
  const [renaming, setRenaming] = useState<string | null>(null);
  const name = at?.hover.name;
  const word = at?.hover.title.split(':')[0] ?? '';
  return (
    <div className="source-word">
      {at && (
        <p className="source-meaning" role="note" aria-label="The name at the caret">
          <span className="label">{at.hover.title}</span>
          {at.tex === undefined ? <span>{at.hover.text.split('\n')[0]}</span> : <Formula tex={at.tex} />}
        </p>
      )}
      {renaming !== null && renaming === word && name !== undefined ? (
        <Rename name={name} rename={async (to) => (await acts()?.rename(to)) ?? null} done={() => setRenaming(null)} />
      ) : (
        <p className="label source-acts">
          {fix !== undefined && (
            <button type="button" className="act" onClick={() => acts()?.fix()}>
              write “{fix}”
            </button>
          )}
          {name !== undefined && (
            <>
              <button type="button" className="act" onClick={() => acts()?.declared()}>
                where {word} is declared
              </button>
              <button type="button" className="act" onClick={() => setRenaming(word)}>
                rename {word}
              </button>
            </>
          )}
          {at?.hover.expands && (
            <button type="button" className="act" onClick={() => acts()?.writeOut()}>
              write {word} out term by term
            </button>
          )}
          <button type="button" className="act" onClick={() => acts()?.layOut()}>
            even layout
          </button>
          <button type="button" className="act" onClick={() => acts()?.folds('all')}>
            fold
          </button>
          <button type="button" className="act" onClick={() => acts()?.folds('none')}>
            unfold
          </button>
        </p>
      )}
    </div>
  );
}

interface RenameProps {
  readonly name: string;
  readonly rename: WordActs['rename'];
  readonly done: () => void;
}

function Rename({ name, rename, done }: RenameProps) {
  const [to, setTo] = useState(name);
  const [refused, setRefused] = useState<string | null>(null);
  const field = useId();
  const submit = async (event: FormEvent) => {
    event.preventDefault();
    const why = await rename(to.trim());
    setRefused(why);
    if (why === null) done();
  };
  return (
    <form
      className="source-acts"
      onSubmit={(event) => void submit(event)}
      onKeyDown={(event) => {
        if (event.key === 'Escape') done();
      }}
    >
      <label className="label" htmlFor={field}>
        New name of {name}
      </label>
      <input
        id={field}
        className="field code"
        autoFocus
        onFocus={(event) => event.target.select()}
        autoComplete="off"
        spellCheck={false}
        value={to}
        onChange={(event) => setTo(event.target.value)}
        aria-describedby={refused === null ? undefined : `${field}-refused`}
      />
      <button type="submit" className="act" disabled={to.trim() === '' || to.trim() === name}>
        rename everywhere
      </button>
      <button type="button" className="act" onClick={done}>
        leave it
      </button>
      {refused !== null && (
        <span role="alert" id={`${field}-refused`} className="ink-refuted">
          {refused}
        </span>
      )}
    </form>
  );
}
