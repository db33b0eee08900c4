import { infiniteQueryOptions, queryOptions } from '@tanstack/react-query';
import { call } from './client.ts';

/** Key and fetcher of what concerns people: account, invitations, notices, and what stewards see. */

const next = (page: { readonly next: string | null }): string | null => page.next;
const after = (cursor: string | null) => (cursor === null ? {} : { after: cursor });
const first = null as string | null;

export const accountQuery = () =>
  queryOptions({ queryKey: ['account'], queryFn: ({ signal }) => call('getAccount', { signal }) });

export const sessionsQuery = () =>
  queryOptions({ queryKey: ['account', 'sessions'], queryFn: ({ signal }) => call('listSessions', { signal }) });

export const tokensQuery = () =>
  queryOptions({ queryKey: ['account', 'tokens'], queryFn: ({ signal }) => call('listTokens', { signal }) });

export const deletionQuery = () =>
  queryOptions({
    queryKey: ['account', 'deletion'],
    queryFn: ({ signal }) => call('getDeletion', { signal }),
    staleTime: 0,
  });

/** Invitations to one's own addresses. */
export const invitedQuery = () =>
  queryOptions({ queryKey: ['invited'], queryFn: ({ signal }) => call('listInvited', { signal }) });

/** What the invitation is to whose mail carries this. */
export const invitationQuery = (token: string) =>
  queryOptions({
    queryKey: ['invited', token],
    queryFn: ({ signal }) => call('lookAtInvitation', { signal, body: { token } }),
  });

export const invitationsQuery = (notebook: string) =>
  queryOptions({
    queryKey: ['notebook', notebook, 'invitations'],
    queryFn: ({ signal }) => call('listInvitations', { signal, params: { notebook } }),
  });

export const noticesQuery = (show: 'all' | 'unread') =>
  infiniteQueryOptions({
    queryKey: ['notices', show],
    queryFn: ({ signal, pageParam }) => call('listNotices', { signal, query: { show, ...after(pageParam) } }),
    initialPageParam: first,
    getNextPageParam: next,
  });

export const noticeSettingsQuery = () =>
  queryOptions({ queryKey: ['notice-settings'], queryFn: ({ signal }) => call('getNoticeSettings', { signal }) });

// ---------------------------------------------------------------- stewards

export const keptPeopleQuery = (q: string) =>
  infiniteQueryOptions({
    queryKey: ['steward', 'people', q],
    queryFn: ({ signal, pageParam }) => call('listKeptPeople', { signal, query: { q, ...after(pageParam) } }),
    initialPageParam: first,
    getNextPageParam: next,
  });

export type KeptJobStatus = 'computing' | 'sealed' | 'failed';
export const keptJobsQuery = (status: KeptJobStatus | undefined) =>
  infiniteQueryOptions({
    queryKey: ['steward', 'jobs', status ?? 'all'],
    queryFn: ({ signal, pageParam }) =>
      call('listKeptJobs', { signal, query: { ...after(pageParam), ...(status === undefined ? {} : { status }) } }),
    initialPageParam: first,
    getNextPageParam: next,
    refetchInterval: 10_000,
  });

export type MailState = 'waiting' | 'sent' | 'failed';
export const mailQuery = (state: MailState | undefined) =>
  infiniteQueryOptions({
    queryKey: ['steward', 'mail', state ?? 'all'],
    queryFn: ({ signal, pageParam }) =>
      call('listMail', { signal, query: { ...after(pageParam), ...(state === undefined ? {} : { state }) } }),
    initialPageParam: first,
    getNextPageParam: next,
  });

export const limitsQuery = () =>
  queryOptions({ queryKey: ['steward', 'limits'], queryFn: ({ signal }) => call('getLimits', { signal }) });

export const healthQuery = () =>
  queryOptions({
    queryKey: ['steward', 'health'],
    queryFn: ({ signal }) => call('getHealth', { signal }),
    refetchInterval: 10_000,
  });
