import { useQuery } from '@tanstack/react-query';
import { useSearchParams } from 'react-router-dom';
import type { Notebook } from '../../shared/contracts/notebooks.ts';
import { comparisonQuery } from '../api/review-queries.ts';
import { Failed, Waiting } from '../components/faces.tsx';
import { Choice } from '../components/parts.tsx';
import { Comparison } from '../features/collation/comparison.tsx';
import { Within } from './within.tsx';

/** Any two editions, an edition and the draft, or a fork and its origin. */
export function ComparePage() {
  return <Within title="Compare">{(notebook) => <Compared notebook={notebook} />}</Within>;
}

function Compared({ notebook }: { notebook: Notebook }) {
  const [search, setSearch] = useSearchParams();
  const newest = notebook.edition;
  const left = search.get('left') ?? (newest === null ? (notebook.origin ? 'origin' : 'draft') : String(newest));
  const right = search.get('right') ?? 'draft';
  const asked = useQuery(comparisonQuery(notebook.id, left, right));
  const numbers = Array.from({ length: newest ?? 0 }, (_, k) => String((newest ?? 0) - k));
  const options = [
    ['draft', 'draft'],
    ...(notebook.origin ? [['origin', 'origin'] as const] : []),
    ...numbers.map((number) => [number, `edition ${number}`] as const),
  ] as const;
  const choose = (given: { left: string; right: string }) => setSearch(given, { replace: true });
  return (
    <>
      <h1>Compare</h1>
      <p className="colophon-line mt-3">
        <Choice label="Left" value={left} options={options} choose={(one) => choose({ left: one, right })} />
        <Choice label="Right" value={right} options={options} choose={(one) => choose({ left, right: one })} />
        <button type="button" className="act" onClick={() => choose({ left: right, right: left })}>
          exchange them
        </button>
      </p>
      {asked.isPending && <Waiting what="Comparing …" />}
      {asked.isError && (
        <Failed what="They could not be compared." error={asked.error} retry={() => void asked.refetch()} />
      )}
      {asked.data && <Comparison of={asked.data} />}
    </>
  );
}
