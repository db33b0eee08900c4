import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { AccountPage, WayIn } from '../../../shared/contracts/people.ts';
import { call } from '../../api/client.ts';
import { Act, Attempt, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { Field, Part } from '../../components/parts.tsx';

const wayWords: Readonly<Record<WayIn['way'], string>> = { github: 'GitHub', email: 'a link to' };

/** The ways to sign in that lead to this person; the last one cannot be taken away. */
export function WaysIn({ account }: { account: AccountPage }) {
  const [email, setEmail] = useState('');
  const [sent, setSent] = useState<string | null>(null);
  const add = useAttempt(async () => {
    await call('addAddress', { body: { email } });
    setSent(email);
    setEmail('');
  });
  return (
    <Part title="Ways to sign in">
      <ul className="space-y-1">
        {account.ways.map((way) => (
          <Way key={way.id} way={way} only={account.ways.length === 1} />
        ))}
      </ul>
      <form
        className="mt-4 max-w-xl"
        onSubmit={(event) => {
          event.preventDefault();
          if (email.trim() !== '') add.run();
        }}
      >
        <Field label="One more address" type="email" value={email} set={setEmail} />
        <p className="colophon-line">
          <button type="submit" className="act" disabled={add.busy || email.trim() === ''}>
            send a link that adds it
          </button>
          {account.ways.every((way) => way.way !== 'github') && (
            <a className="act" href="/auth/github?link=1">
              add a GitHub account
            </a>
          )}
        </p>
        <Attempt of={add} />
        <p role="status">{sent !== null && `A link is on its way to ${sent}; opening it adds the address.`}</p>
      </form>
    </Part>
  );
}

function Way({ way, only }: { way: WayIn; only: boolean }) {
  const client = useQueryClient();
  const remove = useAttempt(async () => {
    client.setQueryData(['account'], await call('removeWayIn', { params: { way: way.id } }));
  });
  return (
    <li className="colophon-line">
      <span>
        {wayWords[way.way]} {way.label}
      </span>
      <span className="label">
        since <Day at={way.since} />
      </span>
      {only ? (
        <span className="label">the only one</span>
      ) : (
        <Act of={remove}>
          take away<span className="aside-only"> {way.label}</span>
        </Act>
      )}
    </li>
  );
}
