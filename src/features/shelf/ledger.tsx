import type { ReactNode } from 'react';
import type { NotebookSummary } from '../../../shared/contracts/notebooks.ts';
import { Day } from '../../components/dates.tsx';

interface Props {
  readonly notebooks: readonly NotebookSummary[];
  readonly link: (id: string, title: string) => ReactNode;
  readonly label: string;
  /** What can be done with a notebook from the list. */
  readonly acts?: (notebook: NotebookSummary) => ReactNode;
}

/** Notebooks as lines of a table: title and authors, edition, what one is on it, last change. */
export function Ledger({ notebooks, link, label, acts }: Props) {
  return (
    <table className="ledger mt-8">
      <caption className="aside-only">{label}</caption>
      <thead>
        <tr className="label">
          <th scope="col">Notebook</th>
          <th scope="col">Edition</th>
          <th scope="col">You</th>
          <th scope="col">Changed</th>
        </tr>
      </thead>
      <tbody>
        {notebooks.map((notebook) => (
          <tr key={notebook.id}>
            <td>
              <span className="text-lead">{link(notebook.id, notebook.title)}</span>
              <span className="label block">
                {notebook.authors.length > 0 ? notebook.authors.join(', ') : notebook.owner.name}
                {notebook.visibility === 'public' && ' · public'}
              </span>
            </td>
            <td className="label">{notebook.edition === null ? 'none yet' : `edition ${String(notebook.edition)}`}</td>
            <td className="label">{notebook.role ?? 'reader'}</td>
            <td className="label">
              <Day at={notebook.changedAt} />
              {acts && <span className="block">{acts(notebook)}</span>}
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}
