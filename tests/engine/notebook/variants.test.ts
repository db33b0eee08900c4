import { describe, expect, it } from 'vitest';
import { variantsOf, withVariant } from '../../../shared/notebook/variants.ts';

const p = (id: string, text: string) => ({ id, kind: 'prose' as const, text });
const base = {
  title: 'T',
  ownTitle: 'T, again',
  entries: [
    { origin: 'a', own: '1', kind: 'prose' as const, text: 'A' },
    { origin: 'b', own: '2', kind: 'prose' as const, text: 'B' },
    { origin: 'c', own: '3', kind: 'prose' as const, text: 'C' },
  ],
};
const origin = { title: 'T', entries: [p('a', 'A'), p('b', 'B'), p('c', 'C')] };
const fork = { title: 'T, again', entries: [p('1', 'A'), p('2', 'B'), p('3', 'C')] };
const find = (mine: (typeof fork)['entries'], theirs = origin.entries) =>
  variantsOf(base, { ...fork, entries: mine }, { ...origin, entries: theirs });

describe('variants', () => {
  it('are none while nothing was changed, moved only, or changed by the origin alone', () => {
    expect(find(fork.entries)).toEqual([]);
    expect(find([...fork.entries].reverse())).toEqual([]);
    expect(find(fork.entries, [p('a', 'other'), p('b', 'B')])).toEqual([]);
  });

  it('hold three readings, and say where both sides changed', () => {
    const [one] = find([p('1', 'A'), p('2', 'mine'), p('3', 'C')], [p('a', 'A'), p('b', 'theirs'), p('c', 'C')]);
    expect(one).toMatchObject({ kind: 'changed', base: 'B', origin: 'theirs', fork: 'mine', bothChanged: true });
    const [two] = find([p('1', 'A'), p('2', 'mine'), p('3', 'C')]);
    expect(two).toMatchObject({ kind: 'changed', base: 'B', origin: 'B', fork: 'mine', bothChanged: false });
    expect(find([p('1', 'A'), p('2', 'mine'), p('3', 'C')], [p('a', 'A'), p('b', 'mine'), p('c', 'C')])).toEqual([]);
  });

  it('keep what the fork added and removed, with its place', () => {
    const found = find([p('1', 'A'), p('9', 'new'), p('3', 'C')]);
    expect(found.map(({ key, kind, entry, after }) => [key, kind, entry, after])).toEqual([
      ['removed:b', 'removed', 'b', null],
      ['added:9', 'added', null, 'a'],
    ]);
    const [removed, added] = found;
    expect(removed && withVariant(origin.entries, removed)?.map(({ text }) => text)).toEqual(['A', 'C']);
    expect(added && withVariant(origin.entries, added)?.map(({ text }) => text)).toEqual(['A', 'new', 'B', 'C']);
    // Once the origin has it, it is no variant any more.
    expect(find([p('1', 'A'), p('9', 'new'), p('2', 'B'), p('3', 'C')], [...origin.entries, p('z', 'new')])).toEqual(
      [],
    );
  });

  it('still have their reading where the origin dropped the entry', () => {
    const [one] = find([p('1', 'A'), p('2', 'mine'), p('3', 'C')], [p('a', 'A'), p('c', 'C')]);
    expect(one).toMatchObject({ origin: null, fork: 'mine', bothChanged: true });
    expect(one && withVariant([p('a', 'A')], one)).toBe(null);
  });

  it('of the title are changes after the fork was made', () => {
    expect(variantsOf(base, { ...fork, title: 'Better' }, origin)).toMatchObject([{ kind: 'title', fork: 'Better' }]);
  });
});
