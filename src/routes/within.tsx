import { useQuery } from '@tanstack/react-query';
import type { ReactNode } from 'react';
import { Link, useParams } from 'react-router-dom';
import type { Notebook } from '../../shared/contracts/notebooks.ts';
import { useLive } from '../api/live.ts';
import { meQuery, notebookQuery } from '../api/queries.ts';
import { Waiting } from '../components/faces.tsx';
import { NotFetched } from './not-found.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

interface Props {
  readonly title: string;
  readonly children: (notebook: Notebook, me: string | null) => ReactNode;
}

/** A page about a notebook: its title and the way back on top; it follows the notebook while it is open. */
export function Within({ title, children }: Props) {
  const { notebook = '' } = useParams();
  const me = useQuery(meQuery());
  const asked = useQuery(notebookQuery(notebook));
  if (asked.isPending || me.isPending)
    return (
      <Sheet title={title}>
        <Waiting what="Opening the notebook …" />
      </Sheet>
    );
  if (!asked.data)
    return (
      <NotFetched what="The notebook could not be opened." error={asked.error} retry={() => void asked.refetch()} />
    );
  return (
    <Sheet title={`${title}, ${asked.data.title}`}>
      <p className="label pt-6">
        <Link to={paths.notebook.to(asked.data.id)}>{asked.data.title}</Link>
      </p>
      <Followed notebook={asked.data.id} me={me.data?.person?.id ?? null} />
      <div className="within">{children(asked.data, me.data?.person?.id ?? null)}</div>
    </Sheet>
  );
}

function Followed({ notebook, me }: { notebook: string; me: string | null }) {
  useLive(notebook, me);
  return null;
}
