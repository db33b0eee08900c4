import { useQuery, useQueryClient } from '@tanstack/react-query';
import type { Session } from '../../../shared/contracts/people.ts';
import { sessionsQuery } from '../../api/account-queries.ts';
import { call } from '../../api/client.ts';
import { Act, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { Failed, Waiting } from '../../components/faces.tsx';
import { Part } from '../../components/parts.tsx';
import { browserInWords } from './words.ts';

/** Where one is signed in, and ending it there. */
export function Sessions() {
  const client = useQueryClient();
  const asked = useQuery(sessionsQuery());
  const others = useAttempt(async () => {
    await call('endOtherSessions');
    await client.invalidateQueries({ queryKey: ['account', 'sessions'] });
  });
  return (
    <Part title="Signed in at">
      {asked.isPending && <Waiting what="Fetching where you are signed in …" />}
      {asked.isError && (
        <Failed what="The list could not be fetched." error={asked.error} retry={() => void asked.refetch()} />
      )}
      <ul className="space-y-1">
        {asked.data?.items.map((session) => (
          <One key={session.id} session={session} />
        ))}
      </ul>
      {(asked.data?.items.length ?? 0) > 1 && (
        <p className="mt-3">
          <Act of={others}>sign out everywhere but here</Act>
        </p>
      )}
    </Part>
  );
}

function One({ session }: { session: Session }) {
  const client = useQueryClient();
  const end = useAttempt(async () => {
    await call('endSession', { params: { session: session.id } });
    await client.invalidateQueries({ queryKey: ['account', 'sessions'] });
  });
  return (
    <li className="colophon-line">
      <span>{browserInWords(session.browser)}</span>
      <span className="label">
        since <Day at={session.since} time />
      </span>
      {session.current ? (
        <span className="label">this one</span>
      ) : (
        <Act of={end}>
          sign out there<span className="aside-only">, {browserInWords(session.browser)}</span>
        </Act>
      )}
    </li>
  );
}
