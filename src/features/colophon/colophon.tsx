import { useQuery, useQueryClient } from '@tanstack/react-query';
import type { ReactNode } from 'react';
import { address, endpoints } from '../../../shared/contracts/endpoints.ts';
import type { Notebook } from '../../../shared/contracts/notebooks.ts';
import { call } from '../../api/client.ts';
import { editionsQuery, keepNotebook, rereadLists } from '../../api/queries.ts';
import { draftFormats, Exports } from './exports.tsx';
import { People } from './people.tsx';
import { Publish } from './publish.tsx';
import { Share } from './share.tsx';
import { Attempt, useAttempt } from '../../components/attempt.tsx';
import { Title } from './title.tsx';

export type ColophonPart = 'publish' | 'share' | 'export' | 'people' | 'title' | 'delete';

export interface Ways {
  readonly edition: (number: number) => string;
  readonly shared: (token: string) => string;
  readonly editions: string;
  readonly collation: string;
  readonly variants: string;
  readonly toNotebook: (id: string) => void;
  readonly toShelf: () => void;
  readonly link: (to: string, words: ReactNode) => ReactNode;
}

interface Props {
  readonly notebook: Notebook;
  readonly part: ColophonPart | null;
  readonly show: (part: ColophonPart | null) => void;
  readonly ways: Ways;
  /** Sends what is typed before an edition is sealed of it. */
  readonly settle: () => Promise<void>;
}

export const sourceAddress = (notebook: string): string => address(endpoints.exportNotebook, { notebook });

/** The foot of a notebook: its newest edition, its people and rights, and what can be done with it. */
export function Colophon({ notebook, part, show, ways, settle }: Props) {
  const editions = useQuery(editionsQuery(notebook.id));
  const newest = editions.data?.items[0];
  const may = new Set(notebook.may);
  const fork = useFork(notebook, ways);
  const act = (name: ColophonPart, words: string) => (
    <button
      type="button"
      className="act"
      aria-expanded={part === name}
      onClick={() => show(part === name ? null : name)}
    >
      {words}
    </button>
  );
  return (
    <footer className="colophon" aria-label="Colophon" id="colophon">
      <div className="colophon-line label">
        <span>
          {newest ? (
            <>
              {ways.link(ways.edition(newest.number), `edition ${String(newest.number)}`)} · {newest.hash.slice(0, 8)}…
              {newest.hash.slice(-4)} · {statusWords(newest.status)}
            </>
          ) : (
            'no edition yet'
          )}
        </span>
        {may.has('publish') && act('publish', `publish edition ${String((notebook.edition ?? 0) + 1)}`)}
        {notebook.edition !== null && ways.link(ways.editions, 'all editions')}
        {may.has('adopt') && ways.link(ways.variants, 'variants')}
        {may.has('edit') && notebook.origin && ways.link(ways.collation, 'collate with its origin')}
        {may.has('fork') && (
          <button type="button" className="act" disabled={fork.busy} onClick={fork.run}>
            fork
          </button>
        )}
        {may.has('link') && act('share', 'share')}
        {may.has('export') && act('export', 'export')}
        {act('people', 'people and rights')}
        {may.has('edit') && act('title', 'title and authors')}
        {may.has('delete') && act('delete', 'delete')}
      </div>
      <Attempt of={fork} />
      {part === 'publish' && (
        <Publish notebook={notebook} settle={settle} link={(n, words) => ways.link(ways.edition(n), words)} />
      )}
      {part === 'share' && <Share notebook={notebook} shared={ways.shared} />}
      {part === 'export' && (
        <section className="colophon-part" aria-label="Export">
          <Exports
            addressOf={(format, query) => address(endpoints.exportNotebookAs, { notebook: notebook.id, format }, query)}
            formats={draftFormats}
            name={fileName(notebook.title)}
          />
        </section>
      )}
      {part === 'people' && <People notebook={notebook} gone={ways.toShelf} />}
      {part === 'title' && <Title key={notebook.title} notebook={notebook} done={() => show(null)} />}
      {part === 'delete' && <Delete notebook={notebook} gone={ways.toShelf} keep={() => show(null)} />}
    </footer>
  );
}

export const statusWords = (status: string): string =>
  status === 'computing'
    ? 'its claims are being computed'
    : status === 'failed'
      ? 'its claims could not be computed'
      : status;

export const fileName = (title: string): string =>
  title
    .toLowerCase()
    .replace(/[^\p{L}\p{N}]+/gu, '-')
    .replace(/^-|-$/g, '') || 'notebook';

function useFork(notebook: Notebook, ways: Ways) {
  const client = useQueryClient();
  return useAttempt(async () => {
    const made = await call('forkNotebook', { params: { notebook: notebook.id }, body: {} });
    keepNotebook(client, made);
    void rereadLists(client);
    ways.toNotebook(made.id);
  });
}

function Delete({ notebook, gone, keep }: { notebook: Notebook; gone: () => void; keep: () => void }) {
  const client = useQueryClient();
  const remove = useAttempt(async () => {
    await call('deleteNotebook', { params: { notebook: notebook.id } });
    await rereadLists(client);
    gone();
  });
  return (
    <section className="colophon-part" aria-label="Delete the notebook">
      <p>
        “{notebook.title}” goes from everyone’s shelf, with its entries and editions, into your bin. It can be restored
        for 30 days; then it goes for good.
      </p>
      <p className="colophon-line">
        <button type="button" className="act ink-refuted" disabled={remove.busy} onClick={remove.run}>
          delete it
        </button>
        <button type="button" className="act" onClick={keep}>
          keep it
        </button>
      </p>
      <Attempt of={remove} />
    </section>
  );
}
