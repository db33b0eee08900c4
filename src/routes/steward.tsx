import { useQuery } from '@tanstack/react-query';
import type { ReactNode } from 'react';
import { Link, useSearchParams } from 'react-router-dom';
import { meQuery } from '../api/queries.ts';
import { Waiting } from '../components/faces.tsx';
import { HealthSheet, LimitsSheet } from '../features/steward/installation.tsx';
import { KeptPeople } from '../features/steward/people.tsx';
import { KeptJobs, MailQueue } from '../features/steward/work.tsx';
import { NotFoundPage } from './not-found.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

const parts: readonly (readonly [string, string, () => ReactNode])[] = [
  ['health', 'health', () => <HealthSheet />],
  ['people', 'people', () => <KeptPeople />],
  ['jobs', 'jobs', () => <KeptJobs />],
  ['mail', 'mail', () => <MailQueue />],
  ['limits', 'limits', () => <LimitsSheet />],
];

/** For those who run the installation. To everyone else there is no such page. */
export function StewardPage() {
  const me = useQuery(meQuery());
  const [search] = useSearchParams();
  const chosen = search.get('part') ?? 'health';
  if (me.isPending)
    return (
      <Sheet title="Stewardship" narrow>
        <Waiting what="Opening …" />
      </Sheet>
    );
  if (!me.data?.may.includes('steward')) return <NotFoundPage />;
  const shown = parts.find(([name]) => name === chosen) ?? parts[0];
  return (
    <Sheet title="Stewardship" narrow>
      <h1 className="pt-8">Stewardship</h1>
      <nav aria-label="Parts of stewardship" className="colophon-line label mt-4">
        {parts.map(([name, words]) => (
          <Link
            key={name}
            to={`${paths.steward.to()}?part=${name}`}
            aria-current={name === shown?.[0] ? 'page' : undefined}
            className="part-link"
          >
            {words}
          </Link>
        ))}
      </nav>
      {shown?.[2]()}
    </Sheet>
  );
}
