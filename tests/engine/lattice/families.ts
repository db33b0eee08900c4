/** The families that the lattice tests walk: the table, and declared ones of one, two and three dimensions. */
import { builtInFamilies } from '../../../shared/lattice/built-in.ts';
import type { LatticeFamily } from '../../../shared/lattice/cells.ts';
import { customFamily, isFamily } from '../../../shared/lattice/custom.ts';
import type { CustomLattice } from '../../../shared/lattice/custom.ts';

const at = (label: string, ...offset: number[]) => ({ label, offset });

/** Two rails and a rung, drawn in the plane: one direction, plaquettes. */
export const ladder: CustomLattice = {
  vectors: [[1, 0]],
  vertices: [
    { label: 'L', position: [0, 0] },
    { label: 'U', position: [0, 1] },
  ],
  links: [
    { a: at('L'), b: at('L', 1) },
    { a: at('U'), b: at('U', 1) },
    { label: 'rung', a: at('L'), b: at('U') },
  ],
  plaquettes: [{ label: 'square', corners: [at('L'), at('L', 1), at('U', 1), at('U')] }],
};

/** The square lattice with a vertex on every link: all links short, plaquettes with eight corners. */
export const lieb: CustomLattice = {
  vectors: [
    [1, 0],
    [0, 1],
  ],
  vertices: [
    { label: 'X', position: [0.5, 0] },
    { label: 'A', position: [0, 0] },
    { label: 'Y', position: [0, 0.5] },
  ],
  links: [
    { a: at('A'), b: at('X') },
    { a: at('X'), b: at('A', 1, 0) },
    { a: at('A'), b: at('Y') },
    { a: at('Y'), b: at('A', 0, 1) },
  ],
  plaquettes: [
    {
      label: 'square',
      corners: [at('A'), at('X'), at('A', 1, 0), at('Y', 1, 0), at('A', 1, 1), at('X', 0, 1), at('A', 0, 1), at('Y')],
    },
  ],
};

/** A cubic lattice whose cell is doubled along direction 1: three dimensions, two vertices a unit cell, cubes by faces. */
export const doubled: CustomLattice = {
  vectors: [
    [2, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
  vertices: [
    { label: 'P', position: [0, 0, 0] },
    { label: 'Q', position: [1, 0, 0] },
  ],
  links: [
    { a: at('P'), b: at('Q') },
    { a: at('Q'), b: at('P', 1, 0, 0) },
    { a: at('P'), b: at('P', 0, 1, 0) },
    { a: at('Q'), b: at('Q', 0, 1, 0) },
    { a: at('P'), b: at('P', 0, 0, 1) },
    { a: at('Q'), b: at('Q', 0, 0, 1) },
  ],
  plaquettes: [
    { label: 'p1', corners: [at('P'), at('P', 0, 1, 0), at('P', 0, 1, 1), at('P', 0, 0, 1)] },
    { label: 'q1', corners: [at('Q'), at('Q', 0, 1, 0), at('Q', 0, 1, 1), at('Q', 0, 0, 1)] },
    { label: 'p2', corners: [at('P'), at('Q'), at('Q', 0, 0, 1), at('P', 0, 0, 1)] },
    { label: 'q2', corners: [at('Q'), at('P', 1, 0, 0), at('P', 1, 0, 1), at('Q', 0, 0, 1)] },
    { label: 'p3', corners: [at('P'), at('Q'), at('Q', 0, 1, 0), at('P', 0, 1, 0)] },
    { label: 'q3', corners: [at('Q'), at('P', 1, 0, 0), at('P', 1, 1, 0), at('Q', 0, 1, 0)] },
  ],
  cubes: [
    { label: 'left', faces: [at('p1'), at('q1'), at('p2'), at('p2', 0, 1, 0), at('p3'), at('p3', 0, 0, 1)] },
    { label: 'right', faces: [at('q1'), at('p1', 1, 0, 0), at('q2'), at('q2', 0, 1, 0), at('q3'), at('q3', 0, 0, 1)] },
  ],
};

export function family(data: CustomLattice, name: string): LatticeFamily {
  const made = customFamily(data, name);
  if (!isFamily(made)) throw new Error(made.map((p) => p.message).join('; '));
  return made;
}

export const builtIn = (name: string): LatticeFamily => {
  const found = builtInFamilies.get(name);
  if (!found) throw new Error(`no lattice ${name}`);
  return found;
};

export const families: readonly LatticeFamily[] = [
  ...builtInFamilies.values(),
  family(ladder, 'ladder'),
  family(lieb, 'lieb'),
  family(doubled, 'doubled'),
];

/** Every combination of entries from low to high. */
export const box = (dimension: number, low: number, high: number): number[][] =>
  Array.from({ length: dimension }).reduce<number[][]>(
    (all) => all.flatMap((o) => Array.from({ length: high - low + 1 }, (_, k) => [...o, low + k])),
    [[]],
  );
