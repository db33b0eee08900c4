import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Link, Navigate, useNavigate } from 'react-router-dom';
import { call } from '../api/client.ts';
import { keepNotebook, meQuery, rereadLists } from '../api/queries.ts';
import { binQuery } from '../api/review-queries.ts';
import { Act, useAttempt } from '../components/attempt.tsx';
import { Day } from '../components/dates.tsx';
import { Empty, Failed, Waiting } from '../components/faces.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** One's own notebooks that were deleted, for 30 days. */
export function BinPage() {
  const me = useQuery(meQuery());
  const asked = useQuery({ ...binQuery(), enabled: me.data?.person != null });
  if (me.data && !me.data.person) return <Navigate to={paths.signIn.to(paths.bin.to())} replace />;
  return (
    <Sheet title="Bin" narrow>
      <h1 className="pt-8">Bin</h1>
      <p className="label mt-2">
        <Link to={paths.shelf.to()}>Back to the shelf</Link>
      </p>
      {asked.isPending && <Waiting what="Looking into the bin …" />}
      {asked.isError && (
        <Failed what="The bin could not be opened." error={asked.error} retry={() => void asked.refetch()} />
      )}
      {asked.data?.items.length === 0 && (
        <Empty title="The bin is empty">
          <p>
            A notebook that you delete lies here for 30 days, with its editions and remarks, and then goes for good.
          </p>
        </Empty>
      )}
      <ul className="listed mt-6">
        {asked.data?.items.map((one) => (
          <Binned key={one.id} {...one} />
        ))}
      </ul>
    </Sheet>
  );
}

function Binned(props: { id: string; title: string; editions: number; deletedAt: string; until: string }) {
  const { id, title, editions } = props;
  const client = useQueryClient();
  const navigate = useNavigate();
  const [sure, setSure] = useState(false);
  const reread = () => Promise.all([client.invalidateQueries({ queryKey: ['bin'] }), rereadLists(client)]);
  const restore = useAttempt(async () => {
    const notebook = await call('restoreNotebook', { params: { binned: id } });
    keepNotebook(client, notebook);
    await reread();
    await navigate(paths.notebook.to(id));
  });
  const remove = useAttempt(async () => {
    await call('emptyBin', { params: { binned: id } });
    await reread();
  });
  const which = <span className="aside-only">: {title}</span>;
  return (
    <li>
      <p className="text-lead">{title}</p>
      <p className="label">
        {editions === 1 ? 'one edition' : `${String(editions)} editions`} · deleted <Day at={props.deletedAt} /> · goes{' '}
        <Day at={props.until} />
      </p>
      <p className="colophon-line">
        <Act of={restore}>restore{which}</Act>
        {sure ? (
          <Act of={remove} loud>
            delete it for good, with its editions{which}
          </Act>
        ) : (
          <button type="button" className="act" onClick={() => setSure(true)}>
            delete for good{which}
          </button>
        )}
      </p>
    </li>
  );
}
