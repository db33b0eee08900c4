import { type QueryClient, queryOptions } from '@tanstack/react-query';
import { type Job, mostNames } from '../../../shared/contracts/jobs.ts';
import { call } from '../../api/client.ts';

export const isOpen = ({ state }: Pick<Job, 'state'>): boolean => state === 'waiting' || state === 'working';

/** One's jobs, newest first; asked again every second while one is open, since progress is not announced. */
export const jobsQuery = () =>
  queryOptions({
    queryKey: ['jobs'],
    queryFn: ({ signal }) => call('listJobs', { signal, query: { limit: 100 } }),
    refetchInterval: (query) => (query.state.data?.items.some(isOpen) ? 1_000 : false),
  });

/** Answers that the server has to questions by their names. */
export const answersQuery = (names: readonly string[]) =>
  queryOptions({
    queryKey: ['answers', names.join(',')],
    queryFn: ({ signal }) => call('getAnswers', { signal, query: { questions: names.slice(0, mostNames).join(',') } }),
    enabled: names.length > 0,
    staleTime: 60_000,
  });

export async function rereadJobs(client: QueryClient): Promise<void> {
  await Promise.all([
    client.invalidateQueries({ queryKey: ['jobs'] }),
    client.invalidateQueries({ queryKey: ['answers'] }),
  ]);
}
