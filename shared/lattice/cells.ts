/** Cells of a lattice and the records that describe a lattice family. Everything here speaks of the infinite lattice. */

export type CellKind = 'vertices' | 'links' | 'plaquettes' | 'cubes';
export const cellKinds: readonly CellKind[] = ['vertices', 'links', 'plaquettes', 'cubes'];

/** Unit cells along each lattice direction; length = dimension (1 to 3). */
export type Offset = readonly number[];

/** One cell of the infinite lattice: `index` numbers its class within the kind, from 0. */
export interface Cell {
  readonly kind: CellKind;
  readonly index: number;
  readonly offset: Offset;
}

/** One cell of each kind for each unit cell. `labels` are the words after the dot: `plaquettes.hexagon`, `links.1`. */
export interface CellClass {
  readonly labels: readonly string[];
  /** Centre, in Cartesian coordinates, of the class's cell in unit cell 0 (length = drawing dimension, 1 to 3). */
  readonly position: readonly number[];
}

export interface VertexClass extends CellClass {
  readonly kind: 'vertices';
}
export interface LinkClass extends CellClass {
  readonly kind: 'links';
  /** A link runs from a to b; that is its direction. */
  readonly a: Cell;
  readonly b: Cell;
}
export interface PlaquetteClass extends CellClass {
  readonly kind: 'plaquettes';
  /** Vertices in order around it. */
  readonly corners: readonly Cell[];
  /** Links in order: rim[k] joins corner k and corner k + 1. */
  readonly rim: readonly Cell[];
}
export interface CubeClass extends CellClass {
  readonly kind: 'cubes';
  readonly faces: readonly Cell[];
  readonly edges: readonly Cell[];
}

/** What is the same at every size and boundary of a lattice. */
export interface LatticeFamily {
  readonly name: string;
  readonly dimension: number;
  /** Primitive vectors, Cartesian (dimension rows). */
  readonly vectors: readonly (readonly number[])[];
  readonly vertices: readonly VertexClass[];
  readonly links: readonly LinkClass[];
  readonly plaquettes: readonly PlaquetteClass[];
  readonly cubes: readonly CubeClass[];
}

/**
 * A size: rows are the periods in unit cells (dimension × dimension integers); diagonal for a straight lattice.
 * Along an open direction d the row is diagonal and cells have coordinates 0 … L−1.
 */
export interface Size {
  readonly periods: readonly (readonly number[])[];
}

/** A declared lattice: its family, which directions are periodic, and the declared size. */
export interface Lattice {
  readonly family: LatticeFamily;
  readonly boundary: 'torus' | 'cylinder' | 'open';
  /** periodic[d] for each direction. */
  readonly periodic: readonly boolean[];
  readonly size: Size;
}

export const shifted = (cell: Cell, by: Offset): Cell => ({
  ...cell,
  offset: cell.offset.map((c, d) => c + (by[d] ?? 0)),
});

/** Key of a cell, unique on the infinite lattice. */
export const cellKey = (cell: Cell): string => `${cell.kind[0] ?? ''}${String(cell.index)}@${cell.offset.join(',')}`;

export const sameCell = (a: Cell, b: Cell): boolean =>
  a.kind === b.kind && a.index === b.index && a.offset.every((c, d) => c === b.offset[d]);

/** The zero offset of a lattice of `dimension` directions. */
export const origin = (dimension: number): Offset => new Array<number>(dimension).fill(0);

/** The offset of one unit cell along `direction` (from 0). */
export const unit = (dimension: number, direction: number): Offset =>
  Array.from({ length: dimension }, (_, d) => (d === direction ? 1 : 0));

/** Why a lattice, a size or a geometry function has no meaning, with what to do; `which` names the culprit in words. */
export interface LatticeProblem {
  readonly problem: 'vectors' | 'vertex' | 'link' | 'plaquette' | 'cube' | 'size' | 'limit' | 'direction' | 'dimension';
  readonly message: string;
  readonly which: string;
  /** The declaration at fault: its part and its place in that part, from 0. Only for declared lattices. */
  readonly part?: 'vectors' | 'vertices' | 'links' | 'plaquettes' | 'cubes';
  readonly index?: number;
}

export const isLatticeProblem = (value: unknown): value is LatticeProblem =>
  typeof value === 'object' && value !== null && 'problem' in value && 'message' in value && 'which' in value;

/** The classes of one kind. */
export const classesOf = (family: LatticeFamily, kind: CellKind): readonly CellClass[] => family[kind];

/** Indices of the classes that carry a label (`plaquettes.hexagon`); empty if none does. */
export const classesLabelled = (family: LatticeFamily, kind: CellKind, label: string): readonly number[] =>
  family[kind].flatMap((c, index) => (c.labels.includes(label) ? [index] : []));

/** All labels of one kind, in order of first use. */
export const labelsOf = (family: LatticeFamily, kind: CellKind): readonly string[] => [
  ...new Set(family[kind].flatMap((c) => c.labels)),
];

/** The shortest label that tells a class from the others of its kind; its number where none does; empty for a single class. */
export function classLabel(family: LatticeFamily, kind: CellKind, index: number): string {
  const classes = family[kind];
  if (classes.length <= 1) return '';
  const own = classes[index]?.labels.find((label) => classes.filter((c) => c.labels.includes(label)).length === 1);
  return own ?? String(index + 1);
}

/** "links.1", or the bare kind where it has one class. */
export function cellWord(family: LatticeFamily, { kind, index }: Pick<Cell, 'kind' | 'index'>): string {
  const label = classLabel(family, kind, index);
  return label === '' ? kind : `${kind}.${label}`;
}
