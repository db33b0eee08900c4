import { useInfiniteQuery, useQuery, useQueryClient } from '@tanstack/react-query';
import { useDeferredValue, useId, useState } from 'react';
import { Link, Navigate, useNavigate } from 'react-router-dom';
import { call } from '../api/client.ts';
import { keepNotebook, meQuery, rereadLists, shelfQuery } from '../api/queries.ts';
import { Empty, Failed, Waiting } from '../components/faces.tsx';
import { BeginWith } from '../features/shelf/begin-with.tsx';
import { Ledger } from '../features/shelf/ledger.tsx';
import { NewNotebook } from '../features/shelf/new-notebook.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** A person's notebooks, own and shared, the one changed last on top. */
export function ShelfPage() {
  const me = useQuery(meQuery());
  const [typed, setTyped] = useState('');
  const q = useDeferredValue(typed.trim());
  const shelf = useInfiniteQuery({ ...shelfQuery(q), enabled: me.data?.person != null });
  const open = useOpenNew();
  const field = useId();
  if (me.data && !me.data.person) return <Navigate to={paths.signIn.to(paths.shelf.to())} replace />;
  const notebooks = shelf.data?.pages.flatMap((page) => page.items) ?? [];
  const bare = shelf.isSuccess && notebooks.length === 0 && q === '';
  return (
    <Sheet title="Shelf" narrow>
      <h1 className="pt-8">Shelf</h1>
      <NewNotebook create={open.create} take={open.take} />
      <BeginWith take={(source) => open.take(source, '')} />
      {!bare && (
        <p className="mt-8">
          <label className="label" htmlFor={field}>
            Find on the shelf
          </label>
          <input
            id={field}
            type="search"
            className="field"
            value={typed}
            onChange={(event) => setTyped(event.target.value)}
          />
        </p>
      )}
      {shelf.isPending && <Waiting what="Fetching your notebooks …" />}
      {shelf.isError && (
        <Failed what="Your notebooks could not be fetched." error={shelf.error} retry={() => void shelf.refetch()} />
      )}
      {bare && <FirstVisit />}
      {shelf.isSuccess && notebooks.length === 0 && q !== '' && (
        <p className="label mt-6" role="status">
          Nothing on the shelf has these words.
        </p>
      )}
      {notebooks.length > 0 && (
        <Ledger
          notebooks={notebooks}
          link={(id, title) => <Link to={paths.notebook.to(id)}>{title}</Link>}
          label="Your notebooks"
        />
      )}
      {shelf.hasNextPage && (
        <button
          type="button"
          className="act mt-4"
          disabled={shelf.isFetchingNextPage}
          onClick={() => void shelf.fetchNextPage()}
        >
          show more
        </button>
      )}
    </Sheet>
  );
}

function FirstVisit() {
  return (
    <Empty title="An empty shelf">
      <p>
        A notebook holds one derivation. Begin with a lattice and the spins on it, write the Hamiltonian as a sum of
        Pauli strings, say by a map what each bond and each field becomes, and ask an audit whether it holds.
      </p>
      <p>
        Spin language is set on the left page, gauge language on the right, term against term; every claim carries the
        grade of its evidence. The quickest way in is one of the texts above, or a worked duality from the{' '}
        <Link to={paths.catalogue.to()}>catalogue</Link>: copy it and change a sign. The{' '}
        <Link to={paths.guide.to()}>guide</Link> has the whole language.
      </p>
    </Empty>
  );
}

function useOpenNew() {
  const client = useQueryClient();
  const navigate = useNavigate();
  const opened = async (notebook: Awaited<ReturnType<typeof call<'createNotebook'>>>) => {
    keepNotebook(client, notebook);
    void rereadLists(client);
    await navigate(paths.notebook.to(notebook.id));
  };
  return {
    create: async (title: string) => opened(await call('createNotebook', { body: { title } })),
    take: async (source: string, name: string) => {
      const title = name.replace(/\.gw$/, '').replace(/[-_]+/g, ' ').trim();
      return opened(await call('importNotebook', { body: { source, ...(title === '' ? {} : { title }) } }));
    },
  };
}
