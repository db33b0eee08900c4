import { useInfiniteQuery, useQuery } from '@tanstack/react-query';
import type { ReactNode } from 'react';
import type { EditionSummary } from '../../../shared/contracts/editions.ts';
import type { Verdict } from '../../../shared/contracts/reviews.ts';
import { allVerdictsQuery, historyQuery } from '../../api/review-queries.ts';
import { Day } from '../../components/dates.tsx';
import { Empty, Failed, Waiting } from '../../components/faces.tsx';
import { GradeMark, type GradeName } from '../../components/marks.tsx';
import { ShowMore } from '../../components/parts.tsx';
import { statusWords } from './colophon.tsx';

export interface HistoryWays {
  readonly edition: (number: number, words: ReactNode) => ReactNode;
  readonly claims: (number: number, words: ReactNode) => ReactNode;
  readonly compare: (left: string, right: string, words: ReactNode) => ReactNode;
}

const grades: readonly GradeName[] = ['proved', 'exact', 'numerical', 'refuted', 'open'];

/** Editions, newest first, each with what it says of itself, how its claims stand and what referees said of it. */
export function History({ notebook, newest, ways }: { notebook: string; newest: number | null; ways: HistoryWays }) {
  const asked = useInfiniteQuery(historyQuery(notebook));
  const verdicts = useQuery(allVerdictsQuery(notebook));
  const editions = asked.data?.pages.flatMap((page) => page.items) ?? [];
  return (
    <>
      {asked.isPending && <Waiting what="Fetching the editions …" />}
      {asked.isError && (
        <Failed what="The editions could not be fetched." error={asked.error} retry={() => void asked.refetch()} />
      )}
      {asked.isSuccess && editions.length === 0 && (
        <Empty title="No edition yet">
          <p>
            An edition fixes the text for good, with a number and a hash to cite; its claims are computed by the server.
          </p>
        </Empty>
      )}
      <ol className="listed mt-6">
        {editions.map((edition) => (
          <One
            key={edition.number}
            edition={edition}
            verdicts={verdicts.data?.items.filter((one) => one.edition === edition.number) ?? []}
            newest={edition.number === newest}
            ways={ways}
          />
        ))}
      </ol>
      <ShowMore of={asked} />
    </>
  );
}

interface OneProps {
  readonly edition: EditionSummary;
  readonly verdicts: readonly Verdict[];
  readonly newest: boolean;
  readonly ways: HistoryWays;
}

function One({ edition, verdicts, newest, ways }: OneProps) {
  const whole = verdicts.filter((verdict) => verdict.claim === null);
  return (
    <li>
      <p className="text-lead">
        {ways.edition(edition.number, `Edition ${String(edition.number)}`)}: {edition.summary}
      </p>
      <p className="colophon-line label">
        <span>
          {edition.publishedBy?.name ?? 'someone who has left'}, <Day at={edition.publishedAt} time />
        </span>
        <span className="code">{edition.hash.slice(0, 12)}</span>
        {edition.status === 'sealed' ? (
          <Counts of={edition.grades} />
        ) : (
          <span className={edition.status === 'failed' ? 'ink-refuted' : undefined}>{statusWords(edition.status)}</span>
        )}
      </p>
      {whole.map((verdict) => (
        <p key={verdict.id} className="label">
          {verdict.by?.name ?? 'a referee who has left'}: {verdict.word}
          {!newest && ', said of this edition, not of later ones'}
        </p>
      ))}
      <p className="colophon-line">
        {ways.claims(edition.number, 'claim sheet')}
        {edition.number > 1 &&
          ways.compare(
            String(edition.number - 1),
            String(edition.number),
            `compare with edition ${String(edition.number - 1)}`,
          )}
        {ways.compare(String(edition.number), 'draft', 'compare with the draft')}
      </p>
    </li>
  );
}

function Counts({ of }: { of: Readonly<Record<string, number>> }) {
  const found = grades.filter((grade) => (of[grade] ?? 0) > 0);
  if (found.length === 0) return <span>no claims</span>;
  return found.map((grade) => (
    <span key={grade} className={`ink-${grade}`}>
      <GradeMark grade={grade} label="" /> {of[grade]} {grade}
    </span>
  ));
}
