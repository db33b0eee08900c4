import { Link } from 'react-router-dom';
import { GradeMark, gradeWords, type GradeName, PauliMark } from '../components/marks.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

const grades = Object.keys(gradeWords) as GradeName[];

/** The guide: how a notebook is read and written, and the whole of the operator language. */
export function GuidePage() {
  return (
    <Sheet title="Guide" narrow>
      <h1 className="pt-8">Guide</h1>
      <div className="prose measure mt-4">
        <p>
          A notebook states a model and carries it into another language. Spin language stands on the left page, gauge
          language on the right, a term facing its image; the gutter between them says whether the step holds. The{' '}
          <Link to={paths.try.to()}>example</Link> shows all of it and can be changed.
        </p>
        <h2>Grades of evidence</h2>
      </div>
      <dl className="mt-3 space-y-2">
        {grades.map((grade) => (
          <div key={grade} className="grid grid-cols-[1.5rem_1fr]">
            <dt className={`ink-${grade}`}>
              <GradeMark grade={grade} />
            </dt>
            <dd>{gradeWords[grade]}</dd>
          </div>
        ))}
      </dl>
      <div className="prose measure mt-8">
        <h2>Marks of the operators</h2>
        <p>
          <PauliMark pauli="x" named /> X, <PauliMark pauli="y" named /> Y, <PauliMark pauli="z" named /> Z: the same
          mark and ink in a formula, on the plate and in a table.
        </p>
        <h2>By keyboard</h2>
        <ul>
          <li>Tab goes from model to model; the arrow keys go from term to term, on a page and across the gutter.</li>
          <li>Enter opens the source of a term, with the caret at it; Escape, or leaving it, sets it as type again.</li>
          <li>Space pins a term, so that the plate keeps showing where it acts.</li>
          <li>Control or Command with the semicolon opens a line for whatever is to be done or found.</li>
        </ul>
      </div>
    </Sheet>
  );
}
