import { memo, type ReactNode } from 'react';
import { Guard } from '../../components/faces.tsx';
import { Prose } from '../../components/prose.tsx';
import type { Slice } from '../../reading/slices.ts';
import { Declaration, Elsewhere, Setting } from './declarations.tsx';
import { Problems } from './problems.tsx';
import type { EntryRows, Row } from './row.ts';
import { titleOf } from './rows.ts';
import { Terms, type Open } from './terms.tsx';

export interface EntryText {
  readonly id: string;
  readonly kind: 'prose' | 'statements';
  readonly text: string;
}

export type ClaimsRow = Extract<Row, { what: 'claims' }>;

interface EntryProps {
  readonly entry: EntryText;
  readonly number: number;
  readonly slice: Slice | undefined;
  readonly rows: EntryRows | undefined;
  /** The source, while it is open here; what is set from it stands under it. */
  readonly source: ReactNode;
  readonly open: Open | undefined;
  readonly claims: (row: ClaimsRow) => ReactNode;
  /** Who else writes here. */
  readonly heldBy: string | undefined;
}

/** One numbered entry: its source when it is open, and what is set from it. */
export const Entry = memo(function Entry(props: EntryProps) {
  const { entry, number, slice, rows, source, open, claims, heldBy } = props;
  const cite = `(${String(number)})`;
  const writing = source !== null;
  return (
    <section
      className={`entry entry-${entry.kind}`}
      id={`entry-${String(number)}`}
      data-entry={entry.id}
      data-writing={writing || undefined}
      aria-label={`${String(number)}, ${titleOf(entry)}`}
      tabIndex={-1}
    >
      {heldBy !== undefined && <p className="label held-by">{heldBy} is writing here</p>}
      {source}
      <Guard what="This entry could not be set." until={rows ?? entry}>
        {entry.kind === 'prose' ? (
          <ProseRow entry={entry} cite={cite} open={open} />
        ) : (
          <StatementRows entry={entry} cite={cite} slice={slice} rows={rows?.rows ?? []} open={open} claims={claims} />
        )}
      </Guard>
      {!writing && slice && slice.problems.length > 0 && (
        <div className="pair">
          <span className="entry-number" />
          <div className="both-pages">
            <Problems entry={entry.id} text={slice.text} problems={slice.problems} open={open} />
          </div>
        </div>
      )}
    </section>
  );
});

interface ProseRowProps {
  readonly entry: EntryText;
  readonly cite: string;
  readonly open: Open | undefined;
}

function ProseRow({ entry, cite, open }: ProseRowProps) {
  const spot = { entry: entry.id, line: 0, column: 1 };
  const chooses = () => (document.getSelection()?.toString() ?? '') !== '';
  return (
    <div className="pair prose-row">
      <span className="entry-number">{cite}</span>
      <div
        className="both-pages"
        // A convenience for the pointer beside the button below: clicking the prose opens it, selecting from it does not.
        onClick={(event) => {
          const onLink = event.target instanceof Element && event.target.closest('a, button') !== null;
          if (open && !onLink && !chooses()) open(spot);
        }}
      >
        {entry.text.trim() === '' ? <p className="label">Nothing written yet.</p> : <Prose text={entry.text} />}
        {open && (
          <button type="button" className="act reveal" data-term="left" onClick={() => open(spot)}>
            write here<span className="aside-only">, entry {cite}</span>
          </button>
        )}
      </div>
    </div>
  );
}

interface StatementRowsProps {
  readonly entry: EntryText;
  readonly cite: string;
  readonly slice: Slice | undefined;
  readonly rows: readonly Row[];
  readonly open: Open | undefined;
  readonly claims: (row: ClaimsRow) => ReactNode;
}

function StatementRows({ entry, cite, slice, rows, open, claims }: StatementRowsProps) {
  if (rows.length === 0) return <AsTyped entry={entry} cite={cite} read={slice !== undefined} open={open} />;
  return (
    <>
      {rows.map((row, k) => {
        const number = k === 0 ? cite : '';
        if (row.what === 'terms') return <Terms key={row.key} row={row} number={number} open={open} />;
        const common = { number, entry: entry.id, open };
        if (row.what === 'setting') return <Setting key={row.key} row={row} {...common} />;
        if (row.what === 'elsewhere') return <Elsewhere key={row.key} row={row} {...common} />;
        if (row.what === 'declaration') return <Declaration key={row.key} row={row} {...common} />;
        return (
          <div key={row.key} className={`pair claims-row ${row.stale ? 'stale' : ''}`}>
            <span className="entry-number">{number}</span>
            <div className="both-pages">
              {claims(row)}
              {open && (
                <button
                  type="button"
                  className="act reveal"
                  data-term="left"
                  onClick={() => open({ entry: entry.id, line: row.line, column: 1 })}
                >
                  change this audit
                  <span className="aside-only">
                    , {row.audit}, entry {cite}
                  </span>
                </button>
              )}
            </div>
          </div>
        );
      })}
    </>
  );
}

/** Statements that set nothing of their own: comments, a broken first statement, or a model that stands beside its source. */
function AsTyped({ entry, cite, read, open }: Omit<ProseRowProps, 'entry'> & { entry: EntryText; read: boolean }) {
  const inside =
    entry.text.trim() === '' ? (
      <span className="label">No statement yet. A notebook begins with a lattice: lattice square torus 4 x 4</span>
    ) : (
      <span className="code as-typed">{entry.text}</span>
    );
  return (
    <div className="pair as-typed-row">
      <span className="entry-number">{cite}</span>
      <div className="both-pages" aria-busy={!read}>
        {open ? (
          <button
            type="button"
            className="term"
            data-term="left"
            aria-label={`source of entry ${cite}: ${entry.text.slice(0, 200) || 'empty'}`}
            onClick={() => open({ entry: entry.id, line: 0, column: 1 })}
          >
            {inside}
          </button>
        ) : (
          inside
        )}
      </div>
    </div>
  );
}
