import { infiniteQueryOptions, type QueryClient, queryOptions } from '@tanstack/react-query';
import { call } from './client.ts';

/** Key and fetcher of what coauthors, referees and reading groups do with a notebook. */

export const remarksQuery = (notebook: string, edition?: number) =>
  queryOptions({
    queryKey: ['notebook', notebook, 'remarks', edition ?? 'draft'],
    queryFn: ({ signal }) =>
      call('listRemarks', { signal, params: { notebook }, query: edition === undefined ? {} : { edition } }),
  });

export const verdictsQuery = (notebook: string, edition: number) =>
  queryOptions({
    queryKey: ['notebook', notebook, 'verdicts', edition],
    queryFn: ({ signal }) => call('listVerdicts', { signal, params: { notebook, edition } }),
  });

export const allVerdictsQuery = (notebook: string) =>
  queryOptions({
    queryKey: ['notebook', notebook, 'verdicts', 'all'],
    queryFn: ({ signal }) => call('listAllVerdicts', { signal, params: { notebook } }),
  });

export const rerunsQuery = (notebook: string, edition: number) =>
  queryOptions({
    queryKey: ['notebook', notebook, 'reruns', edition],
    queryFn: ({ signal }) => call('listReruns', { signal, params: { notebook, edition } }),
    // In case live events do not reach this page.
    refetchInterval: (query) => (query.state.data?.items.some((one) => one.status === 'computing') ? 3000 : false),
  });

export const comparisonQuery = (notebook: string, left: string, right: string) =>
  queryOptions({
    queryKey: ['notebook', notebook, 'comparison', left, right],
    queryFn: ({ signal }) => call('compare', { signal, params: { notebook }, query: { left, right } }),
    // A draft changes, and a side may still be evaluated.
    staleTime: 0,
    refetchInterval: (query) => {
      const said = query.state.data;
      return said && said.physics === null && said.reason === null ? 2000 : false;
    },
  });

const undecided = (variants: readonly { claims: unknown; reason: string | null }[] | undefined): boolean =>
  variants?.some((one) => one.claims === null && one.reason === null) ?? false;

export const collationQuery = (notebook: string) =>
  queryOptions({
    queryKey: ['notebook', notebook, 'collation'],
    queryFn: ({ signal }) => call('getCollation', { signal, params: { notebook } }),
    staleTime: 0,
    refetchInterval: (query) => (undecided(query.state.data?.variants) ? 2500 : false),
  });

export const sendingsQuery = (notebook: string, which: 'received' | 'sent') =>
  infiniteQueryOptions({
    queryKey: ['notebook', notebook, 'variants', which],
    queryFn: ({ signal, pageParam }) =>
      call('listVariants', {
        signal,
        params: { notebook },
        query: { which, ...(pageParam === null ? {} : { after: pageParam }) },
      }),
    initialPageParam: null as string | null,
    getNextPageParam: (page) => page.next,
  });

export const sendingQuery = (notebook: string, sending: string) =>
  queryOptions({
    queryKey: ['notebook', notebook, 'variants', 'one', sending],
    queryFn: ({ signal }) => call('getVariants', { signal, params: { notebook, sending } }),
    refetchInterval: (query) => (undecided(query.state.data?.variants) ? 2500 : false),
  });

export const historyQuery = (notebook: string) =>
  infiniteQueryOptions({
    queryKey: ['notebook', notebook, 'editions', 'history'],
    queryFn: ({ signal, pageParam }) =>
      call('listEditions', { signal, params: { notebook }, query: pageParam === null ? {} : { after: pageParam } }),
    initialPageParam: null as string | null,
    getNextPageParam: (page) => page.next,
  });

export const binQuery = () =>
  queryOptions({ queryKey: ['bin'], queryFn: ({ signal }) => call('listBin', { signal }), staleTime: 0 });

// ---------------------------------------------------------------- what a change does to what is kept

type Part = 'remarks' | 'verdicts' | 'reruns' | 'variants' | 'collation' | 'comparison' | 'invitations' | 'people';

/** Asks again for one part of what is kept about a notebook. */
export const reread = (client: QueryClient, notebook: string, part: Part): Promise<void> =>
  client.invalidateQueries({ queryKey: ['notebook', notebook, part] });
