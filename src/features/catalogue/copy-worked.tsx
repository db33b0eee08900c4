import { useQueryClient } from '@tanstack/react-query';
import { type ReactNode, useState } from 'react';
import { workedQuery } from '../../api/catalogue-queries.ts';
import { call } from '../../api/client.ts';
import { keepNotebook, rereadLists } from '../../api/queries.ts';

/** Makes a notebook of a worked derivation as it stands; answers its id. */
export function useCopyWorked(open: (notebook: string) => void) {
  const client = useQueryClient();
  const [busy, setBusy] = useState(false);
  const [failed, setFailed] = useState<string | null>(null);
  const copy = async (name: string) => {
    setBusy(true);
    setFailed(null);
    try {
      const { source } = await client.fetchQuery(workedQuery(name));
      const notebook = await call('importNotebook', { body: { source } });
      keepNotebook(client, notebook);
      void rereadLists(client);
      open(notebook.id);
    } catch (error) {
      setFailed(error instanceof Error ? error.message : 'It was not copied.');
    } finally {
      setBusy(false);
    }
  };
  return { busy, failed, copy: (name: string) => void copy(name) };
}

interface Props {
  readonly name: string;
  readonly title: string;
  readonly open: (notebook: string) => void;
  /** For visitors: the way to sign in and come back. */
  readonly signIn: ReactNode | null;
}

/** One key from the catalogue to a notebook of one's own. */
export function CopyWorked({ name, title, open, signIn }: Props) {
  const { busy, failed, copy } = useCopyWorked(open);
  if (signIn !== null) return signIn;
  return (
    <>
      <button
        type="button"
        className="act"
        disabled={busy}
        aria-label={`copy “${title}” into a notebook`}
        onClick={() => copy(name)}
      >
        copy into a notebook
      </button>
      {failed !== null && (
        <span role="alert" className="ink-refuted">
          {failed}
        </span>
      )}
    </>
  );
}
