import type { Coefficient } from '../numbers/coefficient.ts';
import type { Site } from '../pauli/types.ts';

/**
 * Operators on a CLUSTER of n numbered spins. A string is i^phase X^x Z^z with x, z ∈ F2^n packed into
 * 32-bit words (bit s of word s >> 5 is site s), so Y is x = z = 1 with phase 1.
 */
export interface FiniteString {
  readonly n: number;
  readonly x: Uint32Array;
  readonly z: Uint32Array;
  readonly phase: number;
}

/** Numbered spins of a cluster: `sites[k]` is spin k. */
export interface SiteTable {
  readonly sites: readonly Site[];
  /** Number of a spin; undefined where the cell is missing on an open lattice. Wraps on periodic directions. */
  number(site: Site): number | undefined;
}

/** A model on a cluster. Equal strings are collected, the identity is `constant`. */
export interface FiniteModel {
  readonly table: SiteTable;
  readonly terms: readonly { readonly coefficient: Coefficient; readonly string: FiniteString }[];
  readonly constant: Coefficient;
  /** Notes about wrapping, each in words: strings that became the identity, coincide, or are not Hermitian here. */
  readonly notes: readonly string[];
}
