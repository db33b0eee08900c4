import { useState } from 'react';
import type { EntryRows } from './row.ts';
import { titleOf } from './rows.ts';
import type { EntryText } from './entry.tsx';

/** The outer strip on the left: entries by number. Only what does not hold is named as such, in words. */
export function Contents({ entries, rows }: { entries: readonly EntryText[]; rows: readonly EntryRows[] }) {
  const fails = new Map(rows.map((row) => [row.id, row.fails]));
  // Where the strip stands above the pages it begins folded.
  const [unfolded, setUnfolded] = useState(() => globalThis.matchMedia('(min-width: 1180px)').matches);
  return (
    <nav aria-label="Contents" className="contents">
      <h2>
        <button type="button" className="head fold" aria-expanded={unfolded} onClick={() => setUnfolded(!unfolded)}>
          Contents
        </button>
      </h2>
      <ol hidden={!unfolded}>
        {entries.map((entry, k) => {
          const said = fails.get(entry.id);
          return (
            <li key={entry.id}>
              <a href={`#entry-${String(k + 1)}`} className={said ? 'ink-refuted' : undefined}>
                <span className="contents-number">{k + 1}</span>
                <span>
                  {titleOf(entry)}
                  {said && <em className="contents-word">{said === 'refuted' ? 'does not hold' : 'cannot be read'}</em>}
                </span>
              </a>
            </li>
          );
        })}
      </ol>
    </nav>
  );
}
