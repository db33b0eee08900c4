import type { Coefficient } from '../numbers/coefficient.ts';
import type { Cell } from '../../lattice/cells.ts';

/**
 * Operators on the INFINITE lattice. Nothing here knows a cluster; `algebra/finite/wrap` is the only way to one.
 * Pauli means the Pauli matrix σ (eigenvalues ±1), not the spin σ/2. |0> is Z = +1.
 */
export type Pauli = 'x' | 'y' | 'z';

/** A power of i: the operator carries i^phase. */
export type Phase = 0 | 1 | 2 | 3;

/** One spin: a species on one cell. */
export interface Site {
  readonly species: string;
  readonly cell: Cell;
}

/** One Pauli matrix on one spin. */
export interface Factor extends Site {
  readonly pauli: Pauli;
  /**
   * True if the factor came from a geometry function that an open boundary cuts (star, rim, neighbours, …):
   * where the cell is missing the factor is left out. Without it the whole term is dropped there.
   * Carries no meaning on the infinite lattice and on tori.
   */
  readonly optional?: true;
}

/** i^phase times a product of Pauli matrices on distinct spins, sorted by `factorOrder`. The identity has no factors. */
export interface LocalString {
  readonly phase: Phase;
  readonly factors: readonly Factor[];
}

/**
 * How a string is translated, one entry a direction: 0 stays put (pinned), m > 0 goes to every m-th unit cell.
 * [1, 1] is the usual translation orbit; [2, 1] a staggered one; [0, 1] one line of cells.
 */
export type Steps = readonly number[];

/**
 * coefficient × Σ over translations (by `steps`) of a string. With all steps 0: a single local operator.
 * With no factors: a constant (for each translate). After collection `string.phase` is 0 and the
 * representative is canonical: two equal families are equal as data.
 */
export interface Family {
  readonly coefficient: Coefficient;
  readonly string: LocalString;
  readonly steps: Steps;
  /** Cells that must exist for the term to stand on an open lattice (bound and named cells). Empty on tori. */
  readonly needs: readonly Cell[];
}

/** Product over translations (by `steps`; 0 stays put) of a string: with `string.phase` once for each translate. */
export interface ProductPart {
  readonly string: LocalString;
  readonly steps: Steps;
  readonly needs: readonly Cell[];
}

/** A Pauli string of unbounded support (loops, membranes, whole symmetries): i^phase times the product of its parts, in order. */
export interface Extended {
  readonly phase: Phase;
  readonly parts: readonly ProductPart[];
}

export interface ExtendedTerm {
  readonly coefficient: Coefficient;
  readonly extended: Extended;
}

/** An operator: sum of families (constants are families without factors) and of extended strings. */
export interface Operator {
  readonly families: readonly Family[];
  readonly extended: readonly ExtendedTerm[];
}
