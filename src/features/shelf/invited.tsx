import { useQuery, useQueryClient } from '@tanstack/react-query';
import type { Invited as Invitation } from '../../../shared/contracts/people.ts';
import { invitedQuery } from '../../api/account-queries.ts';
import { call } from '../../api/client.ts';
import { rereadLists } from '../../api/queries.ts';
import { Act, useAttempt } from '../../components/attempt.tsx';

/** Invitations that wait for an answer, above the shelf. Nothing where there are none. */
export function Invited({ open }: { open: (notebook: string) => void }) {
  const asked = useQuery(invitedQuery());
  if (!asked.data || asked.data.items.length === 0) return null;
  return (
    <section aria-label="Invitations" className="mt-6">
      <ul className="listed">
        {asked.data.items.map((one) => (
          <One key={one.id} invitation={one} open={open} />
        ))}
      </ul>
    </section>
  );
}

function One({ invitation, open }: { invitation: Invitation; open: (notebook: string) => void }) {
  const client = useQueryClient();
  const which = { invitation: invitation.id };
  const accept = useAttempt(async () => {
    const { notebook } = await call('acceptInvitation', { body: which });
    await Promise.all([rereadLists(client), client.invalidateQueries({ queryKey: ['invited'] })]);
    open(notebook);
  });
  const decline = useAttempt(async () => {
    await call('declineInvitation', { body: which });
    await client.invalidateQueries({ queryKey: ['invited'] });
  });
  const whom = <span className="aside-only"> the invitation to {invitation.notebook.title}</span>;
  return (
    <li className="colophon-line">
      <span>
        {invitation.by?.name ?? 'Someone who has left'} invites you to “{invitation.notebook.title}” as{' '}
        {invitation.role}.
      </span>
      <Act of={accept}>accept{whom}</Act>
      <Act of={decline}>decline{whom}</Act>
    </li>
  );
}
