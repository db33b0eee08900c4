import type { Block } from '../bases/sector.ts';
import type { Hamiltonian } from '../hamiltonian.ts';
import type { Kernel, Vector } from '../kernel/kernel.ts';
import { hermitianEigen, symmetricEigen, type Eigen } from './dense.ts';

/** Levels of one block. */
export interface Found {
  /** Ascending. */
  readonly energies: Float64Array;
  readonly residuals: Float64Array;
  /** One for each energy, or none. */
  readonly vectors: readonly Vector[];
  /** True if no level of the block as low as the last one is missing. */
  readonly complete: boolean;
  /** Largest |level| seen. */
  readonly scale: number;
}

/** All levels of a small block, vectors of the lowest `vectors` of them. Yields the part that is done. */
export function* denseLevels(block: Block, vectors: number, kernel: Kernel): Generator<number, Found> {
  const n = block.dimension;
  const h = block.hamiltonian(kernel);
  try {
    const { re, im } = yield* denseMatrix(h, kernel);
    const wanted = vectors > 0;
    const eigen = h.real ? realLevels(re, n, wanted, kernel) : hermitianEigen(re, im, n, wanted);
    const scale = largest(eigen.values);
    return {
      energies: eigen.values,
      // Backward error of orthogonal reduction: a small multiple of n ε ‖H‖ (J. Wilkinson, The Algebraic Eigenvalue Problem (1965)).
      residuals: new Float64Array(n).fill(n * 2.3e-16 * scale),
      vectors: Array.from({ length: Math.min(n, vectors) }, (_, k) => denseVector(eigen, k, n, h.real, kernel)),
      complete: true,
      scale,
    };
  } finally {
    h.free();
  }
}

/** Levels of a block whose matrix is diagonal, read off: the lowest `count` and all that equal the last to `near` (relative). */
export function diagonalLevels(
  values: Float64Array,
  count: number,
  near: number,
  vectors: number,
  kernel: Kernel,
): Found {
  const scale = largest(values);
  const sorted = values.slice().sort();
  const limit = (sorted[Math.min(count, sorted.length) - 1] ?? 0) + near * scale;
  let kept = 0;
  while (kept < sorted.length && (sorted[kept] ?? Infinity) <= limit) kept++;
  const energies = sorted.slice(0, kept);
  return {
    energies,
    residuals: new Float64Array(kept).fill(2.3e-16 * scale * 4),
    vectors: vectors > 0 ? unitVectors(values, energies.subarray(0, vectors), kernel) : [],
    complete: true,
    scale,
  };
}

/** For ascending levels, the basis states that have them, in that order. */
function unitVectors(values: Float64Array, energies: Float64Array, kernel: Kernel): Vector[] {
  const top = energies.at(-1) ?? -Infinity;
  const states: number[] = [];
  values.forEach((v, k) => v <= top && states.push(k));
  states.sort((a, b) => (values[a] ?? 0) - (values[b] ?? 0));
  return Array.from(energies, (_, k) => {
    const v = kernel.vector(values.length);
    v.view[states[k] ?? 0] = 1;
    return v;
  });
}

function largest(values: Float64Array): number {
  let most = 0;
  for (const v of values) most = Math.max(most, Math.abs(v));
  return most;
}

function realLevels(matrix: Float64Array, n: number, vectors: boolean, kernel: Kernel): Eigen {
  const space = kernel.sweep?.(n);
  try {
    return symmetricEigen(matrix, n, vectors, space);
  } finally {
    space?.free();
  }
}

/** Columns of H, one product each; row-major, and H is Hermitian. */
function* denseMatrix(h: Hamiltonian, kernel: Kernel): Generator<number, { re: Float64Array; im: Float64Array }> {
  const n = h.dimension;
  const re = new Float64Array(n * n);
  const im = new Float64Array(h.real ? 0 : n * n);
  const length = h.real ? n : 2 * n;
  const [unit, column] = [kernel.vector(length), kernel.vector(length)];
  try {
    for (let k = 0; k < n; k++) {
      kernel.fill(unit, 0);
      unit.view[k] = 1;
      h.apply(unit, column);
      // Entry (r, k) is the conjugate of (k, r): the column, conjugated, is row k.
      const view = column.view;
      re.set(view.subarray(0, n), k * n);
      if (!h.real) for (let r = 0; r < n; r++) im[k * n + r] = -(view[n + r] ?? 0);
      if (k % 256 === 255) yield (0.5 * k) / n;
    }
  } finally {
    kernel.release(unit);
    kernel.release(column);
  }
  return { re, im };
}

function denseVector(eigen: Eigen, k: number, n: number, real: boolean, kernel: Kernel): Vector {
  const v = kernel.vector(real ? n : 2 * n);
  if (eigen.vectors) v.view.set(eigen.vectors.subarray(k * n, k * n + n));
  if (eigen.imaginary) v.view.set(eigen.imaginary.subarray(k * n, k * n + n), n);
  return v;
}
