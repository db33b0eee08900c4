import { useInfiniteQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { QueuedMail } from '../../../shared/contracts/steward.ts';
import { type KeptJobStatus, keptJobsQuery, mailQuery, type MailState } from '../../api/account-queries.ts';
import { call } from '../../api/client.ts';
import { Act, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { Failed, Waiting } from '../../components/faces.tsx';
import { Choice, ShowMore } from '../../components/parts.tsx';

const jobStates = [
  ['all', 'all'],
  ['computing', 'under way'],
  ['sealed', 'sealed'],
  ['failed', 'failed'],
] as const;

/** The computing of editions' claims: which, not what they say. */
export function KeptJobs() {
  const [status, setStatus] = useState<KeptJobStatus | 'all'>('all');
  const asked = useInfiniteQuery(keptJobsQuery(status === 'all' ? undefined : status));
  const jobs = asked.data?.pages.flatMap((page) => page.items) ?? [];
  return (
    <>
      <p className="mt-4">
        <Choice label="Show" value={status} options={jobStates} choose={setStatus} />
      </p>
      {asked.isPending && <Waiting what="Fetching the jobs …" />}
      {asked.isError && (
        <Failed what="The jobs could not be fetched." error={asked.error} retry={() => void asked.refetch()} />
      )}
      {asked.isSuccess && jobs.length === 0 && <p className="label mt-4">No such job.</p>}
      <ul className="listed mt-4">
        {jobs.map((job) => (
          <li key={job.id}>
            <p className={job.status === 'failed' ? 'ink-refuted' : undefined}>
              Edition {job.edition} of notebook <span className="code">{job.notebook.slice(0, 8)}</span>:{' '}
              {job.status === 'computing' ? 'under way' : job.status}
              {job.reason !== null && `: ${job.reason}`}
            </p>
            <p className="label">
              asked for by {job.by?.name ?? 'a person who has left'}, <Day at={job.askedAt} time />
              {job.attempts > 1 && ` · ${String(job.attempts)} attempts`}
              {job.endedAt !== null && (
                <>
                  {' '}
                  · ended <Day at={job.endedAt} time />
                </>
              )}
            </p>
          </li>
        ))}
      </ul>
      <ShowMore of={asked} />
    </>
  );
}

const mailStates = [
  ['all', 'all'],
  ['waiting', 'waiting'],
  ['sent', 'sent'],
  ['failed', 'given up'],
] as const;

/** The queue of mail, without what the mails say. */
export function MailQueue() {
  const [state, setState] = useState<MailState | 'all'>('all');
  const asked = useInfiniteQuery(mailQuery(state === 'all' ? undefined : state));
  const mails = asked.data?.pages.flatMap((page) => page.items) ?? [];
  return (
    <>
      <p className="mt-4">
        <Choice label="Show" value={state} options={mailStates} choose={setState} />
      </p>
      {asked.isPending && <Waiting what="Fetching the queue …" />}
      {asked.isError && (
        <Failed what="The queue could not be fetched." error={asked.error} retry={() => void asked.refetch()} />
      )}
      {asked.isSuccess && mails.length === 0 && <p className="label mt-4">No such mail.</p>}
      <ul className="listed mt-4">
        {mails.map((mail) => (
          <Mail key={mail.id} mail={mail} />
        ))}
      </ul>
      <ShowMore of={asked} />
    </>
  );
}

function Mail({ mail }: { mail: QueuedMail }) {
  const client = useQueryClient();
  const retry = useAttempt(async () => {
    await call('retryMail', { params: { mail: mail.id } });
    await client.invalidateQueries({ queryKey: ['steward', 'mail'] });
  });
  return (
    <li>
      <p>
        {mail.subject} <span className="label">to {mail.to}</span>
      </p>
      <p className="label colophon-line">
        <span>
          {mail.state === 'failed' ? 'given up' : mail.state}
          {mail.attempts > 1 && ` after ${String(mail.attempts)} attempts`}
          {mail.error !== null && `: ${mail.error}`}
        </span>
        <span>
          <Day at={mail.sentAt ?? mail.createdAt} time />
        </span>
        {mail.state === 'failed' && (
          <Act of={retry}>
            try again<span className="aside-only">: {mail.subject}</span>
          </Act>
        )}
      </p>
    </li>
  );
}
