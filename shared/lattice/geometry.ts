/** The geometry functions of the operator language: ONE table, read by checker, evaluator, help and tests. */
import { shifted } from './cells.ts';
import type { Cell, CellKind, LatticeFamily, LatticeProblem } from './cells.ts';
import { around, boundary, incidence } from './incidence.ts';
import { nearestPairs } from './pairs.ts';
import type { PairClass } from './pairs.ts';
import { coloopLinks, loopLinks, membraneLinks } from './windings.ts';
import type { SteppedCell } from './windings.ts';

interface Entry {
  readonly name: string;
  /** True if an open boundary cuts the set; false if a missing cell drops the whole term. */
  readonly optional: boolean;
  /** Dimensions in which it has a meaning. */
  readonly dimensions: readonly number[];
  readonly help: string;
  readonly example: string;
}

/** From one cell to the cells near it, on the infinite lattice, with multiplicity. */
export interface AroundFunction extends Entry {
  readonly form: 'around';
  readonly takes: readonly CellKind[];
  readonly gives: CellKind;
  cells(family: LatticeFamily, cell: Cell): readonly Cell[];
}

/** From a direction (from 1) to a set of links that runs around the lattice. */
export interface WindingFunction extends Entry {
  readonly form: 'winding';
  readonly takes: 'direction';
  readonly gives: CellKind;
  cells(family: LatticeFamily, direction: number): readonly SteppedCell[] | LatticeProblem;
}

/** From k (from 1) to classes of vertex pairs; like links they have ends `.a` and `.b`. */
export interface PairFunction extends Entry {
  readonly form: 'pairs';
  readonly takes: 'integer';
  readonly gives: 'pairs';
  pairs(family: LatticeFamily, k: number): readonly PairClass[] | LatticeProblem;
}

export type GeometryFunction = AroundFunction | WindingFunction | PairFunction;

const any = [1, 2, 3] as const;

/** Corners of a plaquette in order; of a cube: each of its vertices once. */
function cornersOf(family: LatticeFamily, cell: Cell): Cell[] {
  if (cell.kind === 'plaquettes')
    return around(
      family.plaquettes.map((p) => p.corners),
      cell,
    );
  const all = boundary(family, cell).flatMap((face) => cornersOf(family, face));
  return [...new Map(all.map((v) => [`${String(v.index)}@${v.offset.join(',')}`, v])).values()];
}

export const geometryTable: readonly GeometryFunction[] = [
  {
    name: 'star',
    form: 'around',
    takes: ['vertices'],
    gives: 'links',
    optional: true,
    dimensions: any,
    help: 'The links at a vertex; those that begin there first.',
    example: 'law G(v: vertices) = prod(l: star(v)) g^x[l]',
    cells: (family, cell) => around(incidence(family).star, cell),
  },
  {
    name: 'out',
    form: 'around',
    takes: ['vertices'],
    gives: 'links',
    optional: true,
    dimensions: any,
    help: 'The links that begin at a vertex (a link runs from a to b).',
    example: 'sum(l: out(v)) g^z[l]',
    cells: (family, cell) => around(incidence(family).out, cell),
  },
  {
    name: 'into',
    form: 'around',
    takes: ['vertices'],
    gives: 'links',
    optional: true,
    dimensions: any,
    help: 'The links that end at a vertex (a link runs from a to b).',
    example: 'sum(l: into(v)) g^z[l]',
    cells: (family, cell) => around(incidence(family).into, cell),
  },
  {
    name: 'neighbours',
    form: 'around',
    takes: ['vertices'],
    gives: 'vertices',
    optional: true,
    dimensions: any,
    help: 'The vertices at the other ends of the links at a vertex, once for each link.',
    example: 'prod(u: neighbours(v)) s^z[u]',
    cells: (family, cell) => around(incidence(family).neighbours, cell),
  },
  {
    name: 'ends',
    form: 'around',
    takes: ['links'],
    gives: 'vertices',
    optional: false,
    dimensions: any,
    help: 'The two ends of a link: l.a, then l.b.',
    example: 'prod(v: ends(l)) s^z[v]',
    cells: (family, cell) => boundary(family, cell),
  },
  {
    name: 'sides',
    form: 'around',
    takes: ['links'],
    gives: 'plaquettes',
    optional: true,
    dimensions: [2, 3],
    help: 'The plaquettes whose rim a link belongs to.',
    example: 'prod(p: sides(l)) m^z[p]',
    cells: (family, cell) => around(incidence(family).sides, cell),
  },
  {
    name: 'rim',
    form: 'around',
    takes: ['plaquettes'],
    gives: 'links',
    optional: true,
    dimensions: any,
    help: 'The links around a plaquette, in order: the k-th joins corner k and corner k + 1.',
    example: 'law B(p: plaquettes) = prod(l: rim(p)) g^z[l]',
    cells: (family, cell) => boundary(family, cell),
  },
  {
    name: 'corners',
    form: 'around',
    takes: ['plaquettes', 'cubes'],
    gives: 'vertices',
    optional: false,
    dimensions: any,
    help: 'The vertices of a plaquette in order around it, or those of a cube.',
    example: 'prod(v: corners(p)) s^z[v]',
    cells: cornersOf,
  },
  {
    name: 'faces',
    form: 'around',
    takes: ['cubes'],
    gives: 'plaquettes',
    optional: false,
    dimensions: [3],
    help: 'The plaquettes that bound a cube.',
    example: 'prod(p: faces(c)) m^x[p]',
    cells: (family, cell) => boundary(family, cell),
  },
  {
    name: 'edges',
    form: 'around',
    takes: ['cubes'],
    gives: 'links',
    optional: false,
    dimensions: [3],
    help: 'The links of a cube, each once.',
    example: 'prod(l: edges(c)) g^x[l]',
    cells: (family, cell) =>
      around(
        family.cubes.map((c) => c.edges),
        cell,
      ),
  },
  {
    name: 'loop',
    form: 'winding',
    takes: 'direction',
    gives: 'links',
    optional: true,
    dimensions: any,
    help: 'The links of one cycle around direction d, through the origin.',
    example: 'symmetry w1 = prod(l: loop(1)) g^z[l]',
    cells: loopLinks,
  },
  {
    name: 'coloop',
    form: 'winding',
    takes: 'direction',
    gives: 'links',
    optional: true,
    dimensions: [2],
    help: 'The links that a cycle of the dual lattice around direction d crosses (two dimensions).',
    example: 'symmetry t1 = prod(l: coloop(1)) g^x[l]',
    cells: coloopLinks,
  },
  {
    name: 'membrane',
    form: 'winding',
    takes: 'direction',
    gives: 'links',
    optional: true,
    dimensions: [3],
    help: 'The links along direction d that pierce one plane of the dual lattice (three dimensions).',
    example: 'symmetry m3 = prod(l: membrane(3)) g^x[l]',
    cells: membraneLinks,
  },
  {
    name: 'pairs',
    form: 'pairs',
    takes: 'integer',
    gives: 'pairs',
    optional: false,
    dimensions: any,
    help: 'The k-th-nearest pairs of vertices, unordered, with ends .a and .b.',
    example: 'sum(t: pairs(2)) s^z[t.a] s^z[t.b]',
    pairs: nearestPairs,
  },
];

const byName: ReadonlyMap<string, GeometryFunction> = new Map(geometryTable.map((f) => [f.name, f]));

/** The geometry function of a name, or undefined. */
export const geometryFunction = (name: string): GeometryFunction | undefined => byName.get(name);

/** Names of the coordinates of a cell's unit cell, by direction. */
export const coordinateNames = ['x', 'y', 'z'] as const;

/** `c.x`, `c.y`, `c.z`: the cell's unit cell along a direction; undefined where the lattice has no such direction. */
export const coordinate = (cell: Cell, name: string): number | undefined =>
  cell.offset[(coordinateNames as readonly string[]).indexOf(name)];

/** `l.a`, `l.b`: an end of a link. */
export function linkEnd(family: LatticeFamily, link: Cell, end: 'a' | 'b'): Cell {
  const found = family.links[link.index];
  if (!found || link.kind !== 'links') throw new Error(`linkEnd: no link ${String(link.index)} in ${family.name}`);
  return shifted(found[end], link.offset);
}

/** `t.k`: the k-th link (from 1) of a plaquette's rim; undefined past its end. */
export function rimEntry(family: LatticeFamily, plaquette: Cell, k: number): Cell | undefined {
  const link = family.plaquettes[plaquette.index]?.rim[k - 1];
  return link && shifted(link, plaquette.offset);
}
