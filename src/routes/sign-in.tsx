import { useQuery } from '@tanstack/react-query';
import { Link, Navigate, useSearchParams } from 'react-router-dom';
import { meQuery, signInQuery } from '../api/queries.ts';
import { Failed, Waiting } from '../components/faces.tsx';
import { AskForLink } from '../features/account/ask-for-link.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

const words: Readonly<Record<string, string>> = { github: 'Sign in with GitHub' };

/** The ways to sign in that this installation offers. */
export function SignInPage() {
  const me = useQuery(meQuery());
  const ways = useQuery(signInQuery());
  const [search] = useSearchParams();
  const asked = search.get('back') ?? '';
  // Only a page of ours: an address elsewhere is not followed.
  const back = /^\/(?!\/)/.test(asked) ? asked : paths.shelf.to();
  if (me.data?.person) return <Navigate to={back} replace />;
  return (
    <Sheet title="Sign in" narrow>
      <h1 className="pt-10">Sign in</h1>
      <p className="measure mt-4">
        Signed in, you have a shelf: notebooks of your own, with coauthors and referees, and editions that can be cited.
        Reading public notebooks and <Link to={paths.try.to()}>trying the language</Link> need no account.
      </p>
      {ways.isPending && <Waiting what="Asking how one signs in here …" />}
      {ways.isError && (
        <Failed what="The ways to sign in could not be fetched." error={ways.error} retry={() => void ways.refetch()} />
      )}
      <ul className="mt-6 space-y-6">
        {ways.data?.ways.map((way) => (
          <li key={way.way}>
            {way.way === 'email' ? (
              <AskForLink to={back} />
            ) : (
              <a href={`${way.href}?to=${encodeURIComponent(back)}`} className="text-lead">
                {words[way.way] ?? `Sign in with ${way.way}`}
              </a>
            )}
            {way.standIn && way.way === 'email' && (
              <p className="label">
                Mail stays on this machine: <a href="/auth/stand-in/mail">read what was sent</a>.
              </p>
            )}
            {way.standIn && way.way !== 'email' && (
              <p className="label">A stand-in on this machine, with invented people: nothing leaves the machine.</p>
            )}
          </li>
        ))}
      </ul>
      {ways.data?.ways.length === 0 && (
        <p className="mt-6">Nobody can sign in here yet: ask who runs this installation.</p>
      )}
      {search.has('failed') && (
        <p role="alert" className="ink-refuted mt-6">
          Signing in did not succeed. Try again, or another way.
        </p>
      )}
    </Sheet>
  );
}
