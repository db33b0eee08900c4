import { useState } from 'react';
import type { Slice } from '../../reading/slices.ts';
import type { EntryRows } from './row.ts';
import { rowsOf } from './rows.ts';

/** Rows of the reading in view; entries that did not change keep the same value, so React leaves them as they are. */
export function useRows(slices: readonly Slice[]): readonly EntryRows[] {
  const [kept, setKept] = useState<{ slices: readonly Slice[]; rows: readonly EntryRows[] }>({ slices: [], rows: [] });
  if (kept.slices === slices) return kept.rows;
  const next = { slices, rows: rowsOf(slices, kept.rows) };
  setKept(next);
  return next.rows;
}
