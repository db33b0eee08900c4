import { describe, expect, it } from 'vitest';
import { cellKey, cellKinds, shifted } from '../../../shared/lattice/cells.ts';
import type { Cell } from '../../../shared/lattice/cells.ts';
import { periodicDirections, straight } from '../../../shared/lattice/cluster.ts';
import {
  boundsOf,
  cellPoint,
  cellPosition,
  cellsInWindow,
  cellsOfSize,
  drawCell,
  flatten,
  windowAround,
} from '../../../shared/lattice/drawing.ts';
import { builtIn, families } from './families.ts';

describe.each(families.map((f) => [f.name, f] as const))('drawing of %s', (_name, of) => {
  const zero = of.vectors.map(() => 0);
  it('moves with the unit cell by the primitive vectors', () => {
    for (const kind of cellKinds)
      of[kind].forEach((_, index) => {
        const cell: Cell = { kind, index, offset: zero };
        of.vectors.forEach((vector, d) => {
          const there = cellPosition(
            of,
            shifted(
              cell,
              zero.map((_, k) => Number(k === d)),
            ),
          );
          there.forEach((x, k) => expect(x - cellPosition(of, cell)[k]!).toBeCloseTo(vector[k]!, 12));
        });
      });
  });
  it('sets the centre of a cell in the middle of its outline', () => {
    for (const cell of cellsInWindow(of, zero, zero)) {
      const drawn = drawCell(of, cell);
      const points = drawn.outline.flat();
      const mean = [0, 1].map((k) => points.reduce((s, p) => s + p[k as 0 | 1], 0) / points.length);
      mean.forEach((x, k) => expect(x).toBeCloseTo(drawn.centre[k as 0 | 1], 12));
    }
  });
  it('lists each cell of a window once', () => {
    const cells = cellsInWindow(
      of,
      of.vectors.map(() => -1),
      of.vectors.map(() => 1),
    );
    const classes = cellKinds.reduce((s, kind) => s + of[kind].length, 0);
    expect(cells).toHaveLength(3 ** of.dimension * classes);
    expect(new Set(cells.map(cellKey)).size).toBe(cells.length);
  });
  it('draws corners of a plaquette apart, without crossing its own centre', () => {
    of.plaquettes.forEach((_, index) => {
      const { outline, centre } = drawCell(of, { kind: 'plaquettes', index, offset: zero });
      const ring = outline[0]!;
      // Signed area by the shoelace formula: a simple polygon in order has the sum of the triangles at its centre, all of one sign.
      const signs = ring.map((p, k) => {
        const q = ring[(k + 1) % ring.length]!;
        return Math.sign((p[0] - centre[0]) * (q[1] - centre[1]) - (p[1] - centre[1]) * (q[0] - centre[0]));
      });
      expect(new Set(signs).size).toBe(1);
    });
  });
});

describe('bounds and windows', () => {
  const square = builtIn('square');
  it('bounds of what is drawn', () => {
    const drawn = cellsInWindow(square, [0, 0], [1, 2], ['vertices']).map((c) => drawCell(square, c));
    expect(boundsOf(drawn, 0.5)).toEqual({ low: [-0.5, -0.5], high: [1.5, 2.5] });
    expect(boundsOf([])).toBeUndefined();
  });
  it('a window around a support', () => {
    const cells: Cell[] = [
      { kind: 'links', index: 0, offset: [3, -2] },
      { kind: 'links', index: 1, offset: [-1, 0] },
    ];
    expect(windowAround(square, cells)).toEqual({ low: [-2, -3], high: [4, 1] });
    expect(windowAround(square, [], 2)).toEqual({ low: [-2, -2], high: [2, 2] });
  });
  it('cells of a size', () => {
    const open = { family: square, periodic: periodicDirections('open', 2) };
    expect(cellsOfSize(open, straight(3, 3), ['links'])).toHaveLength(12);
    expect(cellsOfSize(open, straight(0, 3))).toEqual([]);
  });
  it('a chain lies on a line, three dimensions are seen obliquely', () => {
    expect(cellPoint(builtIn('chain'), { kind: 'vertices', index: 0, offset: [3] })).toEqual([3, 0]);
    expect(flatten([1, 0, 2])).toEqual([1, 2]);
    const [x, y] = flatten([0, 1, 0]);
    expect(Math.hypot(x, y)).toBeCloseTo(0.45, 2);
  });
});
