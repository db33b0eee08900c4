import { useInfiniteQuery, useQueryClient } from '@tanstack/react-query';
import { useDeferredValue, useState } from 'react';
import type { KeptPerson } from '../../../shared/contracts/steward.ts';
import { keptPeopleQuery } from '../../api/account-queries.ts';
import { call } from '../../api/client.ts';
import { Act, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { Failed, Waiting } from '../../components/faces.tsx';
import { Field, ShowMore } from '../../components/parts.tsx';

/** Everyone with an account: closing an account to its person, and making stewards. What people write is not shown here. */
export function KeptPeople() {
  const [typed, setTyped] = useState('');
  const q = useDeferredValue(typed.trim());
  const asked = useInfiniteQuery(keptPeopleQuery(q));
  const people = asked.data?.pages.flatMap((page) => page.items) ?? [];
  return (
    <>
      <Field label="Find a person" type="search" value={typed} set={setTyped} className="mt-4" />
      {asked.isPending && <Waiting what="Fetching the people …" />}
      {asked.isError && (
        <Failed what="The people could not be fetched." error={asked.error} retry={() => void asked.refetch()} />
      )}
      {asked.isSuccess && people.length === 0 && (
        <p role="status" className="label mt-4">
          Nobody is called that.
        </p>
      )}
      {people.length > 0 && (
        <table className="ledger mt-4">
          <caption className="aside-only">People</caption>
          <thead>
            <tr className="label">
              <th scope="col">Person</th>
              <th scope="col">Notebooks</th>
              <th scope="col">Sessions</th>
              <th scope="col">Account</th>
            </tr>
          </thead>
          <tbody>
            {people.map((person) => (
              <Row key={person.id} person={person} />
            ))}
          </tbody>
        </table>
      )}
      <ShowMore of={asked} />
    </>
  );
}

function Row({ person }: { person: KeptPerson }) {
  const client = useQueryClient();
  const change = async (body: { steward?: boolean; suspended?: boolean }) => {
    await call('changeKeptPerson', { params: { person: person.id }, body });
    await client.invalidateQueries({ queryKey: ['steward', 'people'] });
  };
  const close = useAttempt(() => change({ suspended: person.suspendedAt === null }));
  const steward = useAttempt(() => change({ steward: !person.steward }));
  const whom = <span className="aside-only"> {person.name}</span>;
  return (
    <tr>
      <td>
        <span className="text-lead">{person.name}</span>
        <span className="label block">
          @{person.handle}
          {person.email !== null && ` · ${person.email}`}
          {person.affiliation !== null && ` · ${person.affiliation}`}
        </span>
      </td>
      <td>{person.notebooks}</td>
      <td>{person.sessions}</td>
      <td>
        <span className="label block">
          {person.steward && 'steward · '}
          {person.suspendedAt === null ? (
            <>
              since <Day at={person.since} />
            </>
          ) : (
            <>
              closed since <Day at={person.suspendedAt} />
            </>
          )}
        </span>
        <span className="colophon-line">
          <Act of={close}>
            {person.suspendedAt === null ? 'close' : 'open again'}
            {whom}
          </Act>
          <Act of={steward}>
            {person.steward ? 'no steward any more' : 'make a steward'}
            {whom}
          </Act>
        </span>
      </td>
    </tr>
  );
}
