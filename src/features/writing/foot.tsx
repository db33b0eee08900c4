import type { Draft } from './drafts.ts';
import { TwoTexts } from './two-texts.tsx';

export interface EntryActs {
  readonly move: (way: 'up' | 'down') => void;
  readonly remove: () => void;
  readonly insertAfter: (kind: 'prose' | 'statements') => void;
}

interface Props {
  readonly draft: Draft | undefined;
  readonly choose: (which: 'mine' | 'theirs') => void;
  readonly acts: EntryActs | undefined;
  readonly first: boolean;
  readonly last: boolean;
}

/** Under the open source: how its saving stands, where something is to be decided, and what can be done with the entry. */
export function SourceFoot({ draft, choose, acts, first, last }: Props) {
  return (
    <>
      {draft?.state === 'changed' && <TwoTexts draft={draft} choose={choose} />}
      {draft?.state === 'refused' && (
        <p role="alert" className="source-foot ink-refuted">
          Not saved: {draft.why}
        </p>
      )}
      {acts && (
        <p className="source-foot label">
          <button type="button" className="act" disabled={first} onClick={() => acts.move('up')}>
            move up
          </button>
          <button type="button" className="act" disabled={last} onClick={() => acts.move('down')}>
            move down
          </button>
          <button type="button" className="act" onClick={() => acts.insertAfter('statements')}>
            statements below
          </button>
          <button type="button" className="act" onClick={() => acts.insertAfter('prose')}>
            prose below
          </button>
          <button type="button" className="act" onClick={acts.remove}>
            delete
          </button>
          <span>Escape closes the source</span>
        </p>
      )}
    </>
  );
}
