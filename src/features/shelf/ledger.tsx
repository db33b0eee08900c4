import type { ReactNode } from 'react';
import type { NotebookSummary } from '../../../shared/contracts/notebooks.ts';

interface Props {
  readonly notebooks: readonly NotebookSummary[];
  readonly link: (id: string, title: string) => ReactNode;
  readonly label: string;
}

const dates = new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'long', year: 'numeric' });

/** Notebooks as lines of a table: title and authors, edition, what one is on it, last change. */
export function Ledger({ notebooks, link, label }: Props) {
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
              <time dateTime={notebook.changedAt}>{dates.format(new Date(notebook.changedAt))}</time>
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}
