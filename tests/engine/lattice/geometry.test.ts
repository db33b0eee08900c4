import { describe, expect, it } from 'vitest';
import { cellKey, classesLabelled, isLatticeProblem } from '../../../shared/lattice/cells.ts';
import type { Cell, LatticeFamily } from '../../../shared/lattice/cells.ts';
import { newCluster, straight } from '../../../shared/lattice/cluster.ts';
import { boundary, coboundary } from '../../../shared/lattice/incidence.ts';
import { coordinate, geometryFunction, geometryTable } from '../../../shared/lattice/geometry.ts';
import { coordination, nearestPairs, pairLimit } from '../../../shared/lattice/pairs.ts';
import { coloopLinks, cutLinks, loopLinks, membraneLinks } from '../../../shared/lattice/windings.ts';
import type { SteppedCell } from '../../../shared/lattice/windings.ts';
import { customFamily, isFamily } from '../../../shared/lattice/custom.ts';
import { builtIn, families, family } from './families.ts';

function good<T>(value: T): Exclude<T, { readonly problem: unknown }> {
  if (isLatticeProblem(value)) throw new Error(value.message);
  return value as Exclude<T, { readonly problem: unknown }>;
}

/** The set on a torus, as numbers of links that occur an odd number of times. */
function onTorus(of: LatticeFamily, parts: readonly SteppedCell[], lengths: readonly number[]): Set<number> {
  const cluster = good(newCluster({ family: of, periodic: lengths.map(() => true) }, straight(...lengths)));
  const odd = new Set<number>();
  for (const { cell, steps } of parts)
    for (const t of cluster.orbit(steps)) {
      const n = cluster.number({ ...cell, offset: cell.offset.map((c, d) => c + t[d]!) })!;
      if (!odd.delete(n)) odd.add(n);
    }
  return odd;
}

describe.each(families.map((f) => [f.name, f] as const))('windings of %s', (_name, of) => {
  const directions = of.vectors.map((_, d) => d + 1);
  for (const size of [1, 2, 3]) {
    const lengths = of.vectors.map((_, d) => size + (d === 0 ? 1 : 0));
    const cluster = good(newCluster({ family: of, periodic: lengths.map(() => true) }, straight(...lengths)));
    const overlap = (set: Set<number>, cells: readonly Cell[]) =>
      cells.filter((c) => set.has(cluster.number(c)!)).length % 2;

    it(`loops close and cuts are cocycles on ${lengths.join(' x ')}`, () => {
      for (const d of directions) {
        const loop = onTorus(of, good(loopLinks(of, d)), lengths);
        for (const v of cluster.cells('vertices')) expect(overlap(loop, coboundary(of, v))).toBe(0);
        const cut = onTorus(of, good(cutLinks(of, d)), lengths);
        for (const p of cluster.cells('plaquettes')) expect(overlap(cut, boundary(of, p))).toBe(0);
      }
    });

    it(`a loop meets the cut of its own direction an odd number of times and no other on ${lengths.join(' x ')}`, () => {
      for (const d of directions)
        for (const e of directions) {
          const loop = onTorus(of, good(loopLinks(of, d)), lengths);
          const cut = onTorus(of, good(cutLinks(of, e)), lengths);
          expect([...loop].filter((l) => cut.has(l)).length % 2).toBe(d === e ? 1 : 0);
        }
    });
  }

  it('loops run along their direction and cuts across it', () => {
    for (const d of directions) {
      for (const { steps } of good(loopLinks(of, d))) expect(steps).toEqual(directions.map((e) => (e === d ? 1 : 0)));
      for (const { steps } of good(cutLinks(of, d))) expect(steps).toEqual(directions.map((e) => (e === d ? 0 : 1)));
    }
  });
});

describe('windings by name', () => {
  const short = (of: LatticeFamily, parts: readonly SteppedCell[]) =>
    parts.map(({ cell, steps }) => `${of.links[cell.index]!.labels[0]!}@${cell.offset.join(',')}*${steps.join(',')}`);
  it('square', () => {
    const square = builtIn('square');
    expect(short(square, good(loopLinks(square, 1)))).toEqual(['1@0,0*1,0']);
    expect(short(square, good(loopLinks(square, 2)))).toEqual(['2@0,0*0,1']);
    expect(short(square, good(coloopLinks(square, 1)))).toEqual(['2@0,0*1,0']);
    expect(short(square, good(coloopLinks(square, 2)))).toEqual(['1@0,0*0,1']);
  });
  it('honeycomb: a zigzag, and one link a unit cell across it', () => {
    const honeycomb = builtIn('honeycomb');
    expect(short(honeycomb, good(loopLinks(honeycomb, 1)))).toEqual(['3@0,0*1,0', '1@0,0*1,0']);
    expect(short(honeycomb, good(coloopLinks(honeycomb, 1)))).toEqual(['2@0,0*1,0']);
  });
  it('cubic: a membrane holds the links along its normal', () => {
    const cubic = builtIn('cubic');
    expect(short(cubic, good(membraneLinks(cubic, 3)))).toEqual(['3@0,0,0*1,1,0']);
  });
  it('triangular and kagome: two links a unit cell', () => {
    for (const name of ['triangular', 'kagome']) expect(good(coloopLinks(builtIn(name), 1))).toHaveLength(2);
  });
  it('starts where the cycle is shortest, not at the first vertex', () => {
    const lieb = families.find((f) => f.name === 'lieb')!;
    expect(good(loopLinks(lieb, 2))).toHaveLength(2);
    expect(good(cutLinks(lieb, 1))).toHaveLength(1);
  });
  it('cuts where fewest links are, not along rows of unit cells', () => {
    // Row-wise cuts would cross the doubled links; the thresholds of A and B must part to find the single one.
    const at = (label: string, x: number, y: number) => ({ label, offset: [x, y] });
    const data = {
      vectors: [
        [1, 0],
        [0, 1],
      ],
      vertices: [
        { label: 'A', position: [0, 0] },
        { label: 'B', position: [0.5, 0.5] },
      ],
      links: [
        { a: at('A', 0, 0), b: at('A', 1, 0) },
        { a: at('A', 0, 0), b: at('B', 0, 0) },
        { a: at('B', 0, 0), b: at('A', 0, 1) },
        { a: at('B', 0, 0), b: at('A', 1, 1) },
      ],
      plaquettes: [],
    };
    const made = family(data, 'uneven');
    expect(short(made, good(coloopLinks(made, 1)))).toEqual(['2@0,0*1,0']);
  });
  it('a direction without a cycle, past the dimension, or of the wrong dimension is a problem', () => {
    const rows = family(
      {
        vectors: [
          [1, 0],
          [0, 1],
        ],
        vertices: [{ label: 'A', position: [0, 0] }],
        links: [
          { a: { label: 'A', offset: [] }, b: { label: 'A', offset: [1, 0] } },
          { a: { label: 'A', offset: [] }, b: { label: 'A', offset: [0, 2] } },
        ],
        plaquettes: [],
      },
      'rows',
    );
    expect(isLatticeProblem(loopLinks(rows, 1))).toBe(false);
    expect(loopLinks(rows, 2)).toMatchObject({ problem: 'direction' });
    expect(coloopLinks(rows, 1)).toMatchObject({ problem: 'direction' });
    expect(loopLinks(builtIn('square'), 3)).toMatchObject({ problem: 'direction' });
    expect(loopLinks(builtIn('square'), 0)).toMatchObject({ problem: 'direction' });
    expect(coloopLinks(builtIn('cubic'), 1)).toMatchObject({ problem: 'dimension' });
    expect(membraneLinks(builtIn('square'), 1)).toMatchObject({ problem: 'dimension' });
  });
});

describe('pairs', () => {
  // Coordination numbers of the shells: Conway and Sloane, Sphere Packings, Lattices and Groups (3rd ed. 1999), chapter 4:
  // theta series of Z, Z^2, Z^3 (representations as sums of squares) and of A2. Tolerance none: integers.
  it.each([
    ['chain', [2, 2, 2, 2]],
    ['square', [4, 4, 4, 8, 4, 4, 8, 8, 4]],
    ['triangular', [6, 6, 6, 12, 6, 6, 12, 6]],
    ['cubic', [6, 12, 8, 6, 24, 24, 12, 30, 24]],
    ['honeycomb', [3, 6, 3]],
    ['kagome', [4, 4]],
  ])('%s', (name, shells) => {
    const of = builtIn(name);
    of.vertices.forEach((_, v) => expect(shells.map((_, k) => coordination(of, k + 1, v))).toEqual(shells));
  });
  it('the nearest pairs are the links of every built-in lattice', () => {
    for (const name of ['chain', 'square', 'triangular', 'honeycomb', 'kagome', 'cubic']) {
      const of = builtIn(name);
      const key = (a: Cell, b: Cell) => {
        const move = (c: Cell, by: Cell) => cellKey({ ...c, offset: c.offset.map((x, d) => x - by.offset[d]!) });
        return [`${move(a, a)} ${move(b, a)}`, `${move(b, b)} ${move(a, b)}`].sort()[0];
      };
      const pairs = good(nearestPairs(of, 1));
      expect(pairs.map((p) => key(p.a, p.b)).sort()).toEqual(of.links.map((l) => key(l.a, l.b)).sort());
    }
  });
  it('takes vectors typed with three decimals as equal lengths', () => {
    const rough = family(
      {
        vectors: [
          [1, 0],
          [0.5, 0.866],
        ],
        vertices: [{ label: 'A', position: [0, 0] }],
        links: [],
        plaquettes: [],
      },
      'rough',
    );
    expect([1, 2, 3, 4].map((k) => coordination(rough, k, 0))).toEqual([6, 6, 6, 12]);
  });
  it('refuses shells that are not counted from 1 or too far', () => {
    expect(nearestPairs(builtIn('square'), 0)).toMatchObject({ problem: 'limit' });
    expect(nearestPairs(builtIn('square'), 1.5)).toMatchObject({ problem: 'limit' });
    expect(nearestPairs(builtIn('square'), pairLimit + 1)).toMatchObject({ problem: 'limit' });
    expect(good(nearestPairs(builtIn('cubic'), 20)).length).toBeGreaterThan(0);
  });
});

describe('the table', () => {
  it('has every function of the language once, with help and an example that names it', () => {
    expect(geometryTable.map((f) => f.name).sort()).toEqual(
      [
        'coloop',
        'corners',
        'edges',
        'ends',
        'faces',
        'into',
        'loop',
        'membrane',
        'neighbours',
        'out',
        'pairs',
        'rim',
        'sides',
        'star',
      ].sort(),
    );
    for (const f of geometryTable) {
      expect(f.example).toContain(`${f.name}(`);
      expect(f.help).toMatch(/\.$/);
      expect(geometryFunction(f.name)).toBe(f);
    }
  });
  it('gives cells of the kind that it says', () => {
    for (const of of families)
      for (const f of geometryTable) {
        if (f.form !== 'around') continue;
        for (const kind of f.takes)
          of[kind].forEach((_, index) => {
            for (const cell of f.cells(of, { kind, index, offset: of.vectors.map(() => 5) })) {
              expect(cell.kind).toBe(f.gives);
              expect(of[f.gives][cell.index]).toBeDefined();
              expect(cell.offset.every((c) => c >= 3 && c <= 7)).toBe(true);
            }
          });
      }
  });
  it('corners of a cube are its eight vertices', () => {
    const f = geometryFunction('corners')!;
    if (f.form !== 'around') throw new Error('corners is a function of a cell');
    expect(f.cells(builtIn('cubic'), { kind: 'cubes', index: 0, offset: [0, 0, 0] })).toHaveLength(8);
  });
  it('reads coordinates and labels', () => {
    const cell: Cell = { kind: 'vertices', index: 0, offset: [4, -1] };
    expect(['x', 'y', 'z'].map((n) => coordinate(cell, n))).toEqual([4, -1, undefined]);
    const kagome = builtIn('kagome');
    expect(classesLabelled(kagome, 'plaquettes', 'triangle')).toEqual([0, 1]);
    expect(classesLabelled(kagome, 'links', '1').map((k) => kagome.links[k]!.a.index)).toEqual([0, 1]);
    expect(classesLabelled(builtIn('square'), 'vertices', 'A')).toEqual([0]);
  });
});

describe('declared lattices that are wrong', () => {
  const at = (label: string, ...offset: number[]) => ({ label, offset });
  const base = {
    vectors: [
      [1, 0],
      [0, 1],
    ],
    vertices: [{ label: 'A', position: [0, 0] }],
    links: [
      { a: at('A'), b: at('A', 1, 0) },
      { a: at('A'), b: at('A', 0, 1) },
    ],
    plaquettes: [{ label: 'square', corners: [at('A'), at('A', 1, 0), at('A', 1, 1), at('A', 0, 1)] }],
  };
  it('the right one is right', () => expect(isFamily(customFamily(base))).toBe(true));
  it.each([
    [
      'dependent vectors',
      {
        ...base,
        vectors: [
          [1, 0],
          [2, 0],
        ],
      },
      'vectors',
      /dependent/,
    ],
    ['four vectors', { ...base, vectors: [[1], [1], [1], [1]] }, 'vectors', /1 to 3/],
    ['uneven vectors', { ...base, vectors: [[1, 0], [1]] }, 'vectors', /same number/],
    ['more vectors than components', { ...base, vectors: [[1], [2]] }, 'vectors', /dependent/],
    ['no vertex', { ...base, vertices: [], links: [], plaquettes: [] }, 'vertex', /at least one/],
    ['a vertex twice', { ...base, vertices: [...base.vertices, ...base.vertices] }, 'vertex', /twice/],
    ['a position too short', { ...base, vertices: [{ label: 'A', position: [0] }] }, 'vertex', /2 coordinates/],
    ['an unknown vertex', { ...base, links: [{ a: at('A'), b: at('B') }] }, 'link', /no vertex B/],
    ['a shift too short', { ...base, links: [{ a: at('A'), b: at('A', 1) }] }, 'link', /2 whole entries/],
    ['a shift too far', { ...base, links: [{ a: at('A'), b: at('A', 99, 0) }] }, 'link', /reaches at most/],
    ['a link to itself', { ...base, links: [{ a: at('A'), b: at('A') }] }, 'link', /one vertex/],
    [
      'corners without a link',
      { ...base, plaquettes: [{ label: 'p', corners: [at('A'), at('A', 1, 1), at('A', 0, 1)] }] },
      'plaquette',
      /no link/,
    ],
    ['corners with two links', { ...base, links: [...base.links, base.links[0]!] }, 'plaquette', /2 links/],
    [
      'two corners',
      { ...base, plaquettes: [{ label: 'p', corners: [at('A'), at('A', 1, 0)] }] },
      'plaquette',
      /three corners/,
    ],
    [
      'an open cube',
      { ...base, cubes: [{ label: 'c', faces: [at('square'), at('square', 1, 0)] }] },
      'cube',
      /not closed/,
    ],
    ['an unknown face', { ...base, cubes: [{ label: 'c', faces: [at('round')] }] }, 'cube', /no plaquette round/],
  ])('%s', (_name, data, problem, message) => {
    const result = customFamily(data);
    if (isFamily(result)) throw new Error('a wrong lattice was accepted');
    expect(result[0]!.problem).toBe(problem);
    expect(result[0]!.message).toMatch(message);
    expect(result[0]!.part).toBeDefined();
    expect(result[0]!.which).not.toBe('');
  });
});
