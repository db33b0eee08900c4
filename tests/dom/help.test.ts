import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { AssistAnswer } from '../../shared/contracts/assist.ts';
import { newAssistant } from '../../shared/derivation/assist.ts';
import { difference } from '../../src/features/writing/acts.ts';
import { edited, newHelper } from '../../src/reading/help.ts';
import { placed } from '../../src/reading/useReading.ts';

const entries = [
  { id: 'prose', kind: 'prose', text: 'A magnet.\n\nIts bonds.' },
  { id: 'setting', kind: 'statements', text: 'lattice square torus 4 x 4\nspins s on vertices\ncouplings J = 1' },
  { id: 'model', kind: 'statements', text: 'model ising =\n  - J sum(l: links) s^z[l.a] s^z[l.b]' },
  { id: 'audit', kind: 'statements', text: 'audit symmetries of ising' },
] as const;

/** Entries, the engine itself behind them. */
function opened() {
  const assistant = newAssistant();
  return newHelper(
    ({ entry, text }) => placed(entries.map((one) => (one.id === entry ? { ...one, text } : one))),
    (text, question) => Promise.resolve<AssistAnswer>(assistant.answer(text, question)),
  );
}
const text = (id: string): string => entries.find((one) => one.id === id)?.text ?? '';
const spot = (entry: string, line: number, column: number) => ({ entry, text: text(entry), at: { line, column } });

describe('the helper of an editor', () => {
  it('speaks in the lines of entries', async () => {
    const helper = opened();
    expect(await helper.explain(spot('audit', 1, 22))).toMatchObject({ name: 'ising', place: { line: 1, column: 21 } });
    expect(await helper.declaration(spot('audit', 1, 22))).toMatchObject({
      entry: 'model',
      place: { line: 1, column: 7 },
    });
    expect(await helper.declaration(spot('model', 2, 5))).toMatchObject({ entry: 'setting', place: { line: 3 } });
    expect(await helper.complete({ ...spot('audit', 1, 22), text: 'audit symmetries of is' })).toMatchObject({
      replace: { line: 1, column: 21 },
      options: [{ label: 'ising' }],
    });
  });
  it('renames through all entries', async () => {
    const { edits, refused } = await opened().rename(spot('model', 1, 8), 'magnet');
    expect(refused).toBeNull();
    const after = (id: string) =>
      edited(
        text(id),
        edits.filter((edit) => edit.entry === id),
      );
    expect(after('model')).toBe('model magnet =\n  - J sum(l: links) s^z[l.a] s^z[l.b]');
    expect(after('audit')).toBe('audit symmetries of magnet');
    expect(after('setting')).toBe(text('setting'));
  });
  it('says why a name is refused', async () => {
    const { edits, refused } = await opened().rename(spot('model', 1, 8), 'J');
    expect(edits).toEqual([]);
    expect(refused).toMatch(/J/);
  });
  it('writes a model out in place of its statement', async () => {
    const { edits } = await opened().writeOut(spot('model', 1, 8));
    expect(edited(text('model'), edits).split('\n')).toEqual([
      'model ising =',
      '  - J sum(v: vertices) s^z[v] s^z[v + (0, 1)]',
      '  - J sum(v: vertices) s^z[v] s^z[v + (1, 0)]',
    ]);
  });
  it('lays an entry out evenly', async () => {
    expect(await opened().format('model   a=  1+2')).toBe('model a = 1 + 2');
  });
});

describe('the least change', () => {
  it('makes one text of another', () => {
    const words = fc.array(fc.constantFrom('a', 'b', '\n', 'ab'), { maxLength: 12 }).map((all) => all.join(''));
    fc.assert(
      fc.property(words, words, (from, to) => {
        const change = difference(from, to);
        expect(from.slice(0, change.from) + change.insert + from.slice(change.to)).toBe(to);
      }),
      { seed: 5 },
    );
  });
});
