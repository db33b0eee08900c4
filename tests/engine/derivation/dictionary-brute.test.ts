import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  claims,
  clean,
  commute,
  eliminate,
  lattices,
  phrase,
  product,
  Torus,
  vector,
  wordOn,
  type Place,
  type TestLattice,
  type Word,
} from './brute.ts';
import { conjugate, infinite, layersOn, shiftWord, times, wordOf } from './clifford.ts';
import { addWord, levelsWhere, zeros } from './dense.ts';

/** Dictionaries carried through random Clifford circuits, some of them spoilt, against relations counted on tori by hand. */

interface Line {
  readonly left: Word;
  readonly right: Word;
}

const signed = (word: Word): string => `${word.sign === 1 ? '' : '- '}${phrase(word, '')}`;
const mapText = (lines: readonly Line[]): string[] => [
  'map n from s to m',
  ...lines.map(({ left, right }) => `  ${signed(left)} => ${signed(right)} for v: vertices`),
];

const straight = (dimension: number, extent: number): number[][] =>
  Array.from({ length: dimension }, (_, d) => Array.from({ length: dimension }, (_, k) => (k === d ? extent : 0)));
const origin = (dimension: number): number[] => Array<number>(dimension).fill(0);

/** Both sides commute alike on a torus so large that nothing wraps. */
function keepsCommutation(lines: readonly Line[], dimension: number): boolean {
  const periods = straight(dimension, 15);
  const [left, right] = [new Torus(periods, ['s.']), new Torus(periods, ['m.'])];
  const zero = origin(dimension);
  return lines.every((a) =>
    lines.every((b) => {
      const [p, q] = [left.lay(a.left, zero), right.lay(a.right, zero)];
      return left.cells.every((by) => commute(p, left.lay(b.left, by)) === commute(q, right.lay(b.right, by)));
    }),
  );
}

/** Counts on one torus; `signs`: no product of lines is ±1 on both sides with different signs. */
function onTorus(lines: readonly Line[], periods: readonly (readonly number[])[]) {
  const [left, right] = [new Torus(periods, ['s.']), new Torus(periods, ['m.'])];
  const instances = lines.flatMap((line) =>
    left.cells.map((by) => ({ l: left.lay(line.left, by), r: right.lay(line.right, by) })),
  );
  const spins = left.spins;
  const both = eliminate(instances.map(({ l, r }) => vector(l, spins) | (vector(r, spins) << BigInt(2 * spins))));
  const signs = both.relations.every((members) => {
    const l = product(members.map((k) => instances[k]!.l)).phase;
    const r = product(members.map((k) => instances[k]!.r)).phase;
    return l === r;
  });
  const lefts = eliminate(instances.map(({ l }) => vector(l, spins)));
  const rights = eliminate(instances.map(({ r }) => vector(r, spins)));
  const onLeft = rights.relations.map((members) => vector(product(members.map((k) => instances[k]!.l)), spins));
  const onRight = lefts.relations.map((members) => vector(product(members.map((k) => instances[k]!.r)), spins));
  return {
    signs,
    figures: {
      generators: instances.length,
      leftRank: lefts.rank,
      rightRank: rights.rank,
      leftRelations: lefts.relations.length,
      rightRelations: rights.relations.length,
      leftDimension: spins - eliminate(onLeft).rank,
      rightDimension: spins - eliminate(onRight).rank,
    },
  };
}

/** Z^f => X and X => Z^(f mirrored), both sides carried through circuits; a redundant third line; then perhaps one thing changed. */
function dictionaries(lattice: TestLattice): fc.Arbitrary<readonly Line[]> {
  const { dimension } = lattice;
  const zero = origin(dimension);
  return fc
    .record({
      f: wordOn(lattice, ['s'], 3),
      before: layersOn(['s'], dimension),
      after: layersOn(['m'], dimension),
      third: fc.option(fc.array(fc.integer({ min: -1, max: 1 }), { minLength: dimension, maxLength: dimension }), {
        nil: undefined,
      }),
      spoil: fc.constantFrom('none', 'none', 'sign', 'pauli'),
      which: fc.nat(),
    })
    .map(({ f, before, after, third, spoil, which }) => {
      const offsets = [...new Map(f.places.map((p) => [p.offset.join(), p.offset])).values()];
      const zs = (at: string, sign: 1 | -1): Word => ({
        sign: 1,
        places: offsets.map((o): Place => ({ at, offset: o.map((c) => sign * c + 0), pauli: 'z' })),
      });
      const x = (at: string): Word => ({ sign: 1, places: [{ at, offset: zero, pauli: 'x' }] });
      const lines = [
        { left: zs('s.', 1), right: x('m.') },
        { left: x('s.'), right: zs('m.', -1) },
      ].map(({ left, right }) => ({ left: conjugate(before, left), right: conjugate(after, right) }));
      if (third?.some((c) => c !== 0)) {
        // the second line times its translate: they commute, and the product is a word of its own
        const twice = (w: Word): Word => wordOf(times(infinite(w), infinite(shiftWord(w, third))));
        lines.push({ left: twice(lines[1]!.left), right: twice(lines[1]!.right) });
      }
      const at = which % lines.length;
      if (spoil === 'none') return lines;
      return lines.map((line, k) => (k === at ? { ...line, right: spoilt(line.right, spoil, which) } : line));
    })
    .filter((lines) => lines.every(({ left, right }) => left.places.length > 0 && right.places.length > 0));
}

function spoilt(word: Word, how: 'sign' | 'pauli', which: number): Word {
  if (how === 'sign') return { ...word, sign: word.sign === 1 ? -1 : 1 };
  const at = which % word.places.length;
  const turn = { x: 'z', z: 'y', y: 'x' } as const;
  return { ...word, places: word.places.map((p, k) => (k === at ? { ...p, pauli: turn[p.pauli] } : p)) };
}

describe.each(['chain', 'square', 'triangular'])('dictionaries on the %s lattice', (name) => {
  const lattice = lattices[name]!;
  const { dimension } = lattice;
  const declared =
    dimension === 1
      ? { text: '5', periods: [[5]] }
      : {
          text: '3 x 2',
          periods: [
            [3, 0],
            [0, 2],
          ],
        };

  it('are right where all relations keep their signs, and refuted where commutation or a sign breaks', () => {
    const seen = { right: 0, commutation: 0, sign: 0 };
    fc.assert(
      fc.property(dictionaries(lattice), (lines) => {
        const text = [
          lattice.text(declared.text),
          'spins s on vertices',
          'spins m on vertices',
          ...mapText(lines),
          'audit map n',
          '',
        ].join('\n');
        const found = claims(clean(text), 'map');
        const refuted = found.filter((claim) => claim.grade === 'refuted');
        if (!keepsCommutation(lines, dimension)) {
          seen.commutation++;
          expect(found[0]?.figures).toMatchObject({ commutation: false });
          expect(refuted.length).toBeGreaterThan(0);
          return;
        }
        // the declared size decides; a torus so large that nothing local wraps shows what holds everywhere
        const signs = [declared.periods, straight(dimension, dimension === 1 ? 12 : 7)].every(
          (periods) => onTorus(lines, periods).signs,
        );
        if (signs) seen.right++;
        else seen.sign++;
        expect(refuted).toHaveLength(signs ? 0 : 1);
        expect(found.some((claim) => claim.grade === 'open')).toBe(false);
        expect(found[0]?.figures).toMatchObject({ commutation: true, signs });
        if (signs) expect(found[0]?.figures).toMatchObject(onTorus(lines, declared.periods).figures);
      }),
      { seed: 679, numRuns: 90 },
    );
    expect(seen.right).toBeGreaterThan(15);
    expect(seen.commutation).toBeGreaterThan(3);
    expect(seen.sign).toBeGreaterThan(3);
  });
});

describe('the duality of the ring, carried through circuits', () => {
  const word = (at: string, ...places: readonly (readonly [number, 'x' | 'y' | 'z'])[]): Word => ({
    sign: 1,
    places: places.map(([offset, pauli]) => ({ at, offset: [offset], pauli })),
  });

  it('asks for the two sectors it needs, and has the levels of a full diagonalisation there', () => {
    fc.assert(
      fc.property(
        layersOn(['s'], 1),
        layersOn(['m'], 1),
        fc.integer({ min: 1, max: 9 }),
        fc.integer({ min: 1, max: 9 }),
        fc.constantFrom(3, 4, 5),
        (before, after, j, h, n) => {
          const lines = [
            { left: word('s.', [0, 'z'], [1, 'z']), right: word('m.', [0, 'x']) },
            { left: word('s.', [0, 'x']), right: word('m.', [-1, 'z'], [0, 'z']) },
          ].map(({ left, right }) => ({ left: conjugate(before, left), right: conjugate(after, right) }));
          const [bond, flip] = lines;
          const text = [
            `lattice chain torus ${String(n)}`,
            'spins s on vertices',
            'spins m on vertices',
            ...mapText(lines),
            `symmetry even = ${sign(flip!.left, n)}prod(v: vertices) ${phrase(flip!.left, '')}`,
            `symmetry walls = ${sign(bond!.right, n)}prod(v: vertices) ${phrase(bond!.right, '')}`,
            `model left = ${sign(bond!.left, 1)}${String(j)}/3 sum(v: vertices) ${phrase(bond!.left, '')} ${
              flip!.left.sign === 1 ? '+' : '-'
            } ${String(h)}/4 sum(v: vertices) ${phrase(flip!.left, '')}`,
            'model right = n(left)',
            'audit map n',
            `audit spectrum left [even = +1] ~ right [walls = +1] on ${String(n)} levels 64`,
            '',
          ].join('\n');
          const report = clean(text);
          const [map] = claims(report, 'map');
          expect(map?.figures).toMatchObject({ leftSectors: ['even = +1'], rightSectors: ['walls = +1'] });
          const [spectrum] = claims(report, 'spectrum');
          expect(spectrum?.grade).toBe('numerical');
          const torus = new Torus([[n]], ['s.']);
          const matrix = zeros(2 ** n);
          const parity = zeros(2 ** n);
          for (let v = 0; v < n; v++)
            for (const [line, weight] of [
              [bond!.left, j / 3],
              [flip!.left, h / 4],
            ] as const)
              addWord(matrix, laid(line, v, torus), line.sign * weight);
          const all = Array.from({ length: n }, (_, v) => laid(flip!.left, v, torus)).flat();
          addWord(parity, all, flip!.left.sign ** n);
          const expected = levelsWhere(matrix, [parity]);
          const got = spectrum?.figures['left'] as number[];
          expect(got).toHaveLength(expected.length);
          got.forEach((level, k) => {
            expect(level).toBeCloseTo(expected[k]!, 7);
          });
        },
      ),
      { seed: 252, numRuns: 30 },
    );
  });

  const sign = (w: Word, times_: number): string => (w.sign ** times_ === 1 ? '' : '- ');
  const laid = (w: Word, v: number, torus: Torus) =>
    w.places.map(({ at, offset, pauli }) => ({ spin: torus.spin(at, [offset[0]! + v]), pauli }));
});
