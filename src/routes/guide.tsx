import { useId, useState } from 'react';
import { Link } from 'react-router-dom';
import { exampleSource, type HelpRecord, reference } from '../../shared/language/reference.ts';
import { GradeMark, gradeWords, type GradeName, PauliMark } from '../components/marks.tsx';
import { GuideContents } from '../features/guide/contents.tsx';
import { Formula, Sentence } from '../components/formula.tsx';
import { useReading } from '../reading/useReading.ts';
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
          <li>
            In the source, Control with the space bar offers what may stand there; the arrow keys choose, Enter writes
            it. Control or Command with the apostrophe says what the name at the caret is; F8 goes to the next problem.
            Under the source stand, by Tab, the ways to a name’s declaration, to rename it, to write a model out, to
            fold.
          </li>
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
                    <Example record={one} />
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

/** An example that can be run: what the engine makes of it, under it. */
function Example({ record }: { record: HelpRecord }) {
  const [run, setRun] = useState(false);
  return (
    <>
      <button type="button" className="act label" aria-expanded={run} onClick={() => setRun(!run)}>
        {run ? 'put away' : 'run it'}
        <span className="aside-only"> ({record.name})</span>
      </button>
      {run && <Outcome record={record} />}
    </>
  );
}

function Outcome({ record }: { record: HelpRecord }) {
  const source = exampleSource(record).trimEnd();
  const [entries] = useState(() => [{ id: 'example', kind: 'statements' as const, text: source }]);
  const reading = useReading(entries);
  const [slice] = reading.slices;
  if (reading.failed !== undefined) return <p className="ink-refuted">{reading.failed}</p>;
  if (!slice) return <p className="label">Being read …</p>;
  // What the example stands on comes before it.
  const at = source.lastIndexOf(record.example.trimEnd());
  const first = source.slice(0, Math.max(0, at)).split('\n').length - 1;
  const own = <T extends { readonly line: number }>(items: readonly T[]) => items.filter(({ line }) => line >= first);
  const said = own(slice.declarations).map(({ value }) => ({ key: value.name, tex: value.tex }));
  const models = own(slice.models).map(({ value }) => ({ key: value.name, tex: value.tex }));
  return (
    <div role="status">
      {[...said, ...models].map(({ key, tex }) => tex !== '' && <p key={key}>{<Formula tex={tex} display />}</p>)}
      <ul>
        {own(slice.claims).map(({ value }, k) => (
          <li key={k} className={`ink-${value.grade}`}>
            <GradeMark grade={value.grade} /> <Sentence text={value.tex} />
          </li>
        ))}
        {own(slice.problems).map(({ value }, k) => (
          <li key={k}>{value.message}</li>
        ))}
      </ul>
      {reading.waiting > 0 && <p className="label">Numbers are under way …</p>}
    </div>
  );
}
