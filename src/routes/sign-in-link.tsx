import { useQueryClient } from '@tanstack/react-query';
import { Link, useNavigate } from 'react-router-dom';
import { UseLink } from '../features/account/use-link.tsx';
import { useCarried } from './carried.ts';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** Where the one-time link of a mail leads. */
export function SignInLinkPage() {
  const token = useCarried();
  const signedIn = useSignedIn();
  return (
    <Sheet title="Sign in by link" narrow>
      <h1 className="pt-10">Sign in by link</h1>
      {token === '' ? (
        <p className="measure mt-4">
          The address of this page is not whole: open the link in the mail, or copy all of it.
        </p>
      ) : (
        <UseLink token={token} words="Sign in now" done={signedIn} />
      )}
      <p className="label mt-6">
        <Link to={paths.signIn.to()}>Other ways to sign in, or another link</Link>
      </p>
    </Sheet>
  );
}

/** Goes on as the person who has just signed in; nothing that was kept for whoever was there before stays. */
export function useSignedIn(): (to: string) => Promise<void> {
  const client = useQueryClient();
  const navigate = useNavigate();
  return async (to) => {
    // What the link was to is not asked again: it has been used.
    await client.resetQueries({ predicate: ({ queryKey }) => queryKey[0] !== 'invited' });
    await navigate(to, { replace: true });
  };
}
