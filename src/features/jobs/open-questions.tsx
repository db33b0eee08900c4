import { useQuery, useQueryClient } from '@tanstack/react-query';
import { createContext, useContext } from 'react';
import type { Claim } from '../../../shared/contracts/report.ts';
import { call } from '../../api/client.ts';
import { Act, useAttempt } from '../../components/attempt.tsx';
import { JobProgress } from './progress.tsx';
import { isOpen, jobsQuery, rereadJobs } from './queries.ts';

/** Where questions are handed over from: a notebook, with its text as it stands on the page. Null: nobody can hand over anything here. */
export const HandOverContext = createContext<{ readonly notebook: string; readonly source: string } | null>(null);

/** What of these claims stands open because it is too costly for this page: to be handed to the server, or on its way there. */
export function OpenQuestions({ claims }: { claims: readonly Claim[] }) {
  const from = useContext(HandOverContext);
  const open = claims.flatMap(({ question, statement }) => (question === undefined ? [] : [{ question, statement }]));
  if (from === null || open.length === 0) return null;
  return (
    <ul className="open-questions label" aria-label="For the server">
      {open.map((one) => (
        <OpenQuestion key={one.question} {...one} {...from} />
      ))}
    </ul>
  );
}

interface Props {
  readonly question: string;
  readonly statement: string;
  readonly notebook: string;
  readonly source: string;
}

function OpenQuestion({ question, statement, notebook, source }: Props) {
  const client = useQueryClient();
  const jobs = useQuery(jobsQuery());
  const job = jobs.data?.items.find((one) => one.question === question && one.state !== 'cancelled');
  const hand = useAttempt(async () => {
    await call('askQuestion', { body: { source, question, notebook } });
    await rereadJobs(client);
  });
  return (
    <li>
      {job && <JobProgress job={job} of={statement} />}
      {(!job || (!isOpen(job) && job.state !== 'done')) && (
        <Act of={hand}>
          hand to the server<span className="aside-only">: {statement}</span>
        </Act>
      )}
    </li>
  );
}
