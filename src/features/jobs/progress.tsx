import { useQueryClient } from '@tanstack/react-query';
import type { Job } from '../../../shared/contracts/jobs.ts';
import { call } from '../../api/client.ts';
import { Act, useAttempt } from '../../components/attempt.tsx';
import { isOpen, rereadJobs } from './queries.ts';
import { jobInWords } from './words.ts';

/** How far a job is, and the way to take it back. */
export function JobProgress({ job, of }: { job: Job; of: string }) {
  const client = useQueryClient();
  const back = useAttempt(async () => {
    await call('cancelJob', { params: { job: job.id } });
    await rereadJobs(client);
  });
  return (
    <span className="label inline-flex flex-wrap items-baseline gap-x-3" data-job={job.state}>
      {isOpen(job) && <progress aria-label={`Progress of ${of}`} max={1} value={job.done} />}
      <span>{jobInWords(job)}</span>
      {isOpen(job) && (
        <Act of={back}>
          take back<span className="aside-only"> {of}</span>
        </Act>
      )}
    </span>
  );
}
