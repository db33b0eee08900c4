import './table.css';
import { type ReactNode, useState } from 'react';
import type { Claim } from '../../../shared/contracts/report.ts';
import { Copy } from '../../components/copy.tsx';
import { Formula } from '../../components/formula.tsx';
import { GradeMark } from '../../components/marks.tsx';
import { letGo, overRef, togglePin, type Held } from '../../hand/hand.ts';
import { useHand, useHandStore } from '../../hand/useHand.ts';
import { useReadingInView } from '../../reading/inView.ts';
import { commutationCsv, commutationOf, commutationTex, fails, type Mark, type TermRow } from './commutation.ts';

/** Tables up to this many marks stand open; larger ones unfold. */
const openMarks = 24;

/** Terms against laws: each mark opens its evidence and lays the term over the law on the plate. */
export function CommutationTable({ claim, say }: { claim: Claim; say: (sentence: string) => ReactNode }) {
  const reading = useReadingInView();
  const [failing, setFailing] = useState(false);
  const [chosen, setChosen] = useState<{ readonly term: number; readonly law: string } | null>(null);
  const hand = useHandStore();
  const table = commutationOf(claim, reading.slices);
  if (!table) return null;
  const broken = table.rows.filter(fails);
  const shown = failing && broken.length > 0 ? broken : table.rows;
  const row = table.rows.find((one) => one.term === chosen?.term);
  const mark = row?.marks.find((one) => one.law === chosen?.law);
  const choose = (term: number, law: string) => {
    const off = chosen?.term === term && chosen.law === law;
    setChosen(off ? null : { term, law });
    const held: Held = { left: overRef(table.subject, term, law), right: null };
    hand.set((now) => (off ? letGo(now) : togglePin({ ...now, pinned: false }, held)));
  };
  const size = table.rows.length * table.laws.length;
  return (
    <details className="commutation-table" open={size <= openMarks}>
      <summary className="label">
        {table.subject} against {table.laws.join(', ')}, term by term
      </summary>
      <div className="commutation" tabIndex={0} role="region" aria-label={`Commutation table of ${table.subject}`}>
        <table>
          <thead>
            <tr>
              <th scope="col" className="label">
                term
              </th>
              {table.laws.map((law) => (
                <th key={law} scope="col">
                  {law}
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {shown.map((one) => (
              <Row key={one.term} row={one} subject={table.subject} choose={choose} />
            ))}
          </tbody>
        </table>
      </div>
      <p role="status" className="table-evidence">
        {mark && row && <Evidence mark={mark} row={row} say={say} />}
      </p>
      <p className="colophon-line label">
        {broken.length > 0 && broken.length < table.rows.length && (
          <label className="tick">
            <input type="checkbox" checked={failing} onChange={(event) => setFailing(event.target.checked)} /> only what
            fails
          </label>
        )}
        <Copy words="copy as LaTeX" text={() => commutationTex({ ...table, rows: shown })} />
        <Copy words="copy as CSV" text={() => commutationCsv({ ...table, rows: shown })} />
      </p>
    </details>
  );
}

interface RowProps {
  readonly row: TermRow;
  readonly subject: string;
  readonly choose: (term: number, law: string) => void;
}

function Row({ row, subject, choose }: RowProps) {
  const { held, pinned } = useHand();
  return (
    <tr>
      <th scope="row">
        {row.tex !== null && (
          <span aria-hidden>
            <Formula tex={row.tex} />
          </span>
        )}
        <span className={row.tex === null ? undefined : 'aside-only'}>{row.spoken}</span>
      </th>
      {row.marks.map((mark) => {
        const on = pinned && held?.left === overRef(subject, row.term, mark.law);
        return (
          <td key={mark.law}>
            <button
              type="button"
              className="table-mark"
              aria-pressed={on}
              aria-label={`${row.spoken}: ${mark.holds ? 'commutes' : 'does not commute'} with ${mark.law}`}
              onClick={() => choose(row.term, mark.law)}
            >
              <GradeMark grade={mark.holds ? (mark.atSize ? 'exact' : 'proved') : 'refuted'} label="" />
            </button>
          </td>
        );
      })}
    </tr>
  );
}

function Evidence({ mark, row, say }: { mark: Mark; row: TermRow; say: (sentence: string) => ReactNode }) {
  if (mark.holds)
    return mark.atSize
      ? `At the declared size this term meets ${mark.law} evenly; at sizes of another parity it does not.`
      : `Wherever this term meets ${mark.law}, the two differ on an even number of spins, so that their signs cancel.`;
  const words = mark.words === '' ? `${row.spoken} does not commute with ${mark.law}` : mark.words;
  return <span className="ink-refuted">{say(words.endsWith('.') ? words : `${words}.`)}</span>;
}
