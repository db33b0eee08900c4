import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  claims,
  clean,
  commute,
  lattices,
  lawText,
  sumText,
  Torus,
  wordOn,
  type TestLattice,
  type Word,
} from './brute.ts';

/** `audit commute` on random families of five lattices and a declared one, against tori laid out site by site. */

const classesOf = (lattice: TestLattice, species: readonly string[]): string[] =>
  species.flatMap((s) => lattice.vertices.map((v) => `${s}.${v}`));
const straight = (lengths: readonly number[]): number[][] =>
  lengths.map((length, d) => lengths.map((_, k) => (k === d ? length : 0)));

const sizes: Readonly<Record<number, readonly (readonly number[])[]>> = {
  1: [[1], [2], [3], [4], [5], [9]],
  2: [
    [1, 1],
    [1, 2],
    [2, 1],
    [2, 2],
    [3, 2],
    [3, 3],
    [5, 4],
    [9, 9],
  ],
};

/** All translates of both words commute on a torus. */
function commuteOn(
  periods: readonly (readonly number[])[],
  lattice: TestLattice,
  species: string[],
  a: Word,
  b: Word,
): boolean {
  const torus = new Torus(periods, classesOf(lattice, species));
  const origin = torus.lay(
    a,
    periods.map(() => 0),
  );
  return torus.all(b).every((other) => commute(origin, other));
}

const source = (
  lattice: TestLattice,
  species: readonly string[],
  size: string,
  terms: readonly Word[],
  law: Word,
): string =>
  [
    lattice.text(size),
    ...species.map((s) => `spins ${s} on vertices`),
    `model m = ${terms.map((t) => sumText('1', t)).join(' ')}`,
    lawText('G', law),
    'audit commute m with G',
    '',
  ].join('\n');

/** A pair that commutes at every size: X of (f, g) against Z of the mirror images (g, f); then perhaps one Pauli changed. */
const twins = (lattice: TestLattice): fc.Arbitrary<readonly [Word, Word]> =>
  fc
    .record({
      f: wordOn(lattice, ['s'], 3),
      g: wordOn(lattice, ['s'], 3),
      spoil: fc.option(fc.nat(), { nil: undefined }),
    })
    .map(({ f, g, spoil }) => {
      // all on one class of vertices: the two species stand for the two blocks of the pair
      const home = `.${lattice.vertices[0] ?? ''}`;
      const put = (w: Word, species: string, p: 'x' | 'z', sign: 1 | -1) =>
        [...new Map(w.places.map((q) => [q.offset.join(), q])).values()].map((q) => ({
          at: species + home,
          offset: q.offset.map((c) => sign * c + 0),
          pauli: p,
        }));
      const a: Word = { sign: 1, places: [...put(f, 's', 'x', 1), ...put(g, 't', 'x', 1)] };
      const b = [...put(g, 's', 'z', -1), ...put(f, 't', 'z', -1)];
      const at = spoil === undefined ? -1 : spoil % b.length;
      return [a, { sign: 1, places: b.map((q, k) => (k === at ? { ...q, pauli: 'x' as const } : q)) }] as const;
    });

describe.each(Object.keys(lattices))('families on the %s lattice', (name) => {
  const lattice = lattices[name]!;
  const large = straight(Array<number>(lattice.dimension).fill(9));
  const declared = lattice.dimension === 1 ? '6' : '4 x 3';

  it('are proved to commute where they do on every torus, and refuted by a pair that anticommutes on a large one', () => {
    const random = fc.tuple(
      fc.array(wordOn(lattice, ['s', 't'], 3), { minLength: 1, maxLength: 2 }),
      wordOn(lattice, ['s', 't'], 4),
    );
    const paired = twins(lattice).map(([a, b]) => [[a], b] as const);
    let proved = 0;
    let refuted = 0;
    fc.assert(
      fc.property(fc.oneof(random, paired), ([terms, law]) => {
        const [claim] = claims(clean(source(lattice, ['s', 't'], declared, terms, law)), 'commute');
        const good = terms.map((t) => commuteOn(large, lattice, ['s', 't'], t, law));
        if (good.every(Boolean)) {
          proved++;
          expect(claim?.grade).toBe('proved');
          for (const size of sizes[lattice.dimension] ?? [])
            for (const t of terms) expect(commuteOn(straight(size), lattice, ['s', 't'], t, law)).toBe(true);
        } else {
          refuted++;
          expect(claim?.grade).toBe('refuted');
          expect(claim?.witness['words']).toBeTypeOf('string');
        }
      }),
      { seed: 351, numRuns: 60 },
    );
    expect(proved).toBeGreaterThan(5);
    expect(refuted).toBeGreaterThan(5);
  });

  it('are counted term by term', () => {
    fc.assert(
      fc.property(
        fc.uniqueArray(wordOn(lattice, ['s'], 2), {
          minLength: 2,
          maxLength: 3,
          selector: (w) => JSON.stringify(w.places.map((p) => `${p.at}${p.pauli}${p.offset.join()}`).sort()),
        }),
        wordOn(lattice, ['s'], 3),
        (terms, law) => {
          // words that are translates of one another are one family, so only families that stay apart are counted
          const torus = new Torus(large, classesOf(lattice, ['s']));
          const orbits = terms.map((t) => new Set(torus.all(t).map((l) => `${String(l.x)} ${String(l.z)}`)));
          const first = terms.map((t) =>
            torus.lay(
              t,
              large.map(() => 0),
            ),
          );
          fc.pre(first.every((l, k) => orbits.every((o, j) => j === k || !o.has(`${String(l.x)} ${String(l.z)}`))));
          const [claim] = claims(clean(source(lattice, ['s'], declared, terms, law)), 'commute');
          expect(claim?.figures).toMatchObject({
            terms: terms.length,
            commuting: terms.filter((t) => commuteOn(large, lattice, ['s'], t, law)).length,
          });
        },
      ),
      { seed: 1601, numRuns: 30 },
    );
  });
});
