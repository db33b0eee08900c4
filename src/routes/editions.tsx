import { Link } from 'react-router-dom';
import { History } from '../features/colophon/history.tsx';
import { paths } from './paths.ts';
import { Within } from './within.tsx';

/** All editions of a notebook. */
export function EditionsPage() {
  return (
    <Within title="Editions">
      {(notebook) => (
        <>
          <h1>Editions</h1>
          <History
            notebook={notebook.id}
            newest={notebook.edition}
            ways={{
              edition: (number, words) => <Link to={paths.edition.to(notebook.id, number)}>{words}</Link>,
              claims: (number, words) => <Link to={paths.claimSheet.to(notebook.id, number)}>{words}</Link>,
              compare: (left, right, words) => <Link to={paths.compare.to(notebook.id, left, right)}>{words}</Link>,
            }}
          />
        </>
      )}
    </Within>
  );
}
