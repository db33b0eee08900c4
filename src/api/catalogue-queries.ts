import { queryOptions } from '@tanstack/react-query';
import { call } from './client.ts';

/** The catalogue changes with the program alone, so what was fetched keeps. */
export const workedListQuery = () =>
  queryOptions({
    queryKey: ['worked'],
    queryFn: ({ signal }) => call('listWorked', { signal }),
    staleTime: Infinity,
  });

export const workedQuery = (worked: string) =>
  queryOptions({
    queryKey: ['worked', worked],
    queryFn: ({ signal }) => call('getWorked', { signal, params: { worked } }),
    staleTime: Infinity,
  });
