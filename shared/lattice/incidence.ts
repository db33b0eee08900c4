/** The chain complex of a family, over F2: what bounds a cell and what it bounds, as lists that are the same in every unit cell. */
import { cellKinds, shifted } from './cells.ts';
import type { Cell, CellKind, LatticeFamily, Offset } from './cells.ts';

/** Cells near the class's cell in unit cell 0, with multiplicity; one list for each class of the kind in the comment. */
type Lists = readonly (readonly Cell[])[];

export interface Incidence {
  /** For each vertex class: links that end there (once for each end). */
  readonly star: Lists;
  /** For each vertex class: links that begin there; links that end there. */
  readonly out: Lists;
  readonly into: Lists;
  /** For each vertex class: the other ends of its star, in the same order. */
  readonly neighbours: Lists;
  /** For each vertex class: plaquettes with a corner there. */
  readonly plaquettesAtVertex: Lists;
  /** For each link class: plaquettes whose rim it belongs to. */
  readonly sides: Lists;
  /** For each plaquette class: cubes of which it is a face. */
  readonly cubesAtPlaquette: Lists;
}

const minus = (offset: Offset): Offset => offset.map((c) => 0 - c);

/** For each of `targets` classes, the cells of `kind` that list it: the transpose of the given lists. */
export function transpose(kind: CellKind, targets: number, lists: Lists): Lists {
  const found: Cell[][] = Array.from({ length: targets }, () => []);
  lists.forEach((cells, index) => {
    for (const cell of cells) found[cell.index]!.push({ kind, index, offset: minus(cell.offset) });
  });
  return found;
}

const known = new WeakMap<LatticeFamily, Incidence>();

/** The incidence lists of a family; worked out once. */
export function incidence(family: LatticeFamily): Incidence {
  const before = known.get(family);
  if (before) return before;
  const places = family.vertices.length;
  const out = transpose(
    'links',
    places,
    family.links.map((l) => [l.a]),
  );
  const into = transpose(
    'links',
    places,
    family.links.map((l) => [l.b]),
  );
  const ends = out.map((begin, v) => [
    ...begin.map((l) => ({ link: l, far: shifted(family.links[l.index]!.b, l.offset) })),
    ...into[v]!.map((l) => ({ link: l, far: shifted(family.links[l.index]!.a, l.offset) })),
  ]);
  const made: Incidence = {
    star: ends.map((list) => list.map((e) => e.link)),
    out,
    into,
    neighbours: ends.map((list) => list.map((e) => e.far)),
    plaquettesAtVertex: transpose(
      'plaquettes',
      places,
      family.plaquettes.map((p) => p.corners),
    ),
    sides: transpose(
      'plaquettes',
      family.links.length,
      family.plaquettes.map((p) => p.rim),
    ),
    cubesAtPlaquette: transpose(
      'cubes',
      family.plaquettes.length,
      family.cubes.map((c) => c.faces),
    ),
  };
  known.set(family, made);
  return made;
}

/** The entries of a list for `cell`'s class, moved to where the cell is. */
export const around = (lists: Lists, cell: Cell): Cell[] =>
  (lists[cell.index] ?? []).map((c) => shifted(c, cell.offset));

/** Kind that bounds a kind: links are bounded by vertices, and so on; vertices by nothing. */
export const boundaryKind = (kind: CellKind): CellKind | undefined => cellKinds[cellKinds.indexOf(kind) - 1];
/** Kind that a kind bounds. */
export const coboundaryKind = (kind: CellKind): CellKind | undefined => cellKinds[cellKinds.indexOf(kind) + 1];

/** The boundary of each class of a kind, at unit cell 0: the boundary map as a matrix over Laurent monomials, column by column. */
export function boundaryLists(family: LatticeFamily, kind: CellKind): Lists {
  if (kind === 'links') return family.links.map((l) => [l.a, l.b]);
  if (kind === 'plaquettes') return family.plaquettes.map((p) => p.rim);
  if (kind === 'cubes') return family.cubes.map((c) => c.faces);
  return family.vertices.map(() => []);
}

/** Cells of the next lower dimension that bound a cell. */
export const boundary = (family: LatticeFamily, cell: Cell): Cell[] => around(boundaryLists(family, cell.kind), cell);

/** Cells of the next higher dimension that a cell bounds. */
export function coboundary(family: LatticeFamily, cell: Cell): Cell[] {
  const i = incidence(family);
  if (cell.kind === 'vertices') return around(i.star, cell);
  if (cell.kind === 'links') return around(i.sides, cell);
  return cell.kind === 'plaquettes' ? around(i.cubesAtPlaquette, cell) : [];
}
