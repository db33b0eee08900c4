import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { RefusalWitness } from '../../../shared/contracts/report.ts';
import { newDerivation } from '../../../shared/derivation/derive.ts';

/** A term that a map refuses comes with a symmetry that commutes with all the map takes, and the spins where the term meets it. */

type Pauli = 'x' | 'y' | 'z';
interface Place {
  readonly cell: string;
  readonly offset: readonly number[];
  readonly pauli: Pauli;
}
type Support = RefusalWitness['term'][number];

/** Parity of the spins where two products differ, by hand: each translate of the symmetry is looked up at the spin. */
function anticommute(term: readonly Place[], charged: readonly Support[]): boolean {
  let odd = 0;
  for (const place of term)
    for (const { orbit, steps } of charged)
      for (const own of orbit) {
        const here =
          own.cell === place.cell &&
          own.offset.every((c, d) => {
            const by = (place.offset[d] ?? 0) - c;
            const step = steps[d] ?? 0;
            return step === 0 ? by === 0 : by % step === 0;
          });
        if (here && own.pauli !== place.pauli) odd += 1;
      }
  return odd % 2 === 1;
}

interface Case {
  readonly lattice: string;
  readonly cells: readonly string[];
  readonly dimension: number;
  readonly map: string;
  /** All left sides, written out by hand. */
  readonly lefts: readonly (readonly Place[])[];
}

const at = (cell: string, pauli: Pauli, ...offset: number[]): Place => ({ cell, offset, pauli });
const bonds = `map bonds from s to g
  s^z[l.a] s^z[l.b] => g^z[l]                   for l: links
  s^x[v]            => prod(l: star(v)) g^x[l]  for v: vertices`;
const rows = `map rows from s to g
  s^z[v] s^z[v + (1, 0)] => g^z[v] for v: vertices
  s^x[v] s^x[v + (0, 1)] => g^x[v] for v: vertices`;
const pairs = (cell: string, ...by: readonly (readonly number[])[]): Place[][] =>
  by.map((to) => [at(cell, 'z', ...to.map(() => 0)), at(cell, 'z', ...to)]);

const cases: readonly Case[] = [
  {
    lattice: 'square torus 6 x 6\nspins s on vertices\nspins g on links',
    cells: ['vertices'],
    dimension: 2,
    map: bonds,
    lefts: [...pairs('vertices', [1, 0], [0, 1]), [at('vertices', 'x', 0, 0)]],
  },
  {
    lattice: 'honeycomb torus 4 x 4\nspins s on vertices\nspins g on links',
    cells: ['vertices.A', 'vertices.B'],
    dimension: 2,
    map: bonds,
    lefts: [
      [at('vertices.A', 'z', 1, 0), at('vertices.B', 'z', 0, 0)],
      [at('vertices.A', 'z', 0, 1), at('vertices.B', 'z', 0, 0)],
      [at('vertices.A', 'z', 0, 0), at('vertices.B', 'z', 0, 0)],
      [at('vertices.A', 'x', 0, 0)],
      [at('vertices.B', 'x', 0, 0)],
    ],
  },
  {
    lattice: 'cubic torus 4 x 4 x 4\nspins s on vertices\nspins g on links',
    cells: ['vertices'],
    dimension: 3,
    map: bonds,
    lefts: [...pairs('vertices', [1, 0, 0], [0, 1, 0], [0, 0, 1]), [at('vertices', 'x', 0, 0, 0)]],
  },
  {
    lattice: 'square torus 6 x 6\nspins s on vertices\nspins g on vertices',
    cells: ['vertices'],
    dimension: 2,
    map: rows,
    lefts: [
      [at('vertices', 'z', 0, 0), at('vertices', 'z', 1, 0)],
      [at('vertices', 'x', 0, 0), at('vertices', 'x', 0, 1)],
    ],
  },
];

const word = (places: readonly Place[]): string =>
  places.map((p) => `s^${p.pauli}[${p.cell}(${p.offset.join(', ')})]`).join(' ');

describe.each(cases)('terms that a map on $lattice refuses', ({ lattice, cells, dimension, map, lefts }) => {
  const place = fc.record({
    cell: fc.constantFrom(...cells),
    offset: fc.array(fc.integer({ min: -1, max: 1 }), { minLength: dimension, maxLength: dimension }),
    pauli: fc.constantFrom<Pauli>('x', 'y', 'z'),
  });
  const term = fc.uniqueArray(place, {
    minLength: 1,
    maxLength: 4,
    selector: (p) => `${p.cell} ${p.offset.join()}`,
  });
  const offsets = Array.from({ length: 5 ** dimension }, (_, k) =>
    Array.from({ length: dimension }, (__, d) => (Math.floor(k / 5 ** d) % 5) - 2),
  );

  it('come with a correct witness, and the others have an image', () => {
    const derivation = newDerivation();
    let refused = 0;
    let taken = 0;
    fc.assert(
      fc.property(term, (places) => {
        const report = derivation.derive(
          `lattice ${lattice}\n${map}\noperator o = ${word(places)}\noperator n = ${map.split(' ')[1] ?? ''}(o)\n`,
        );
        const [problem] = report.problems;
        if (!problem) {
          taken += 1;
          return;
        }
        refused += 1;
        expect(problem.code).toBe('map-refuses');
        const charged = problem.witness?.charged ?? [];
        expect(charged.length).toBeGreaterThan(0);
        expect(anticommute(places, charged)).toBe(true);
        expect((problem.witness?.overlap.length ?? 0) % 2).toBe(1);
        // the symmetry commutes with every left side, wherever that stands
        for (const left of lefts)
          for (const by of offsets) {
            const moved = left.map((p) => ({ ...p, offset: p.offset.map((c, d) => c + (by[d] ?? 0)) }));
            expect(anticommute(moved, charged)).toBe(false);
          }
      }),
      { seed: 11, numRuns: 60 },
    );
    expect(refused).toBeGreaterThan(5);
    expect(taken).toBeGreaterThan(1);
  });
});
