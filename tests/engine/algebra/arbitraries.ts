import fc from 'fast-check';
import { Coefficient } from '../../../shared/algebra/numbers/coefficient.ts';
import { siteTable } from '../../../shared/algebra/finite/wrap.ts';
import type { FiniteString, SiteTable } from '../../../shared/algebra/finite/types.ts';
import { newString } from '../../../shared/algebra/pauli/string.ts';
import type { Extended, Factor, LocalString, Pauli, ProductPart, Steps } from '../../../shared/algebra/pauli/types.ts';
import { builtInFamily } from '../../../shared/lattice/built-in.ts';
import { isLatticeProblem } from '../../../shared/lattice/cells.ts';
import { newCluster, straight, type Cluster } from '../../../shared/lattice/cluster.ts';

/** Species s on the vertices and g on the links of the square lattice. */
export const factorOn = (reach: number): fc.Arbitrary<Factor> =>
  fc
    .record({
      link: fc.constantFrom(-1, 0, 1),
      offset: fc.tuple(fc.integer({ min: -reach, max: reach }), fc.integer({ min: -reach, max: reach })),
      pauli: fc.constantFrom<Pauli>('x', 'y', 'z'),
    })
    .map(({ link, offset, pauli }) =>
      link < 0
        ? { species: 's', cell: { kind: 'vertices', index: 0, offset }, pauli }
        : { species: 'g', cell: { kind: 'links', index: link, offset }, pauli },
    );

export const stringOn = (reach: number, most: number): fc.Arbitrary<LocalString> =>
  fc
    .tuple(fc.array(factorOn(reach), { minLength: 1, maxLength: most }), fc.integer({ min: 0, max: 3 }))
    .map(([factors, phase]) => newString(factors, phase));

export const stepsOf: fc.Arbitrary<Steps> = fc.constantFrom(
  [1, 1],
  [1, 1],
  [2, 1],
  [1, 2],
  [0, 1],
  [1, 0],
  [0, 0],
  [2, 2],
  [0, 2],
);

export const partOf = (reach: number, most: number): fc.Arbitrary<ProductPart> =>
  fc.record({ string: stringOn(reach, most), steps: stepsOf, needs: fc.constant([]) });

export const extendedOf = (reach: number, most: number): fc.Arbitrary<Extended> =>
  fc.record({
    phase: fc.constantFrom(0, 1, 2, 3),
    parts: fc.array(partOf(reach, most), { minLength: 1, maxLength: 3 }),
  });

/** A torus (or open piece) of a built-in lattice with s on vertices and, where there are links, g on them. */
export function clusterOf(
  name: string,
  lengths: readonly number[],
  periodic = true,
): { cluster: Cluster; table: SiteTable } {
  const family = builtInFamily(name);
  if (!family) throw new Error(name);
  const cluster = newCluster({ family, periodic: lengths.map(() => periodic) }, straight(...lengths));
  if (isLatticeProblem(cluster)) throw new Error(cluster.message);
  const table = siteTable(cluster, [
    { name: 's', kind: 'vertices', classes: family.vertices.map((_, k) => k) },
    { name: 'g', kind: 'links', classes: family.links.map((_, k) => k) },
  ]);
  return { cluster, table };
}

interface Complex {
  re: number;
  im: number;
}
/** Dense matrix (2^n × 2^n, row-major) of a string; spin 0 is the lowest bit of the index, |1> the excited state. */
export function denseMatrix(string: FiniteString): Complex[][] {
  const size = 2 ** string.n;
  const [x, z] = [string.x[0] ?? 0, string.z[0] ?? 0];
  const rows = Array.from({ length: size }, () => Array.from({ length: size }, () => ({ re: 0, im: 0 })));
  for (let column = 0; column < size; column++) {
    let k = string.phase;
    for (let spin = 0; spin < string.n; spin++) if ((((column & z) >>> spin) & 1) === 1) k += 2;
    const value = [
      { re: 1, im: 0 },
      { re: 0, im: 1 },
      { re: -1, im: 0 },
      { re: 0, im: -1 },
    ][k & 3];
    const row = rows[column ^ x];
    if (row && value) row[column] = value;
  }
  return rows;
}

export function times(a: Complex[][], b: Complex[][]): Complex[][] {
  return a.map((row) =>
    row.map((_, j) =>
      row.reduce(
        (sum, v, k) => {
          const w = b[k]?.[j] ?? { re: 0, im: 0 };
          return { re: sum.re + v.re * w.re - v.im * w.im, im: sum.im + v.re * w.im + v.im * w.re };
        },
        { re: 0, im: 0 },
      ),
    ),
  );
}

export const one = Coefficient.one;
