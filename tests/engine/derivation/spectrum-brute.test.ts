import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  claims,
  clean,
  commute,
  lattices,
  phrase,
  Torus,
  wordOn,
  type Laid,
  type TestLattice,
  type Word,
} from './brute.ts';
import { addWord, hermitianLevels, identity, levelsWhere, times, zeros, type Complex } from './dense.ts';

/** Levels, degeneracies and gaps of random models against full diagonalisation in the test, with sectors, seams and rules. */

const chain = lattices['chain']!;
const square = lattices['square']!;

/** A weight p/7 + i q/5 on a word; complex ones stand with their Hermitian conjugate. */
interface Weighted {
  readonly word: Word;
  readonly re: number;
  readonly im: number;
}
const weighted = (lattice: TestLattice): fc.Arbitrary<Weighted> =>
  fc.record({
    word: wordOn(lattice, ['s'], 3),
    re: fc.integer({ min: -9, max: 9 }).filter((n) => n !== 0),
    im: fc.constantFrom(0, 0, 1, -2),
  });

/** A word as it is multiplied where factors meet: by offset. */
const placesOf = (word: Word, by: readonly number[], torus: Torus) =>
  [...word.places]
    .sort((a, b) => {
      const d = a.offset.findIndex((c, k) => c !== b.offset[k]);
      return d < 0 ? 0 : a.offset[d]! - b.offset[d]!;
    })
    .map(({ at, offset, pauli }) => ({
      spin: torus.spin(
        at,
        offset.map((c, d) => c + by[d]!),
      ),
      pauli,
    }));

const modelText = (terms: readonly Weighted[]): string =>
  terms
    .map(({ word, re, im }) => {
      const sum = `sum(v: vertices) ${phrase(word, '')}`;
      return im === 0 ? `(${String(re)}/7) ${sum}` : `((${String(re)}/7 + (${String(im)}) * 1i / 5) ${sum} + hc)`;
    })
    .join(' + ');

/** The matrix of the model: the Hermitian conjugate of a complex weight doubles the real part and removes the other. */
function matrixOf(terms: readonly Weighted[], torus: Torus): Complex {
  const h = zeros(2 ** torus.spins);
  for (const { word, re, im } of terms)
    for (const by of torus.cells) addWord(h, placesOf(word, by, torus), im === 0 ? re / 7 : (2 * re) / 7);
  return h;
}

const near = (got: readonly number[], expected: readonly number[]): void => {
  expect(got).toHaveLength(expected.length);
  got.forEach((level, k) => {
    expect(level).toBeCloseTo(expected[k]!, 7);
  });
};

/** Factors of one word may not meet on a spin: the wrapped word would not be Hermitian. */
const fits = (terms: readonly Weighted[], torus: Torus): boolean =>
  terms.every(({ word }) => {
    const spins = placesOf(word, torus.cells[0]!, torus).map((p) => p.spin);
    return new Set(spins).size === spins.length;
  });

describe.each([
  ['chain', chain, '5', [[5]]],
  [
    'square',
    square,
    '3 x 2',
    [
      [3, 0],
      [0, 2],
    ],
  ],
  [
    'tilted square',
    square,
    '(2, 1), (1, -2)',
    [
      [2, 1],
      [1, -2],
    ],
  ],
] as const)('random models on the %s', (_, lattice, size, periods) => {
  const torus = new Torus(periods, ['s.']);

  it('have the levels of a full diagonalisation', () => {
    fc.assert(
      fc.property(fc.array(weighted(lattice), { minLength: 1, maxLength: 3 }), (terms) => {
        fc.pre(fits(terms, torus));
        const text = [
          lattice.text(size),
          'spins s on vertices',
          `model m = ${modelText(terms)}`,
          `audit spectrum m ~ m on ${size} levels 64`,
          `audit degeneracy m on ${size}`,
          '',
        ].join('\n');
        const report = clean(text);
        const expected = hermitianLevels(matrixOf(terms, torus));
        const [spectrum] = claims(report, 'spectrum');
        near(spectrum?.figures['left'] as number[], expected);
        const [ground] = claims(report, 'degeneracy');
        const states = expected.filter((e) => e - expected[0]! < 1e-6).length;
        expect(ground?.figures).toMatchObject({ degeneracy: states });
        expect(ground?.figures['energy']).toBeCloseTo(expected[0]!, 7);
        if (states < expected.length) expect(ground?.figures['gap']).toBeCloseTo(expected[states]! - expected[0]!, 7);
        else expect(ground?.figures['gap']).toBeNull();
      }),
      { seed: 1932, numRuns: 25 },
    );
  });

  it('have in a sector the levels of the projected matrix, and are refuted where they leave it', () => {
    const seen = { kept: 0, left: 0 };
    fc.assert(
      fc.property(
        fc.array(weighted(lattice), { minLength: 1, maxLength: 2 }),
        fc.constantFrom('x', 'y', 'z'),
        fc.constantFrom(1, -1),
        (terms, p, value) => {
          fc.pre(fits(terms, torus));
          const text = [
            lattice.text(size),
            'spins s on vertices',
            `model m = ${modelText(terms)}`,
            `symmetry P = prod(v: vertices) s^${p}[v]`,
            `audit degeneracy m [P = ${value === 1 ? '+1' : '-1'}] on ${size}`,
            '',
          ].join('\n');
          const [claim] = claims(clean(text), 'degeneracy');
          const all = Array.from({ length: torus.spins }, (__, spin) => ({ spin, pauli: p }));
          const whole: Laid = {
            x: p === 'z' ? 0n : (1n << BigInt(torus.spins)) - 1n,
            z: p === 'x' ? 0n : (1n << BigInt(torus.spins)) - 1n,
            phase: 0,
          };
          if (!terms.every(({ word }) => commute(torus.lay(word, torus.cells[0]!), whole))) {
            seen.left++;
            expect(claim?.grade).toBe('refuted');
            return;
          }
          seen.kept++;
          const parity = zeros(2 ** torus.spins);
          addWord(parity, all, value);
          const expected = levelsWhere(matrixOf(terms, torus), [parity]);
          expect(claim?.figures['energy']).toBeCloseTo(expected[0]!, 7);
          expect(claim?.figures).toMatchObject({
            dimension: expected.length,
            degeneracy: expected.filter((e) => e - expected[0]! < 1e-6).length,
          });
        },
      ),
      { seed: 1939, numRuns: 25 },
    );
    expect(seen.kept).toBeGreaterThan(3);
    expect(seen.left).toBeGreaterThan(3);
  });
});

describe('a rule', () => {
  it('leaves P H P, against the matrix cut down to the states that obey it', () => {
    const n = 5;
    const torus = new Torus([[n]], ['s.']);
    fc.assert(
      fc.property(fc.array(weighted(chain), { minLength: 1, maxLength: 3 }), fc.constantFrom(0, 1), (terms, most) => {
        fc.pre(fits(terms, torus));
        const text = [
          chain.text(String(n)),
          'spins s on vertices',
          `model m = ${modelText(terms)}`,
          `rule few(v: vertices) = s^n[v] + s^n[v + (1)] is <= ${String(most)}`,
          `audit spectrum m [few] ~ m [few] on ${String(n)} levels 64`,
          '',
        ].join('\n');
        const [claim] = claims(clean(text), 'spectrum');
        const h = matrixOf(terms, torus);
        const states = [...Array(2 ** n).keys()].filter((s) =>
          [...Array(n).keys()].every((v) => ((s >> v) & 1) + ((s >> ((v + 1) % n)) & 1) <= most),
        );
        const cut = zeros(states.length);
        states.forEach((a, i) => {
          states.forEach((b, j) => {
            cut.re[i * states.length + j] = h.re[a * h.n + b]!;
            cut.im[i * states.length + j] = h.im[a * h.n + b]!;
          });
        });
        near(claim?.figures['left'] as number[], hermitianLevels(cut));
      }),
      { seed: 1984, numRuns: 20 },
    );
  });
});

describe('a seam', () => {
  /** U = ∏ X on the spins of the far side turns the bonds that cross; built by conjugating each term that wraps. */
  it('turns the terms that reach across it, wherever it stands', () => {
    const n = 5;
    const torus = new Torus([[n]], ['s.']);
    fc.assert(
      fc.property(
        fc.array(weighted(chain), { minLength: 1, maxLength: 2 }),
        fc.constantFrom('x', 'y', 'z'),
        (terms, p) => {
          fc.pre(fits(terms, torus));
          const odd = (word: Word, from: (offset: number) => boolean): boolean =>
            word.places.filter((q) => from(q.offset[0]!) && q.pauli !== p).length % 2 === 1;
          fc.pre(terms.every(({ word }) => !odd(word, () => true)));
          const text = [
            chain.text(String(n)),
            'spins s on vertices',
            `model m = ${modelText(terms)}`,
            `symmetry P = prod(v: vertices) s^${p}[v]`,
            'model t = twist(m, P, 1)',
            `audit spectrum t ~ t on ${String(n)} levels 64`,
            '',
          ].join('\n');
          const [claim] = claims(clean(text), 'spectrum');
          // here the seam stands between cells 2 and 3 of the ring, not at its end
          const h = zeros(2 ** n);
          for (const { word, re, im } of terms)
            for (const [v] of torus.cells) {
              const across = odd(word, (o) => Math.floor((v! + o - 3) / n) % 2 !== 0) ? -1 : 1;
              addWord(h, placesOf(word, [v!], torus), across * (im === 0 ? re / 7 : (2 * re) / 7));
            }
          near(claim?.figures['left'] as number[], hermitianLevels(h));
        },
      ),
      { seed: 1979, numRuns: 25 },
    );
  });
});

describe('complex hopping', () => {
  it('has the levels of its matrix: raising and lowering operators with a phase, and their conjugates', () => {
    const n = 4;
    fc.assert(
      fc.property(
        fc.integer({ min: -5, max: 5 }),
        fc.integer({ min: -5, max: 5 }),
        fc.constantFrom(1, 2),
        fc.integer({ min: -4, max: 4 }),
        (a, b, reach, u) => {
          const text = `lattice chain torus ${String(n)}
spins s on vertices
couplings a = (${String(a)})/3, b = (${String(b)})/4
model m = (a + b * 1i) sum(v: vertices) s^+[v] s^-[v + (${String(reach)})] + hc
model n = m + (${String(u)})/5 sum(v: vertices) s^n[v] s^n[v + (1)] + sum(v: vertices) s^x[v] s^y[v + (1)]
audit spectrum n ~ n on ${String(n)} levels 64
`;
          // as matrices: s^+ = |0><1|, s^- = |1><0|
          const h = zeros(2 ** n);
          const raise = (state: number, v: number): number => ((state >> v) & 1 ? state ^ (1 << v) : -1);
          const lower = (state: number, v: number): number => ((state >> v) & 1 ? -1 : state | (1 << v));
          for (let v = 0; v < n; v++) {
            for (let state = 0; state < h.n; state++) {
              const middle = lower(state, (v + reach) % n);
              const end = middle < 0 ? -1 : raise(middle, v);
              if (end >= 0) {
                h.re[end * h.n + state]! += a / 3;
                h.im[end * h.n + state]! += b / 4;
                h.re[state * h.n + end]! += a / 3;
                h.im[state * h.n + end]! -= b / 4;
              }
              if ((state >> v) & 1 && (state >> ((v + 1) % n)) & 1) h.re[state * h.n + state]! += u / 5;
            }
            addWord(
              h,
              [
                { spin: v, pauli: 'x' },
                { spin: (v + 1) % n, pauli: 'y' },
              ],
              1,
            );
          }
          const [claim] = claims(clean(text), 'spectrum');
          near(claim?.figures['left'] as number[], hermitianLevels(h));
        },
      ),
      { seed: 1928, numRuns: 25 },
    );
  });
});

describe('the test’s own matrices', () => {
  it('obey the Pauli algebra', () => {
    const word = (pauli: string): Complex => {
      const m = zeros(4);
      addWord(m, [{ spin: 1, pauli }], 1);
      return m;
    };
    const i = identity(4);
    const xyz = times(times(word('x'), word('y')), word('z'));
    i.re.forEach((x, k) => {
      expect(xyz.im[k]).toBe(x);
      expect(xyz.re[k]).toBe(0);
    });
  });
});
