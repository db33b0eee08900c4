import { useQuery } from '@tanstack/react-query';
import { Link, useNavigate, useParams } from 'react-router-dom';
import type { Notebook } from '../../shared/contracts/notebooks.ts';
import { collationQuery, sendingQuery } from '../api/review-queries.ts';
import { Empty, Failed, Waiting } from '../components/faces.tsx';
import { Part } from '../components/parts.tsx';
import { Collation, Sending } from '../features/collation/sending.tsx';
import { Sendings } from '../features/collation/sendings.tsx';
import { NotFetched } from './not-found.tsx';
import { paths } from './paths.ts';
import { Within } from './within.tsx';

/** A fork beside its origin, to send what differs. */
export function CollationPage() {
  return <Within title="Collation">{(notebook) => <Collated notebook={notebook} />}</Within>;
}

function Collated({ notebook }: { notebook: Notebook }) {
  const navigate = useNavigate();
  const asked = useQuery(collationQuery(notebook.id));
  return (
    <>
      <h1>Collation with the origin</h1>
      {asked.isPending && <Waiting what="Laying the fork beside its origin …" />}
      {asked.isError && (
        <Failed
          what="The fork could not be laid beside its origin."
          error={asked.error}
          retry={() => void asked.refetch()}
        />
      )}
      {asked.data && (
        <>
          <p className="byline label">
            <span>
              origin <Link to={paths.notebook.to(asked.data.origin.id)}>{asked.data.origin.title}</Link>
              {asked.data.origin.edition !== null && `, edition ${String(asked.data.origin.edition)}`}
            </span>
            <Link to={paths.compare.to(notebook.id, 'origin', 'draft')}>compare both as physics</Link>
            <Link to={paths.variants.to(notebook.id)}>what was sent before</Link>
          </p>
          {asked.data.variants.length === 0 ? (
            <Empty title="No variants">
              <p>This fork reads as its origin does. Change something in it, and it stands here, ready to be sent.</p>
            </Empty>
          ) : (
            <Collation
              notebook={notebook.id}
              of={asked.data}
              sent={(sending) => void navigate(paths.sending.to(notebook.id, sending))}
            />
          )}
        </>
      )}
    </>
  );
}

/** Variants that came to a notebook, and those that were sent from it. */
export function VariantsPage() {
  return (
    <Within title="Variants">
      {(notebook) => {
        const link = (sending: string, words: React.ReactNode) => (
          <Link to={paths.sending.to(notebook.id, sending)}>{words}</Link>
        );
        return (
          <>
            <h1>Variants</h1>
            <Part title="Received">
              <Sendings
                notebook={notebook.id}
                which="received"
                empty="None yet. Whoever forks this notebook can send what differs in the fork."
                link={link}
              />
            </Part>
            {notebook.origin && (
              <Part title="Sent to its origin">
                <p className="mb-3">
                  <Link to={paths.collation.to(notebook.id)}>Lay this fork beside its origin</Link>
                </p>
                <Sendings notebook={notebook.id} which="sent" empty="None yet." link={link} />
              </Part>
            )}
          </>
        );
      }}
    </Within>
  );
}

/** Variants that were sent together. */
export function SendingPage() {
  return <Within title="Variants">{(notebook) => <Sent notebook={notebook} />}</Within>;
}

function Sent({ notebook }: { notebook: Notebook }) {
  const { sending = '' } = useParams();
  const asked = useQuery(sendingQuery(notebook.id, sending));
  if (asked.isPending) return <Waiting what="Fetching the variants …" />;
  if (!asked.data)
    return (
      <NotFetched what="The variants could not be fetched." error={asked.error} retry={() => void asked.refetch()} />
    );
  const deciding = asked.data.origin?.id === notebook.id;
  return (
    <>
      <h1>{deciding ? 'Variants sent to this notebook' : 'Variants sent from this fork'}</h1>
      <Sending
        notebook={notebook.id}
        of={asked.data}
        deciding={deciding}
        may={notebook.may.includes(deciding ? 'adopt' : 'edit')}
        link={(id, title) => <Link to={paths.notebook.to(id)}>{title}</Link>}
      />
    </>
  );
}
