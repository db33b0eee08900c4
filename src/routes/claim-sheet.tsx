import { useQuery } from '@tanstack/react-query';
import { Link, useParams } from 'react-router-dom';
import type { Notebook } from '../../shared/contracts/notebooks.ts';
import { editionQuery } from '../api/queries.ts';
import { Day } from '../components/dates.tsx';
import { Waiting } from '../components/faces.tsx';
import { ClaimSheet } from '../features/claims/sheet.tsx';
import { statusWords } from '../features/colophon/colophon.tsx';
import { NotFetched } from './not-found.tsx';
import { paths } from './paths.ts';
import { Within } from './within.tsx';

/** The referee's list of the claims of one edition; printed, it is the report of the review. */
export function ClaimSheetPage() {
  return <Within title="Claim sheet">{(notebook, me) => <Opened notebook={notebook} me={me} />}</Within>;
}

function Opened({ notebook, me }: { notebook: Notebook; me: string | null }) {
  const { edition = '' } = useParams();
  const number = Number(edition);
  const asked = useQuery(editionQuery(notebook.id, number));
  if (asked.isPending) return <Waiting what="Opening the claim sheet …" />;
  if (!asked.data)
    return (
      <NotFetched what="The edition could not be opened." error={asked.error} retry={() => void asked.refetch()} />
    );
  const { data } = asked;
  return (
    <>
      <h1>Claim sheet</h1>
      <p className="byline label">
        <span>{data.content.title}</span>
        <span>{data.content.authors.join(', ')}</span>
        <span>
          <Link to={paths.edition.to(notebook.id, number)}>edition {number}</Link>, <Day at={data.publishedAt} />
        </span>
        <span role="status" data-status={data.status}>
          {statusWords(data.status)}
          {data.engine !== null && `, engine ${data.engine}`}
        </span>
        <span>SHA-256 {data.hash.slice(0, 16)}…</span>
        <button type="button" className="act" onClick={() => print()}>
          print the report of the review
        </button>
      </p>
      {notebook.edition !== null && notebook.edition > number && (
        <p className="measure mt-2">
          There is a later edition, {notebook.edition}. What is said here belongs to edition {number} and stays with it.{' '}
          <Link to={paths.claimSheet.to(notebook.id, notebook.edition)}>Claim sheet of edition {notebook.edition}</Link>
        </p>
      )}
      <ClaimSheet
        edition={data}
        me={me}
        may={new Set(notebook.may)}
        entry={(entry) => (
          <Link to={`${paths.edition.to(notebook.id, number)}#entry-${String(entry)}`}>entry ({entry})</Link>
        )}
      />
    </>
  );
}
