import { useQuery, useQueryClient } from '@tanstack/react-query';
import { Link, Navigate, useNavigate } from 'react-router-dom';
import { accountQuery } from '../api/account-queries.ts';
import { meQuery } from '../api/queries.ts';
import { Failed, Waiting } from '../components/faces.tsx';
import { Leaving } from '../features/account/leaving.tsx';
import { Profile } from '../features/account/profile.tsx';
import { Sessions } from '../features/account/sessions.tsx';
import { Tokens } from '../features/account/tokens.tsx';
import { WaysIn } from '../features/account/ways-in.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** One's own account. */
export function AccountPage() {
  const me = useQuery(meQuery());
  const asked = useQuery({ ...accountQuery(), enabled: me.data?.person != null });
  const client = useQueryClient();
  const navigate = useNavigate();
  if (me.data && !me.data.person) return <Navigate to={paths.signIn.to(paths.account.to())} replace />;
  return (
    <Sheet title="Account" narrow>
      <h1 className="pt-8">Account</h1>
      {asked.isPending && <Waiting what="Fetching your account …" />}
      {asked.isError && (
        <Failed what="Your account could not be fetched." error={asked.error} retry={() => void asked.refetch()} />
      )}
      {asked.data && (
        <>
          <p className="label mt-2">
            <Link to={paths.notices.to()}>notices and mail</Link>
            {asked.data.steward && (
              <>
                {' · '}
                <Link to={paths.steward.to()}>stewardship</Link>
              </>
            )}
          </p>
          <Profile account={asked.data} />
          <WaysIn account={asked.data} />
          <Sessions />
          <Tokens />
          <Leaving
            account={asked.data}
            link={(id, title) => <Link to={paths.notebook.to(id)}>{title}</Link>}
            gone={async () => {
              client.clear();
              await navigate(paths.home.to());
            }}
          />
        </>
      )}
    </Sheet>
  );
}
