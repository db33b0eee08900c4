import { useQuery } from '@tanstack/react-query';
import { Navigate } from 'react-router-dom';
import { meQuery } from '../api/queries.ts';
import { Waiting } from '../components/faces.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';
import { TryPage } from './try.tsx';

/** The first page: for someone signed in, their shelf; for a visitor, the living example. */
export function HomePage() {
  const me = useQuery(meQuery());
  if (me.isPending)
    return (
      <Sheet title="">
        <Waiting what="Opening …" />
      </Sheet>
    );
  return me.data?.person ? <Navigate to={paths.shelf.to()} replace /> : <TryPage first />;
}
