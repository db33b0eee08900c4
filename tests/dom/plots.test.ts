import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Claim } from '../../shared/contracts/report.ts';
import { newDerivation } from '../../shared/derivation/derive.ts';
import { spaced } from '../../src/features/plots/axes.tsx';
import * as data from '../../src/features/plots/data.ts';
import { contour, gridOf, largestOf, steepness } from '../../src/features/plots/grid.ts';

const claim = (audit: string, figures: Claim['figures']): Claim => ({
  line: 1,
  audit,
  subject: 'a, b',
  statement: 'the lowest 2 levels of a [p = +1] and b [w = +1] agree on 2 x 2, within 1e-12',
  tex: '',
  grade: 'numerical',
  figures,
  witness: {},
  cautions: [],
  sources: [],
});

describe('plots', () => {
  it('read what the engine computed: levels, scans, ground multiplets', () => {
    const source = [
      'lattice chain torus 4',
      'spins s on vertices',
      'couplings J = 1, h = 0.6',
      'model ising = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]',
      'audit degeneracy ising on 4, 6',
      'audit scan gap of ising over h = 0 .. 2 by 0.5 on 4, 6',
      'audit scan gap of ising over h = 0 .. 1 by 0.5, J = 0.5 .. 1 by 0.25 on 4',
      'audit spectrum ising ~ ising on 4, 6 levels 3',
    ].join('\n');
    const derivation = newDerivation();
    const { claims } = derivation.derive(source);
    const of = (audit: string) => claims.filter((one) => one.audit === audit);
    expect(data.groundsOf(of('degeneracy')).map(({ size }) => size)).toEqual(['4', '6']);
    expect(data.spectraOf(of('spectrum')).map(({ names }) => names)).toEqual([
      ['ising', 'ising'],
      ['ising', 'ising'],
    ]);
    const scans = data.scansOf(of('scan'));
    expect(scans.map(({ moving }) => moving)).toEqual([['h'], ['h'], ['h', 'J']]);
    for (const { points } of scans.slice(0, 2)) {
      const at = points.map((point) => point.at[0] ?? 0);
      expect(at).toEqual([...at].sort((a, b) => a - b));
    }
    const grid = scans[2] && gridOf(scans[2]);
    expect([grid?.xs, grid?.ys]).toEqual([
      [0, 0.5, 1],
      [0.5, 0.75, 1],
    ]);
    expect(grid?.values.flat().every((value) => value !== null)).toBe(true);
  });

  it('name both sides with their sectors, and keep all digits in the CSV', () => {
    const spectra = data.spectraOf([claim('spectrum', { size: '2 x 2', left: [0.1 + 0.2, 1], right: [0.3] })]);
    expect(spectra[0]?.names).toEqual(['a [p = +1]', 'b [w = +1]']);
    expect(data.csvOf(data.spectraTable(spectra)).split('\r\n')).toEqual([
      'size,level,a [p = +1],b [w = +1]',
      '2 x 2,1,0.30000000000000004,0.3',
      '2 x 2,2,1,',
      '',
    ]);
    expect(data.spectraOf([claim('spectrum', { size: '2 x 2' })])).toEqual([]);
  });

  it('gather equal levels without losing any', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: -4, max: 4 }), { minLength: 1 }), (levels) => {
        const sorted = [...levels].sort((a, b) => a - b);
        const all = data.multipletsOf(sorted);
        expect(all.flatMap(({ energy, count }) => Array.from({ length: count }, () => energy))).toEqual(sorted);
        expect(new Set(all.map(({ energy }) => energy)).size).toBe(all.length);
      }),
      { seed: 7 },
    );
  });

  it('draw the contour where a linear value takes its level, and none elsewhere', () => {
    const axis = [0, 1, 2, 3, 4];
    fc.assert(
      fc.property(
        fc.integer({ min: -3, max: 3 }),
        fc.integer({ min: -3, max: 3 }),
        fc.double({ min: -12, max: 12, noNaN: true }),
        (a, b, level) => {
          const grid = { xs: axis, ys: axis, values: axis.map((y) => axis.map((x) => a * x + b * y)) };
          const segments = contour(grid, level);
          for (const [x, y] of segments.flat()) expect(a * x + b * y).toBeCloseTo(level, 8);
          const values = grid.values.flat();
          const crossed = values.some((v) => v >= level) && values.some((v) => v < level);
          expect(segments.length > 0).toBe(crossed);
        },
      ),
      { seed: 11 },
    );
  });

  it('find where a value changes fastest, whatever the units of the couplings', () => {
    const points = (unit: number) =>
      [0, 1, 2, 3, 4].flatMap((x) => [0, 1, 2].map((y) => ({ at: [x * unit, y], value: x > 2 ? 5 : 0 })));
    for (const unit of [1, 1000]) {
      const scan = { size: '4', quantity: 'gap', moving: ['h', 'J'], points: points(unit) };
      expect(largestOf(steepness(gridOf(scan)))).toMatchObject({ x: 2 * unit, value: 10 });
    }
    const unknown = { size: '4', quantity: 'gap', moving: ['h', 'J'], points: [{ at: [0, 0], value: null }] };
    expect(largestOf(steepness(gridOf(unknown)))).toBeNull();
  });

  it('move labels apart in their order', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 0, max: 100 })), (wanted) => {
        const placed = [...spaced(wanted, 12)].sort((a, b) => a - b);
        placed.slice(1).forEach((at, k) => expect(at - (placed[k] ?? 0)).toBeGreaterThanOrEqual(12));
        expect(placed.length).toBe(wanted.length);
      }),
      { seed: 3 },
    );
  });
});
