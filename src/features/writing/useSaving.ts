import { useQueryClient } from '@tanstack/react-query';
import { useCallback, useEffect, useRef, useState } from 'react';
import { changedSchema, type Entry } from '../../../shared/contracts/notebooks.ts';
import { call, NoConnection, RequestFailed } from '../../api/client.ts';
import { keepEntry } from '../../api/queries.ts';
import { keepOnDevice, keptOnDevice } from './device.ts';
import {
  changed,
  choose,
  type Draft,
  type Drafts,
  noDrafts,
  notSaved,
  recovered,
  saved,
  sending,
  toSend,
  typed,
} from './drafts.ts';

export interface Saving {
  readonly drafts: Drafts;
  readonly type: (entry: Entry, text: string) => void;
  /** Sends what is typed now, without waiting for a pause. */
  readonly flush: () => void;
  readonly choose: (id: string, which: 'mine' | 'theirs') => void;
}

/** Saved after this pause in typing, in milliseconds. */
const pause = 700;

/**
 * Saves what is typed in a notebook: after a pause, on leaving the entry, when the connection is back; each save names the
 * version it started from. Until it is on the server, a copy stands on this device.
 */
export function useSaving(notebook: string, entries: readonly Entry[], may: boolean): Saving {
  const client = useQueryClient();
  const [drafts, setDrafts] = useState<Drafts>(() => (may ? recovered(keptOnDevice(notebook), entries) : noDrafts));
  const latest = useRef(drafts);
  const timer = useRef<ReturnType<typeof setTimeout> | undefined>(undefined);

  const update = useCallback(
    (change: (drafts: Drafts) => Drafts) => {
      const next = change(latest.current);
      if (next === latest.current) return;
      latest.current = next;
      keepOnDevice(notebook, next);
      setDrafts(next);
    },
    [notebook],
  );

  const send = useCallback(
    async (id: string, draft: Draft) => {
      update((now) => sending(now, id));
      try {
        const body = { text: draft.text };
        const entry = await call('saveEntry', { params: { notebook, entry: id }, body, ifMatch: draft.base });
        keepEntry(client, notebook, entry);
        update((now) => saved(now, id, entry.version));
      } catch (error) {
        update((now) => failed(now, id, error));
      }
    },
    [client, notebook, update],
  );

  const flush = useCallback(
    (again = false) => {
      clearTimeout(timer.current);
      for (const id of toSend(latest.current, again)) {
        const draft = latest.current.get(id);
        if (draft) void send(id, draft);
      }
    },
    [send],
  );

  // A draft that was typed while its predecessor was on its way goes out after another pause.
  useEffect(() => {
    if (toSend(drafts).length === 0) return;
    clearTimeout(timer.current);
    timer.current = setTimeout(() => flush(), pause);
    return () => clearTimeout(timer.current);
  }, [drafts, flush]);

  useEffect(() => {
    const back = () => flush(true);
    const leave = (event: BeforeUnloadEvent) => {
      flush();
      // Asks the browser to warn only while something is kept nowhere else.
      if (latest.current.size > 0 && !keepOnDevice(notebook, latest.current)) event.preventDefault();
    };
    const retry = setInterval(back, 15_000);
    addEventListener('online', back);
    addEventListener('beforeunload', leave);
    return () => {
      clearInterval(retry);
      removeEventListener('online', back);
      removeEventListener('beforeunload', leave);
    };
  }, [flush, notebook]);

  // What is typed in the last moment before the page is left for another page of the application is sent too.
  useEffect(() => () => flush(), [flush]);

  return {
    drafts,
    type: useCallback((entry, text) => update((now) => typed(now, entry, text)), [update]),
    flush: useCallback(() => flush(), [flush]),
    choose: useCallback(
      (id, which) => {
        const theirs = latest.current.get(id)?.theirs;
        if (which === 'theirs' && theirs) keepEntry(client, notebook, theirs);
        update((now) => choose(now, id, which));
      },
      [client, notebook, update],
    ),
  };
}

function failed(drafts: Drafts, id: string, error: unknown): Drafts {
  if (error instanceof NoConnection) return notSaved(drafts, id, 'waiting', error.message);
  if (error instanceof RequestFailed) {
    const both = error.code === 'changed-meanwhile' ? changedSchema.safeParse(error.problem) : undefined;
    if (both?.success) return changed(drafts, id, both.data.theirs);
    // Too many requests, or a server that is starting: the text waits as if there were no connection.
    if (error.status === 429 || error.status >= 500) return notSaved(drafts, id, 'waiting', error.message);
    return notSaved(drafts, id, 'refused', error.message);
  }
  return notSaved(drafts, id, 'refused', 'The answer of the server could not be read.');
}
