import { useQuery } from '@tanstack/react-query';
import { useCallback, useEffect, useMemo, useState } from 'react';
import type { Slice } from '../../reading/slices.ts';
import { type EntryText, type Learned, placed } from '../../reading/useReading.ts';
import { answersQuery } from './queries.ts';

/** Names of the questions that stand open on a page, sorted, each once. */
export const openNames = (slices: readonly Slice[]): readonly string[] =>
  [...new Set(slices.flatMap(({ claims }) => claims.flatMap(({ value }) => value.question ?? [])))].sort();

/** Answers of the server, as they come; the same value until there is something new. */
export function useLearned(): readonly [Learned | undefined, (more: Learned) => void] {
  const [learned, setLearned] = useState<Learned | undefined>(undefined);
  const learn = useCallback(
    (more: Learned) =>
      setLearned((before) =>
        Object.keys(more).every((name) => before?.[name] !== undefined) ? before : { ...before, ...more },
      ),
    [],
  );
  return [learned, learn];
}

/** Asks the server for answers to what stands open on a page, whoever had them computed, and hands them on as they come. */
export function useAnswers(slices: readonly Slice[], learn: (more: Learned) => void): void {
  const names = useMemo(() => openNames(slices), [slices]);
  const { data } = useQuery(answersQuery(names));
  useEffect(() => {
    if (!data || data.items.length === 0) return;
    learn(Object.fromEntries(data.items.map(({ question, findings }) => [question, findings])));
  }, [data, learn]);
}

/** From where questions are handed to the server: for those who are signed in. */
export function useHandOver(notebook: string, entries: readonly EntryText[], me: string | null) {
  return useMemo(() => (me === null ? null : { notebook, source: placed(entries).text }), [notebook, entries, me]);
}
