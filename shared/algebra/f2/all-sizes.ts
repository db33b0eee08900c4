declare const seal: unique symbol;

/**
 * Evidence that a statement holds for every size of a lattice family. Only `pauli/commutation`, `pauli/keeping` and `f2/module` make one (a test reads the imports),
 * so that no number from a cluster can pass for it.
 */
export interface AllSizes {
  readonly [seal]: true;
  /** Smallest extent along each direction from which it holds; smaller sizes have to be decided one by one. */
  readonly from: readonly number[];
  /** The size must be a multiple of these, or the operators themselves do not fit on it. */
  readonly multiples: readonly number[];
}

/** Seals a statement; `from` and `multiples` as in `AllSizes`. To be called where the proof is, nowhere else. */
export const shownForAllSizes = (from: readonly number[], multiples: readonly number[]): AllSizes =>
  ({ from, multiples }) as unknown as AllSizes;
