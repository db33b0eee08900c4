import { describe, expect, it } from 'vitest';
import type { Remark } from '../../shared/contracts/reviews.ts';
import { placeRemarks, subjectsOf, walk } from '../../src/features/margin/anchors.ts';

const remark = (id: string, entry: string, state: Remark['state'] = 'open'): Remark => ({
  id,
  by: null,
  text: 'Why this sign?',
  mentions: [],
  at: '2026-05-03T10:00:00Z',
  editedAt: null,
  subject: { what: 'entry', entry, quote: null },
  state,
  settledBy: null,
  settledAt: null,
  madeOn: null,
  stands: 'here',
  edition: null,
  replies: [],
});

describe('remarks in the margin', () => {
  const remarks = [remark('a', 'two'), remark('b', 'one', 'settled'), remark('c', 'one'), remark('d', 'lost')];

  it('stand beside their entries in the order of the page; those without an entry come last', () => {
    const placed = placeRemarks(remarks, ['one', 'two'], 'all');
    expect(placed.beside.get('one')?.map(({ id }) => id)).toEqual(['b', 'c']);
    expect(placed.gone.map(({ id }) => id)).toEqual(['d']);
    expect(placed.order.map(({ id }) => id)).toEqual(['b', 'c', 'a', 'd']);
  });

  it('are filtered to open ones, or away', () => {
    expect(placeRemarks(remarks, ['one', 'two'], 'open').order.map(({ id }) => id)).toEqual(['c', 'a', 'd']);
    expect(placeRemarks(remarks, ['one', 'two'], 'none').order).toEqual([]);
  });

  it('are walked both ways, round at the ends', () => {
    const { order } = placeRemarks(remarks, ['one', 'two'], 'open');
    expect(walk(order, null, 'next')?.id).toBe('c');
    expect(walk(order, null, 'previous')?.id).toBe('d');
    expect(walk(order, 'c', 'next')?.id).toBe('a');
    expect(walk(order, 'c', 'previous')?.id).toBe('d');
    expect(walk(order, 'd', 'next')?.id).toBe('c');
    expect(walk([], 'd', 'next')).toBeNull();
  });

  it('speak of the words that were chosen', () => {
    expect(subjectsOf('one', undefined, 'the sign of h')).toEqual([
      {
        key: 'entry',
        words: '“the sign of h”',
        subject: { what: 'entry', entry: 'one', quote: { exact: 'the sign of h', prefix: '', suffix: '' } },
      },
    ]);
  });
});
