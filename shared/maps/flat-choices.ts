import type { AllSizes } from '../algebra/f2/all-sizes.ts';
import { fromMonomials, type LaurentVector } from '../algebra/f2/laurent.ts';
import { LaurentModule } from '../algebra/f2/module.ts';
import type { Cell, LatticeFamily } from '../lattice/cells.ts';
import { boundary } from '../lattice/incidence.ts';
import type { Budget } from '../limits.ts';

/** Cells as a vector of Laurent polynomials over F2, one component a class. */
function vectorOf(cells: readonly Cell[], classes: number): LaurentVector {
  const offsets: number[][][] = Array.from({ length: classes }, () => []);
  for (const cell of cells) offsets[cell.index]?.push([...cell.offset]);
  return offsets.map(fromMonomials);
}

export interface FlatChoices {
  /** Generators of the closed paths of links, up to translation and products; none on a lattice of trees and chains. */
  readonly cycles: number;
  /** One proof for each that is a product of rims, for every size. */
  readonly proofs: readonly AllSizes[];
}

/**
 * Whether every closed path of links is a product of rims of plaquettes: the kernel of the boundary map of links (its syzygies over the Laurent
 * polynomials) against the module of the rims. Then two choices of a gauge string between the same charges differ by fluxes alone. Paths that
 * close around the lattice are holonomies and not among these. Throws BudgetSpent.
 */
export function flatChoices(family: LatticeFamily, budget: Budget): FlatChoices {
  const { dimension } = family;
  const zero = family.vectors.map(() => 0);
  const ends = family.links.map((_, index) =>
    vectorOf(boundary(family, { kind: 'links', index, offset: zero }), family.vertices.length),
  );
  const cycles = new LaurentModule(ends, dimension, family.vertices.length, budget).syzygies();
  const rims = family.plaquettes.map(({ rim }) => vectorOf(rim, family.links.length));
  const module = new LaurentModule(rims, dimension, family.links.length, budget);
  const proofs = cycles.flatMap((cycle) => {
    const found = rims.length > 0 ? module.decompose(cycle) : undefined;
    const proof = found?.inside === true ? module.verify(found.coefficients, cycle) : undefined;
    return proof ? [proof] : [];
  });
  return { cycles: cycles.length, proofs };
}
