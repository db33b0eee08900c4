import { describe, expect, it } from 'vitest';
import { builtInFamilies, builtInFamily } from '../../shared/lattice/built-in.ts';
import { drawnOf, frameOf, pointsIn, windowAbout, wraps } from '../../src/features/plate/frame.ts';
import { classOf, plateSides, supportInWords, type Support } from '../../src/features/plate/supports.ts';
import { emptyHand, take } from '../../src/hand/hand.ts';
import { slicesOf } from '../../src/reading/slices.ts';
import { placed } from '../../src/reading/useReading.ts';
import { example } from '../../src/routes/example.ts';
import { reportOf } from './fixture.ts';

const square = builtInFamily('square');
if (!square) throw new Error('no square lattice');
const source = placed(example);
const report = reportOf(source.text);
const slices = slicesOf(report, source.entries, []);
const lattice = report.lattice;
if (!lattice) throw new Error('no lattice');

describe('the plate', () => {
  it.each([...builtInFamilies.keys()])('draws the %s lattice, every cell of a class inside its frame', (name) => {
    const family = builtInFamily(name);
    if (!family) throw new Error(name);
    const window = windowAbout(family, []);
    const { box, links } = frameOf(family, window);
    expect(links.filter((link) => !link.outside).length).toBeGreaterThan(5);
    expect(links.some((link) => link.outside)).toBe(true);
    for (const kind of ['vertices', 'links', 'plaquettes'] as const)
      family[kind].forEach((_, index) => {
        for (const { x, y } of pointsIn(family, window, kind, index)) {
          expect(x).toBeGreaterThan(box.x);
          expect(x).toBeLessThan(box.x + box.width);
          expect(y).toBeGreaterThan(box.y);
          expect(y).toBeLessThan(box.y + box.height);
        }
      });
  });

  it('shows the term in hand and its image, and says the same in words', () => {
    const hand = take(emptyHand, { left: 'ising/1', right: 'gauge/1' }, 'focus');
    const { left, right } = plateSides(square, lattice, slices, hand);
    expect(supportInWords(square, left.answered?.supports ?? [])).toBe('X of s at vertex (0, 0)');
    expect(right.answered?.supports[0]?.sites).toHaveLength(4);
    const window = windowAbout(square, right.answered?.supports ?? []);
    expect(drawnOf(square, window, right.answered?.supports ?? [])).toHaveLength(4);
  });

  it('lays the bar of X across its link', () => {
    const on = (index: number): Support => ({
      sites: [{ species: 'g', kind: 'links', index, offset: [0, 0], pauli: 'x' }],
      repeats: [],
    });
    const window = windowAbout(square, []);
    const turns = [0, 1].map((index) => drawnOf(square, window, [on(index)])[0]?.turn);
    expect(turns.map((turn) => Math.abs((turn ?? NaN) % 180))).toEqual([90, 0]);
  });

  it('repeats a product along its directions only', () => {
    const loop: Support = {
      sites: [{ species: 'g', kind: 'links', index: 0, offset: [0, 0], pauli: 'z' }],
      repeats: [1, 0],
    };
    const window = windowAbout(square, [loop]);
    const drawn = drawnOf(square, window, [loop]);
    expect(new Set(drawn.map((one) => one.at.y)).size).toBe(1);
    expect(drawn.length).toBe((window[0]?.[1] ?? 0) - (window[0]?.[0] ?? 0) + 1);
  });

  it('knows the classes of cells by their labels, and says when a support wraps onto itself', () => {
    expect(classOf(square, 'links.2')).toEqual({ kind: 'links', index: 1 });
    expect(classOf(square, 'vertices')).toEqual({ kind: 'vertices', index: 0 });
    expect(classOf(square, 'links.9')).toBeUndefined();
    const far: Support = {
      sites: [0, 4].map((x) => ({ species: 's', kind: 'vertices', index: 0, offset: [x, 0], pauli: 'z' })),
      repeats: [],
    };
    expect(wraps(lattice, [far])).toBe(true);
    expect(wraps({ ...lattice, boundary: 'open' }, [far])).toBe(false);
  });
});
