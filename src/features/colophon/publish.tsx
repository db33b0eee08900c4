import { useQueryClient } from '@tanstack/react-query';
import { type ReactNode, useId, useState } from 'react';
import type { EditionSummary } from '../../../shared/contracts/editions.ts';
import type { Notebook } from '../../../shared/contracts/notebooks.ts';
import { call } from '../../api/client.ts';
import { rereadEditions, rereadLists, rereadNotebook } from '../../api/queries.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';

interface Props {
  readonly notebook: Notebook;
  readonly settle: () => Promise<void>;
  readonly link: (edition: number, words: string) => ReactNode;
}

/** Seals the text as it stands into the next edition; the server computes its claims anew. */
export function Publish({ notebook, settle, link }: Props) {
  const client = useQueryClient();
  const [summary, setSummary] = useState('');
  const [made, setMade] = useState<EditionSummary | null>(null);
  const field = useId();
  const publish = useAttempt(async () => {
    await settle();
    const edition = await call('publishEdition', { params: { notebook: notebook.id }, body: { summary } });
    setMade(edition);
    setSummary('');
    await Promise.all([rereadNotebook(client, notebook.id), rereadEditions(client, notebook.id), rereadLists(client)]);
  });
  return (
    <section className="colophon-part" aria-label="Publish an edition">
      <form
        onSubmit={(event) => {
          event.preventDefault();
          if (summary.trim() !== '') publish.run();
        }}
      >
        <p className="label mb-3">
          An edition is fixed for good: its text has a number and a hash to cite, and its claims are computed by the
          server, not taken from this page.
        </p>
        <label className="label" htmlFor={field}>
          What is new in it, in one line
        </label>
        <input
          id={field}
          className="field"
          maxLength={300}
          value={summary}
          onChange={(event) => setSummary(event.target.value)}
        />
        <p className="mt-2">
          <button type="submit" className="act" disabled={publish.busy || summary.trim() === ''}>
            publish it
          </button>
        </p>
      </form>
      <Attempt of={publish} />
      {made && (
        <p role="status" className="mt-2">
          {link(made.number, `Edition ${String(made.number)}`)} is published.
        </p>
      )}
    </section>
  );
}
