import { Link, useRouteError } from 'react-router-dom';
import { RequestFailed } from '../api/client.ts';
import { Failed } from '../components/faces.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

export function NotFoundPage() {
  return (
    <Sheet title="Not found" narrow>
      <h1 className="pt-10">There is no such page</h1>
      <p className="measure mt-4">
        It may have been deleted, or it is not open to you: a notebook that you may not read looks the same as one that
        does not exist. If someone sent you the address, ask them for a link to an edition.
      </p>
      <p className="mt-4">
        <Link to={paths.home.to()}>To the first page</Link>
      </p>
    </Sheet>
  );
}

/** What a page shows that broke while it was drawn. */
export function PageFailed() {
  const error = useRouteError();
  return (
    <Sheet title="This page failed" narrow>
      <Failed what="This page could not be shown." error={error} retry={() => location.reload()} />
    </Sheet>
  );
}

/** The face of a page whose subject could not be fetched: not found, or failed with the reason. */
export function NotFetched({ what, error, retry }: { what: string; error: unknown; retry: () => void }) {
  if (error instanceof RequestFailed && error.status === 404) return <NotFoundPage />;
  return (
    <Sheet title="Not fetched" narrow>
      <Failed what={what} error={error} retry={retry} />
    </Sheet>
  );
}
