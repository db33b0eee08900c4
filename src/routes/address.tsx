import { useQuery, useQueryClient } from '@tanstack/react-query';
import { Link, Navigate, useNavigate } from 'react-router-dom';
import { call } from '../api/client.ts';
import { meQuery } from '../api/queries.ts';
import { Act, useAttempt } from '../components/attempt.tsx';
import { Waiting } from '../components/faces.tsx';
import { useCarried } from './carried.ts';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** Where the mail leads that shows an address to be one's own. */
export function AddressPage() {
  const token = useCarried();
  const me = useQuery(meQuery());
  const client = useQueryClient();
  const navigate = useNavigate();
  const confirm = useAttempt(async () => {
    const account = await call('confirmAddress', { body: { token } });
    client.setQueryData(['account'], account);
    await navigate(paths.account.to(), { replace: true });
  });
  if (me.data && !me.data.person) return <Navigate to={paths.signIn.to(`${paths.address.to()}#${token}`)} replace />;
  return (
    <Sheet title="One more address" narrow>
      <h1 className="pt-10">One more address</h1>
      {me.isPending && <Waiting what="Asking who you are …" />}
      {me.data?.person && token === '' && (
        <p className="measure mt-4">
          The address of this page is not whole: open the link in the mail, or copy all of it.
        </p>
      )}
      {me.data?.person && token !== '' && (
        <>
          <p className="measure mt-4">
            With this, the address that the mail came to becomes one more way to sign in as {me.data.person.name}.
          </p>
          <p className="mt-3">
            <Act of={confirm}>add the address</Act>
          </p>
        </>
      )}
      <p className="label mt-6">
        <Link to={paths.account.to()}>To the account</Link>
      </p>
    </Sheet>
  );
}
