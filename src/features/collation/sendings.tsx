import { useInfiniteQuery } from '@tanstack/react-query';
import type { ReactNode } from 'react';
import { sendingsQuery } from '../../api/review-queries.ts';
import { Day } from '../../components/dates.tsx';
import { Failed, Waiting } from '../../components/faces.tsx';
import { ShowMore } from '../../components/parts.tsx';

interface Props {
  readonly notebook: string;
  readonly which: 'received' | 'sent';
  readonly empty: string;
  readonly link: (sending: string, words: ReactNode) => ReactNode;
}

/** Variants that came, or that were sent, newest first. */
export function Sendings({ notebook, which, empty, link }: Props) {
  const asked = useInfiniteQuery(sendingsQuery(notebook, which));
  const items = asked.data?.pages.flatMap((page) => page.items) ?? [];
  return (
    <>
      {asked.isPending && <Waiting what="Fetching the variants …" />}
      {asked.isError && (
        <Failed what="The variants could not be fetched." error={asked.error} retry={() => void asked.refetch()} />
      )}
      {asked.isSuccess && items.length === 0 && <p className="label">{empty}</p>}
      <ul className="listed">
        {items.map((one) => (
          <li key={one.id}>
            <p>{link(one.id, beginning(one.letter))}</p>
            <p className="label">
              {which === 'received'
                ? `from ${one.by?.name ?? 'someone who has left'}`
                : `to ${one.origin?.title ?? 'an origin that is gone'}`}
              , <Day at={one.at} /> · {one.variants === 1 ? 'one variant' : `${String(one.variants)} variants`},{' '}
              {one.adopted} adopted, {one.left} left
              {one.status === 'withdrawn' && ' · withdrawn'}
              {one.status === 'waiting' && ' · waiting'}
            </p>
          </li>
        ))}
      </ul>
      <ShowMore of={asked} />
    </>
  );
}

const beginning = (letter: string): string => {
  const line = letter.split('\n').find((one) => one.trim() !== '') ?? 'A letter without words';
  return line.length > 120 ? `${line.slice(0, 120)}…` : line;
};
