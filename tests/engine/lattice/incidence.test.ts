import { describe, expect, it } from 'vitest';
import { cellKey, cellKinds, shifted } from '../../../shared/lattice/cells.ts';
import type { Cell, CellKind, LatticeFamily } from '../../../shared/lattice/cells.ts';
import { isLatticeProblem } from '../../../shared/lattice/cells.ts';
import { newCluster, straight } from '../../../shared/lattice/cluster.ts';
import type { Cluster } from '../../../shared/lattice/cluster.ts';
import { oddCells } from '../../../shared/lattice/family.ts';
import { around, boundary, coboundary, incidence } from '../../../shared/lattice/incidence.ts';
import { linkEnd, rimEntry } from '../../../shared/lattice/geometry.ts';
import { box, families } from './families.ts';

const reference = (family: LatticeFamily, kind: CellKind): Cell[] =>
  family[kind].map((_, index) => ({ kind, index, offset: new Array<number>(family.dimension).fill(0) }));

export function torus(family: LatticeFamily, ...lengths: number[]): Cluster {
  const cluster = newCluster({ family, periodic: lengths.map(() => true) }, straight(...lengths));
  if (isLatticeProblem(cluster)) throw new Error(cluster.message);
  return cluster;
}

it('walks the six families of the table and three declared ones', () => {
  expect(families.map((f) => f.name)).toEqual([
    'chain',
    'square',
    'triangular',
    'honeycomb',
    'kagome',
    'cubic',
    'ladder',
    'lieb',
    'doubled',
  ]);
});

describe.each(families.map((f) => [f.name, f] as const))('%s', (_name, family) => {
  it('has no boundary of a boundary over F2', () => {
    for (const kind of ['plaquettes', 'cubes'] as const)
      for (const cell of reference(family, kind)) {
        const once = boundary(family, cell);
        expect(once.length).toBeGreaterThan(2);
        expect(oddCells(once.flatMap((c) => boundary(family, c)))).toEqual([]);
      }
  });

  it('lists as coboundary the transpose of the boundary, with multiplicity', () => {
    for (const kind of cellKinds)
      for (const low of reference(family, kind))
        for (const high of coboundary(family, low)) {
          const there = boundary(family, high).filter((c) => cellKey(c) === cellKey(low)).length;
          const back = coboundary(family, low).filter((c) => cellKey(c) === cellKey(high)).length;
          expect(back).toBe(there);
          expect(there).toBeGreaterThan(0);
        }
    const total = (kind: CellKind, map: (c: Cell) => Cell[]) =>
      reference(family, kind).reduce((s, c) => s + map(c).length, 0);
    expect(total('vertices', (c) => coboundary(family, c))).toBe(2 * family.links.length);
    expect(total('links', (c) => coboundary(family, c))).toBe(total('plaquettes', (c) => boundary(family, c)));
    expect(total('plaquettes', (c) => coboundary(family, c))).toBe(total('cubes', (c) => boundary(family, c)));
  });

  it('splits the star into links that begin and links that end, with the neighbours beside them', () => {
    const lists = incidence(family);
    for (const v of reference(family, 'vertices')) {
      const star = around(lists.star, v);
      expect([...around(lists.out, v), ...around(lists.into, v)]).toEqual(star);
      around(lists.neighbours, v).forEach((far, k) => {
        const ends = boundary(family, star[k]!).map(cellKey);
        expect(new Set(ends)).toEqual(new Set([cellKey(far), cellKey(v)]));
      });
    }
  });

  it('joins corner k and corner k + 1 by entry k of the rim', () => {
    family.plaquettes.forEach((p, index) => {
      const offset = family.vectors.map((_, d) => d + 2);
      p.corners.forEach((corner, k) => {
        const link = rimEntry(family, { kind: 'plaquettes', index, offset }, k + 1)!;
        const next = p.corners[(k + 1) % p.corners.length]!;
        const ends = [linkEnd(family, link, 'a'), linkEnd(family, link, 'b')].map(cellKey).sort();
        expect(ends).toEqual([shifted(corner, offset), shifted(next, offset)].map(cellKey).sort());
      });
      expect(rimEntry(family, { kind: 'plaquettes', index, offset }, p.corners.length + 1)).toBeUndefined();
    });
  });

  it('has the Euler characteristic of its torus, at sizes 1 to 3', () => {
    // A torus of any dimension has characteristic 0; chain and ladder (circle; annulus) too, cut or not.
    for (const lengths of box(family.dimension, 1, family.dimension === 3 ? 2 : 3)) {
      const cluster = torus(family, ...lengths);
      const [v, e, f, c] = cellKinds.map((kind) => cluster.count(kind));
      expect(v! - e! + f! - c!).toBe(0);
    }
  });

  it('keeps links of one length between the drawn ends', () => {
    if (!['chain', 'square', 'triangular', 'honeycomb', 'kagome', 'cubic'].includes(family.name)) return;
    const place = (c: Cell) =>
      family.vertices[c.index]!.position.map(
        (x, k) => x + c.offset.reduce((s, o, d) => s + o * family.vectors[d]![k]!, 0),
      );
    const lengths = family.links.map((l) => Math.hypot(...place(l.a).map((x, k) => x - place(l.b)[k]!)));
    for (const length of lengths) expect(length).toBeCloseTo(lengths[0]!, 12);
  });
});

describe('stars and rims of the table', () => {
  it.each([
    ['chain', [2], []],
    ['square', [4], [4]],
    ['triangular', [6], [3, 3]],
    ['honeycomb', [3, 3], [6]],
    ['kagome', [4, 4, 4], [3, 3, 6]],
    ['cubic', [6], [4, 4, 4]],
  ])('%s', (name, stars, rims) => {
    const family = families.find((f) => f.name === name)!;
    expect(incidence(family).star.map((s) => s.length)).toEqual(stars);
    expect(family.plaquettes.map((p) => p.rim.length)).toEqual(rims);
  });

  it('cubic: twelve edges, six faces, eight corners a cube; two cubes at a face, four plaquettes at a link', () => {
    const family = families.find((f) => f.name === 'cubic')!;
    expect(family.cubes[0]!.edges).toHaveLength(12);
    expect(family.cubes[0]!.faces).toHaveLength(6);
    expect(incidence(family).cubesAtPlaquette.map((c) => c.length)).toEqual([2, 2, 2]);
    expect(incidence(family).sides.map((c) => c.length)).toEqual([4, 4, 4]);
  });
});
