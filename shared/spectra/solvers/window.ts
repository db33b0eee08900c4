import type { Kernel, Vector } from '../kernel/kernel.ts';

/**
 * Orthogonal sets of real or complex vectors in a kernel's memory. A complex vector of dimension D is 2D numbers, real
 * parts first; the inner product is <v, w> = Σ conj(v) w. Small complex tables are two real ones.
 */
export interface Window {
  readonly dimension: number;
  readonly real: boolean;
  make(): Vector;
  /** <v_k, w> for all k: [real parts, imaginary parts]. */
  products(vectors: readonly Vector[], w: Vector): readonly [Float64Array, Float64Array];
  /** w −= Σ c_k v_k */
  subtract(vectors: readonly Vector[], c: readonly [Float64Array, Float64Array], w: Vector): void;
  norm(w: Vector): number;
  /** Replaces the first `columns` vectors by combinations of all; re and im have shape (vectors × columns). */
  rotate(vectors: readonly Vector[], re: Float64Array, im: Float64Array, columns: number): void;
}

export function newWindow(kernel: Kernel, dimension: number, real: boolean): Window {
  const reals = (v: Vector) => kernel.part(v, 0, dimension);
  const imaginaries = (v: Vector) => kernel.part(v, dimension, dimension);
  return {
    dimension,
    real,
    make: () => kernel.vector(real ? dimension : 2 * dimension),
    norm: (w) => Math.sqrt(kernel.dot(w, w)),
    products(vectors, w) {
      const re = new Float64Array(vectors.length);
      const im = new Float64Array(vectors.length);
      kernel.dots(vectors, w, re);
      if (!real) {
        const other = new Float64Array(vectors.length);
        kernel.dots(vectors.map(reals), imaginaries(w), im);
        kernel.dots(vectors.map(imaginaries), reals(w), other);
        other.forEach((value, k) => (im[k] = (im[k] ?? 0) - value));
      }
      return [re, im];
    },
    subtract(vectors, [re, im], w) {
      const minus = re.map((value) => -value);
      kernel.combine(vectors, minus, w);
      if (real) return;
      kernel.combine(vectors.map(imaginaries), im, reals(w));
      kernel.combine(
        vectors.map(reals),
        im.map((value) => -value),
        imaginaries(w),
      );
    },
    rotate(vectors, re, im, columns) {
      if (real) {
        kernel.rotate(vectors, re, columns);
        return;
      }
      const halves = vectors.flatMap((v) => [reals(v), imaginaries(v)]);
      const matrix = new Float64Array(4 * vectors.length * columns);
      for (let k = 0; k < vectors.length; k++) {
        for (let j = 0; j < columns; j++) {
          const [a, b] = [re[k * columns + j] ?? 0, im[k * columns + j] ?? 0];
          const at = 4 * k * columns + 2 * j;
          matrix[at] = a;
          matrix[at + 1] = b;
          matrix[at + 2 * columns] = -b;
          matrix[at + 2 * columns + 1] = a;
        }
      }
      kernel.rotate(halves, matrix, 2 * columns);
    },
  };
}

/**
 * Removes from w its parts along the vectors (orthonormal) and returns the coefficients removed. A second pass runs when
 * the first took away most of w, which is when rounding spoils it (J. Daniel, W. Gragg, L. Kaufman, G. Stewart,
 * Math. Comp. 30, 772 (1976)).
 */
export function orthogonalise(
  window: Window,
  vectors: readonly Vector[],
  w: Vector,
): { c: readonly [Float64Array, Float64Array]; norm: number } {
  const before = window.norm(w);
  const c = window.products(vectors, w);
  window.subtract(vectors, c, w);
  let norm = window.norm(w);
  for (let pass = 0; pass < 2 && norm < 0.7 * before; pass++) {
    const more = window.products(vectors, w);
    window.subtract(vectors, more, w);
    for (const half of [0, 1] as const) more[half].forEach((value, k) => (c[half][k] = (c[half][k] ?? 0) + value));
    const after = window.norm(w);
    const settled = after > 0.7 * norm;
    norm = after;
    if (settled) break;
  }
  return { c, norm };
}

/** Deterministic numbers in (−1, 1): xorshift32 (G. Marsaglia, J. Stat. Softw. 8, 14 (2003)). The same seed gives the same start vector. */
export function fillSeeded(w: Vector, seed: number): void {
  const view = w.view;
  let state = (seed * 2654435761 + 88172645) | 0 || 1;
  for (let k = 0; k < view.length; k++) {
    state ^= state << 13;
    state ^= state >>> 17;
    state ^= state << 5;
    view[k] = state / 2147483648;
  }
}
