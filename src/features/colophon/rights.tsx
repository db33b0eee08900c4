import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { Notebook } from '../../../shared/contracts/notebooks.ts';
import type { Invitation, MailMode, Member } from '../../../shared/contracts/people.ts';
import type { GrantedRole } from '../../../shared/contracts/rights.ts';
import { invitationsQuery, noticeSettingsQuery } from '../../api/account-queries.ts';
import { call } from '../../api/client.ts';
import { rereadLists, rereadNotebook } from '../../api/queries.ts';
import { Act, Attempt, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { Choice, Field } from '../../components/parts.tsx';
import { RoleChoice } from './role-choice.tsx';

/** Inviting by e-mail, and what is still open. */
export function Invitations({ notebook }: { notebook: string }) {
  const client = useQueryClient();
  const asked = useQuery(invitationsQuery(notebook));
  const [email, setEmail] = useState('');
  const [role, setRole] = useState<GrantedRole>('coauthor');
  const [sent, setSent] = useState<string | null>(null);
  const invite = useAttempt(async () => {
    await call('invite', { params: { notebook }, body: { email, role } });
    setSent(email);
    setEmail('');
    await client.invalidateQueries({ queryKey: invitationsQuery(notebook).queryKey });
  });
  return (
    <>
      {(asked.data?.items.length ?? 0) > 0 && (
        <ul className="mt-3 space-y-1" aria-label="Open invitations">
          {asked.data?.items.map((one) => (
            <Pending key={one.id} notebook={notebook} invitation={one} />
          ))}
        </ul>
      )}
      <form
        className="mt-3 flex flex-wrap items-end gap-x-6 gap-y-2"
        onSubmit={(event) => {
          event.preventDefault();
          if (email.trim() !== '') invite.run();
        }}
      >
        <Field label="Invite by e-mail" type="email" value={email} set={setEmail} className="w-64" />
        <RoleChoice label="Invited as" role={role} choose={setRole} />
        <button type="submit" className="act" disabled={invite.busy || email.trim() === ''}>
          send the invitation
        </button>
      </form>
      <Attempt of={invite} />
      <p role="status" className="label">
        {sent !== null && `An invitation is on its way to ${sent}.`}
      </p>
    </>
  );
}

function Pending({ notebook, invitation }: { notebook: string; invitation: Invitation }) {
  const client = useQueryClient();
  const withdraw = useAttempt(async () => {
    await call('withdrawInvitation', { params: { notebook, invitation: invitation.id } });
    await client.invalidateQueries({ queryKey: invitationsQuery(notebook).queryKey });
  });
  return (
    <li className="colophon-line">
      <span>{invitation.email}</span>
      <span className="label">
        invited as {invitation.role}, open until <Day at={invitation.until} />
      </span>
      <Act of={withdraw}>
        withdraw<span className="aside-only"> the invitation to {invitation.email}</span>
      </Act>
    </li>
  );
}

/** Makes someone else the owner; asked twice, since only they can undo it. */
export function Transfer({ notebook, others }: { notebook: string; others: readonly Member[] }) {
  const client = useQueryClient();
  const [to, setTo] = useState('');
  const chosen = others.find(({ person }) => person.id === to);
  const transfer = useAttempt(async () => {
    await call('transferNotebook', { params: { notebook }, body: { person: to } });
    await Promise.all([
      rereadNotebook(client, notebook),
      client.invalidateQueries({ queryKey: ['notebook', notebook, 'people'] }),
      rereadLists(client),
    ]);
  });
  return (
    <p className="colophon-line mt-3">
      <Choice
        label="Hand the notebook on to"
        value={to}
        options={[['', 'nobody'], ...others.map(({ person }) => [person.id, person.name] as const)]}
        choose={setTo}
      />
      {chosen && (
        <Act of={transfer} loud>
          make {chosen.person.name} the owner; you stay as coauthor
        </Act>
      )}
    </p>
  );
}

const mailModes = [
  ['as-all', 'as all others'],
  ['immediate', 'at once'],
  ['daily', 'once a day, together'],
  ['off', 'not at all'],
] as const;

/** How notices about this notebook come by mail. */
export function Follow({ notebook }: { notebook: string }) {
  const client = useQueryClient();
  const asked = useQuery(noticeSettingsQuery());
  const set = async (mail: MailMode | null) => {
    const said = await call('followNotebook', { params: { notebook }, body: { mail } });
    client.setQueryData(noticeSettingsQuery().queryKey, said);
  };
  const [failed, setFailed] = useState(false);
  if (!asked.data) return null;
  const mail = asked.data.notebooks.find((one) => one.notebook === notebook)?.mail ?? 'as-all';
  return (
    <p className="colophon-line mt-3">
      <Choice
        label="Notices about it come to you by mail"
        value={mail}
        options={mailModes}
        choose={(mode) => {
          setFailed(false);
          set(mode === 'as-all' ? null : mode).catch(() => setFailed(true));
        }}
      />
      {failed && (
        <span role="alert" className="ink-refuted">
          This could not be set.
        </span>
      )}
    </p>
  );
}

/** Gives up one's own role. */
export function Leave({ notebook, gone }: { notebook: Notebook; gone: () => void }) {
  const client = useQueryClient();
  const [sure, setSure] = useState(false);
  const leave = useAttempt(async () => {
    await call('leaveNotebook', { params: { notebook: notebook.id } });
    await rereadLists(client);
    gone();
  });
  return (
    <p className="colophon-line mt-3">
      <span>You are on it as {notebook.role}.</span>
      {sure ? (
        <Act of={leave} loud>
          give the role up
        </Act>
      ) : (
        <button type="button" className="act" onClick={() => setSure(true)}>
          leave the notebook
        </button>
      )}
    </p>
  );
}
