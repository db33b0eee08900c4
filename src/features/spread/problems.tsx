import type { Problem } from '../../../shared/contracts/report.ts';
import type { Item } from '../../reading/slices.ts';
import type { Spot } from './row.ts';

interface Props {
  readonly entry: string;
  readonly text: string;
  readonly problems: readonly Item<Problem>[];
  readonly open: ((spot: Spot) => void) | undefined;
}

/** What is wrong in an entry: the line as typed, the word marked, the sentence under its word. */
export function Problems({ entry, text, problems, open }: Props) {
  const lines = text.split('\n');
  return (
    <ul className="problems" aria-label="What is wrong here">
      {problems.map(({ line, value }, k) => (
        <li key={k} className={value.severity === 'error' ? 'problem' : 'problem caution'}>
          <ProblemLine line={lines[line] ?? ''} problem={value} />
          {open && (
            <button
              type="button"
              className="act"
              onClick={() => open({ entry, line, column: value.column })}
              aria-label={`open the source at line ${String(line + 1)}`}
            >
              open the source here
            </button>
          )}
        </li>
      ))}
    </ul>
  );
}

function ProblemLine({ line, problem }: { line: string; problem: Problem }) {
  const characters = [...line];
  const from = Math.max(0, problem.column - 1);
  const to = Math.max(from + 1, from + problem.length);
  const before = characters.slice(0, from).join('');
  return (
    <>
      <pre className="code problem-source">
        {before}
        <mark className="problem-word">{characters.slice(from, to).join('') || ' '}</mark>
        {characters.slice(to).join('')}
      </pre>
      <p className="problem-words" style={{ paddingInlineStart: `min(${String(from)}ch, 50%)` }}>
        {problem.message}
        {problem.hint !== '' && <span className="problem-hint"> {problem.hint}</span>}
      </p>
    </>
  );
}
