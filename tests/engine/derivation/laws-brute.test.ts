import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  claims,
  clean,
  commute,
  eliminate,
  lattices,
  lawText,
  product,
  Torus,
  vector,
  wordOn,
  type Laid,
  type TestLattice,
  type Word,
} from './brute.ts';

/** `audit laws` against elimination written apart, on small, straight and tilted tori, with laws that are −1. */

const sizes: Readonly<Record<number, readonly { readonly text: string; readonly periods: number[][] }[]>> = {
  1: [1, 2, 3, 4, 6].map((n) => ({ text: String(n), periods: [[n]] })),
  2: [
    {
      text: '1 x 1',
      periods: [
        [1, 0],
        [0, 1],
      ],
    },
    {
      text: '2 x 1',
      periods: [
        [2, 0],
        [0, 1],
      ],
    },
    {
      text: '2 x 2',
      periods: [
        [2, 0],
        [0, 2],
      ],
    },
    {
      text: '3 x 2',
      periods: [
        [3, 0],
        [0, 2],
      ],
    },
    {
      text: '3 x 3',
      periods: [
        [3, 0],
        [0, 3],
      ],
    },
    {
      text: '(2, 2), (1, -2)',
      periods: [
        [2, 2],
        [1, -2],
      ],
    },
    {
      text: '(3, 1), (0, 2)',
      periods: [
        [3, 1],
        [0, 2],
      ],
    },
  ],
};

interface Counted {
  readonly commute: boolean;
  readonly consistent: boolean;
  readonly independent: number;
  readonly relations: number;
  readonly logical: number;
}

function byHand(all: readonly Laid[], spins: number): Counted {
  const { rank, relations } = eliminate(all.map((l) => vector(l, spins)));
  const clash = all.some((a, k) => all.slice(0, k).some((b) => !commute(a, b)));
  // A law that is not Hermitian has eigenvalues ±i: nothing obeys it.
  const hermitian = all.every((l) => product([l, l]).phase === 0);
  const signs = relations.every((members) => product(members.map((k) => all[k]!)).phase === 0);
  return {
    commute: !clash,
    consistent: !clash && hermitian && signs,
    independent: rank,
    relations: relations.length,
    logical: spins - rank,
  };
}

/** Pairs X(f, g), Z(g, f) mirrored, which always commute, or words at random. */
const pairs = (lattice: TestLattice): fc.Arbitrary<readonly Word[]> =>
  fc
    .record({
      f: wordOn(lattice, ['s'], 3),
      g: wordOn(lattice, ['s'], 3),
      first: fc.constantFrom<1 | -1>(1, -1),
      second: fc.constantFrom<1 | -1>(1, -1),
    })
    .map(({ f, g, first, second }) => {
      const home = `.${lattice.vertices[0] ?? ''}`;
      const put = (w: Word, species: string, p: 'x' | 'z', sign: 1 | -1) =>
        [...new Map(w.places.map((q) => [q.offset.join(), q])).values()].map((q) => ({
          at: species + home,
          offset: q.offset.map((c) => sign * c + 0),
          pauli: p,
        }));
      return [
        { sign: first, places: [...put(f, 's', 'x', 1), ...put(g, 't', 'x', 1)] },
        { sign: second, places: [...put(g, 's', 'z', -1), ...put(f, 't', 'z', -1)] },
      ];
    });

describe.each(Object.keys(lattices))('laws on the %s lattice', (name) => {
  const lattice = lattices[name]!;
  it('have the rank, relations, signs and logical spins that elimination finds', () => {
    const some = fc.oneof(
      { arbitrary: pairs(lattice), weight: 3 },
      { arbitrary: fc.array(wordOn(lattice, ['s'], 3), { minLength: 1, maxLength: 2 }), weight: 2 },
    );
    fc.assert(
      fc.property(some, (laws) => {
        const on = sizes[lattice.dimension] ?? [];
        const species = [...new Set(laws.flatMap((w) => w.places.map((p) => p.at.split('.')[0] ?? '')))].sort();
        const text = [
          lattice.text(on[0]?.text ?? '1'),
          ...species.map((s) => `spins ${s} on vertices`),
          ...laws.map((w, k) => lawText(`G${String(k)}`, w)),
          `audit laws ${laws.map((_, k) => `G${String(k)}`).join(', ')} on ${on.map((s) => s.text).join(', ')}`,
          '',
        ].join('\n');
        const found = claims(clean(text), 'laws');
        expect(found).toHaveLength(on.length);
        on.forEach(({ periods }, k) => {
          const torus = new Torus(
            periods,
            species.flatMap((s) => lattice.vertices.map((v) => `${s}.${v}`)),
          );
          const expected = byHand(
            laws.flatMap((w) => torus.all(w)),
            torus.spins,
          );
          const { logical, ...rest } = expected;
          expect(found[k]?.figures).toMatchObject(expected.commute ? { ...rest, logical } : { ...rest });
          expect(found[k]?.grade).toBe(expected.consistent ? 'exact' : 'refuted');
        });
      }),
      { seed: 9705, numRuns: 40 },
    );
  });
});

/** Stars and plaquettes on an open or half-open square lattice, laid out by coordinates. */
function surface(width: number, height: number, around: boolean, sign: 1 | -1): { all: Laid[]; spins: number } {
  const links = new Map<string, bigint>();
  const link = (x: number, y: number, d: number): bigint | undefined => {
    const [a, b] = [around ? ((x % width) + width) % width : x, y];
    const ends = d === 0 ? (around || a + 1 < width) && a >= 0 && a < width : a >= 0 && a < width && b + 1 < height;
    if (!ends || b < 0 || b >= height) return undefined;
    const key = `${String(a)},${String(b)},${String(d)}`;
    if (!links.has(key)) links.set(key, 1n << BigInt(links.size));
    return links.get(key);
  };
  const all: Laid[] = [];
  for (let y = 0; y < height; y++)
    for (let x = 0; x < width; x++) {
      const star = [link(x, y, 0), link(x - 1, y, 0), link(x, y, 1), link(x, y - 1, 1)];
      all.push({ x: star.reduce<bigint>((s, l) => s ^ (l ?? 0n), 0n), z: 0n, phase: 0 });
    }
  for (let y = 0; y + 1 < height; y++)
    for (let x = 0; x < (around ? width : width - 1); x++) {
      const rim = [link(x, y, 0), link(x, y + 1, 0), link(x, y, 1), link(x + 1, y, 1)];
      all.push({ x: 0n, z: rim.reduce<bigint>((s, l) => s ^ (l ?? 0n), 0n), phase: sign === 1 ? 0 : 2 });
    }
  return { all, spins: links.size };
}

describe('laws at an open edge', () => {
  const grid = [
    [1, 2],
    [2, 1],
    [2, 2],
    [3, 2],
    [2, 3],
    [3, 3],
  ] as const;
  it.each([
    ['open', 1],
    ['open', -1],
    ['cylinder', 1],
    ['cylinder', -1],
  ] as const)('stars and plaquettes on %s lattices, plaquettes %i', (boundary, sign) => {
    const text = `lattice square ${boundary} 3 x 3
spins g on links
law A(v: vertices) = prod(l: star(v)) g^x[l]
law B(p: plaquettes) = prod(l: rim(p)) g^z[l] is ${String(sign)}
audit laws A, B on ${grid.map(([a, b]) => `${String(a)} x ${String(b)}`).join(', ')}
`;
    const found = claims(clean(text), 'laws');
    grid.forEach(([a, b], k) => {
      const { all, spins } = surface(a, b, boundary === 'cylinder', sign);
      expect(found[k]?.figures).toMatchObject({ spins, ...byHand(all, spins) });
    });
  });
});
