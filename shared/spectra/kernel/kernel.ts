/**
 * The loops that take the time, behind one interface: `plain` (typed arrays) and `wasm` (SIMD) do the same
 * to rounding, and one suite of tests runs on both.
 */

/**
 * A vector of float64 in the kernel's memory. `view` must be asked for anew after any allocation:
 * growing the memory of the wasm kernel detaches older views.
 */
export interface Vector {
  readonly length: number;
  readonly view: Float64Array;
}

/** One diagonal sign pattern: the function amplitude × (−1)^(z·b) of the basis state b. */
export interface SignTerm {
  readonly z: number;
  readonly amplitude: number;
}

/** All terms that flip the same bits: b goes to b ^ x with amplitude Σ amplitude (−1)^(z·b). */
export interface FlipGroup {
  readonly x: number;
  readonly terms: readonly SignTerm[];
}

/**
 * A real matrix on 2^spins states as sign patterns and bit flips; bit s of a basis index is spin s.
 * `diagonal` is the group of x = 0. No symmetry is assumed.
 */
export interface FlipForm {
  readonly spins: number;
  readonly diagonal: readonly SignTerm[];
  readonly flips: readonly FlipGroup[];
}

/** A real square matrix in compressed rows: row r holds columns[starts[r] … starts[r + 1]). */
export interface RowForm {
  readonly dimension: number;
  readonly starts: Uint32Array;
  readonly columns: Uint32Array;
  readonly values: Float64Array;
}

/** A real matrix made ready for many products. */
export interface Prepared {
  readonly dimension: number;
  /** Memory it holds beside the vectors. */
  readonly bytes: number;
  /** output += sign × (matrix × input); input and output must not overlap. `sign` is 1 or −1. */
  addTo(output: Vector, input: Vector, sign: number): void;
  free(): void;
}

export interface Kernel {
  readonly name: 'plain' | 'wasm';
  /** A new vector of zeros. Throws RangeError when memory is out. */
  vector(length: number): Vector;
  /** Gives a vector back; it must not be used afterwards. */
  release(vector: Vector): void;
  /** The entries offset … offset + length − 1 as a vector that shares memory with its parent; not to be released. */
  part(vector: Vector, offset: number, length: number): Vector;
  fill(vector: Vector, value: number): void;
  copy(from: Vector, to: Vector): void;
  dot(a: Vector, b: Vector): number;
  /** y += alpha x */
  axpy(alpha: number, x: Vector, y: Vector): void;
  scale(alpha: number, x: Vector): void;
  /** out[k] = vectors[k] · w for all k, in one sweep over w. */
  dots(vectors: readonly Vector[], w: Vector, out: Float64Array): void;
  /** w += Σ coefficients[k] vectors[k], in one sweep over w. */
  combine(vectors: readonly Vector[], coefficients: Float64Array, w: Vector): void;
  /**
   * Replaces vectors[0 … columns − 1] by the combinations Σ_k vectors[k] matrix[k × columns + j] of all of them;
   * `matrix` has shape (vectors × columns), columns ≤ vectors. The other vectors are left as they are.
   */
  rotate(vectors: readonly Vector[], matrix: Float64Array, columns: number): void;
  prepareFlips(form: FlipForm): Prepared;
  prepareRows(form: RowForm): Prepared;
  /** Space and inner loop for the Householder reduction of a real symmetric (n × n) matrix; left out, solvers/dense runs its own. */
  readonly sweep?: (n: number) => Sweep;
}

/** Arrays of one reduction (solvers/dense). No vector may be made while it is in use. */
export interface Sweep {
  readonly matrix: Float64Array;
  readonly v: Float64Array;
  readonly w: Float64Array;
  readonly u: Float64Array;
  readonly y: Float64Array;
  /** From row and column `from` on: lower triangle −= v wᵀ + w vᵀ, then y = matrix × u. */
  run(from: number): void;
  free(): void;
}
