import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { AccessToken } from '../../../shared/contracts/people.ts';
import { type Scope, scopes } from '../../../shared/contracts/rights.ts';
import { tokensQuery } from '../../api/account-queries.ts';
import { call } from '../../api/client.ts';
import { Act, Attempt, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { Failed, Waiting } from '../../components/faces.tsx';
import { Choice, Field, Part } from '../../components/parts.tsx';

const scopeWords: Readonly<Record<Scope, string>> = {
  read: 'read notebooks and editions',
  write: 'make and change notebooks',
  publish: 'publish editions',
};

const lifetimes = [
  ['30', '30 days'],
  ['90', '90 days'],
  ['365', 'a year'],
  ['', 'until it is revoked'],
] as const;
type Lifetime = (typeof lifetimes)[number][0];

/** Personal access tokens, for scripts. A token's secret is shown once, when it is made. */
export function Tokens() {
  const client = useQueryClient();
  const asked = useQuery(tokensQuery());
  const [name, setName] = useState('');
  const [chosen, setChosen] = useState<readonly Scope[]>(['read']);
  const [days, setDays] = useState<Lifetime>('90');
  const [secret, setSecret] = useState<string | null>(null);
  const make = useAttempt(async () => {
    const body = { name, scopes: [...chosen], days: days === '' ? null : Number(days) };
    const made = await call('createToken', { body });
    setSecret(made.secret);
    setName('');
    await client.invalidateQueries({ queryKey: ['account', 'tokens'] });
  });
  const toggle = (scope: Scope) =>
    setChosen((now) => (now.includes(scope) ? now.filter((one) => one !== scope) : [...now, scope]));
  return (
    <Part title="Access tokens">
      <p className="measure">
        A token lets a script of yours do what it names, as you, through the{' '}
        <a href="/api/openapi.json">interface that is described here</a>.
      </p>
      {asked.isPending && <Waiting what="Fetching your tokens …" />}
      {asked.isError && (
        <Failed what="Your tokens could not be fetched." error={asked.error} retry={() => void asked.refetch()} />
      )}
      {asked.data?.items.length === 0 && <p className="label mt-2">None yet.</p>}
      <ul className="mt-2 space-y-1">
        {asked.data?.items.map((token) => (
          <One key={token.id} token={token} />
        ))}
      </ul>
      {secret !== null && (
        <p role="status" className="mt-3">
          The token, shown only now: <code className="code select-all break-all">{secret}</code>
        </p>
      )}
      <form
        className="mt-4 max-w-xl space-y-2"
        onSubmit={(event) => {
          event.preventDefault();
          if (name.trim() !== '' && chosen.length > 0) make.run();
        }}
      >
        <Field label="What a new token is for" value={name} set={setName} maxLength={80} />
        <fieldset>
          <legend className="label">It may</legend>
          {scopes.map((scope) => (
            <label key={scope} className="tick">
              <input type="checkbox" checked={chosen.includes(scope)} onChange={() => toggle(scope)} />{' '}
              {scopeWords[scope]}
            </label>
          ))}
        </fieldset>
        <p className="colophon-line">
          <Choice label="Good for" value={days} options={lifetimes} choose={setDays} />
          <button type="submit" className="act" disabled={make.busy || name.trim() === '' || chosen.length === 0}>
            make the token
          </button>
        </p>
        <Attempt of={make} />
      </form>
    </Part>
  );
}

function One({ token }: { token: AccessToken }) {
  const client = useQueryClient();
  const revoke = useAttempt(async () => {
    await call('revokeToken', { params: { key: token.id } });
    await client.invalidateQueries({ queryKey: ['account', 'tokens'] });
  });
  return (
    <li className="colophon-line">
      <span>
        {token.name} <span className="code">{token.begins}…</span>
      </span>
      <span className="label">
        {token.scopes.join(', ')}
        {token.expiresAt !== null && (
          <>
            {' '}
            · until <Day at={token.expiresAt} />
          </>
        )}{' '}
        ·{' '}
        {token.usedAt === null ? (
          'not used yet'
        ) : (
          <>
            last used <Day at={token.usedAt} />
          </>
        )}
      </span>
      <Act of={revoke}>
        revoke<span className="aside-only"> {token.name}</span>
      </Act>
    </li>
  );
}
