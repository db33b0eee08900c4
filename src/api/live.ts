import { useQueryClient } from '@tanstack/react-query';
import { useEffect, useState } from 'react';
import { address, endpoints } from '../../shared/contracts/endpoints.ts';
import { liveEvents, type LiveEvent, type Notebook } from '../../shared/contracts/notebooks.ts';
import type { Person } from '../../shared/contracts/people.ts';
import { rereadEditions, rereadNotebook } from './queries.ts';

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
    on('present', ({ people }) => setPresent(people));
    events.onerror = () => {
      lost = true;
    };
    events.onopen = () => {
      if (lost) void rereadNotebook(client, notebook);
      lost = false;
    };
    return () => events.close();
  }, [client, notebook, me]);
  return present;
}
