/** Lattices that a source declares itself: `lattice custom`. */
import type { LatticeFamily, LatticeProblem, Offset } from './cells.ts';
import { buildFamily } from './family.ts';
import type { NamedCell } from './family.ts';

/** What the indented lines under `lattice custom` say. Positions and vectors are Cartesian, shifts in unit cells. */
export interface CustomLattice {
  readonly vectors: readonly (readonly number[])[];
  readonly vertices: readonly { readonly label: string; readonly position: readonly number[] }[];
  /** A link without a label is named by its place among the links, from 1. */
  readonly links: readonly { readonly label?: string; readonly a: NamedCell; readonly b: NamedCell }[];
  /** Several plaquettes may share a label, as long as no cube names it. */
  readonly plaquettes: readonly { readonly label: string; readonly corners: readonly NamedCell[] }[];
  readonly cubes?: readonly { readonly label: string; readonly faces: readonly NamedCell[] }[];
}

/** A family from its declaration, or all problems of the first part that has any, in order. */
export function customFamily(data: CustomLattice, name = 'custom'): LatticeFamily | readonly LatticeProblem[] {
  const full = (cell: NamedCell): NamedCell => ({
    label: cell.label,
    offset: padded(cell.offset, data.vectors.length),
  });
  return buildFamily({
    name,
    vectors: data.vectors,
    vertices: data.vertices.map((v) => ({ labels: [v.label], position: v.position })),
    links: data.links.map((l, k) => ({ labels: [l.label ?? String(k + 1)], a: full(l.a), b: full(l.b) })),
    plaquettes: data.plaquettes.map((p) => ({ labels: [p.label], corners: p.corners.map(full) })),
    cubes: (data.cubes ?? []).map((c) => ({ labels: [c.label], faces: c.faces.map(full) })),
  });
}

/** A cell written without a shift has an empty offset: it lies in unit cell 0. */
const padded = (offset: Offset, dimension: number): Offset =>
  offset.length === 0 ? new Array<number>(dimension).fill(0) : offset;

/** True if a built family came out, false if problems did. */
export const isFamily = (result: LatticeFamily | readonly LatticeProblem[]): result is LatticeFamily =>
  'name' in result;
