import { describe, expect, it } from 'vitest';
import { cellKey, cellKinds, isLatticeProblem, shifted } from '../../../shared/lattice/cells.ts';
import type { Cell, LatticeFamily, Size } from '../../../shared/lattice/cells.ts';
import { newCluster, periodicDirections, straight } from '../../../shared/lattice/cluster.ts';
import { boundary } from '../../../shared/lattice/incidence.ts';
import { clusterMotions, clusterTranslations, familyMotions, moveCell } from '../../../shared/lattice/motions.ts';
import type { Motion } from '../../../shared/lattice/motions.ts';
import { cellPosition } from '../../../shared/lattice/drawing.ts';
import { builtIn, families, family } from './families.ts';

const references = (of: LatticeFamily): Cell[] =>
  cellKinds.flatMap((kind) => of[kind].map((_, index) => ({ kind, index, offset: of.vectors.map((_, d) => d - 1) })));

const keys = (cells: readonly Cell[]): string[] => cells.map(cellKey).sort();

/** A motion as text, modulo translations: the image of every class, from where the first vertex goes. */
const fingerprint = (of: LatticeFamily, move: (cell: Cell) => Cell): string => {
  const zero = of.vectors.map(() => 0);
  const first = move({ kind: 'vertices', index: 0, offset: zero });
  const back = first.offset.map((c) => 0 - c);
  const axes = of.vectors.map((_, d) => ({
    kind: 'vertices' as const,
    index: 0,
    offset: zero.map((_, k) => Number(k === d)),
  }));
  const cells = [...references(of).map((c) => ({ ...c, offset: zero })), ...axes];
  return cells.map((c) => cellKey(shifted(move(c), back))).join(' ');
};

describe.each(families.map((f) => [f.name, f] as const))('motions of %s', (_name, of) => {
  const motions = familyMotions(of);

  it('map every boundary to the boundary of the image', () => {
    expect(motions.length).toBeGreaterThan(1);
    for (const m of motions)
      for (const cell of references(of))
        expect(keys(boundary(of, cell).map((c) => moveCell(m, c)))).toEqual(keys(boundary(of, moveCell(m, cell))));
  });

  it('keep distances between drawn cells', () => {
    const apart = (a: Cell, b: Cell) => Math.hypot(...cellPosition(of, a).map((x, k) => x - cellPosition(of, b)[k]!));
    for (const m of motions)
      for (const a of references(of))
        for (const b of references(of)) expect(apart(moveCell(m, a), moveCell(m, b))).toBeCloseTo(apart(a, b), 9);
  });

  it('form a group modulo translations, each once, the identity first', () => {
    const all = new Set(motions.map((m) => fingerprint(of, (c) => moveCell(m, c))));
    expect(all.size).toBe(motions.length);
    expect(fingerprint(of, (c) => c)).toBe(fingerprint(of, (c) => moveCell(motions[0]!, c)));
    for (const p of motions)
      for (const q of motions) expect(all.has(fingerprint(of, (c) => moveCell(p, moveCell(q, c))))).toBe(true);
  });
});

it('have the orders of the point groups', () => {
  // Point groups of the wallpaper groups p4mm (8) and p6mm (12) and of m-3m (48): International Tables for Crystallography A.
  // The ladder has the reflection of a line and the swap of its rails; the doubled cell 4/mmm (16) and the hidden half translation.
  const orders = Object.fromEntries(families.map((f) => [f.name, familyMotions(f).length]));
  expect(orders).toEqual({
    chain: 2,
    square: 8,
    triangular: 12,
    honeycomb: 12,
    kagome: 12,
    cubic: 48,
    ladder: 4,
    lieb: 8,
    doubled: 32,
  });
});

it('a lattice without symmetry has the identity alone', () => {
  const at = (label: string, ...offset: number[]) => ({ label, offset });
  const skew = family(
    {
      vectors: [
        [1, 0],
        [0.3, 1.7],
      ],
      vertices: [
        { label: 'A', position: [0, 0] },
        { label: 'B', position: [0.2, 0.1] },
      ],
      links: [
        { a: at('A'), b: at('B') },
        { a: at('A'), b: at('A', 1, 0) },
      ],
      plaquettes: [],
    },
    'skew',
  );
  expect(familyMotions(skew)).toHaveLength(1);
});

it('reflects what stands off the span of the vectors as a whole', () => {
  const at = (label: string, ...offset: number[]) => ({ label, offset });
  const rails = family(
    {
      vectors: [[1, 0]],
      vertices: [
        { label: 'M', position: [0, 0] },
        { label: 'U', position: [0, 1] },
        { label: 'L', position: [0, -1] },
      ],
      links: [
        { a: at('M'), b: at('M', 1) },
        { a: at('M'), b: at('U') },
        { a: at('M'), b: at('L') },
      ],
      plaquettes: [],
    },
    'rails',
  );
  expect(familyMotions(rails)).toHaveLength(4);
  expect(familyMotions(rails)[0]!.images.vertices.map((c) => c.index)).toEqual([0, 1, 2]);
});

describe('motions of clusters', () => {
  const of = (name: string, size: Size, edge: 'torus' | 'cylinder' | 'open' = 'torus') => {
    const found = builtIn(name);
    const made = newCluster({ family: found, periodic: periodicDirections(edge, found.dimension) }, size);
    if (isLatticeProblem(made)) throw new Error(made.message);
    return made;
  };
  it.each([
    ['square', straight(3, 3), 'torus', 8],
    ['square', straight(2, 3), 'torus', 4],
    [
      'square',
      {
        periods: [
          [2, 1],
          [-1, 2],
        ],
      },
      'torus',
      4,
    ],
    [
      'square',
      {
        periods: [
          [2, 2],
          [2, -2],
        ],
      },
      'torus',
      8,
    ],
    ['square', straight(3, 3), 'open', 8],
    ['square', straight(3, 4), 'open', 4],
    ['square', straight(3, 3), 'cylinder', 4],
    ['triangular', straight(3, 3), 'torus', 12],
    ['triangular', straight(3, 3), 'open', 4],
    ['kagome', straight(2, 2), 'torus', 12],
    ['honeycomb', straight(2, 3), 'torus', 2],
    ['cubic', straight(2, 2, 3), 'torus', 16],
    ['chain', straight(5), 'open', 2],
  ] as const)('%s %o %s: %i', (name, size, edge, order) => {
    expect(clusterMotions(of(name, size, edge))).toHaveLength(order);
  });
  it('permute cells with their boundaries', () => {
    for (const cluster of [
      of('kagome', straight(2, 2)),
      of('square', straight(3, 3), 'open'),
      of('honeycomb', {
        periods: [
          [2, 1],
          [-1, 3],
        ],
      }),
    ])
      for (const { images } of [...clusterMotions(cluster), ...clusterTranslations(cluster)])
        for (const kind of ['links', 'plaquettes'] as const)
          for (const cell of cluster.cells(kind)) {
            const image = cluster.cell(kind, images[kind][cluster.number(cell)!]!);
            const below = (c: Cell) => boundary(cluster.family, c).map((b) => cluster.number(b)!);
            const kindBelow = kind === 'links' ? 'vertices' : 'links';
            expect(
              below(cell)
                .map((n) => images[kindBelow][n]!)
                .sort((p, q) => p - q),
            ).toEqual(below(image).sort((p, q) => p - q));
          }
  });
  it('translations generate as many moves as there are unit cells', () => {
    const cluster = of('square', {
      periods: [
        [2, 2],
        [1, -2],
      ],
    });
    const seen = new Set<string>();
    const queue = [Int32Array.from(cluster.cells('links').keys())];
    for (let next = queue.pop(); next; next = queue.pop()) {
      if (seen.has(next.join())) continue;
      seen.add(next.join());
      for (const { images } of clusterTranslations(cluster)) queue.push(next.map((n) => images.links[n]!));
    }
    expect(seen.size).toBe(cluster.unitCells);
    expect(clusterTranslations(of('square', straight(3, 3), 'cylinder'))).toHaveLength(1);
    expect(clusterTranslations(of('square', straight(3, 3), 'open'))).toHaveLength(0);
  });
  it('a motion refuses a class that is not there', () => {
    const motion: Motion = familyMotions(builtIn('square'))[0]!;
    expect(() => moveCell(motion, { kind: 'cubes', index: 0, offset: [0, 0] })).toThrow(/cubes/);
  });
});
