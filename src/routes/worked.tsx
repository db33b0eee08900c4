import { useQuery } from '@tanstack/react-query';
import { useMemo } from 'react';
import { Link, useNavigate, useParams } from 'react-router-dom';
import type { Answer } from '../../shared/contracts/endpoints.ts';
import { workedQuery } from '../api/catalogue-queries.ts';
import { meQuery } from '../api/queries.ts';
import { Waiting } from '../components/faces.tsx';
import { CopyWorked, useCopyWorked } from '../features/catalogue/copy-worked.tsx';
import { entriesOf } from '../features/catalogue/entries.ts';
import { useCommands } from '../features/commands/context.ts';
import { useRows } from '../features/spread/useRows.ts';
import { useReading } from '../reading/useReading.ts';
import { Facing } from './facing.tsx';
import { NotFetched } from './not-found.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** One worked derivation of the catalogue, evaluated here and now. */
export function WorkedPage() {
  const { worked = '' } = useParams();
  const asked = useQuery(workedQuery(worked));
  if (asked.isPending)
    return (
      <Sheet title="Catalogue">
        <Waiting what="Opening the derivation …" />
      </Sheet>
    );
  if (!asked.data)
    return (
      <NotFetched what="The derivation could not be opened." error={asked.error} retry={() => void asked.refetch()} />
    );
  return <Opened key={worked} worked={asked.data} />;
}

function Opened({ worked }: { worked: Answer<'getWorked'> }) {
  const entries = useMemo(() => entriesOf(worked.source), [worked]);
  const reading = useReading(entries);
  const rows = useRows(reading.slices);
  const me = useQuery(meQuery());
  const navigate = useNavigate();
  const open = (notebook: string) => void navigate(paths.notebook.to(notebook));
  const signedIn = me.data?.person != null;
  const { copy } = useCopyWorked(open);
  useCommands(() =>
    signedIn ? [{ words: 'copy into a notebook', also: 'keep shelf own', run: () => copy(worked.name) }] : [],
  );
  const act = (
    <CopyWorked
      name={worked.name}
      title={worked.title}
      open={open}
      signIn={signedIn ? null : <Link to={paths.signIn.to(paths.worked.to(worked.name))}>sign in to copy it</Link>}
    />
  );
  return (
    <Facing
      entries={entries}
      reading={reading}
      rows={rows}
      head={
        <>
          <title>{`${worked.title} · Gaugewright`}</title>
          <h1>{worked.title}</h1>
          <p className="byline label">
            <span>{worked.shows}</span>
            {act}
            <Link to={paths.catalogue.to()}>the catalogue</Link>
          </p>
        </>
      }
      foot={
        <footer className="colophon" aria-label="Colophon">
          <ul className="label list-none space-y-1 p-0">
            {worked.sources.map(({ citation, doi }) => (
              <li key={doi}>
                {citation},{' '}
                <a href={`https://doi.org/${doi}`} rel="noreferrer noopener">
                  doi:{doi}
                </a>
              </li>
            ))}
          </ul>
          <p className="colophon-line label mt-3">{act}</p>
        </footer>
      }
    />
  );
}
