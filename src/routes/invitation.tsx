import { useQuery, useQueryClient } from '@tanstack/react-query';
import { Link, useNavigate } from 'react-router-dom';
import type { Invited } from '../../shared/contracts/people.ts';
import { call } from '../api/client.ts';
import { invitationQuery } from '../api/account-queries.ts';
import { meQuery, rereadLists } from '../api/queries.ts';
import { Act, useAttempt } from '../components/attempt.tsx';
import { Day } from '../components/dates.tsx';
import { Failed, Waiting } from '../components/faces.tsx';
import { UseLink } from '../features/account/use-link.tsx';
import { useCarried } from './carried.ts';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';
import { useSignedIn } from './sign-in-link.tsx';

/** Where an invitation's mail leads: what it is to, and taking it or not. */
export function InvitationPage() {
  const token = useCarried();
  const me = useQuery(meQuery());
  const asked = useQuery({ ...invitationQuery(token), enabled: token !== '' });
  return (
    <Sheet title="Invitation" narrow>
      <h1 className="pt-10">Invitation</h1>
      {token === '' && (
        <p className="measure mt-4">
          The address of this page is not whole: open the link in the mail, or copy all of it.
        </p>
      )}
      {token !== '' && (asked.isPending || me.isPending) && <Waiting what="Reading the invitation …" />}
      {asked.isError && (
        <Failed
          what="This invitation is not open: it was taken, declined or withdrawn, or is too old."
          error={asked.error}
          retry={() => void asked.refetch()}
        />
      )}
      {asked.data && me.data && <Offered invited={asked.data} token={token} name={me.data.person?.name ?? null} />}
    </Sheet>
  );
}

function Offered({ invited, token, name }: { invited: Invited; token: string; name: string | null }) {
  const signedIn = useSignedIn();
  return (
    <>
      <p className="measure mt-4 text-lead">
        {invited.by?.name ?? 'Someone who has left'} invites you to the notebook “{invited.notebook.title}” as{' '}
        {invited.role}.
      </p>
      <p className="measure mt-2">{roleMeans[invited.role]}</p>
      <p className="label mt-2">
        Sent to {invited.email}; open until <Day at={invited.until} />.
      </p>
      {name === null ? (
        <>
          <UseLink token={token} words="Accept, and sign in with this address" done={signedIn} />
          <p className="label mt-3">
            <Link to={paths.signIn.to(`${paths.invitation.to()}#${token}`)}>Sign in another way first</Link>, if you
            have an account under another address.
          </p>
        </>
      ) : (
        <Answered token={token} name={name} />
      )}
    </>
  );
}

const roleMeans: Readonly<Record<Invited['role'], string>> = {
  coauthor: 'A coauthor writes in it, publishes editions and decides on variants.',
  referee: 'A referee reads it, asks in its margin, has its claims computed again, and gives verdicts on its editions.',
  reader: 'A reader reads it, exports it and can fork it.',
};

function Answered({ token, name }: { token: string; name: string }) {
  const client = useQueryClient();
  const navigate = useNavigate();
  const accept = useAttempt(async () => {
    const { notebook } = await call('acceptInvitation', { body: { token } });
    await Promise.all([rereadLists(client), client.invalidateQueries({ queryKey: ['invited'] })]);
    await navigate(paths.notebook.to(notebook), { replace: true });
  });
  const decline = useAttempt(async () => {
    await call('declineInvitation', { body: { token } });
    await client.invalidateQueries({ queryKey: ['invited'] });
    await navigate(paths.shelf.to(), { replace: true });
  });
  return (
    <p className="colophon-line mt-4">
      <Act of={accept}>accept as {name}</Act>
      <Act of={decline}>decline</Act>
    </p>
  );
}
