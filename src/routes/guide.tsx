import { useId, useState } from 'react';
import { Link } from 'react-router-dom';
import { type HelpRecord, reference } from '../../shared/language/reference.ts';
import { GradeMark, gradeWords, type GradeName, PauliMark } from '../components/marks.tsx';
import { GuideContents } from '../features/guide/contents.tsx';
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
        <h2>Chapters</h2>
      </div>
      <GuideContents link={(name, title) => <Link to={paths.chapter.to(name)}>{title}</Link>} />
      <div className="prose measure mt-8">
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
          <li>
            Enter opens the source of a term, with the caret at it; Escape, or leaving it, sets it as type again. Tab
            leaves it for what can be done with the entry.
          </li>
          <li>Space pins a term, so that the plate keeps showing where it acts.</li>
          <li>Control or Command with the semicolon opens a line for whatever is to be done or found.</li>
        </ul>
        <h2 id="language">The operator language</h2>
        <p>
          Plain text. A statement begins in the first column with its keyword, indented lines continue it, and # starts
          a comment. A name is used after it is declared.
        </p>
      </div>
      <Reference />
    </Sheet>
  );
}

const topics: readonly (readonly [HelpRecord['topic'], string])[] = [
  ['statement', 'Statements'],
  ['lattice', 'Lattices'],
  ['cells', 'Cells'],
  ['geometry', 'Geometry'],
  ['operator', 'Operators'],
  ['expression', 'Expressions'],
  ['map', 'Maps'],
  ['audit', 'Audits'],
];

/** The whole language, record by record, as the engine knows it. */
function Reference() {
  const [typed, setTyped] = useState('');
  const field = useId();
  const wanted = typed.trim().toLowerCase();
  const found = reference.filter(({ name, help }) => `${name} ${help}`.toLowerCase().includes(wanted));
  return (
    <>
      <p className="mt-4">
        <label className="label" htmlFor={field}>
          Find in the language
        </label>
        <input
          id={field}
          type="search"
          className="field"
          value={typed}
          onChange={(event) => setTyped(event.target.value)}
        />
      </p>
      {found.length === 0 && (
        <p className="label mt-4" role="status">
          Nothing in the language has these letters.
        </p>
      )}
      {topics.map(([topic, words]) => {
        const own = found.filter((one) => one.topic === topic);
        if (own.length === 0) return null;
        return (
          <section key={topic} className="mt-8" aria-labelledby={`topic-${topic}`}>
            <h3 id={`topic-${topic}`}>{words}</h3>
            <dl className="reference mt-2">
              {own.map((one) => (
                <div key={one.name}>
                  <dt className="code">{one.name}</dt>
                  <dd>
                    <p>{one.help}</p>
                    <pre className="code" tabIndex={0} aria-label={`Example of ${one.name}`}>
                      {one.example.trimEnd()}
                    </pre>
                  </dd>
                </div>
              ))}
            </dl>
          </section>
        );
      })}
    </>
  );
}
