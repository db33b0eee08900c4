import { useInfiniteQuery, useQueryClient } from '@tanstack/react-query';
import { type ReactNode, useState } from 'react';
import type { Notice } from '../../../shared/contracts/notices.ts';
import { noticesQuery } from '../../api/account-queries.ts';
import { call } from '../../api/client.ts';
import { Act, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { Empty, Failed, Waiting } from '../../components/faces.tsx';
import { Choice, ShowMore } from '../../components/parts.tsx';

type Show = 'all' | 'unread';
const shows = [
  ['all', 'all'],
  ['unread', 'unread'],
] as const;

/** What happened elsewhere that concerns this person, newest first. Going to what a notice speaks of marks it as read. */
export function Notices({ link }: { link: (to: string, words: ReactNode, gone: () => void) => ReactNode }) {
  const client = useQueryClient();
  const [show, setShow] = useState<Show>('all');
  const asked = useInfiniteQuery(noticesQuery(show));
  const read = async (notices: 'all' | string[]) => {
    await call('readNotices', { body: { notices } });
    await Promise.all(['notices', 'me'].map((key) => client.invalidateQueries({ queryKey: [key] })));
  };
  const all = useAttempt(() => read('all'));
  const notices = asked.data?.pages.flatMap((page) => page.items) ?? [];
  return (
    <>
      <p className="colophon-line mt-4">
        <Choice label="Show" value={show} options={shows} choose={setShow} />
        {notices.some((notice) => !notice.read) && <Act of={all}>mark all as read</Act>}
      </p>
      {asked.isPending && <Waiting what="Fetching your notices …" />}
      {asked.isError && (
        <Failed what="Your notices could not be fetched." error={asked.error} retry={() => void asked.refetch()} />
      )}
      {asked.isSuccess && notices.length === 0 && (
        <Empty title={show === 'all' ? 'No notices yet' : 'Nothing unread'}>
          <p>
            Invitations, variants sent to your notebooks, remarks and verdicts on them, mentions of you and jobs that
            have finished are told here, and by mail as you choose below.
          </p>
        </Empty>
      )}
      <ul className="listed mt-4">
        {notices.map((notice) => (
          <One key={notice.id} notice={notice} link={link} read={() => void read([notice.id])} />
        ))}
      </ul>
      <ShowMore of={asked} />
    </>
  );
}

interface OneProps {
  readonly notice: Notice;
  readonly link: (to: string, words: ReactNode, gone: () => void) => ReactNode;
  readonly read: () => void;
}

function One({ notice, link, read }: OneProps) {
  return (
    <li data-unread={!notice.read || undefined}>
      <p>
        {!notice.read && <span className="new-mark">new </span>}
        {link(notice.to, notice.text, notice.read ? () => undefined : read)}
      </p>
      <p className="label">
        <Day at={notice.at} time />
        {notice.notebook && ` · ${notice.notebook.title}`}
        {!notice.read && (
          <>
            {' · '}
            <button type="button" className="act" onClick={read}>
              mark as read<span className="aside-only">: {notice.text}</span>
            </button>
          </>
        )}
      </p>
    </li>
  );
}
