import { useInfiniteQuery } from '@tanstack/react-query';
import { useDeferredValue, useId, useState } from 'react';
import { Link } from 'react-router-dom';
import { publicQuery } from '../api/queries.ts';
import { Empty, Failed, Waiting } from '../components/faces.tsx';
import { Ledger } from '../features/shelf/ledger.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** What anyone may read here, to learn from and to fork. */
export function CataloguePage() {
  const [typed, setTyped] = useState('');
  const q = useDeferredValue(typed.trim());
  const list = useInfiniteQuery(publicQuery(q));
  const field = useId();
  const notebooks = list.data?.pages.flatMap((page) => page.items) ?? [];
  return (
    <Sheet title="Catalogue" narrow>
      <h1 className="pt-8">Catalogue</h1>
      <p className="measure mt-3">Derivations that anyone may read, export and fork.</p>
      <p className="mt-6">
        <label className="label" htmlFor={field}>
          Find in the catalogue
        </label>
        <input
          id={field}
          type="search"
          className="field"
          value={typed}
          onChange={(event) => setTyped(event.target.value)}
        />
      </p>
      {list.isPending && <Waiting what="Fetching the catalogue …" />}
      {list.isError && (
        <Failed what="The catalogue could not be fetched." error={list.error} retry={() => void list.refetch()} />
      )}
      {list.isSuccess && notebooks.length === 0 && (
        <Empty title={q === '' ? 'Nothing public yet' : 'Nothing has these words'}>
          <p>
            A notebook stands here when its owner makes it public, from its colophon. Until then, the{' '}
            <Link to={paths.try.to()}>example</Link> is open to everyone.
          </p>
        </Empty>
      )}
      {notebooks.length > 0 && (
        <Ledger
          notebooks={notebooks}
          link={(id, title) => <Link to={paths.notebook.to(id)}>{title}</Link>}
          label="Public notebooks"
        />
      )}
      {list.hasNextPage && (
        <button
          type="button"
          className="act mt-4"
          disabled={list.isFetchingNextPage}
          onClick={() => void list.fetchNextPage()}
        >
          show more
        </button>
      )}
    </Sheet>
  );
}
