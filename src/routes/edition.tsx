import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useMemo } from 'react';
import { Link, useNavigate, useParams } from 'react-router-dom';
import type { Edition } from '../../shared/contracts/editions.ts';
import { address, endpoints } from '../../shared/contracts/endpoints.ts';
import { call } from '../api/client.ts';
import { editionQuery, keepNotebook, linkedQuery, meQuery, rereadLists } from '../api/queries.ts';
import { Waiting } from '../components/faces.tsx';
import { Attempt, useAttempt } from '../features/colophon/attempt.tsx';
import { statusWords } from '../features/colophon/colophon.tsx';
import { useRows } from '../features/spread/useRows.ts';
import { sealed, type Reading, unread } from '../reading/state.ts';
import { placed, useReading } from '../reading/useReading.ts';
import { Facing } from './facing.tsx';
import { NotFetched } from './not-found.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** An edition of a notebook that the reader may read. */
export function EditionPage() {
  const { notebook = '', edition = '' } = useParams();
  const asked = useQuery(editionQuery(notebook, Number(edition)));
  const source = address(endpoints.exportEdition, { notebook, edition });
  return <Shown asked={asked} source={source} linked={false} />;
}

/** The edition that a share link opens. */
export function SharedPage() {
  const { token = '' } = useParams();
  return <Shown asked={useQuery(linkedQuery(token))} source={address(endpoints.exportLinked, { token })} linked />;
}

interface ShownProps {
  readonly asked: { data: Edition | undefined; isPending: boolean; error: unknown; refetch: () => unknown };
  readonly source: string;
  readonly linked: boolean;
}

function Shown({ asked, source, linked }: ShownProps) {
  if (asked.isPending)
    return (
      <Sheet title="Edition">
        <Waiting what="Opening the edition …" />
      </Sheet>
    );
  if (!asked.data)
    return (
      <NotFetched what="The edition could not be opened." error={asked.error} retry={() => void asked.refetch()} />
    );
  return <Opened edition={asked.data} source={source} linked={linked} />;
}

const dates = new Intl.DateTimeFormat('en-GB', { dateStyle: 'long' });

function Opened({ edition, source, linked }: { edition: Edition; source: string; linked: boolean }) {
  const { content, entryIds, report } = edition;
  const entries = useMemo(
    () => content.entries.map((entry, k) => ({ ...entry, id: entryIds[k] ?? `entry-${String(k)}` })),
    [content, entryIds],
  );
  // The sealed report is what counts. Until it is there, the text is set by the engine here, without its claims.
  const own = useReading(report ? none : entries);
  const reading = useMemo(
    () => (report ? sealed(report, placed(entries).entries) : withoutClaims(own)),
    [report, entries, own],
  );
  const rows = useRows(reading.slices);
  return (
    <Facing
      entries={entries}
      reading={reading}
      rows={rows}
      cover={`${content.authors.join(', ')}: ${content.title}, edition ${String(edition.number)}, ${dates.format(new Date(edition.publishedAt))}. SHA-256 ${edition.hash}`}
      head={
        <>
          <title>{`${content.title}, edition ${String(edition.number)} · Gaugewright`}</title>
          <h1>{content.title}</h1>
          <p className="byline label">
            <span>{content.authors.join(', ')}</span>
            <span>
              edition {edition.number},{' '}
              <time dateTime={edition.publishedAt}>{dates.format(new Date(edition.publishedAt))}</time>
            </span>
            <span role="status" data-status={edition.status}>
              {statusWords(edition.status)}
            </span>
            {!linked && <Link to={paths.notebook.to(edition.notebook.id)}>to the notebook</Link>}
          </p>
          <p className="measure mt-2">{edition.summary}</p>
        </>
      }
      foot={<EditionColophon edition={edition} source={source} linked={linked} />}
    />
  );
}

const none: readonly never[] = [];

/** A grade that a browser computed is not an edition's: until the server has sealed them, no claims are shown. */
const withoutClaims = (reading: Reading): Reading =>
  reading === unread ? reading : { ...reading, slices: reading.slices.map((slice) => ({ ...slice, claims: none })) };

function EditionColophon({ edition, source, linked }: { edition: Edition; source: string; linked: boolean }) {
  const client = useQueryClient();
  const navigate = useNavigate();
  const me = useQuery(meQuery());
  const fork = useAttempt(async () => {
    const params = { notebook: edition.notebook.id };
    const made = await call('forkNotebook', { params, body: { edition: edition.number } });
    keepNotebook(client, made);
    void rereadLists(client);
    await navigate(paths.notebook.to(made.id));
  });
  const again = useAttempt(async () => {
    await call('evaluateEdition', { params: { notebook: edition.notebook.id, edition: edition.number } });
    await client.invalidateQueries({ queryKey: ['notebook', edition.notebook.id, 'editions'] });
  });
  return (
    <footer className="colophon" aria-label="Colophon">
      <dl className="label space-y-1">
        <div>
          <dt className="inline">SHA-256 of its text: </dt>
          <dd className="code inline break-all text-ink">{edition.hash}</dd>
        </div>
        <div>
          <dt className="inline">Claims: </dt>
          <dd className="inline">
            {edition.status === 'sealed'
              ? `computed by the server${edition.engine === null ? '' : `, engine ${edition.engine}`}`
              : statusWords(edition.status)}
            {edition.reason !== null && `: ${edition.reason}`}
          </dd>
        </div>
      </dl>
      <p className="colophon-line label mt-3">
        <a className="act" href={source} download>
          export .gw
        </a>
        {!linked && me.data?.person && (
          <button type="button" className="act" disabled={fork.busy} onClick={fork.run}>
            fork this edition
          </button>
        )}
        {!linked && edition.status === 'failed' && (
          <button type="button" className="act" disabled={again.busy} onClick={again.run}>
            compute its claims again
          </button>
        )}
      </p>
      <Attempt of={fork} />
      <Attempt of={again} />
    </footer>
  );
}
