import './margin.css';
import { useQuery } from '@tanstack/react-query';
import { type ReactNode, useEffect, useMemo, useRef, useState } from 'react';
import type { Remark as RemarkValue } from '../../../shared/contracts/reviews.ts';
import { remarksQuery } from '../../api/review-queries.ts';
import { Choice } from '../../components/parts.tsx';
import type { Slice } from '../../reading/slices.ts';
import { fate, heldBy, placeRemarks, type Show, walk } from './anchors.ts';
import { chosenIn, NewRemark } from './new-remark.tsx';
import { Remark } from './remark.tsx';

interface Given {
  readonly notebook: string;
  /** The edition that is read; left out: the working text. */
  readonly edition?: number;
  readonly entries: readonly { readonly id: string }[];
  readonly slices: readonly Slice[];
  readonly me: string | null;
  readonly may: boolean;
  /** Nothing is asked: the reader sees the page without its margin. */
  readonly off?: boolean;
}

/** The margin of a page: its head, what stands beside each entry, what has lost its entry, and going from remark to remark. */
export interface Margin {
  readonly head: ReactNode;
  readonly beside: (entry: string, number: number) => ReactNode;
  readonly gone: ReactNode;
  readonly open: number;
  readonly go: (way: 'next' | 'previous') => void;
  /** Begins a remark on an entry. */
  readonly begin: (entry: string) => void;
}

const shows = [
  ['open', 'open'],
  ['all', 'all'],
  ['none', 'none'],
] as const;

export function useMargin({ notebook, edition, entries, slices, me, may, off = false }: Given): Margin {
  const asked = useQuery({ ...remarksQuery(notebook, edition), enabled: !off });
  const [show, setShow] = useState<Show>('open');
  const [begun, setBegun] = useState<{ entry: string; quote: string } | null>(null);
  const [unfolded, setUnfolded] = useState<ReadonlySet<string>>(new Set());
  const at = useRef<string | null>(null);
  const remarks = asked.data?.items ?? none;
  const placed = useMemo(
    () =>
      placeRemarks(
        remarks,
        entries.map((entry) => entry.id),
        show,
      ),
    [remarks, entries, show],
  );
  const unfold = (entry: string) => setUnfolded((now) => new Set([...now, entry]));
  useNamedRemark(remarks, (remark) => {
    if (remark.state === 'settled') setShow('all');
    unfold(remark.subject.entry);
  });

  const go = (way: 'next' | 'previous') => {
    const to = walk(placed.order, at.current, way);
    if (!to) return;
    at.current = to.id;
    unfold(to.subject.entry);
    focusRemark(to.id);
  };
  const begin = (entry: string) => {
    setBegun({ entry, quote: chosenIn(entry) });
    unfold(entry);
  };
  const one = (remark: RemarkValue) => (
    <Remark
      key={remark.id}
      notebook={notebook}
      remark={remark}
      me={me}
      may={may}
      held={heldBy(remark.subject, slices)}
      fate={fate(remark, slices)}
    />
  );
  const open = remarks.filter((remark) => remark.state === 'open').length;
  const keys = (event: React.KeyboardEvent) => {
    const target = event.target instanceof HTMLElement ? event.target : null;
    if (!target?.matches('[data-remark]')) return;
    if (event.key !== 'ArrowDown' && event.key !== 'ArrowUp') return;
    event.preventDefault();
    at.current = target.dataset['remark'] ?? null;
    go(event.key === 'ArrowDown' ? 'next' : 'previous');
  };

  return {
    open,
    go,
    begin,
    head: (
      <div className="margin-head">
        <Choice label="Margin" value={show} options={shows} choose={setShow} />
        {asked.isError && (
          <p role="alert" className="ink-refuted">
            The remarks could not be fetched.{' '}
            <button type="button" className="act" onClick={() => void asked.refetch()}>
              try again
            </button>
          </p>
        )}
        {placed.order.length > 0 && (
          <p className="colophon-line">
            <button type="button" className="act" onClick={() => go('next')}>
              next<span className="aside-only"> remark</span>
            </button>
            <button type="button" className="act" onClick={() => go('previous')}>
              previous<span className="aside-only"> remark</span>
            </button>
            <span role="status">{open === 0 ? 'none is open' : `${String(open)} open`}</span>
          </p>
        )}
      </div>
    ),
    beside: (entry, number) => {
      const here = placed.beside.get(entry) ?? none;
      const writing = begun?.entry === entry;
      if (here.length === 0 && !may) return null;
      return (
        <div
          role="group"
          aria-label={`Margin of entry ${String(number)}`}
          data-unfolded={unfolded.has(entry) || undefined}
          className="margin-notes"
          onKeyDown={keys}
        >
          {here.length > 0 && (
            <button
              type="button"
              className="act margin-mark"
              aria-expanded={unfolded.has(entry)}
              onClick={() =>
                setUnfolded((now) => {
                  const next = new Set(now);
                  if (!next.delete(entry)) next.add(entry);
                  return next;
                })
              }
            >
              {here.length === 1 ? 'one remark' : `${String(here.length)} remarks`}
            </button>
          )}
          <div className="margin-folded">{here.map(one)}</div>
          {writing ? (
            <NewRemark
              notebook={notebook}
              edition={edition}
              entry={entry}
              slice={slices.find((slice) => slice.id === entry)}
              quote={begun.quote}
              done={() => setBegun(null)}
            />
          ) : (
            may && (
              <button
                type="button"
                className="act margin-begin"
                // Before the focus moves, so that words chosen in the entry are still chosen.
                onMouseDown={(event) => event.preventDefault()}
                onClick={() => begin(entry)}
              >
                remark<span className="aside-only"> on entry {number}</span>
              </button>
            )
          )}
        </div>
      );
    },
    gone:
      placed.gone.length === 0 ? null : (
        <section className="part measure" aria-label="Remarks whose entry is gone" onKeyDown={keys}>
          <h2 className="head">Remarks whose entry is gone</h2>
          {placed.gone.map(one)}
        </section>
      ),
  };
}

const none: readonly never[] = [];

function focusRemark(id: string): void {
  // After the fold that it may stand in was opened.
  requestAnimationFrame(() =>
    requestAnimationFrame(() => {
      const there = document.getElementById(`remark-${id}`);
      there?.scrollIntoView({ block: 'center' });
      there?.focus({ preventScroll: true });
    }),
  );
}

/** Goes to the remark that the address names (#remark-…), once, when it is there. */
function useNamedRemark(remarks: readonly RemarkValue[], found: (remark: RemarkValue) => void): void {
  const gone = useRef<string | null>(null);
  useEffect(() => {
    const named = /^#remark-(.+)$/.exec(location.hash)?.[1];
    const remark = remarks.find((one) => one.id === named);
    if (!remark || gone.current === remark.id) return;
    gone.current = remark.id;
    found(remark);
    focusRemark(remark.id);
  });
}
