import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useMemo } from 'react';
import { Link, useNavigate, useParams } from 'react-router-dom';
import type { Edition } from '../../shared/contracts/editions.ts';
import type { Notebook } from '../../shared/contracts/notebooks.ts';
import { address, endpoints } from '../../shared/contracts/endpoints.ts';
import { call } from '../api/client.ts';
import { useLive } from '../api/live.ts';
import { editionQuery, keepNotebook, linkedQuery, meQuery, notebookQuery, rereadLists } from '../api/queries.ts';
import { allVerdictsQuery } from '../api/review-queries.ts';
import { Waiting } from '../components/faces.tsx';
import { Attempt, useAttempt } from '../components/attempt.tsx';
import { fileName, statusWords } from '../features/colophon/colophon.tsx';
import { editionFormats, Exports, linkedFormats } from '../features/colophon/exports.tsx';
import { useMargin } from '../features/margin/margin.tsx';
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
  const addressOf: AddressOf = (format, query) =>
    address(endpoints.exportEditionAs, { notebook, edition, format }, query);
  return <Shown asked={asked} addressOf={addressOf} linked={false} />;
}

/** The edition that a share link opens. */
export function SharedPage() {
  const { token = '' } = useParams();
  const addressOf: AddressOf = (format, query) => address(endpoints.exportLinkedAs, { token, format }, query);
  return <Shown asked={useQuery(linkedQuery(token))} addressOf={addressOf} linked />;
}

type AddressOf = Parameters<typeof Exports>[0]['addressOf'];

interface ShownProps {
  readonly asked: { data: Edition | undefined; isPending: boolean; error: unknown; refetch: () => unknown };
  readonly addressOf: AddressOf;
  readonly linked: boolean;
}

function Shown({ asked, addressOf, linked }: ShownProps) {
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
  return <Opened edition={asked.data} addressOf={addressOf} linked={linked} />;
}

const dates = new Intl.DateTimeFormat('en-GB', { dateStyle: 'long' });

function Opened({ edition, addressOf, linked }: { edition: Edition; addressOf: AddressOf; linked: boolean }) {
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
  const me = useQuery(meQuery());
  // Who has only a link sees one edition and nothing of the notebook around it.
  const notebook = useQuery({ ...notebookQuery(edition.notebook.id), enabled: !linked });
  const margin = useMargin({
    notebook: edition.notebook.id,
    edition: edition.number,
    entries,
    slices: reading.slices,
    me: me.data?.person?.id ?? null,
    may: notebook.data?.may.includes('remark') ?? false,
    off: linked,
  });
  return (
    <Facing
      entries={entries}
      reading={reading}
      rows={rows}
      {...(linked ? {} : { margin })}
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
            {!linked && (
              <>
                <Link to={paths.notebook.to(edition.notebook.id)}>to the notebook</Link>
                <Link to={paths.claimSheet.to(edition.notebook.id, edition.number)}>claim sheet</Link>
                <Live notebook={edition.notebook.id} me={me.data?.person?.id ?? null} />
              </>
            )}
          </p>
          <p className="measure mt-2">{edition.summary}</p>
          {!linked && <Standing edition={edition.number} notebook={notebook.data ?? null} />}
        </>
      }
      foot={
        <EditionColophon edition={edition} addressOf={addressOf} linked={linked} notebook={notebook.data ?? null} />
      }
    />
  );
}

const none: readonly never[] = [];

/** A grade that a browser computed is not an edition's: until the server has sealed them, no claims are shown. */
const withoutClaims = (reading: Reading): Reading =>
  reading === unread ? reading : { ...reading, slices: reading.slices.map((slice) => ({ ...slice, claims: none })) };

/** Follows the notebook while an edition of it is open: remarks and verdicts come without a reload. */
function Live({ notebook, me }: { notebook: string; me: string | null }) {
  useLive(notebook, me);
  return null;
}

/** What referees said of the whole edition, and of earlier ones, each with the edition that it belongs to. */
function Standing({ edition, notebook }: { edition: number; notebook: Notebook | null }) {
  const asked = useQuery({ ...allVerdictsQuery(notebook?.id ?? ''), enabled: notebook !== null });
  const whole = asked.data?.items.filter((one) => one.claim === null && one.edition <= edition) ?? [];
  if (whole.length === 0 || notebook === null) return null;
  return (
    <ul className="label mt-2" aria-label="Verdicts">
      {whole.map((one) => (
        <li key={one.id}>
          {one.by?.name ?? 'A referee who has left'} on{' '}
          <Link to={paths.claimSheet.to(notebook.id, one.edition)}>
            {one.edition === edition ? 'this edition' : `edition ${String(one.edition)}`}
          </Link>
          : {one.word}
          {one.edition !== edition && ', not said of this edition'}
        </li>
      ))}
    </ul>
  );
}

interface EditionColophonProps {
  readonly edition: Edition;
  readonly addressOf: AddressOf;
  readonly linked: boolean;
  readonly notebook: Notebook | null;
}

function EditionColophon({ edition, addressOf, linked, notebook }: EditionColophonProps) {
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
        {!linked && me.data?.person && (
          <button type="button" className="act" disabled={fork.busy} onClick={fork.run}>
            fork this edition
          </button>
        )}
        {!linked && (
          <>
            <Link to={paths.editions.to(edition.notebook.id)}>all editions</Link>
            <Link to={paths.compare.to(edition.notebook.id, String(edition.number), 'draft')}>
              compare with the draft
            </Link>
          </>
        )}
        {notebook?.may.includes('publish') && edition.status === 'failed' && (
          <button type="button" className="act" disabled={again.busy} onClick={again.run}>
            compute its claims again
          </button>
        )}
      </p>
      <div className="mt-3">
        <Exports
          addressOf={addressOf}
          formats={linked ? linkedFormats : editionFormats}
          name={`${fileName(edition.content.title)}-edition-${String(edition.number)}`}
        />
      </div>
      <Attempt of={fork} />
      <Attempt of={again} />
    </footer>
  );
}
