import type { Draft } from './drafts.ts';

/** Two texts of one entry, side by side, when someone else saved while this one was being written. Both are kept until chosen. */
export function TwoTexts({ draft, choose }: { draft: Draft; choose: (which: 'mine' | 'theirs') => void }) {
  const { theirs } = draft;
  const who = theirs?.changedBy?.name ?? 'someone else';
  return (
    <div role="alertdialog" aria-label="Two texts of this entry" className="two-texts">
      <div>
        <p className="label">yours, kept on this device</p>
        <pre className="code">{draft.text}</pre>
        {theirs ? (
          <button type="button" className="act" onClick={() => choose('mine')}>
            save yours over it
          </button>
        ) : (
          <p className="label">Copy what you need into another entry.</p>
        )}
      </div>
      <div>
        {theirs ? (
          <>
            <p className="label">saved meanwhile by {who}</p>
            <pre className="code">{theirs.text}</pre>
            <button type="button" className="act" onClick={() => choose('theirs')}>
              take this one
            </button>
          </>
        ) : (
          <>
            <p className="label">The entry was deleted meanwhile.</p>
            <button type="button" className="act" onClick={() => choose('theirs')}>
              let yours go
            </button>
          </>
        )}
      </div>
    </div>
  );
}
