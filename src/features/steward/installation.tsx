import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { type Health, type Limits, limitsSchema } from '../../../shared/contracts/steward.ts';
import { healthQuery, limitsQuery } from '../../api/account-queries.ts';
import { call } from '../../api/client.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';
import { Failed, Waiting } from '../../components/faces.tsx';
import { Field } from '../../components/parts.tsx';

/** How the installation is; what ought to be looked at comes first. */
export function HealthSheet() {
  const asked = useQuery(healthQuery());
  if (asked.isPending) return <Waiting what="Asking how the installation is …" />;
  if (!asked.data)
    return <Failed what="Its health is not known." error={asked.error} retry={() => void asked.refetch()} />;
  return <Figures health={asked.data} />;
}

const roads: Readonly<Record<Health['mail']['road'], string>> = {
  smtp: 'leaves the house by SMTP',
  'stand-in': 'stays with the stand-in on this machine',
  none: 'goes nowhere: no mail server is set',
};

function duration(seconds: number): string {
  if (seconds < 120) return `${String(Math.round(seconds))} s`;
  if (seconds < 7200) return `${String(Math.round(seconds / 60))} min`;
  if (seconds < 172_800) return `${String(Math.round(seconds / 3600))} h`;
  return `${String(Math.round(seconds / 86_400))} days`;
}

function Figures({ health }: { health: Health }) {
  const { database, editions, mail } = health;
  const wait = editions.oldestWaitSeconds;
  const rows: readonly (readonly [string, string])[] = [
    ['people', String(health.people)],
    ['notebooks', String(health.notebooks)],
    [
      'editions being computed',
      `${String(editions.computing)}${wait === null ? '' : `, the oldest for ${duration(wait)}`}`,
    ],
    ['editions that failed', String(editions.failed)],
    ['mail', roads[mail.road]],
    ['mail that waits, given up', `${String(mail.waiting)}, ${String(mail.failed)}`],
    ['engine', health.engine],
    ['up for', duration(health.upSeconds)],
    ['memory of this process', `${String(Math.round(health.memoryMb))} MB`],
    ['Node', health.node],
    [
      'database',
      `${database.version}, ${String(Math.round(database.megabytes))} MB, ${String(database.connections)} connections`,
    ],
  ];
  return (
    <>
      {health.worries.length === 0 ? (
        <p className="mt-4">Nothing needs to be looked at.</p>
      ) : (
        <ul className="ink-refuted mt-4" aria-label="To be looked at">
          {health.worries.map((worry) => (
            <li key={worry}>{worry}</li>
          ))}
        </ul>
      )}
      <dl className="reference mt-4">
        {rows.map(([name, value]) => (
          <div key={name}>
            <dt className="label">{name}</dt>
            <dd>{value}</dd>
          </div>
        ))}
      </dl>
    </>
  );
}

const limitWords: readonly (readonly [keyof Omit<Limits, 'openSignUp'>, string])[] = [
  ['jobsPerPerson', 'Editions of one person that are computed or wait at the same time'],
  ['notebooksPerPerson', 'Notebooks of one person'],
  ['invitationsPerDay', 'Invitations that one person sends in a day'],
  ['accessTokensPerPerson', 'Access tokens of one person'],
];

/** Bounds that hold for everyone; they take effect with the next request. */
export function LimitsSheet() {
  const asked = useQuery(limitsQuery());
  if (asked.isPending) return <Waiting what="Fetching the limits …" />;
  if (!asked.data)
    return <Failed what="The limits could not be fetched." error={asked.error} retry={() => void asked.refetch()} />;
  return <SetLimits key={JSON.stringify(asked.data)} limits={asked.data} />;
}

function SetLimits({ limits }: { limits: Limits }) {
  const client = useQueryClient();
  const [typed, setTyped] = useState<Readonly<Record<string, string>>>(() =>
    Object.fromEntries(limitWords.map(([name]) => [name, String(limits[name])])),
  );
  const [openSignUp, setOpen] = useState(limits.openSignUp);
  const numbers = Object.fromEntries(limitWords.map(([name]) => [name, Number(typed[name])]));
  const parsed = limitsSchema.safeParse({ ...numbers, openSignUp });
  const save = useAttempt(async () => {
    if (parsed.success) client.setQueryData(limitsQuery().queryKey, await call('setLimits', { body: parsed.data }));
  });
  return (
    <form
      className="mt-4 max-w-xl space-y-4"
      onSubmit={(event) => {
        event.preventDefault();
        save.run();
      }}
    >
      {limitWords.map(([name, words]) => {
        const said = parsed.error?.issues.find((issue) => issue.path[0] === name)?.message;
        return (
          <Field
            key={name}
            label={words}
            inputMode="numeric"
            value={typed[name] ?? ''}
            set={(value) => setTyped((now) => ({ ...now, [name]: value }))}
            {...(said === undefined ? {} : { hint: said, 'aria-invalid': true })}
          />
        );
      })}
      <label className="tick">
        <input type="checkbox" checked={openSignUp} onChange={() => setOpen(!openSignUp)} /> Anyone can make an account
        without an invitation
      </label>
      <button type="submit" className="act" disabled={save.busy || !parsed.success}>
        set the limits
      </button>
      <Attempt of={save} />
    </form>
  );
}
