import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cellKey, cellKinds, isLatticeProblem } from '../../../shared/lattice/cells.ts';
import type { LatticeFamily, Size } from '../../../shared/lattice/cells.ts';
import {
  checkSize,
  isPeriod,
  newCluster,
  periodicDirections,
  sizeKey,
  sizeText,
  straight,
} from '../../../shared/lattice/cluster.ts';
import type { Cluster } from '../../../shared/lattice/cluster.ts';
import { boundary } from '../../../shared/lattice/incidence.ts';
import { determinant } from '../../../shared/lattice/vectors.ts';
import { builtIn, families } from './families.ts';

function cluster(family: LatticeFamily, size: Size, boundaryName: 'torus' | 'cylinder' | 'open' = 'torus'): Cluster {
  const made = newCluster({ family, periodic: periodicDirections(boundaryName, family.dimension) }, size);
  if (isLatticeProblem(made)) throw new Error(made.message);
  return made;
}

const torusOf = (family: LatticeFamily) => ({ family, periodic: family.vectors.map(() => true) });
const moved = (a: readonly number[], b: readonly number[]) => a.map((c, d) => c + b[d]!);

function expectBijective(c: Cluster): void {
  for (const kind of cellKinds) {
    const cells = c.cells(kind);
    expect(cells.map((cell) => c.number(cell))).toEqual(cells.map((_, k) => k));
    expect(new Set(cells.map(cellKey)).size).toBe(cells.length);
    cells.forEach((cell, k) => {
      expect(c.cell(kind, k)).toEqual(cell);
      expect(c.wrap(cell)).toEqual(cell);
    });
    expect(() => c.cell(kind, cells.length)).toThrow(RangeError);
  }
}

describe.each(families.map((f) => [f.name, f] as const))('clusters of %s', (_name, family) => {
  it.each(['torus', 'cylinder', 'open'] as const)('number their cells without gaps: %s', (boundaryName) => {
    for (const length of [1, 2, 3]) {
      const c = cluster(family, straight(...family.vectors.map((_, d) => length + (d === 1 ? 1 : 0))), boundaryName);
      expectBijective(c);
      expect(c.count('vertices')).toBe(c.unitCells * family.vertices.length);
      if (boundaryName === 'torus')
        for (const kind of cellKinds) expect(c.count(kind)).toBe(c.unitCells * family[kind].length);
    }
  });

  it('an open piece holds a cell if and only if it holds all that bounds it', () => {
    const c = cluster(family, straight(...family.vectors.map(() => 3)), 'open');
    let missing = 0;
    for (const kind of ['links', 'plaquettes', 'cubes'] as const)
      family[kind].forEach((_, index) => {
        for (let k = 0; k < 7 ** family.dimension; k++) {
          const offset = family.vectors.map((_, d) => (Math.floor(k / 7 ** d) % 7) - 2);
          const whole = boundary(family, { kind, index, offset }).every((b) => c.number(b) !== undefined);
          expect(c.number({ kind, index, offset }) !== undefined).toBe(whole);
          if (!whole) missing++;
        }
      });
    expect(missing).toBeGreaterThan(0);
  });

  it('wraps by the periods of any torus, and by nothing else', () => {
    const entry = fc.integer({ min: -4, max: 4 });
    const row = fc.tuple(...family.vectors.map(() => entry));
    const torus = fc
      .tuple(...family.vectors.map(() => row))
      .filter((rows) => determinant(rows) !== 0 && checkSize(torusOf(family), { periods: rows }) === undefined);
    fc.assert(
      fc.property(torus, row, row, (periods, offset, turns) => {
        const c = cluster(family, { periods });
        const shift = periods.reduce(
          (sum, p, k) =>
            moved(
              sum,
              p.map((x) => x * turns[k]!),
            ),
          family.vectors.map(() => 0),
        );
        const cell = { kind: 'vertices' as const, index: family.vertices.length - 1, offset };
        expect(c.number({ ...cell, offset: moved(offset, shift) })).toBe(c.number(cell));
        expect(isPeriod(c, shift)).toBe(true);
        const one = family.vectors.map((_, d) => (d === 0 ? 1 : 0));
        expect(c.number({ ...cell, offset: moved(offset, one) }) === c.number(cell)).toBe(isPeriod(c, one));
        expect(c.unitCells).toBe(Math.abs(determinant(periods)));
        expect(c.translations()).toHaveLength(c.unitCells);
        expect(new Set(c.translations().map((t) => c.number({ ...cell, offset: moved(offset, t) }))).size).toBe(
          c.unitCells,
        );
      }),
      { seed: 20240611, numRuns: 60 },
    );
  });

  it('numbers tilted tori without gaps', () => {
    const periods = [
      [2, 1, 0],
      [-1, 2, 1],
      [0, 1, 2],
    ]
      .slice(0, family.dimension)
      .map((r) => r.slice(0, family.dimension));
    expectBijective(cluster(family, { periods }));
  });
});

describe('open counts', () => {
  it.each([1, 2, 3, 8])('square %i x %i + 1', (n) => {
    const c = cluster(builtIn('square'), straight(n, n + 1), 'open');
    expect(cellKinds.map((k) => c.count(k))).toEqual([n * (n + 1), (n - 1) * (n + 1) + n * n, (n - 1) * n, 0]);
  });
  it('cubic and chain', () => {
    const c = cluster(builtIn('cubic'), straight(3, 3, 3), 'open');
    expect(cellKinds.map((k) => c.count(k))).toEqual([27, 54, 36, 8]);
    expect(cluster(builtIn('chain'), straight(5), 'open').count('links')).toBe(4);
  });
  it('a cylinder wraps direction 1 only', () => {
    const c = cluster(builtIn('square'), straight(4, 3), 'cylinder');
    expect(cellKinds.map((k) => c.count(k))).toEqual([12, 12 + 8, 8, 0]);
    expect([0, 1].map((k) => c.count('links', k))).toEqual([12, 8]);
  });
});

describe('orbits', () => {
  it('each translate once, by the group the steps generate', () => {
    const c = cluster(builtIn('square'), {
      periods: [
        [2, 2],
        [1, -2],
      ],
    });
    expect(c.unitCells).toBe(6);
    expect(c.orbit([1, 1])).toHaveLength(6);
    // (1, 0) has order 6 in Z^2 / <(2, 2), (1, -2)>: (3, 0) is their sum, so order 3; (0, 1) has order 6.
    expect(c.orbit([1, 0])).toHaveLength(3);
    expect(c.orbit([0, 1])).toHaveLength(6);
    expect(c.orbit([0, 0])).toEqual([[0, 0]]);
    const straightOne = cluster(builtIn('square'), straight(4, 6));
    expect(straightOne.orbit([2, 3])).toHaveLength(4);
    expect(straightOne.admits([2, 3])).toBe(true);
    expect(straightOne.admits([3, 1])).toBe(false);
    expect(straightOne.admits([0, 4])).toBe(false);
  });
  it('along an open direction: all that may meet the piece', () => {
    const c = cluster(builtIn('chain'), straight(5), 'open');
    expect(c.orbit([1])).toEqual([[0], [1], [2], [3], [4]]);
    expect(c.orbit([2])).toEqual([[0], [2], [4]]);
    expect(c.orbit([1], [-1], [3])).toEqual([-3, -2, -1, 0, 1, 2, 3, 4, 5].map((x) => [x]));
    expect(c.admits([2])).toBe(true);
  });
});

describe('sizes', () => {
  it('read as they are written', () => {
    expect(sizeText(straight(3, 3))).toBe('3 x 3');
    expect(sizeText(straight(8))).toBe('8');
    expect(
      sizeText({
        periods: [
          [2, 2],
          [1, -2],
        ],
      }),
    ).toBe('(2, 2), (1, -2)');
  });
  it('have one key for one lattice of periods', () => {
    expect(
      sizeKey({
        periods: [
          [2, 2],
          [1, -2],
        ],
      }),
    ).toBe(
      sizeKey({
        periods: [
          [3, 0],
          [1, -2],
        ],
      }),
    );
    expect(sizeKey(straight(2, 3))).not.toBe(sizeKey(straight(3, 2)));
  });
  it.each([
    ['too few directions', 'torus', straight(3), /2 directions/],
    ['zero', 'torus', straight(0, 3), /at least 1/],
    ['negative', 'torus', straight(3, -1), /at least 1/],
    ['not whole', 'torus', straight(1.5, 2), /whole/],
    ['not a number', 'torus', straight(NaN, 2), /whole/],
    ['too long', 'torus', straight(1001, 1), /at most 1000/],
    ['too many', 'torus', straight(1000, 1000), /at most 200000/],
    [
      'dependent',
      'torus',
      {
        periods: [
          [1, 2],
          [2, 4],
        ],
      },
      /dependent/,
    ],
    [
      'tilted along an open direction',
      'cylinder',
      {
        periods: [
          [2, 1],
          [0, 3],
        ],
      },
      /open/,
    ],
    [
      'tilted open',
      'open',
      {
        periods: [
          [2, 0],
          [1, 3],
        ],
      },
      /open/,
    ],
  ] as const)('refused: %s', (_name, boundaryName, size, message) => {
    const lattice = { family: builtIn('square'), periodic: periodicDirections(boundaryName, 2) };
    expect(checkSize(lattice, size)?.message).toMatch(message);
    expect(isLatticeProblem(newCluster(lattice, size))).toBe(true);
  });
});
