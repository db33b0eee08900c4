import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useCallback, useMemo, useState } from 'react';
import { Link, useNavigate } from 'react-router-dom';
import { call } from '../api/client.ts';
import { keepNotebook, meQuery, rereadLists } from '../api/queries.ts';
import { useRows } from '../features/spread/useRows.ts';
import { useReading } from '../reading/useReading.ts';
import { useDesk } from './desk.tsx';
import { example, exampleTitle } from './example.ts';
import { Facing } from './facing.tsx';
import { paths } from './paths.ts';

const key = 'gaugewright:try';

/** The example as this tab left it: it survives the way to the sign-in page and back. */
function keptExample(): typeof example {
  try {
    const said: unknown = JSON.parse(sessionStorage.getItem(key) ?? 'null');
    if (Array.isArray(said) && said.length === example.length && said.every((text) => typeof text === 'string'))
      return example.map((entry, k) => ({ ...entry, text: String(said[k]) }));
  } catch {
    // What cannot be read is the example as it was.
  }
  return example;
}

/** A living example for a first visit: all of it can be changed before signing in. */
export function TryPage({ first = false }: { first?: boolean }) {
  const [entries, setEntries] = useState(keptExample);
  const reading = useReading(entries);
  const rows = useRows(reading.slices);
  const onType = useCallback((id: string, text: string) => {
    setEntries((now) => {
      const next = now.map((entry) => (entry.id === id ? { ...entry, text } : entry));
      try {
        sessionStorage.setItem(key, JSON.stringify(next.map((entry) => entry.text)));
      } catch {
        // The change lasts as long as the page.
      }
      return next;
    });
  }, []);
  const nothing = useCallback(() => undefined, []);
  const desk = useDesk({ entries, reading, rows, onType, onLeave: nothing, foot: () => null });
  const edits = useMemo(() => ({ open: desk.open }), [desk.open]);
  return (
    <Facing
      hand={desk.hand}
      entries={entries}
      reading={reading}
      rows={rows}
      writing={desk.writing}
      source={desk.source}
      edits={edits}
      head={
        <>
          <title>{first ? 'Gaugewright' : 'Try · Gaugewright'}</title>
          <h1>{exampleTitle}</h1>
          <p className="byline label">
            <span>An example to change: click into any formula, or move to one with Tab and press Enter</span>
            <Link to={paths.guide.to()}>the language</Link>
          </p>
        </>
      }
      foot={<Keep entries={entries} />}
    />
  );
}

function Keep({ entries }: { entries: typeof example }) {
  const me = useQuery(meQuery());
  const client = useQueryClient();
  const navigate = useNavigate();
  const [failed, setFailed] = useState<string | null>(null);
  const keep = async () => {
    setFailed(null);
    try {
      const body = { title: exampleTitle, entries: entries.map(({ kind, text }) => ({ kind, text })) };
      const notebook = await call('createNotebook', { body });
      keepNotebook(client, notebook);
      void rereadLists(client);
      await navigate(paths.notebook.to(notebook.id));
    } catch (error) {
      setFailed(error instanceof Error ? error.message : 'It was not kept.');
    }
  };
  return (
    <footer className="colophon">
      <p className="colophon-line label">
        <span>not kept anywhere yet</span>
        {me.data?.person ? (
          <button type="button" className="act" onClick={() => void keep()}>
            keep it on my shelf
          </button>
        ) : (
          <Link to={paths.signIn.to(paths.try.to())}>sign in to keep it</Link>
        )}
        {failed !== null && (
          <span role="alert" className="ink-refuted">
            {failed}
          </span>
        )}
      </p>
    </footer>
  );
}
