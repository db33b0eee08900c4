import type { ReactNode } from 'react';
import type { Job } from '../../../shared/contracts/jobs.ts';
import { JobProgress } from './progress.tsx';

interface Props {
  readonly jobs: readonly Job[];
  readonly link: (notebook: string, title: string) => ReactNode;
}

const times = new Intl.DateTimeFormat('en-GB', { dateStyle: 'medium', timeStyle: 'short' });

/** A person's jobs as lines of a table: the audit, its size, where its answer is waited for, how it stands. */
export function Jobs({ jobs, link }: Props) {
  return (
    <table className="ledger mt-8">
      <caption className="aside-only">Your jobs</caption>
      <thead>
        <tr className="label">
          <th scope="col">Question</th>
          <th scope="col">Notebook</th>
          <th scope="col">Asked</th>
          <th scope="col">Progress</th>
        </tr>
      </thead>
      <tbody>
        {jobs.map((job) => (
          <tr key={job.id}>
            <td>
              <span className="code block">{job.text}</span>
              <span className="label block">
                {job.size !== '' && `on ${job.size.replaceAll(' x ', ' × ')}, `}
                {job.estimate.words}
              </span>
            </td>
            <td className="label">{job.notebook ? link(job.notebook.id, job.notebook.title) : 'none'}</td>
            <td className="label">
              <time dateTime={job.askedAt}>{times.format(new Date(job.askedAt))}</time>
            </td>
            <td>
              <JobProgress job={job} of={`${job.text}${job.size === '' ? '' : ` on ${job.size}`}`} />
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}
