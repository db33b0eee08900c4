import './collation.css';
import type { Comparison as ComparisonValue, EntryDifference } from '../../../shared/contracts/reviews.ts';
import { Part } from '../../components/parts.tsx';
import { ReadingOf } from '../../components/readings.tsx';
import { Physics } from './physics.tsx';

export function sideInWords(side: ComparisonValue['left']): string {
  if (side.name === 'origin')
    return side.edition === null ? `origin, ${side.notebook.title}` : `origin, edition ${String(side.edition)}`;
  return side.edition === null ? 'draft' : `edition ${String(side.edition)}`;
}

/** Two readings side by side: first what differs as physics, then the text. */
export function Comparison({ of }: { of: ComparisonValue }) {
  const [left, right] = [sideInWords(of.left), sideInWords(of.right)];
  const titles = of.left.title !== of.right.title;
  return (
    <>
      <Part title="As physics">
        {of.physics ? (
          <Physics of={of.physics} left={left} right={right} />
        ) : of.reason === null ? (
          <p role="status">The server evaluates the readings; this page shows it when it is done.</p>
        ) : (
          <p className="ink-refuted">It could not be evaluated: {of.reason}</p>
        )}
        <Broken of={of} left={left} right={right} />
      </Part>
      <Part title="As text">
        {titles && (
          <div className="collated-row">
            <div className="collated-side">{of.left.title}</div>
            <div className="collated-side">{of.right.title}</div>
            <span className="label">title</span>
          </div>
        )}
        {of.entries.length === 0 && !titles && <p>Word for word the same.</p>}
        <div className="collated">
          {of.entries.map((entry, k) => (
            <TextDifference key={k} entry={entry} left={left} right={right} />
          ))}
        </div>
      </Part>
    </>
  );
}

function Broken({ of, left, right }: { of: ComparisonValue; left: string; right: string }) {
  const sides = [
    [left, of.left.problems],
    [right, of.right.problems],
  ] as const;
  return sides.map(([name, problems]) =>
    problems === null || problems === 0 ? null : (
      <p key={name} className="label">
        {name} has {problems === 1 ? 'a problem' : `${String(problems)} problems`} in its source; what depends on it is
        not compared.
      </p>
    ),
  );
}

const number = (value: number | null): string => (value === null ? '–' : `(${String(value)})`);

function TextDifference({ entry, left, right }: { entry: EntryDifference; left: string; right: string }) {
  const code = entry.kind === 'statements';
  return (
    <div className="collated-row">
      <div className="collated-side" data-empty={entry.left === null || undefined}>
        <span className="label">
          <span className="collated-label">{left} </span>
          {number(entry.left)}
        </span>
        {entry.left !== null && <ReadingOf pieces={entry.pieces} side="left" code={code} />}
      </div>
      <div className="collated-side" data-empty={entry.right === null || undefined}>
        <span className="label">
          <span className="collated-label">{right} </span>
          {number(entry.right)}
        </span>
        {entry.right !== null && <ReadingOf pieces={entry.pieces} side="right" code={code} />}
      </div>
      <span className="label">{entry.what}</span>
    </div>
  );
}
