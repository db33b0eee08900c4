import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { newDerivation } from '../../../shared/derivation/derive.ts';
import type { Claim, Report } from '../../../shared/contracts/report.ts';
import { addWord, hermitianLevels, zeros, type Complex } from './dense.ts';

/** The image of a state map as a sector, against V† H V multiplied out. */

const derive = (text: string): Report => newDerivation().derive(text);
const errors = (of: Report): string[] => of.problems.filter((p) => p.severity === 'error').map((p) => p.message);
const only = (of: Report, audit: string): Claim => {
  expect(errors(of)).toEqual([]);
  const found = of.claims.filter((claim) => claim.audit === audit);
  expect(found).toHaveLength(1);
  return found[0]!;
};

/** A vector on two bits: amplitudes of |00>, |01>, |10>, |11> as text and as numbers. */
interface Ket {
  readonly text: string;
  readonly re: readonly number[];
  readonly im: readonly number[];
}

const r = Math.SQRT1_2;
/** Orthonormal sets, real and complex. */
const sets: readonly (readonly Ket[])[] = [
  [
    { text: '|00>', re: [1, 0, 0, 0], im: [0, 0, 0, 0] },
    { text: '(|01> + |10>) / sqrt(2)', re: [0, r, r, 0], im: [0, 0, 0, 0] },
    { text: '(|01> - |10>) / sqrt(2)', re: [0, r, -r, 0], im: [0, 0, 0, 0] },
  ],
  [
    { text: '(3 |00> + 4 * 1i |11>) / 5', re: [0.6, 0, 0, 0], im: [0, 0, 0, 0.8] },
    { text: '(4 * 1i |00> + 3 |11>) / 5', re: [0, 0, 0, 0.6], im: [0.8, 0, 0, 0] },
  ],
  [{ text: '(|00> + |01> + |10> - |11>) / 2', re: [0.5, 0.5, 0.5, -0.5], im: [0, 0, 0, 0] }],
  [
    { text: '(|00> + 1i |01>) / sqrt(2)', re: [r, 0, 0, 0], im: [0, r, 0, 0] },
    { text: '(|10> - 1i |11>) / sqrt(2)', re: [0, 0, r, 0], im: [0, 0, 0, -r] },
    { text: '(1i |00> + |01>) / sqrt(2)', re: [0, r, 0, 0], im: [r, 0, 0, 0] },
  ],
];

interface Word {
  readonly weight: number;
  readonly factors: readonly { readonly species: 'a' | 'b' | 'c'; readonly shift: number; readonly pauli: string }[];
}

const word: fc.Arbitrary<Word> = fc.record({
  weight: fc.integer({ min: 1, max: 9 }),
  factors: fc.uniqueArray(
    fc.record({
      species: fc.constantFrom<'a' | 'b' | 'c'>('a', 'b', 'c'),
      shift: fc.integer({ min: 0, max: 1 }),
      pauli: fc.constantFrom('x', 'y', 'z'),
    }),
    { minLength: 1, maxLength: 3, selector: (f) => `${f.species}${String(f.shift)}` },
  ),
});

const cells = 2;
const spinOf = (species: string, cell: number): number => 'abc'.indexOf(species) * cells + (cell % cells);

function source(set: readonly Ket[], words: readonly Word[], levels: number): string {
  const term = ({ weight, factors }: Word): string =>
    `${String(weight)}/4 sum(v: vertices) ${factors.map((f) => `${f.species}^${f.pauli}[v + (${String(f.shift)})]`).join(' ')}`;
  const bits = ['00', '10', '01', '11'];
  return [
    `lattice chain torus ${String(cells)}`,
    ...['p', 'q', 'a', 'b', 'c'].map((name) => `spins ${name} on vertices`),
    `model m = ${words.map(term).join(' + ')} + 0 sum(v: vertices) a^z[v] b^z[v] c^z[v] + sum(v: vertices) c^x[v]`,
    'map pack on v: vertices from p[v] q[v] to a[v] b[v]',
    ...set.map((ket, k) => `  |${bits[k] ?? ''}> => ${ket.text}`),
    `audit spectrum m [pack] ~ m [pack] on ${String(cells)} levels ${String(levels)}`,
    '',
  ].join('\n');
}

/** V† H V, multiplied out on all 2^6 states. */
function byHand(set: readonly Ket[], words: readonly Word[]): number[] {
  const h = zeros(2 ** (3 * cells));
  for (let v = 0; v < cells; v++) {
    for (const { weight, factors } of words)
      addWord(
        h,
        factors.map((f) => ({ spin: spinOf(f.species, v + f.shift), pauli: f.pauli })),
        weight / 4,
      );
    addWord(h, [{ spin: spinOf('c', v), pauli: 'x' }], 1);
  }
  const d = set.length;
  const states = d * d * 2 ** cells;
  // state = (vector of block 0) + d (vector of block 1) + d² (bits of c)
  const amplitude = (state: number, index: number): [number, number] => {
    let [re, im] = [1, 0];
    for (let v = 0; v < cells; v++) {
      const ket = set[Math.floor(state / d ** v) % d]!;
      const at = 2 * ((index >> spinOf('a', v)) & 1) + ((index >> spinOf('b', v)) & 1);
      [re, im] = [re * ket.re[at]! - im * ket.im[at]!, re * ket.im[at]! + im * ket.re[at]!];
      if (((Math.floor(state / (d * d)) >> v) & 1) !== ((index >> spinOf('c', v)) & 1)) return [0, 0];
    }
    return [re, im];
  };
  const v = Array.from({ length: states }, (_, s) => Array.from({ length: h.n }, (_, i) => amplitude(s, i)));
  const m: Complex = zeros(states);
  for (let t = 0; t < states; t++) {
    const moved = Array.from({ length: h.n }, (): [number, number] => [0, 0]);
    for (let j = 0; j < h.n; j++) {
      const [a, b] = v[t]![j]!;
      if (a === 0 && b === 0) continue;
      for (let i = 0; i < h.n; i++) {
        const [p, q] = [h.re[i * h.n + j]!, h.im[i * h.n + j]!];
        moved[i]![0] += p * a - q * b;
        moved[i]![1] += p * b + q * a;
      }
    }
    for (let s = 0; s < states; s++)
      for (let i = 0; i < h.n; i++) {
        const [a, b] = v[s]![i]!;
        const [p, q] = moved[i]!;
        m.re[s * states + t]! += a * p + b * q;
        m.im[s * states + t]! += a * q - b * p;
      }
  }
  return hermitianLevels(m);
}

describe('levels in the image of a state map', () => {
  it('are those of V† H V', () => {
    fc.assert(
      fc.property(fc.constantFrom(...sets), fc.array(word, { minLength: 1, maxLength: 3 }), (set, words) => {
        const expected = byHand(set, words);
        const claim = only(derive(source(set, words, 64)), 'spectrum');
        expect(claim.grade).toBe('numerical');
        const left = claim.figures['left'] as number[];
        expect(left).toHaveLength(expected.length);
        left.forEach((level, k) => {
          expect(level).toBeCloseTo(expected[k]!, 8);
        });
      }),
      { seed: 1971, numRuns: 40 },
    );
  });
});

const pairs = `lattice chain torus 3
spins p on vertices
spins q on vertices
spins a on vertices
spins b on vertices
model m = - sum(v: vertices) (a^x[v] b^x[v] + a^y[v] b^y[v]) - 1/3 sum(v: vertices) a^z[v] b^z[v]
law parity(v: vertices) = a^z[v] b^z[v]
law swapped(v: vertices) = a^x[v] b^x[v]
symmetry all = prod(v: vertices) a^z[v] b^z[v]
symmetry flips = prod(v: vertices) a^x[v] b^x[v]
rule few(v: vertices) = a^n[v] + b^n[v] is <= 1
map pack on v: vertices from p[v] q[v] to a[v] b[v]
  |00> => |00>
  |10> => (|01> + |10>) / sqrt(2)
  |01> => (|01> - |10>) / sqrt(2)
`;

describe('an image together with other labels', () => {
  it('takes a law that acts within it, block by block', () => {
    // parity -1 leaves the two triplet and singlet states: levels −2 + 1/3 and 2 + 1/3 of each block
    const claim = only(derive(`${pairs}audit degeneracy m [pack, parity = -1]\n`), 'degeneracy');
    expect(claim.figures).toMatchObject({ dimension: 8, degeneracy: 1 });
    expect(claim.figures['energy']).toBeCloseTo(3 * (-2 + 1 / 3), 9);
    expect(claim.figures['gap']).toBeCloseTo(4, 9);
  });

  it('takes a symmetry that joins blocks', () => {
    const even = only(derive(`${pairs}audit degeneracy m [pack, all = +1]\n`), 'degeneracy');
    const odd = only(derive(`${pairs}audit degeneracy m [pack, all = -1]\n`), 'degeneracy');
    // one of three states of a block is even: 1 + 3·4 and 3·2 + 8 of the 27 states
    expect(even.figures).toMatchObject({ dimension: 13 });
    expect(odd.figures).toMatchObject({ dimension: 14 });
  });

  it('takes a rule that has one value on each of its states, and says where one has not', () => {
    expect(only(derive(`${pairs}audit degeneracy m [pack, parity = +1]\n`), 'degeneracy').figures).toMatchObject({
      dimension: 1,
    });
    const crossing = derive(`${pairs}audit degeneracy m [pack, few]\n`);
    expect(errors(crossing).join()).toContain('one value');
  });

  it('refuses in words a law that leads out of it', () => {
    const outside = derive(`${pairs}audit degeneracy m [pack, flips]\n`);
    expect(errors(outside).join()).toContain('does not act within the image of pack');
    expect(outside.claims.find((c) => c.audit === 'degeneracy')?.grade).toBe('open');
  });

  it('says that labels which contradict each other hold no state', () => {
    const none = derive(`${pairs}audit degeneracy m [pack, parity = -1, all = +1]\n`);
    expect(errors(none).join()).toContain('holds no state');
  });

  it('names the terms that lead out, and none where none does', () => {
    const bare = derive(`${pairs}model x = m + sum(v: vertices) a^x[v]\naudit degeneracy x [pack]\n`);
    expect(only(bare, 'degeneracy').cautions.join()).toContain('3 terms lead out');
    const within = only(derive(`${pairs}audit degeneracy m [pack]\n`), 'degeneracy');
    expect(within.cautions.join()).not.toContain('lead out');
  });

  it('refuses a map whose images are not orthonormal', () => {
    const skew = derive(
      `${pairs.replace('(|01> - |10>) / sqrt(2)', '(|00> - |10>) / sqrt(2)')}audit degeneracy m [pack]\n`,
    );
    const claim = skew.claims.find((c) => c.audit === 'degeneracy');
    expect(claim?.grade).toBe('open');
    expect(claim?.cautions.join()).toContain('not orthonormal');
  });

  it('refuses a map that is no state map', () => {
    const circuit = derive(`${pairs}map turn = circuit\n  h a[v] for v: vertices\naudit degeneracy m [turn]\n`);
    expect(errors(circuit).join()).toContain('"turn" is a map');
  });
});
