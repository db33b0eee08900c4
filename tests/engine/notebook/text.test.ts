import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  joinEntries,
  notebookFromText,
  notebookToText,
  placeOfLine,
  readAnyText,
  type PlainEntry,
} from '../../../shared/notebook/text.ts';

/** Lines that are awkward for the marks, and ordinary ones. */
const line = fc.oneof(
  fc.constantFrom(
    '',
    ' ',
    '#',
    '#:',
    '#: a',
    '#~',
    '#@ title x',
    '#\\~',
    '#\\\\: b',
    '# a',
    '  - J',
    'model m = s^z[l.a]',
  ),
  fc.string({ maxLength: 12 }).map((text) => text.replace(/[\r\n]/g, ' ')),
);
const entry: fc.Arbitrary<PlainEntry> = fc.record({
  kind: fc.constantFrom('prose' as const, 'statements' as const),
  text: fc.array(line, { minLength: 1, maxLength: 6 }).map((lines) => lines.join('\n')),
});
const entries = fc.array(entry, { maxLength: 7 });
const seed = { seed: 20260411, numRuns: 2000 };

describe('a notebook and its text', () => {
  it('loses nothing on the way there and back', () => {
    fc.assert(
      fc.property(entries, (given) => {
        expect(notebookFromText(joinEntries(given).text).entries).toEqual(given);
      }),
      seed,
    );
  });

  it('keeps title and authors', () => {
    const words = fc.stringMatching(/^[A-Za-z#:~@]([A-Za-z ]{0,8}[a-z])?$/);
    fc.assert(
      fc.property(words, fc.array(words, { maxLength: 3 }), entries, (title, authors, given) => {
        const notebook = { title, authors, entries: given };
        expect(notebookFromText(notebookToText(notebook))).toEqual(notebook);
      }),
      seed,
    );
  });

  it('gives a text that is cut and joined to itself', () => {
    fc.assert(
      fc.property(fc.array(line, { maxLength: 10 }), (lines) => {
        const once = joinEntries(notebookFromText(lines.join('\n')).entries).text;
        expect(joinEntries(notebookFromText(once).entries).text).toBe(once);
      }),
      seed,
    );
  });

  it('says which lines are whose, every line at most once', () => {
    fc.assert(
      fc.property(entries, (given) => {
        const { text, lines } = joinEntries(given);
        const all = text.split('\n');
        given.forEach((own, at) => {
          const span = lines[at];
          expect(span === undefined ? -1 : span.last - span.first + 1).toBe(own.text.split('\n').length);
          expect(placeOfLine(lines, span?.first ?? 0)).toEqual({ entry: at, line: 1 });
          const first = own.text.split('\n')[0] ?? '';
          if (own.kind === 'statements' && !first.startsWith('#')) expect(all[(span?.first ?? 0) - 1]).toBe(first);
        });
      }),
      seed,
    );
  });

  it('writes prose as comments and marks the border between statements only', () => {
    const { text, lines } = joinEntries([
      { kind: 'prose', text: 'A magnet.\n\nIts bonds.' },
      { kind: 'statements', text: 'lattice chain torus 4' },
      { kind: 'statements', text: 'spins s on vertices' },
    ]);
    expect(text).toBe('#: A magnet.\n#:\n#: Its bonds.\n\nlattice chain torus 4\n\n#~\n\nspins s on vertices\n');
    expect(lines).toEqual([
      { first: 1, last: 3 },
      { first: 5, last: 5 },
      { first: 9, last: 9 },
    ]);
    expect(placeOfLine(lines, 7)).toBeNull();
  });

  it('reads files with foreign line ends and a byte order mark', () => {
    expect(notebookFromText('\uFEFF#: a\r\n\r\nspins s on vertices\r\n').entries).toEqual([
      { kind: 'prose', text: 'a' },
      { kind: 'statements', text: 'spins s on vertices' },
    ]);
  });
});

describe('a plain file of the operator language', () => {
  it('is divided into steps: comments that begin a paragraph are prose', () => {
    const source = [
      '# Bonds of a ring',
      'lattice chain torus 8',
      'spins s on vertices',
      '',
      'model ising =',
      '',
      '  # exchange',
      '  - J sum(l: links) s^z[l.a] s^z[l.b]',
      '',
      '# What holds',
      '# and where',
      '',
      'audit symmetries of ising',
    ].join('\n');
    expect(readAnyText(source).entries).toEqual([
      { kind: 'prose', text: 'Bonds of a ring' },
      { kind: 'statements', text: 'lattice chain torus 8\nspins s on vertices' },
      { kind: 'statements', text: 'model ising =\n\n  # exchange\n  - J sum(l: links) s^z[l.a] s^z[l.b]' },
      { kind: 'prose', text: 'What holds\nand where' },
      { kind: 'statements', text: 'audit symmetries of ising' },
    ]);
  });

  it('keeps every statement and every comment, in order', () => {
    const simple = fc.constantFrom('', '# c', 'spins s on vertices', '  + a', '  # d', '#');
    const words = (text: string): string[] =>
      text
        .split('\n')
        .map((one) => one.replace(/^# ?/, '').trim())
        .filter((one) => one !== '');
    fc.assert(
      fc.property(fc.array(simple, { maxLength: 12 }), (lines) => {
        const read = readAnyText(lines.join('\n'));
        expect(read.entries.flatMap((own) => words(own.text))).toEqual(words(lines.join('\n')));
      }),
      seed,
    );
  });
});
