import { useQuery } from '@tanstack/react-query';
import { Link, Navigate } from 'react-router-dom';
import { meQuery } from '../api/queries.ts';
import { Waiting } from '../components/faces.tsx';
import { Notices } from '../features/notices/notices.tsx';
import { MailSettings } from '../features/notices/settings.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** What a person is told, and how they want to be told. */
export function NoticesPage() {
  const me = useQuery(meQuery());
  if (me.data && !me.data.person) return <Navigate to={paths.signIn.to(paths.notices.to())} replace />;
  return (
    <Sheet title="Notices" narrow>
      <h1 className="pt-8">Notices</h1>
      {!me.data ? (
        <Waiting what="Fetching your notices …" />
      ) : (
        <>
          <Notices
            link={(to, words, gone) => (
              <Link to={to} onClick={gone}>
                {words}
              </Link>
            )}
          />
          <MailSettings link={(id, title) => <Link to={paths.notebook.to(id)}>{title}</Link>} />
        </>
      )}
    </Sheet>
  );
}
