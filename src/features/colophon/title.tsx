import { useQueryClient } from '@tanstack/react-query';
import { useId, useState } from 'react';
import type { Notebook } from '../../../shared/contracts/notebooks.ts';
import { call } from '../../api/client.ts';
import { keepNotebook, rereadLists } from '../../api/queries.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';

/** Title and authors of a notebook, as they are printed and cited. */
export function Title({ notebook, done }: { notebook: Notebook; done: () => void }) {
  const client = useQueryClient();
  const [title, setTitle] = useState(notebook.title);
  const [authors, setAuthors] = useState(notebook.authors.join(', '));
  const field = useId();
  const save = useAttempt(async () => {
    const names = authors
      .split(',')
      .map((name) => name.trim())
      .filter((name) => name !== '');
    const params = { notebook: notebook.id };
    keepNotebook(client, await call('changeNotebook', { params, body: { title, authors: names } }));
    void rereadLists(client);
    done();
  });
  return (
    <section className="colophon-part" aria-label="Title and authors">
      <form
        className="space-y-3"
        onSubmit={(event) => {
          event.preventDefault();
          if (title.trim() !== '') save.run();
        }}
      >
        <div>
          <label className="label" htmlFor={`${field}-title`}>
            Title
          </label>
          <input
            id={`${field}-title`}
            className="field"
            maxLength={200}
            value={title}
            onChange={(event) => setTitle(event.target.value)}
          />
        </div>
        <div>
          <label className="label" htmlFor={`${field}-authors`}>
            Authors, with commas between them
          </label>
          <input
            id={`${field}-authors`}
            className="field"
            value={authors}
            onChange={(event) => setAuthors(event.target.value)}
          />
        </div>
        <button type="submit" className="act" disabled={save.busy || title.trim() === ''}>
          save title and authors
        </button>
      </form>
      <Attempt of={save} />
    </section>
  );
}
