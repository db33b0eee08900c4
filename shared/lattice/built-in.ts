/** The lattices known by name: one row each, from which parser, help and tests read. */
import type { LatticeFamily } from './cells.ts';
import { buildFamily } from './family.ts';
import type { FamilyData, NamedCell } from './family.ts';

export interface BuiltInRow extends FamilyData {
  readonly help: string;
  readonly example: string;
}

const at = (label: string, ...offset: number[]): NamedCell => ({ label, offset: offset });
const half = Math.sqrt(3) / 2;
const oblique = [
  [1, 0],
  [0.5, half],
] as const;
const third = [0.5, half / 3] as const;

/**
 * The table of section 3 of the design. Links run along straight lines in one direction; corners go counterclockwise,
 * seen against the normal in three dimensions.
 */
export const builtInRows: readonly BuiltInRow[] = [
  {
    name: 'chain',
    vectors: [[1]],
    vertices: [{ labels: ['A'], position: [0] }],
    links: [{ labels: ['1'], a: at('A', 0), b: at('A', 1) }],
    plaquettes: [],
    cubes: [],
    help: 'One vertex and one link a unit cell, in a row.',
    example: 'lattice chain torus 8',
  },
  {
    name: 'square',
    vectors: [
      [1, 0],
      [0, 1],
    ],
    vertices: [{ labels: ['A'], position: [0, 0] }],
    links: [
      { labels: ['1'], a: at('A', 0, 0), b: at('A', 1, 0) },
      { labels: ['2'], a: at('A', 0, 0), b: at('A', 0, 1) },
    ],
    plaquettes: [{ labels: ['square'], corners: [at('A', 0, 0), at('A', 1, 0), at('A', 1, 1), at('A', 0, 1)] }],
    cubes: [],
    help: 'One vertex, two links and one plaquette a unit cell; four links meet at a vertex.',
    example: 'lattice square torus 4 x 4',
  },
  {
    name: 'triangular',
    vectors: oblique,
    vertices: [{ labels: ['A'], position: [0, 0] }],
    links: [
      { labels: ['1'], a: at('A', 0, 0), b: at('A', 1, 0) },
      { labels: ['2'], a: at('A', 0, 0), b: at('A', 0, 1) },
      { labels: ['3'], a: at('A', 0, 0), b: at('A', -1, 1) },
    ],
    plaquettes: [
      { labels: ['up', 'triangle'], corners: [at('A', 0, 0), at('A', 1, 0), at('A', 0, 1)] },
      { labels: ['down', 'triangle'], corners: [at('A', 1, 0), at('A', 1, 1), at('A', 0, 1)] },
    ],
    cubes: [],
    help: 'One vertex, three links and two triangles (up, down) a unit cell; six links meet at a vertex.',
    example: 'lattice triangular torus 3 x 3',
  },
  {
    name: 'honeycomb',
    vectors: oblique,
    vertices: [
      { labels: ['A'], position: [0, 0] },
      { labels: ['B'], position: third },
    ],
    links: [
      { labels: ['1'], a: at('A', 1, 0), b: at('B', 0, 0) },
      { labels: ['2'], a: at('A', 0, 1), b: at('B', 0, 0) },
      { labels: ['3'], a: at('A', 0, 0), b: at('B', 0, 0) },
    ],
    plaquettes: [
      {
        labels: ['hexagon'],
        corners: [at('B', 0, 0), at('A', 1, 0), at('B', 1, 0), at('A', 1, 1), at('B', 0, 1), at('A', 0, 1)],
      },
    ],
    cubes: [],
    help: 'Two vertices (A, B), three links from A to B and one hexagon a unit cell; three links meet at a vertex.',
    example: 'lattice honeycomb torus 3 x 3',
  },
  {
    name: 'kagome',
    vectors: oblique,
    vertices: [
      { labels: ['A'], position: [0, 0] },
      { labels: ['B'], position: [0.5, 0] },
      { labels: ['C'], position: [0.25, half / 2] },
    ],
    links: [
      { labels: ['1'], a: at('A', 0, 0), b: at('B', 0, 0) },
      { labels: ['2'], a: at('A', 0, 0), b: at('C', 0, 0) },
      { labels: ['3'], a: at('B', 0, 0), b: at('C', 0, 0) },
      { labels: ['1'], a: at('B', 0, 0), b: at('A', 1, 0) },
      { labels: ['2'], a: at('C', 0, 0), b: at('A', 0, 1) },
      { labels: ['3'], a: at('C', 0, 0), b: at('B', -1, 1) },
    ],
    plaquettes: [
      { labels: ['up', 'triangle'], corners: [at('A', 0, 0), at('B', 0, 0), at('C', 0, 0)] },
      { labels: ['down', 'triangle'], corners: [at('B', 0, 0), at('A', 1, 0), at('C', 1, -1)] },
      {
        labels: ['hexagon'],
        corners: [at('B', 0, 0), at('A', 1, 0), at('C', 1, 0), at('B', 0, 1), at('A', 0, 1), at('C', 0, 0)],
      },
    ],
    cubes: [],
    help: 'Three vertices (A, B, C), the six sides of two triangles (up, down) and one hexagon a unit cell; four links meet at a vertex.',
    example: 'lattice kagome torus 2 x 2',
  },
  {
    name: 'cubic',
    vectors: [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ],
    vertices: [{ labels: ['A'], position: [0, 0, 0] }],
    links: [
      { labels: ['1'], a: at('A', 0, 0, 0), b: at('A', 1, 0, 0) },
      { labels: ['2'], a: at('A', 0, 0, 0), b: at('A', 0, 1, 0) },
      { labels: ['3'], a: at('A', 0, 0, 0), b: at('A', 0, 0, 1) },
    ],
    plaquettes: [
      { labels: ['1'], corners: [at('A', 0, 0, 0), at('A', 0, 1, 0), at('A', 0, 1, 1), at('A', 0, 0, 1)] },
      { labels: ['2'], corners: [at('A', 0, 0, 0), at('A', 0, 0, 1), at('A', 1, 0, 1), at('A', 1, 0, 0)] },
      { labels: ['3'], corners: [at('A', 0, 0, 0), at('A', 1, 0, 0), at('A', 1, 1, 0), at('A', 0, 1, 0)] },
    ],
    cubes: [
      {
        labels: ['cube'],
        faces: [
          at('1', 0, 0, 0),
          at('1', 1, 0, 0),
          at('2', 0, 0, 0),
          at('2', 0, 1, 0),
          at('3', 0, 0, 0),
          at('3', 0, 0, 1),
        ],
      },
    ],
    help: 'One vertex, three links, three plaquettes (named by their normal) and one cube a unit cell.',
    example: 'lattice cubic torus 2 x 2 x 2',
  },
];

/** The families of the table, by name. */
export const builtInFamilies: ReadonlyMap<string, LatticeFamily> = new Map(
  builtInRows.map((row) => {
    const family = buildFamily(row);
    if (!('name' in family)) throw new Error(`lattice table, ${row.name}: ${family.map((p) => p.message).join('; ')}`);
    return [row.name, family];
  }),
);

/** The family of a name in the table, or undefined. */
export const builtInFamily = (name: string): LatticeFamily | undefined => builtInFamilies.get(name);
