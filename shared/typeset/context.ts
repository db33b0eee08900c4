import type { LocalString, Steps } from '../algebra/pauli/types.ts';
import { classLabel, type CellKind, type LatticeFamily } from '../lattice/cells.ts';

/** A declared law or operator whose name may stand for its string: `A_{v}` for the star product of a law A(v). */
export interface NamedShape {
  readonly name: string;
  readonly kind: CellKind;
  /** One string for each class of the kind, standing at the class's cell of unit cell 0. */
  readonly instances: readonly { readonly index: number; readonly string: LocalString; readonly steps: Steps }[];
}

/** Kind of cell, and classes of it, that carry a species. */
export interface Carrier {
  readonly kind: CellKind;
  readonly classes: readonly number[];
}

/** What setting a formula needs to know. `page` marks each Pauli with its own macro (\px, \py, \pz); `plain` is standard LaTeX. */
export interface TypesetContext {
  readonly family: LatticeFamily;
  readonly species: ReadonlyMap<string, Carrier>;
  readonly names: readonly NamedShape[];
}

export type Style = 'page' | 'plain';

export const letters: Readonly<Record<CellKind, string>> = { vertices: 'v', links: 'l', plaquettes: 'p', cubes: 'c' };
export const singular: Readonly<Record<CellKind, string>> = {
  vertices: 'vertex',
  links: 'link',
  plaquettes: 'plaquette',
  cubes: 'cube',
};
export const rank: Readonly<Record<CellKind, number>> = { vertices: 0, links: 1, plaquettes: 2, cubes: 3 };

/** A label that exactly these classes carry; else their own labels. */
export function labelsOf(family: LatticeFamily, kind: CellKind, indices: readonly number[]): readonly string[] {
  const classes = family[kind];
  const chosen = new Set(indices);
  const shared = classes[indices[0] ?? 0]?.labels.find((label) =>
    classes.every((c, k) => c.labels.includes(label) === chosen.has(k)),
  );
  return shared === undefined ? indices.map((k) => classLabel(family, kind, k)) : [shared];
}
