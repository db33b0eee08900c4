import { useInfiniteQuery, useQuery } from '@tanstack/react-query';
import { useDeferredValue, useState } from 'react';
import { Link, useNavigate } from 'react-router-dom';
import { meQuery, publicQuery } from '../api/queries.ts';
import { Empty, Failed, Waiting } from '../components/faces.tsx';
import { ShowMore } from '../components/parts.tsx';
import { CopyWorked } from '../features/catalogue/copy-worked.tsx';
import { WorkedList } from '../features/catalogue/worked-list.tsx';
import { everything, Filters, narrows, queryOf } from '../features/shelf/filters.tsx';
import { Ledger } from '../features/shelf/ledger.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** Worked dualities from the literature, to copy; and what people here made public, to learn from and to fork. */
export function CataloguePage() {
  const me = useQuery(meQuery());
  const navigate = useNavigate();
  const [narrowed, setNarrowed] = useState(everything);
  const deferred = useDeferredValue(narrowed);
  const list = useInfiniteQuery(publicQuery(queryOf(deferred)));
  const notebooks = list.data?.pages.flatMap((page) => page.items) ?? [];
  return (
    <Sheet title="Catalogue" narrow>
      <h1 className="pt-8">Catalogue</h1>
      <p className="measure mt-3">
        Worked dualities from the literature, each with its published source. All of their claims are computed while you
        read. Copy one into a notebook of your own and change what you like.
      </p>
      <WorkedList
        link={(name, title) => (
          <Link className="inline-block py-1" to={paths.worked.to(name)}>
            {title}
          </Link>
        )}
        acts={({ name, title }) => (
          <CopyWorked
            name={name}
            title={title}
            open={(notebook) => void navigate(paths.notebook.to(notebook))}
            signIn={
              me.data?.person ? null : (
                <Link className="inline-block py-1" to={paths.signIn.to(paths.worked.to(name))}>
                  sign in to copy it
                </Link>
              )
            }
          />
        )}
      />
      <h2 className="mt-12">Public notebooks</h2>
      <p className="measure mt-2">Derivations that people made public: anyone may read, export and fork them.</p>
      <Filters label="Find among public notebooks" narrowed={narrowed} set={setNarrowed} />
      {list.isPending && <Waiting what="Fetching the public notebooks …" />}
      {list.isError && (
        <Failed
          what="The public notebooks could not be fetched."
          error={list.error}
          retry={() => void list.refetch()}
        />
      )}
      {list.isSuccess && notebooks.length === 0 && (
        <Empty title={narrows(deferred) ? 'Nothing is like that' : 'Nothing public yet'}>
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
      <ShowMore of={list} />
    </Sheet>
  );
}
