import { useQuery } from '@tanstack/react-query';
import { type ReactNode, useState } from 'react';
import { address, endpoints } from '../../../shared/contracts/endpoints.ts';
import type { AccountPage } from '../../../shared/contracts/people.ts';
import { deletionQuery } from '../../api/account-queries.ts';
import { call } from '../../api/client.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';
import { Failed, Waiting } from '../../components/faces.tsx';
import { Field, Part } from '../../components/parts.tsx';

interface Props {
  readonly account: AccountPage;
  readonly link: (notebook: string, title: string) => ReactNode;
  readonly gone: () => Promise<void>;
}

/** Taking one's data along, and deleting the account. */
export function Leaving({ account, link, gone }: Props) {
  const [asking, setAsking] = useState(false);
  return (
    <Part title="Your data">
      <p className="colophon-line">
        <a className="act" href={address(endpoints.exportAccount)} download="gaugewright-account.json">
          export all that is kept about you
        </a>
        <button type="button" className="act" aria-expanded={asking} onClick={() => setAsking(!asking)}>
          delete the account
        </button>
      </p>
      {asking && <Deleting account={account} link={link} gone={gone} />}
    </Part>
  );
}

function Deleting({ account, link, gone }: Props) {
  // Once the account goes, nothing more is asked in its name.
  const [leaving, setLeaving] = useState(false);
  const asked = useQuery({ ...deletionQuery(), enabled: !leaving });
  const [typed, setTyped] = useState('');
  const remove = useAttempt(async () => {
    setLeaving(true);
    try {
      await call('deleteAccount', { body: { handle: typed } });
    } catch (error) {
      setLeaving(false);
      throw error;
    }
    await gone();
  });
  if (asked.isPending) return <Waiting what="Looking what would go with it …" />;
  if (!asked.data)
    return <Failed what="What would go with it is not known." error={asked.error} retry={() => void asked.refetch()} />;
  const { goes, handOn } = asked.data;
  if (handOn.length > 0)
    return (
      <div className="measure mt-3">
        <p>These notebooks have other people; make one of them the owner first, or delete the notebook:</p>
        <ul className="mt-1">
          {handOn.map((one) => (
            <li key={one.id}>
              {link(one.id, one.title)} <span className="label">{one.people} on it</span>
            </li>
          ))}
        </ul>
      </div>
    );
  return (
    <form
      className="measure mt-3 space-y-3"
      onSubmit={(event) => {
        event.preventDefault();
        if (typed === account.handle) remove.run();
      }}
    >
      <p>
        Your profile, ways to sign in, tokens and notices go for good; your name stays as author on editions of others’
        notebooks.
      </p>
      {goes.length > 0 && (
        <>
          <p>These notebooks go with it, and their editions:</p>
          <ul>
            {goes.map((one) => (
              <li key={one.id}>
                {link(one.id, one.title)}{' '}
                <span className="label">{one.editions === 1 ? 'one edition' : `${String(one.editions)} editions`}</span>
              </li>
            ))}
          </ul>
        </>
      )}
      <Field
        label={`To confirm, type your handle: ${account.handle}`}
        value={typed}
        set={setTyped}
        autoComplete="off"
      />
      <button type="submit" className="act ink-refuted" disabled={remove.busy || typed !== account.handle}>
        delete the account for good
      </button>
      <Attempt of={remove} />
    </form>
  );
}
