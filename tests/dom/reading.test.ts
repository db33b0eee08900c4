import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { rowsOf } from '../../src/features/spread/rows.ts';
import { type Placed, slicesOf } from '../../src/reading/slices.ts';
import { answering, type Reading, unread } from '../../src/reading/state.ts';
import { placed } from '../../src/reading/useReading.ts';
import { type Answer, protocol } from '../../src/worker/messages.ts';
import { example } from '../../src/routes/example.ts';
import { reportOf } from './fixture.ts';

const read = (texts: Readonly<Record<string, string>> = {}) => {
  const entries = example.map((entry) => ({ ...entry, text: texts[entry.id] ?? entry.text }));
  const source = placed(entries);
  return { report: reportOf(source.text), entries: source.entries };
};

const answer = (version: number, part: number, at = read()): Answer => ({
  protocol,
  version,
  part,
  kind: 'report',
  report: { ...at.report, engine: `${String(version)}.${String(part)}` },
  waiting: 0,
});

describe('late answers lose', () => {
  const answers = [answer(1, 0), answer(1, 1), answer(2, 0), answer(3, 0), answer(3, 1), answer(3, 2)];
  it('whatever the order of arrival, the newest answer is the one shown', () => {
    const shuffled = fc.shuffledSubarray(answers, { minLength: answers.length });
    fc.assert(
      fc.property(shuffled, (order) => {
        const { entries } = read();
        const last = order.reduce<Reading>((reading, one) => answering(reading, one, entries), unread);
        expect([last.answered, last.part, last.engine]).toEqual([3, 2, '3.2']);
      }),
      { seed: 20261201, numRuns: 60 },
    );
  });

  it('an answer of another protocol says what to do and shows nothing of it', () => {
    const { entries } = read();
    const first = answering(unread, answer(1, 0), entries);
    const odd = answering(first, { ...answer(2, 0), protocol: protocol + 1 }, entries);
    expect(odd.failed).toMatch(/load it again/);
    expect(odd.slices).toBe(first.slices);
  });
});

describe('slices', () => {
  const at = (
    entries: readonly Placed[],
    report: ReturnType<typeof reportOf>,
    before = slicesOf(report, entries, []),
  ) => slicesOf(report, entries, before);

  it('lines are the entry’s own', () => {
    const { report, entries } = read();
    const ising = at(entries, report).find((slice) => slice.id === 'ising');
    expect(ising?.models.map((item) => item.line)).toEqual([0]);
    expect(ising?.models[0]?.value.groups.map((group) => group.place?.line)).toEqual([1, 2]);
  });

  it('an entry that only moves down stays the same value', () => {
    const first = read();
    const before = slicesOf(first.report, first.entries, []);
    const longer = read({ magnet: 'One line.\n\nAnd another paragraph\nof several\nlines.' });
    const after = slicesOf(longer.report, longer.entries, before);
    for (const id of ['ising', 'bonds', 'holds', 'biased']) {
      const of = (slices: typeof before) => slices.find((slice) => slice.id === id);
      expect(of(after)).toBe(of(before));
    }
  });

  it('a broken statement keeps its last good model, marked stale, and so does what depends on it elsewhere', () => {
    const first = read();
    const before = slicesOf(first.report, first.entries, []);
    const broken = read({ ising: 'model ising =\n  - J sum(l: links) s^z[l.a ' });
    const after = slicesOf(broken.report, broken.entries, before);
    const models = after.flatMap((slice) => slice.models.map((item) => [item.value.name, item.stale]));
    expect(models).toContainEqual(['ising', true]);
    expect(models).toContainEqual(['gauge', true]);
    expect(models).toContainEqual(['biased', false]);
    const mended = slicesOf(first.report, first.entries, after);
    expect(mended.flatMap((slice) => slice.models.map((item) => item.stale))).not.toContain(true);
  });

  it('a statement that was taken out is gone, also while another is broken', () => {
    const first = read();
    const before = slicesOf(first.report, first.entries, []);
    const without = read({ ising: '# nothing here', spectra: 'x', laws: 'spn s' });
    const after = slicesOf(without.report, without.entries, before);
    expect(after.find((slice) => slice.id === 'ising')?.models).toEqual([]);
  });
});

describe('rows', () => {
  const { report, entries } = read();
  const slices = slicesOf(report, entries, []);
  const all = rowsOf(slices, []);
  const rows = (id: string) => all.find((one) => one.id === id)?.rows ?? [];

  it('sets each term against its image, with the weakest grade that is claimed of the map', () => {
    const [row] = rows('ising');
    if (row?.what !== 'terms') throw new Error('no terms');
    expect(row.pairs.map((pair) => [pair.left?.ref, pair.right?.ref, pair.mark?.grade])).toEqual([
      ['ising/0', 'gauge/0', 'exact'],
      ['ising/1', 'gauge/1', 'exact'],
    ]);
    expect([row.left?.name, row.right?.name, row.map]).toEqual(['ising', 'gauge', 'bonds']);
  });

  it('the image’s own entry says where it stands', () => {
    expect(rows('bonds').map((row) => row.what)).toEqual(['declaration', 'elsewhere']);
  });

  it('marks the very term that a law refutes, and gives the others of a refuted claim no grade', () => {
    const [row] = rows('biased');
    if (row?.what !== 'terms') throw new Error('no terms');
    expect(row.pairs.map((pair) => pair.mark?.grade)).toEqual([undefined, undefined, 'refuted']);
    expect(all.find((one) => one.id === 'biased')?.fails).toBe('refuted');
  });

  it('an unchanged reading gives the same values', () => {
    const again = rowsOf(slicesOf(reportOf(placed(example).text), entries, slices), all);
    again.forEach((one, k) => expect(one).toBe(all[k]));
  });
});
