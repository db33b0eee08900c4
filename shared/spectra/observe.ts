import type { NumericTerm } from './hamiltonian.ts';
import type { Kernel, Vector } from './kernel/kernel.ts';
import type { EigenSpace, EigenVector, Spectrum } from './solve.ts';

/** What is asked of eigenvectors. */

/** Number of lowest levels in the ground multiplet, and whether all of it is there. */
export function groundDegeneracy(spectrum: Spectrum): { readonly degeneracy: number; readonly complete: boolean } {
  const ground = spectrum.multiplets[0];
  return { degeneracy: ground?.multiplicity ?? 0, complete: ground?.complete ?? false };
}

/** The kept vectors of levels first … first + count − 1, counted with their copies; throws RangeError where some are not kept or a set of copies is cut. */
function vectorsOf(space: EigenSpace, first: number, count: number): readonly EigenVector[] {
  const { copies } = space;
  const vectors = space.vectors.slice(first / copies, (first + count) / copies);
  if (count < 1 || vectors.length * copies !== count || first % copies !== 0) {
    throw new RangeError(
      `levels ${String(first)} to ${String(first + count - 1)} asked for; ${String(space.vectors.length * copies)} were kept, in sets of ${String(copies)}: ask for whole multiplets, or solve for more levels`,
    );
  }
  return vectors;
}

/**
 * Mean of a Hermitian operator Σ terms + constant in the space of levels first … first + count − 1:
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
  const vectors = vectorsOf(space, first, count);
  const { kernel } = space;
  let sum = 0;
  for (const block of new Set(vectors.map((v) => v.block))) {
    const own = vectors.filter((v) => v.block === block);
    const operator = block.operator(terms, constant, kernel, !block.real);
    const work = kernel.vector(own[0]?.vector.length ?? 0);
    try {
      for (const { vector } of own) {
        operator.apply(vector, work);
        sum += kernel.dot(vector, work);
      }
    } finally {
      kernel.release(work);
      operator.free();
    }
  }
  return sum / vectors.length;
}

/** Mean of a Hermitian operator in the ground space of a spectrum that was solved with `vectors`. */
export function groundMean(spectrum: Spectrum, terms: readonly NumericTerm[], constant = 0): number {
  if (!spectrum.space) throw new Error('no vectors were kept: ask for them when solving');
  return meanIn(spectrum.space, 0, groundDegeneracy(spectrum).degeneracy, terms, constant);
}

/**
 * Overlap of the ground spaces of two spectra of one model (same terms and sector, other values of the couplings), solved
 * with vectors on one kernel: (Σ |<a_i, b_j>|² / smaller dimension)^(1/2), between 0 and 1; |<a, b>| for two single states,
 * which is the square root of what others call the fidelity.
 */
export function groundOverlap(a: Spectrum, b: Spectrum): number {
  if (!a.space || !b.space) throw new Error('no vectors were kept: ask for them when solving');
  if (a.space.copies !== b.space.copies)
    throw new Error('the two spectra are not of one model: their symmetries differ');
  const left = vectorsOf(a.space, 0, groundDegeneracy(a).degeneracy);
  const right = vectorsOf(b.space, 0, groundDegeneracy(b).degeneracy);
  let sum = 0;
  for (const v of left) {
    for (const w of right) {
      if (v.blockNumber === w.blockNumber) sum += squaredProduct(a.space.kernel, v.vector, w.vector, v.block.real);
    }
  }
  return Math.sqrt(Math.min(1, sum / Math.min(left.length, right.length)));
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
