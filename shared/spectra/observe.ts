import type { NumericTerm } from './hamiltonian.ts';
import type { Kernel, Vector } from './kernel/kernel.ts';
import type { EigenSpace, Spectrum } from './solve.ts';

/** What is asked of eigenvectors. */

/** Number of lowest levels in the ground multiplet, and whether all of it is there. */
export function groundDegeneracy(spectrum: Spectrum): { readonly degeneracy: number; readonly complete: boolean } {
  const ground = spectrum.multiplets[0];
  return { degeneracy: ground?.multiplicity ?? 0, complete: ground?.complete ?? false };
}

/**
 * Mean of a Hermitian operator Σ terms + constant in the space of vectors first … first + count − 1:
 * the trace over that space divided by its dimension, which does not depend on the basis of a degenerate level.
 * Strings that do not commute with the sector's constraints contribute nothing.
 */
export function meanIn(
  space: EigenSpace,
  first: number,
  count: number,
  terms: readonly NumericTerm[],
  constant = 0,
): number {
  const { kernel, real } = space;
  const vectors = space.vectors.slice(first, first + count);
  if (count < 1 || vectors.length < count) {
    throw new RangeError(
      `vectors ${String(first)} to ${String(first + count - 1)} asked for, ${String(space.vectors.length)} were kept: solve for more levels`,
    );
  }
  const operator = space.sector.operator(terms, constant, kernel, !real);
  const work = kernel.vector(vectors[0]?.length ?? 0);
  try {
    let sum = 0;
    for (const v of vectors) {
      operator.apply(v, work);
      sum += kernel.dot(v, work);
    }
    return sum / count;
  } finally {
    kernel.release(work);
    operator.free();
  }
}

/** Mean of a Hermitian operator in the ground space of a spectrum that was solved with `vectors`. */
export function groundMean(spectrum: Spectrum, terms: readonly NumericTerm[], constant = 0): number {
  if (!spectrum.space) throw new Error('no vectors were kept: ask for them when solving');
  return meanIn(spectrum.space, 0, groundDegeneracy(spectrum).degeneracy, terms, constant);
}

/**
 * Overlap of two subspaces of the same sector, spanned by orthonormal vectors: (Σ |<a_i, b_j>|² / min(count))^(1/2),
 * between 0 and 1; |<a, b>| for two single vectors. The fidelity of ground states as a square root, not its square.
 */
export function overlapOf(kernel: Kernel, a: readonly Vector[], b: readonly Vector[], real: boolean): number {
  let sum = 0;
  for (const v of a) for (const w of b) sum += squaredProduct(kernel, v, w, real);
  const least = Math.min(a.length, b.length);
  return least === 0 ? 0 : Math.sqrt(Math.min(1, sum / least));
}

function squaredProduct(kernel: Kernel, v: Vector, w: Vector, real: boolean): number {
  const re = kernel.dot(v, w);
  if (real) return re * re;
  const half = v.length / 2;
  const im =
    kernel.dot(kernel.part(v, 0, half), kernel.part(w, half, half)) -
    kernel.dot(kernel.part(v, half, half), kernel.part(w, 0, half));
  return re * re + im * im;
}
