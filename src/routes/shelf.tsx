import { useInfiniteQuery, useQuery, useQueryClient } from '@tanstack/react-query';
import { useDeferredValue, useState } from 'react';
import { Link, Navigate, useNavigate } from 'react-router-dom';
import { call } from '../api/client.ts';
import { keepNotebook, meQuery, rereadLists, shelfQuery } from '../api/queries.ts';
import { Empty, Failed, Waiting } from '../components/faces.tsx';
import { Choice, ShowMore } from '../components/parts.tsx';
import { BeginWith } from '../features/shelf/begin-with.tsx';
import { everything, Filters, narrows, queryOf } from '../features/shelf/filters.tsx';
import { Invited } from '../features/shelf/invited.tsx';
import { Ledger } from '../features/shelf/ledger.tsx';
import { NewNotebook } from '../features/shelf/new-notebook.tsx';
import { PutAway } from '../features/shelf/put-away.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

type Whose = 'all' | 'own' | 'shared';
const whoses = [
  ['all', 'all'],
  ['own', 'your own'],
  ['shared', 'shared with you'],
] as const;
type State = 'kept' | 'archived';
const states = [
  ['kept', 'on the shelf'],
  ['archived', 'archived'],
] as const;

/** A person's notebooks, own and shared, the one changed last on top. */
export function ShelfPage() {
  const me = useQuery(meQuery());
  const navigate = useNavigate();
  const [narrowed, setNarrowed] = useState(everything);
  const [whose, setWhose] = useState<Whose>('all');
  const [state, setState] = useState<State>('kept');
  const deferred = useDeferredValue(narrowed);
  const asked = { ...queryOf(deferred), whose, state };
  const shelf = useInfiniteQuery({ ...shelfQuery(asked), enabled: me.data?.person != null });
  const open = useOpenNew();
  if (me.data && !me.data.person) return <Navigate to={paths.signIn.to(paths.shelf.to())} replace />;
  const notebooks = shelf.data?.pages.flatMap((page) => page.items) ?? [];
  const whole = !narrows(deferred) && whose === 'all' && state === 'kept';
  const bare = shelf.isSuccess && notebooks.length === 0 && whole;
  return (
    <Sheet title="Shelf" narrow>
      <h1 className="pt-8">Shelf</h1>
      <Invited open={(notebook) => void navigate(paths.notebook.to(notebook))} />
      <NewNotebook create={open.create} take={open.take} preview={open.preview} />
      <BeginWith take={(source) => open.take(source, '')} />
      <Filters label="Find on the shelf" narrowed={narrowed} set={setNarrowed}>
        <Choice label="whose" value={whose} options={whoses} choose={setWhose} />
        <Choice label="state" quiet value={state} options={states} choose={setState} />
      </Filters>
      {shelf.isPending && <Waiting what="Fetching your notebooks …" />}
      {shelf.isError && (
        <Failed what="Your notebooks could not be fetched." error={shelf.error} retry={() => void shelf.refetch()} />
      )}
      {bare && <FirstVisit />}
      {shelf.isSuccess && notebooks.length === 0 && !whole && (
        <p className="label mt-6" role="status">
          {state === 'archived' && !narrows(deferred) && whose === 'all'
            ? 'Nothing is archived.'
            : 'Nothing on the shelf is like that.'}
        </p>
      )}
      {notebooks.length > 0 && (
        <Ledger
          notebooks={notebooks}
          link={(id, title) => <Link to={paths.notebook.to(id)}>{title}</Link>}
          label="Your notebooks"
          acts={(notebook) => <PutAway notebook={notebook} archived={state === 'archived'} />}
        />
      )}
      <ShowMore of={shelf} />
      <p className="label mt-8">
        <Link to={paths.bin.to()}>The bin</Link> keeps for 30 days what you delete.
      </p>
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
    preview: (source: string) => call('previewImport', { body: { source } }),
    take: async (source: string, title: string) =>
      opened(await call('importNotebook', { body: { source, ...(title.trim() === '' ? {} : { title }) } })),
  };
}
