import { useState } from 'react';
import type { Preview } from '../../../shared/contracts/reviews.ts';
import { Act, useAttempt } from '../../components/attempt.tsx';
import { Field } from '../../components/parts.tsx';

interface Props {
  readonly preview: Preview;
  readonly name: string;
  /** Stands in where the file has no title of its own. */
  readonly title: string;
  readonly take: (title: string) => Promise<void>;
  readonly leave: () => void;
}

const formWords: Readonly<Record<Preview['form'], string>> = {
  gw: 'the operator language',
  json: 'JSON of a notebook',
  'pauli-csv': 'Pauli strings as CSV',
};

/** What a file would become: its entries, and what is wrong with it, line by line. Nothing is stored before it is taken in. */
export function Previewed({ preview, name, title, take, leave }: Props) {
  const [wanted, setWanted] = useState(preview.title === '' ? title : preview.title);
  const taking = useAttempt(() => take(wanted));
  const { faults, problems, entries } = preview;
  const kept = faults.some((fault) => fault.severity === 'error');
  return (
    <section aria-label={`Preview of ${name}`} className="part">
      <h2>
        {name}, read as {formWords[preview.form]}
      </h2>
      {faults.length > 0 && (
        <ul className={kept ? 'ink-refuted' : undefined} aria-label="What is wrong with the file">
          {faults.map((fault, k) => (
            <li key={k}>
              line {fault.line}, column {fault.column}: {fault.message}
            </li>
          ))}
        </ul>
      )}
      {problems.length > 0 && (
        <ul className="label mt-2" aria-label="Problems of the language in it">
          {problems.map((problem, k) => (
            <li key={k}>
              {problem.entry !== null && `entry ${String(problem.entry + 1)}, `}line {problem.line}: {problem.message}
            </li>
          ))}
        </ul>
      )}
      <ol className="preview-entries">
        {entries.slice(0, 50).map((entry, k) => (
          <li key={k}>{entry.kind === 'prose' ? <p>{entry.text}</p> : <pre className="code">{entry.text}</pre>}</li>
        ))}
      </ol>
      {entries.length > 50 && <p className="label">and {entries.length - 50} entries more</p>}
      {kept ? (
        <p className="label mt-3">As it is, the file cannot be taken in.</p>
      ) : (
        <Field label="Title" value={wanted} set={setWanted} maxLength={200} className="mt-3 max-w-md" />
      )}
      <p className="colophon-line mt-2">
        {!kept && (
          <Act of={taking} disabled={wanted.trim() === ''}>
            make a notebook of it
          </Act>
        )}
        <button type="button" className="act" onClick={leave}>
          leave it
        </button>
      </p>
    </section>
  );
}
