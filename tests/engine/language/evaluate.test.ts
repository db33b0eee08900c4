import fc from 'fast-check';
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { limits } from '../../../shared/limits.ts';
import { linesOf, run } from './support.ts';

const bonds = readFileSync(new URL('../../examples/ising-bonds.gw', import.meta.url), 'utf8');

describe('a source with errors', () => {
  const text = `lattice square torus 4 x 4
spins s on vertices
couplings h = 1
model good = h sum(v: vertices) s^x[v]
model bad = h sum(v: vertices s^x[v]
model after = bad + good
model worse = q sum(v: vertices) s^x[v]
audit commute good with lost
model fine = 2 good
audit symmetries of after
`;
  it('gives one problem a mistake, where it stands, and evaluates the rest', () => {
    const program = run(text);
    expect(program.problems.map((p) => [p.line, p.column, p.code])).toEqual([
      [5, 18, 'bracket'],
      [7, 15, 'unknown-name'],
      [8, 25, 'unknown-name'],
    ]);
    expect(linesOf(program, 'fine')).toEqual(['2*h sx(0,0) ~ 1,1']);
    expect(program.statements.filter((s) => !s.ok).map((s) => [s.line, s.waits])).toEqual([
      [5, []],
      [6, ['bad']],
      [7, []],
      [8, []],
      [10, ['after']],
    ]);
  });
  it('has one problem when the lattice itself is wrong', () => {
    const program = run(text.replace('square', 'sqare').replace('vertices s^x', 'vertices) s^x'));
    expect(program.problems.map((p) => [p.line, p.code, p.fix])).toContainEqual([1, 'unknown-lattice', 'square']);
    expect(program.problems.filter((p) => p.code === 'no-lattice')).toEqual([]);
  });
});

describe('incremental evaluation', () => {
  it('keeps the very values that did not change', () => {
    const first = run(bonds);
    const second = run(bonds.replace('- h sum(v', '- 2 h sum(v'), first);
    for (const name of ['s', 'g', 'J', 'flip', 'w1', 'flat', 'bonds'])
      expect([name, second.values.find(name) === first.values.find(name)]).toEqual([name, true]);
    for (const name of ['ising', 'gauge'])
      expect([name, second.values.find(name) === first.values.find(name)]).toEqual([name, false]);
    expect(linesOf(second, 'gauge')).toContain('-2*h gx(0,1) gx(1,1) gx.1(1,0) gx.1(1,1) ~ 1,1');
  });
  it('gives the same as from the beginning, whatever was there before', () => {
    const words = bonds.split('\n');
    const plain = (source: string, previous?: ReturnType<typeof run>): unknown => {
      const p = run(source, previous);
      return [p.problems, p.statements, p.audits, [...p.values.all.values()].map((v) => [v.name, v.place])];
    };
    fc.assert(
      fc.property(
        fc.nat(words.length - 1),
        fc.nat(words.length - 1),
        fc.constantFrom('', '# x', 'model z = 1'),
        (i, j, line) => {
          const edited = [...words.slice(0, i), line, ...words.slice(i).filter((_, k) => k !== j)].join('\n');
          expect(plain(edited, run(bonds))).toEqual(plain(edited));
        },
      ),
      { seed: 20240607, numRuns: 60 },
    );
  });
  it('moves places with their lines and keeps the operators', () => {
    const first = run(bonds);
    const second = run(`# one line more\n${bonds}`, first);
    const [a, b] = [first.values.find('gauge'), second.values.find('gauge')];
    expect(a?.what === 'model' && b?.what === 'model' && a.operator === b.operator).toBe(true);
    expect((b?.place.line ?? 0) - (a?.place.line ?? 0)).toBe(1);
  });
});

describe('hostile sources', () => {
  const prelude = 'lattice square torus 4 x 4\nspins s on vertices\ncouplings J = 1, h\n';
  const many = (n: number, f: (k: number) => string): string => Array.from({ length: n }, (_, k) => f(k)).join('');
  it.each([
    ['deep brackets', `model a = ${'('.repeat(5000)}1${')'.repeat(5000)}`],
    ['many nots', `model a = sum(v: vertices where ${'not '.repeat(9000)}v.x == 0) 1`],
    ['sums of sums', `model a = ${'sum(v: vertices) '.repeat(3000)}1`],
    [
      'sums over sums',
      `model a = ${many(30, (k) => `sum(v${k}: neighbours(${k ? `v${k - 1}` : 'vertices(0, 0)'})) `)}1`,
    ],
    ['a long statement', `model a = ${'1+'.repeat(490_000)}1`],
    ['open brackets', `model a = ${'('.repeat(990_000)}`],
    ['a long word', `model ${'a'.repeat(900_000)}`],
    ['huge powers', 'model a = ((((2^64)^64)^64)^64)^64'],
    ['a huge exponent', 'model a = 2^99999999999'],
    ['huge decimals', `model a = 1e999999 + ${'9'.repeat(100_000)}`],
    ['many families', `model a = ${many(25, (k) => `(s^x[vertices(${k}, 0)] + s^z[vertices(${k}, 0)]) `)}`],
    ['a power of a sum', `model a = (${many(40, (k) => `${k ? '+' : ''} s^x[vertices(${k}, 0)]`)})^64`],
    ['a product of sums of roots', `model a = ${many(60, (k) => `(J + ${k} h + sqrt(${k + 2})) `)}s^x[vertices(0, 0)]`],
    ['powers of sums of roots', `model a = (${many(20, (k) => `sqrt(${k + 2}) + `)}J + h)^64 s^x[vertices(0, 0)]`],
    ['a chain of or', `model a = sum(v: vertices where ${many(6000, () => 'v.x == 0 or ')} v.x == 1) 1`],
  ])('%s end in a problem', (_, text) => {
    const program = run(prelude + text);
    const errors = program.problems.filter((p) => p.severity === 'error');
    expect(errors.length).toBe(1);
    expect(errors[0]?.line).toBe(4);
  });
  it('are refused past a million characters, and past the number of statements', () => {
    expect(run('x'.repeat(limits.sourceCharacters + 1)).problems.map((p) => p.code)).toEqual(['limit']);
    expect(run('couplings a\n'.repeat(limits.statements + 5)).problems.some((p) => p.code === 'limit')).toBe(true);
  });
});

describe('fuzz', () => {
  const bits = [
    ...'lattice square torus 4 x 4|spins s on vertices|couplings J|model M = |law G(v: vertices) = |map N from s to g|audit '.split(
      '|',
    ),
    ...'sum(v: vertices)|prod(l: star(v))|s^x[v]|g^z[l]|+ hc|where|v.x|% 2|== 0|(|)|[|]|+|-|*|/|^|2|1i|0.5|,|:|=>|=|is -1|for|\n|\n  |J|M|G|N|~|on 2 x 2|levels 3|over J = 0 .. 1 by 0.1|#|σ|\\sigma|⟩|(1, 0)|loop(1)|in|not|and|..|.|@|\u{1f600}'.split(
      '|',
    ),
  ];
  it('throws nothing but problems, with places inside the source', () => {
    const part = fc.constantFrom(...bits);
    fc.assert(
      fc.property(fc.array(part, { maxLength: 30 }), fc.boolean(), (words, withLattice) => {
        const source = `${withLattice ? 'lattice square torus 4 x 4\nspins s on vertices\nspins g on links\ncouplings J = 1\n' : ''}${words.join(' ')}`;
        const lines = source.split('\n');
        for (const p of run(source).problems) {
          expect(p.line).toBeGreaterThanOrEqual(1);
          expect(p.line).toBeLessThanOrEqual(lines.length);
          expect(p.column).toBeGreaterThanOrEqual(1);
          expect(p.column).toBeLessThanOrEqual((lines[p.line - 1]?.length ?? 0) + 1);
        }
      }),
      { seed: 7, numRuns: 400 },
    );
  });
  it('takes any text at all', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary', maxLength: 60 }), (text) => {
        run(text);
        run(`lattice chain torus 4\nspins s on vertices\nmodel M = ${text}`);
      }),
      { seed: 11, numRuns: 400 },
    );
  });
});
