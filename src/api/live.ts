import { useQueryClient } from '@tanstack/react-query';
import { useEffect, useState } from 'react';
import { address, endpoints } from '../../shared/contracts/endpoints.ts';
import { liveEvents, type LiveEvent, type Notebook } from '../../shared/contracts/notebooks.ts';
import type { Me, Person } from '../../shared/contracts/people.ts';
import { type PersonEvent, personEvents } from '../../shared/contracts/notices.ts';
import { rereadEditions, rereadLists, rereadNotebook } from './queries.ts';
import { reread } from './review-queries.ts';

/**
 * Follows a notebook as others change it (server-sent events) and says who has it open. The browser connects again by
 * itself; what was missed meanwhile is read anew. `me`: own changes are known already and cause no reading.
 */
export function useLive(notebook: string, me: string | null): readonly Person[] {
  const client = useQueryClient();
  const [present, setPresent] = useState<readonly Person[]>([]);
  useEffect(() => {
    const events = new EventSource(address(endpoints.live, { notebook }));
    let lost = false;
    const on = <E extends LiveEvent>(name: E, take: (data: ReturnType<(typeof liveEvents)[E]['parse']>) => void) => {
      events.addEventListener(name, (event: MessageEvent<string>) => {
        const parsed = liveEvents[name].safeParse(JSON.parse(event.data));
        if (parsed.success) take(parsed.data as ReturnType<(typeof liveEvents)[E]['parse']>);
      });
    };
    on('entries', ({ by }) => {
      if (by === null || by !== me) void rereadNotebook(client, notebook);
    });
    on('hold', ({ entry, hold }) => {
      client.setQueryData<Notebook>(
        ['notebook', notebook],
        (kept) => kept && { ...kept, entries: kept.entries.map((one) => (one.id === entry ? { ...one, hold } : one)) },
      );
    });
    on('notebook', () => void rereadNotebook(client, notebook));
    on('answer', () => {
      for (const key of ['answers', 'jobs']) void client.invalidateQueries({ queryKey: [key] });
    });
    on('edition', () => {
      void rereadEditions(client, notebook);
      void rereadNotebook(client, notebook);
    });
    on('remarks', () => void reread(client, notebook, 'remarks'));
    on('verdicts', () => void reread(client, notebook, 'verdicts'));
    on('variants', () => {
      void reread(client, notebook, 'variants');
      void reread(client, notebook, 'collation');
    });
    on('evaluation', () => {
      for (const part of ['comparison', 'collation', 'variants', 'reruns'] as const)
        void reread(client, notebook, part);
    });
    on('present', ({ people }) => setPresent(people));
    events.onerror = () => {
      lost = true;
    };
    events.onopen = () => {
      // What was missed meanwhile may be anything about the notebook.
      if (lost) void client.invalidateQueries({ queryKey: ['notebook', notebook] });
      lost = false;
    };
    return () => events.close();
  }, [client, notebook, me]);
  return present;
}

/** Follows what concerns the person signed in, on every page: notices that come, jobs that go on, rights that change. */
export function useLiveMine(person: string | null): void {
  const client = useQueryClient();
  useEffect(() => {
    if (person === null) return;
    const events = new EventSource(address(endpoints.liveMine));
    const on = <E extends PersonEvent>(
      name: E,
      take: (data: ReturnType<(typeof personEvents)[E]['parse']>) => void,
    ) => {
      events.addEventListener(name, (event: MessageEvent<string>) => {
        const parsed = personEvents[name].safeParse(JSON.parse(event.data));
        if (parsed.success) take(parsed.data as ReturnType<(typeof personEvents)[E]['parse']>);
      });
    };
    on('notices', ({ unread }) => {
      client.setQueryData<Me>(['me'], (kept) =>
        kept?.person ? { ...kept, person: { ...kept.person, unread } } : kept,
      );
      void client.invalidateQueries({ queryKey: ['notices'] });
    });
    on('shelf', () => void rereadLists(client));
    on('job', () => void client.invalidateQueries({ queryKey: ['jobs'] }));
    on('account', () => {
      for (const key of ['me', 'account', 'invited']) void client.invalidateQueries({ queryKey: [key] });
      void rereadLists(client);
    });
    return () => events.close();
  }, [client, person]);
}
