import { infiniteQueryOptions, keepPreviousData, type QueryClient, queryOptions } from '@tanstack/react-query';
import type { QueryGiven } from '../../shared/contracts/endpoints.ts';
import type { Entry, Notebook } from '../../shared/contracts/notebooks.ts';
import { call } from './client.ts';

/** Key and fetcher together, one for each thing the server knows; loader, hook and invalidation use the same object. */

export const meQuery = () =>
  queryOptions({ queryKey: ['me'], queryFn: ({ signal }) => call('getMe', { signal }), staleTime: 60_000 });

export const signInQuery = () =>
  queryOptions({ queryKey: ['sign-in'], queryFn: ({ signal }) => call('getSignIn', { signal }), staleTime: 60_000 });

/** What narrows a list of notebooks. */
export type ShelfAsked = Omit<QueryGiven<'listShelf'>, 'after' | 'limit'>;
export type PublicAsked = Omit<QueryGiven<'listPublic'>, 'after' | 'limit'>;
const after = (cursor: string | null) => (cursor === null ? {} : { after: cursor });

export const shelfQuery = (asked: ShelfAsked) =>
  infiniteQueryOptions({
    queryKey: ['shelf', asked],
    queryFn: ({ signal, pageParam }) => call('listShelf', { signal, query: { ...asked, ...after(pageParam) } }),
    initialPageParam: null as string | null,
    getNextPageParam: (page) => page.next,
    placeholderData: keepPreviousData,
  });

export const publicQuery = (asked: PublicAsked) =>
  infiniteQueryOptions({
    queryKey: ['public', asked],
    queryFn: ({ signal, pageParam }) => call('listPublic', { signal, query: { ...asked, ...after(pageParam) } }),
    initialPageParam: null as string | null,
    getNextPageParam: (page) => page.next,
    placeholderData: keepPreviousData,
  });

export const notebookQuery = (notebook: string) =>
  queryOptions({
    queryKey: ['notebook', notebook],
    queryFn: ({ signal }) => call('getNotebook', { signal, params: { notebook } }),
  });

export const editionsQuery = (notebook: string) =>
  queryOptions({
    queryKey: ['notebook', notebook, 'editions'],
    queryFn: ({ signal }) => call('listEditions', { signal, params: { notebook }, query: { limit: 100 } }),
    // Claims are being computed: ask again until they are sealed, in case live events do not reach this page.
    refetchInterval: (query) => (query.state.data?.items.some((one) => one.status === 'computing') ? 3000 : false),
  });

export const editionQuery = (notebook: string, edition: number) =>
  queryOptions({
    queryKey: ['notebook', notebook, 'editions', edition],
    queryFn: ({ signal }) => call('getEdition', { signal, params: { notebook, edition } }),
    refetchInterval: (query) => (query.state.data?.status === 'computing' ? 2000 : false),
  });

export const linkedQuery = (token: string) =>
  queryOptions({
    queryKey: ['linked', token],
    queryFn: ({ signal }) => call('getLinked', { signal, params: { token } }),
    refetchInterval: (query) => (query.state.data?.status === 'computing' ? 2000 : false),
  });

export const membersQuery = (notebook: string) =>
  queryOptions({
    queryKey: ['notebook', notebook, 'people'],
    queryFn: ({ signal }) => call('listMembers', { signal, params: { notebook } }),
  });

export const linksQuery = (notebook: string) =>
  queryOptions({
    queryKey: ['notebook', notebook, 'links'],
    queryFn: ({ signal }) => call('listLinks', { signal, params: { notebook } }),
  });

// ---------------------------------------------------------------- what a change does to what is kept

/** Puts a saved entry in the kept notebook, unless a later version is there already. */
export function keepEntry(client: QueryClient, notebook: string, entry: Entry): void {
  client.setQueryData<Notebook>(['notebook', notebook], (kept) => {
    if (!kept) return kept;
    const entries = kept.entries.map((one) => (one.id === entry.id && one.version <= entry.version ? entry : one));
    return { ...kept, entries };
  });
}

export const keepNotebook = (client: QueryClient, notebook: Notebook): void => {
  client.setQueryData<Notebook>(['notebook', notebook.id], notebook);
};

export function keepOrder(client: QueryClient, notebook: string, order: readonly string[], added?: Entry): void {
  client.setQueryData<Notebook>(['notebook', notebook], (kept) => {
    if (!kept) return kept;
    const all = new Map([...kept.entries, ...(added ? [added] : [])].map((entry) => [entry.id, entry]));
    return { ...kept, entries: order.flatMap((id) => all.get(id) ?? []) };
  });
}

/** Asks again for the notebook itself; its editions, people and links keep. */
export const rereadNotebook = (client: QueryClient, notebook: string): Promise<void> =>
  client.invalidateQueries({ queryKey: ['notebook', notebook], exact: true });

export const rereadEditions = (client: QueryClient, notebook: string): Promise<void> =>
  client.invalidateQueries({ queryKey: ['notebook', notebook, 'editions'] });

export const rereadLists = async (client: QueryClient): Promise<void> => {
  await Promise.all([
    client.invalidateQueries({ queryKey: ['shelf'] }),
    client.invalidateQueries({ queryKey: ['public'] }),
  ]);
};
