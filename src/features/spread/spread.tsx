import './spread.css';
import { type ReactNode, useRef, useState } from 'react';
import type { Reading } from '../../reading/state.ts';
import { Entry, type ClaimsRow, type EntryText } from './entry.tsx';
import { moveBetweenTerms } from './keys.ts';
import type { EntryRows, Spot } from './row.ts';

/** What can be done with entries, where the reader may write. `before` null: at the end. */
export interface Edits {
  readonly open: (spot: Spot) => void;
  /** Absent where entries are fixed. */
  readonly insert?: (kind: 'prose' | 'statements', before: string | null) => void;
}

export type PageLanguage = 'spin' | 'gauge' | 'both';

interface SpreadProps {
  readonly entries: readonly EntryText[];
  readonly reading: Reading;
  readonly rows: readonly EntryRows[];
  /** The entry whose source is open, if any. */
  readonly writing: string | null;
  readonly source: (entry: EntryText) => ReactNode;
  readonly claims: (row: ClaimsRow) => ReactNode;
  readonly edits: Edits | undefined;
  readonly heldBy: ReadonlyMap<string, string>;
  /** What stands in the outer strip: at its head, and beside each entry. Absent where there is no margin. */
  readonly marginHead?: ReactNode;
  readonly beside?: ((entry: string, number: number) => ReactNode) | undefined;
}

/** The facing pages: spin language on the left, gauge language on the right, entry after entry. */
export function Spread(props: SpreadProps) {
  const { entries, reading, rows, writing, source, claims, edits, heldBy, marginHead, beside } = props;
  const [language, setLanguage] = useState<PageLanguage>('both');
  const pages = useRef<HTMLDivElement>(null);
  const slices = new Map(reading.slices.map((slice) => [slice.id, slice]));
  const set = new Map(rows.map((row) => [row.id, row]));
  return (
    <div
      className="spread"
      data-language={language}
      data-asked={reading.asked}
      data-answered={reading.answered}
      aria-busy={reading.asked > reading.answered}
      ref={pages}
      onKeyDown={(event) => {
        if (pages.current && moveBetweenTerms(pages.current, event)) event.preventDefault();
      }}
    >
      <div className="with-margin heads-row">
        <div className="pair page-heads">
          <span />
          <span className="head page-left">in spin language</span>
          <span className="head gutter">map</span>
          <span className="head page-right">in gauge language</span>
        </div>
        {marginHead}
      </div>
      <LanguageSwitch language={language} choose={setLanguage} />
      {entries.map((entry, k) => (
        <div key={entry.id} className="entry-frame with-margin">
          {edits?.insert && <InsertHere insert={edits.insert} before={entry.id} where={`before (${String(k + 1)})`} />}
          <Entry
            entry={entry}
            number={k + 1}
            slice={slices.get(entry.id)}
            rows={set.get(entry.id)}
            source={writing === entry.id ? source(entry) : null}
            open={edits && !heldBy.has(entry.id) ? edits.open : undefined}
            claims={claims}
            heldBy={heldBy.get(entry.id)}
          />
          {beside && <div className="entry-margin">{beside(entry.id, k + 1)}</div>}
        </div>
      ))}
      {edits?.insert && <InsertHere insert={edits.insert} before={null} where="at the end" last />}
    </div>
  );
}

/** Where there is room for one page only, which language it shows. */
function LanguageSwitch({ language, choose }: { language: PageLanguage; choose: (language: PageLanguage) => void }) {
  const all: readonly (readonly [PageLanguage, string])[] = [
    ['spin', 'spin'],
    ['gauge', 'gauge'],
    ['both', 'both in turn'],
  ];
  return (
    <fieldset className="language-switch label">
      <legend className="aside-only">Language of the page</legend>
      {all.map(([value, word]) => (
        <label key={value}>
          <input
            type="radio"
            name="page-language"
            value={value}
            checked={language === value}
            onChange={() => choose(value)}
          />
          {word}
        </label>
      ))}
    </fieldset>
  );
}

interface InsertProps {
  readonly insert: NonNullable<Edits['insert']>;
  readonly before: string | null;
  readonly where: string;
  readonly last?: true;
}

function InsertHere({ insert, before, where, last }: InsertProps) {
  return (
    <div className={last ? 'insert-here insert-last' : 'insert-here'}>
      <button type="button" className="act" onClick={() => insert('statements', before)}>
        add statements<span className="aside-only"> {where}</span>
      </button>
      <button type="button" className="act" onClick={() => insert('prose', before)}>
        add prose<span className="aside-only"> {where}</span>
      </button>
    </div>
  );
}
