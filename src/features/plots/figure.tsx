import './plots.css';
import { type ReactNode, useId, useRef, useState } from 'react';
import { saveSvg, saveText } from '../../components/picture.ts';
import { csvOf, type Table } from './data.ts';

interface Props {
  /** What the drawing says, in a sentence: its text alternative too. */
  readonly words: string;
  /** What to be careful about, in the caption. */
  readonly cautions: readonly ReactNode[];
  readonly table: Table;
  /** Name of saved files, without their ending. */
  readonly name: string;
  readonly width: number;
  readonly height: number;
  readonly children: ReactNode;
}

/** A plot with its caption, the same as a table, and both as files. */
export function Figure({ words, cautions, table, name, width, height, children }: Props) {
  const [asTable, setAsTable] = useState(false);
  const svg = useRef<SVGSVGElement>(null);
  const caption = useId();
  return (
    <figure className="plot" aria-labelledby={caption}>
      {asTable ? (
        <TableView table={table} label={words} />
      ) : (
        <svg
          ref={svg}
          className="plot-drawing"
          viewBox={`0 0 ${String(width)} ${String(height)}`}
          width={width}
          height={height}
          role="img"
          aria-label={words}
        >
          {children}
        </svg>
      )}
      <figcaption id={caption} className="label">
        {words}
        {cautions.map((caution, k) => (
          <span key={k} className="plot-caution">
            {' '}
            {caution}
          </span>
        ))}
        <span className="plot-acts">
          <button type="button" className="act" aria-pressed={asTable} onClick={() => setAsTable(!asTable)}>
            {asTable ? 'show the drawing' : 'show as a table'}
          </button>
          <button type="button" className="act" onClick={() => saveText(`${name}.csv`, csvOf(table), 'text/csv')}>
            save CSV
          </button>
          {!asTable && (
            <button type="button" className="act" onClick={() => svg.current && saveSvg(name, svg.current)}>
              save SVG
            </button>
          )}
        </span>
      </figcaption>
    </figure>
  );
}

const shown = (value: string | number): string =>
  typeof value === 'number' ? String(Number(value.toPrecision(10))).replace('-', '−') : value.replace(/ x /g, ' × ');

function TableView({ table, label }: { table: Table; label: string }) {
  return (
    <div className="plot-table" tabIndex={0} role="region" aria-label={`Table: ${label}`}>
      <table>
        <thead>
          <tr>
            {table.head.map((word, k) => (
              <th key={k} scope="col" className="label">
                {word}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {table.rows.map((row, k) => (
            <tr key={k}>
              {row.map((value, c) => (
                <td key={c}>{shown(value)}</td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}
