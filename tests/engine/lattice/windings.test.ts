import fc from 'fast-check';
import { expect, it } from 'vitest';
import { isLatticeProblem } from '../../../shared/lattice/cells.ts';
import type { LatticeFamily } from '../../../shared/lattice/cells.ts';
import { cutLinks, loopLinks } from '../../../shared/lattice/windings.ts';
import { box, family } from './families.ts';

/** Random lattices in two dimensions with three vertices a unit cell, no plaquettes. */
const places = ['A', 'B', 'C'];
const end = fc.record({
  label: fc.constantFrom(...places),
  offset: fc.tuple(fc.integer({ min: -2, max: 2 }), fc.integer({ min: -2, max: 2 })),
});
const links = fc
  .array(fc.record({ a: end, b: end }), { minLength: 3, maxLength: 9 })
  .map((list) => list.filter(({ a, b }) => a.label !== b.label || a.offset.join() !== b.offset.join()));
const lattice = links.map((list) =>
  family(
    {
      vectors: [
        [1, 0],
        [0, 1],
      ],
      vertices: places.map((label, k) => ({ label, position: [k / 3, k / 5] })),
      links: list,
      plaquettes: [],
    },
    'random',
  ),
);

/** Classes joined by links to a class. */
function joined(of: LatticeFamily, start: number): Set<number> {
  const found = new Set([start]);
  for (let before = 0; before < found.size;) {
    before = found.size;
    for (const { a, b } of of.links) if (found.has(a.index) || found.has(b.index)) found.add(a.index).add(b.index);
  }
  return found;
}

/** Fewest crossings for each unit cell over all thresholds within a window: the definition, tried out. */
function fewest(of: LatticeFamily, d: number, inside: ReadonlySet<number>): number {
  const part = of.links.filter((l) => inside.has(l.a.index));
  const crossings = (c: readonly number[]) =>
    part.reduce((sum, { a, b }) => sum + Math.abs(b.offset[d]! - c[b.index]! - a.offset[d]! + c[a.index]!), 0);
  // Shifting all thresholds changes nothing, and neighbours differ by at most the reach of a link (4): 8 over three vertices.
  return Math.min(...box(2, -8, 8).map((c) => crossings([0, ...c])));
}

it('cuts are minimal, loops close, and they meet an odd number of times, on random lattices', () => {
  let decided = 0;
  fc.assert(
    fc.property(lattice, fc.constantFrom(1, 2), (of, direction) => {
      const loop = loopLinks(of, direction);
      const cut = cutLinks(of, direction);
      if (isLatticeProblem(loop) || isLatticeProblem(cut)) {
        expect(isLatticeProblem(loop) && isLatticeProblem(cut)).toBe(true);
        return;
      }
      decided++;
      const d = direction - 1;
      const inside = joined(of, of.links[loop[0]!.cell.index]!.a.index);
      expect(cut).toHaveLength(fewest(of, d, inside));

      // Closed: on the infinite lattice modulo translations along d every vertex is an end an even number of times.
      const ends = new Map<string, number>();
      for (const { cell } of loop)
        for (const v of [of.links[cell.index]!.a, of.links[cell.index]!.b]) {
          const key = `${String(v.index)}@${String(v.offset[1 - d]! + cell.offset[1 - d]!)}`;
          ends.set(key, (ends.get(key) ?? 0) + 1);
        }
      for (const count of ends.values()) expect(count % 2).toBe(0);

      // The translates of the loop's links along d meet the cut wherever class and height agree.
      const meetings = loop.reduce((sum, l) => sum + cut.filter((c) => c.cell.index === l.cell.index).length, 0);
      expect(meetings % 2).toBe(1);
    }),
    { seed: 7, numRuns: 400 },
  );
  expect(decided).toBeGreaterThan(100);
});
