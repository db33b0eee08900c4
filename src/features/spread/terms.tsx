import { memo } from 'react';
import { Formula } from '../../components/formula.tsx';
import { GradeMark, PauliMark } from '../../components/marks.tsx';
import type { Held } from '../../hand/hand.ts';
import { leave, take, togglePin } from '../../hand/hand.ts';
import { useAnswers, useHandStore } from '../../hand/useHand.ts';
import type { Head, Pair, Row, Spot, Term } from './row.ts';

type TermsRow = Extract<Row, { what: 'terms' }>;

/** Opens the source at a spot. Absent where nothing can be written: then a click pins the term. */
export type Open = (spot: Spot) => void;

/** A model and, facing it, its image: one line for each pair of terms, on common baselines. */
export const Terms = memo(function Terms({
  row,
  number,
  open,
}: {
  row: TermsRow;
  number: string;
  open: Open | undefined;
}) {
  const names = [row.left?.name, row.right?.name].filter((name) => name !== undefined);
  const label = names.length === 2 ? `Model ${names[0] ?? ''} facing ${names[1] ?? ''}` : `Model ${names[0] ?? ''}`;
  return (
    <div className={row.stale ? 'stale' : undefined} role="group" aria-label={label}>
      {row.pairs.length === 0 && <NoTerms row={row} number={number} />}
      {row.pairs.map((pair, k) => (
        <PairLine
          key={`${pair.left?.ref ?? ''}|${pair.right?.ref ?? ''}`}
          pair={pair}
          first={k === 0}
          number={k === 0 ? number : ''}
          left={row.left}
          right={row.right}
          map={row.map}
          open={open}
        />
      ))}
      {(row.left?.note ?? row.right?.note) && <p className="label spread-note">{row.left?.note ?? row.right?.note}</p>}
    </div>
  );
});

function NoTerms({ row, number }: { row: TermsRow; number: string }) {
  return (
    <div className="pair">
      <span className="entry-number">{number}</span>
      <div className={row.left ? 'page-left' : 'page-right'}>
        <Formula tex={`${(row.left ?? row.right)?.tex ?? ''} = 0`} />
      </div>
    </div>
  );
}

interface PairLineProps {
  readonly pair: Pair;
  readonly first: boolean;
  readonly number: string;
  readonly left: Head | null;
  readonly right: Head | null;
  readonly map: string | null;
  readonly open: Open | undefined;
}

const PairLine = memo(function PairLine({ pair, first, number, left, right, map, open }: PairLineProps) {
  const held: Held = { left: pair.left?.ref ?? null, right: pair.right?.ref ?? null };
  const answers = useAnswers(held);
  return (
    <div className="pair" data-answers={answers || undefined} data-alone={pair.left && pair.right ? undefined : true}>
      <span className="entry-number">{number}</span>
      <div className="page-left">
        {left && pair.left && (
          <PageTerm head={left} term={pair.left} first={first} held={held} side="left" open={open} />
        )}
      </div>
      <div className="gutter">
        {pair.mark ? (
          <span title={pair.mark.words}>
            <GradeMark grade={pair.mark.grade} label={pair.mark.words} size="0.7em" />
          </span>
        ) : (
          map !== null &&
          pair.left &&
          pair.right && (
            <span className="quiet-ink" aria-label={`taken over by ${map}, not audited`} role="img">
              ↦
            </span>
          )
        )}
      </div>
      <div className="page-right">
        {right && pair.right && (
          <PageTerm head={right} term={pair.right} first={first} held={held} side="right" open={open} />
        )}
      </div>
      <Kind term={pair.right ?? pair.left} />
    </div>
  );
});

function Kind({ term }: { term: Term | null }) {
  if (!term) return <span className="kind" />;
  return (
    <span className="kind label">
      {term.kind === 'other' ? '' : term.kind}
      <span className="kind-marks">
        {term.paulis.map((pauli) => (
          <PauliMark key={pauli} pauli={pauli} />
        ))}
      </span>
    </span>
  );
}

interface PageTermProps {
  readonly head: Head;
  readonly term: Term;
  readonly first: boolean;
  readonly held: Held;
  readonly side: 'left' | 'right';
  readonly open: Open | undefined;
}

function PageTerm({ head, term, first, held, side, open }: PageTermProps) {
  const hand = useHandStore();
  const { place } = term;
  const act = () => {
    if (open && place) open(place);
    else hand.set((now) => togglePin(now, held));
  };
  return (
    <>
      {/* The head is set again, unseen, on each line, so that all terms of a model begin on one vertical. */}
      <span className={first ? 'model-head' : 'model-head unseen'} aria-hidden={!first}>
        <Formula tex={`${head.tex} =`} />
      </span>
      <button
        type="button"
        className="term"
        data-term={side}
        data-ref={term.ref}
        tabIndex={first ? 0 : -1}
        aria-label={`${term.spoken}${term.kind === 'other' ? '' : `, ${term.kind}`}`}
        aria-description={open && place ? 'Enter opens the source here; space pins the term' : 'Enter pins the term'}
        onPointerEnter={(event) => {
          if (event.pointerType !== 'touch') hand.set((now) => take(now, held, 'pointer'));
        }}
        onPointerLeave={() => hand.set((now) => leave(now, 'pointer'))}
        onFocus={() => hand.set((now) => take(now, held, 'focus'))}
        onBlur={() => hand.set((now) => leave(now, 'focus'))}
        onKeyDown={(event) => {
          if (event.key !== ' ') return;
          event.preventDefault();
          hand.set((now) => togglePin(now, held));
        }}
        onClick={act}
      >
        <Formula tex={term.tex} display />
      </button>
    </>
  );
}
