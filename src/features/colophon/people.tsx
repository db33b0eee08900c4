import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useId, useState } from 'react';
import type { Notebook } from '../../../shared/contracts/notebooks.ts';
import type { GrantedRole, Visibility } from '../../../shared/contracts/rights.ts';
import { call } from '../../api/client.ts';
import { keepNotebook, membersQuery } from '../../api/queries.ts';
import { RoleChoice } from './role-choice.tsx';
import { Follow, Invitations, Leave, Transfer } from './rights.tsx';
import { Attempt, useAttempt } from '../../components/attempt.tsx';

/** Who is on a notebook and as what, and who else may read it. */
export function People({ notebook, gone }: { notebook: Notebook; gone: () => void }) {
  const members = useQuery(membersQuery(notebook.id));
  const may = new Set(notebook.may);
  const others = members.data?.items.filter(({ role }) => role !== 'owner') ?? [];
  return (
    <section className="colophon-part" aria-label="People and rights">
      <ul className="space-y-1">
        {members.data?.items.map(({ person, role }) => (
          <li key={person.id} className="colophon-line">
            <span>
              {person.name} <span className="label">@{person.handle}</span>
            </span>
            <span className="label">{role}</span>
            {may.has('invite') && role !== 'owner' && (
              <Member notebook={notebook.id} person={person.id} name={person.name} role={role} />
            )}
          </li>
        ))}
      </ul>
      {members.isError && <p className="ink-refuted">The people could not be fetched.</p>}
      {may.has('invite') && <Invitations notebook={notebook.id} />}
      {may.has('invite') && <Add notebook={notebook.id} />}
      {may.has('transfer') && others.length > 0 && <Transfer notebook={notebook.id} others={others} />}
      {may.has('follow') && <Follow notebook={notebook.id} />}
      {may.has('leave') && notebook.role !== 'owner' && notebook.role !== null && (
        <Leave notebook={notebook} gone={gone} />
      )}
      <Visible notebook={notebook} may={may.has('show')} />
    </section>
  );
}

function useRereadMembers(notebook: string) {
  const client = useQueryClient();
  return () => client.invalidateQueries({ queryKey: membersQuery(notebook).queryKey });
}

function Member(props: { notebook: string; person: string; name: string; role: GrantedRole }) {
  const { notebook, person, name, role } = props;
  const reread = useRereadMembers(notebook);
  const remove = useAttempt(async () => {
    await call('removeMember', { params: { notebook, person } });
    await reread();
  });
  const [wanted, setWanted] = useState<GrantedRole>(role);
  const change = useAttempt(async () => {
    await call('changeMember', { params: { notebook, person }, body: { role: wanted } });
    await reread();
  });
  return (
    <>
      <RoleChoice label={`Role of ${name}`} role={wanted} choose={setWanted} />
      {wanted !== role && (
        <button type="button" className="act" disabled={change.busy} onClick={change.run}>
          change to {wanted}
        </button>
      )}
      <button type="button" className="act" disabled={remove.busy} onClick={remove.run}>
        remove<span className="aside-only"> {name}</span>
      </button>
      <Attempt of={remove} />
      <Attempt of={change} />
    </>
  );
}

function Add({ notebook }: { notebook: string }) {
  const [handle, setHandle] = useState('');
  const [role, setRole] = useState<GrantedRole>('coauthor');
  const field = useId();
  const reread = useRereadMembers(notebook);
  const add = useAttempt(async () => {
    await call('addMember', { params: { notebook }, body: { handle, role } });
    setHandle('');
    await reread();
  });
  return (
    <form
      className="colophon-line mt-3"
      onSubmit={(event) => {
        event.preventDefault();
        if (handle.trim() !== '') add.run();
      }}
    >
      <label className="label" htmlFor={field}>
        Add someone by their handle
      </label>
      <input
        id={field}
        className="field w-48"
        autoComplete="off"
        value={handle}
        onChange={(event) => setHandle(event.target.value)}
      />
      <RoleChoice label="As what" role={role} choose={setRole} />
      <button type="submit" className="act" disabled={add.busy || handle.trim() === ''}>
        add
      </button>
      <Attempt of={add} />
    </form>
  );
}

function Visible({ notebook, may }: { notebook: Notebook; may: boolean }) {
  const client = useQueryClient();
  const other: Visibility = notebook.visibility === 'public' ? 'private' : 'public';
  const change = useAttempt(async () => {
    const params = { notebook: notebook.id };
    keepNotebook(client, await call('setVisibility', { params, body: { visibility: other } }));
  });
  return (
    <p className="colophon-line mt-3">
      <span>
        {notebook.visibility === 'public'
          ? 'Public: anyone may read it and its editions.'
          : 'Private: only the people above may read it, and whoever has a link to an edition.'}
      </span>
      {may && (
        <button type="button" className="act" disabled={change.busy} onClick={change.run}>
          make it {other}
        </button>
      )}
      <Attempt of={change} />
    </p>
  );
}
