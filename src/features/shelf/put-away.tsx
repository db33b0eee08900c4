import { useQueryClient } from '@tanstack/react-query';
import type { NotebookSummary } from '../../../shared/contracts/notebooks.ts';
import { call } from '../../api/client.ts';
import { rereadLists } from '../../api/queries.ts';
import { Act, useAttempt } from '../../components/attempt.tsx';

/** Puts a notebook off one's own shelf, or back on it; nobody else sees a difference. */
export function PutAway({ notebook, archived }: { notebook: NotebookSummary; archived: boolean }) {
  const client = useQueryClient();
  const put = useAttempt(async () => {
    await call('archiveNotebook', { params: { notebook: notebook.id }, body: { archived: !archived } });
    await rereadLists(client);
  });
  return (
    <Act of={put}>
      {archived ? 'back on the shelf' : 'archive'}
      <span className="aside-only">: {notebook.title}</span>
    </Act>
  );
}
