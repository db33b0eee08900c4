import type { FiniteString } from '../algebra/finite/types.ts';
import type { FlipForm, FlipGroup, Kernel, Prepared, SignTerm, Vector } from './kernel/kernel.ts';

/**
 * The Hamiltonian as numbers. Floats begin here: below, strings, signs and coefficients are exact.
 * A basis state of n spins is the integer whose bit s is spin s; bit 0 means Z = +1.
 */

/** coefficient × string, the coefficient as numbers in the unit of the couplings. */
export interface NumericTerm {
  readonly re: number;
  readonly im: number;
  readonly string: FiniteString;
}

/**
 * A Hermitian matrix ready for products. Complex vectors of a space of dimension D hold 2D numbers:
 * D real parts, then D imaginary parts.
 */
export interface Hamiltonian {
  readonly dimension: number;
  readonly real: boolean;
  /** Memory held beside the vectors. */
  readonly bytes: number;
  /** output = H input; the two must be different vectors of `dimension` (real) or twice that (complex) entries. */
  apply(input: Vector, output: Vector): void;
  free(): void;
}

/** Real and imaginary part of H as matrices of bit flips and signs: H = real + i imaginary. */
export interface FlipParts {
  readonly real: FlipForm;
  readonly imaginary: FlipForm;
}

/** Thrown when the sum of terms is not Hermitian by more than rounding. */
export class NotHermitian extends Error {
  constructor(size: number) {
    super(
      `the terms do not add up to a Hermitian operator: an antihermitian part of size ${size.toExponential(2)} remains`,
    );
    this.name = 'NotHermitian';
  }
}

/** Collected terms by x mask and z mask. Throws NotHermitian. Spins: at most 30 (masks are 32-bit integers). */
export function flipParts(spins: number, terms: readonly NumericTerm[], constant = 0): FlipParts {
  const collected = new Map<string, { x: number; z: number; re: number; im: number }>();
  const add = (x: number, z: number, re: number, im: number) => {
    const key = `${String(x)},${String(z)}`;
    const at = collected.get(key) ?? { x, z, re: 0, im: 0 };
    collected.set(key, { x, z, re: at.re + re, im: at.im + im });
  };
  for (const t of terms) {
    const [re, im] = timesPhase(t.re, t.im, t.string.phase);
    add(t.string.x[0] ?? 0, t.string.z[0] ?? 0, re, im);
  }
  if (constant !== 0) add(0, 0, constant, 0);
  const scale = terms.reduce((sum, t) => sum + Math.hypot(t.re, t.im), 0) || 1;
  const real: Flat[] = [];
  const imaginary: Flat[] = [];
  for (const { x, z, re, im } of collected.values()) {
    // X^x Z^z is Hermitian or antihermitian with the parity of x·z: one of the two parts must vanish.
    const antihermitian = overlapBits(x, z) === 1;
    const wrong = Math.abs(antihermitian ? re : im);
    if (wrong > 1e-12 * scale) throw new NotHermitian(wrong);
    if (antihermitian && im !== 0) imaginary.push({ x, z, amplitude: im });
    if (!antihermitian && re !== 0) real.push({ x, z, amplitude: re });
  }
  return { real: form(spins, real), imaginary: form(spins, imaginary) };
}

interface Flat extends SignTerm {
  readonly x: number;
}

function form(spins: number, flat: readonly Flat[]): FlipForm {
  const byX = new Map<number, SignTerm[]>();
  for (const { x, z, amplitude } of flat) byX.set(x, [...(byX.get(x) ?? []), { z, amplitude }]);
  const diagonal = byX.get(0) ?? [];
  byX.delete(0);
  const flips: FlipGroup[] = [...byX].map(([x, terms]) => ({ x, terms })).sort((a, b) => a.x - b.x);
  return { spins, diagonal, flips };
}

const overlapBits = (a: number, b: number): number => {
  let bits = a & b;
  let count = 0;
  for (; bits !== 0; bits &= bits - 1) count ^= 1;
  return count;
};

/** i^phase (re + i im) */
export function timesPhase(re: number, im: number, phase: number): [number, number] {
  switch (phase & 3) {
    case 0:
      return [re, im];
    case 1:
      return [-im, re];
    case 2:
      return [-re, -im];
    default:
      return [im, -re];
  }
}

const isEmpty = (f: FlipForm): boolean => f.diagonal.length === 0 && f.flips.length === 0;

export const isReal = (parts: FlipParts): boolean => isEmpty(parts.imaginary);

/** Matrix-free Hamiltonian on all 2^spins states. `complex` asks for complex vectors also where the matrix is real. */
export function flipHamiltonian(parts: FlipParts, kernel: Kernel, complex = false): Hamiltonian {
  const real = kernel.prepareFlips(parts.real);
  return fromParts(kernel, real, isReal(parts) ? undefined : kernel.prepareFlips(parts.imaginary), complex);
}

/** H = real + i imaginary from two prepared real matrices; with no imaginary part the vectors are real unless `complex`. */
export function fromParts(
  kernel: Kernel,
  real: Prepared,
  imaginary: Prepared | undefined,
  complex = false,
): Hamiltonian {
  const d = real.dimension;
  return {
    dimension: d,
    real: !imaginary && !complex,
    bytes: real.bytes + (imaginary?.bytes ?? 0),
    apply(input, output) {
      kernel.fill(output, 0);
      if (!imaginary && !complex) {
        real.addTo(output, input, 1);
        return;
      }
      const [a, b] = [kernel.part(input, 0, d), kernel.part(input, d, d)];
      const [re, im] = [kernel.part(output, 0, d), kernel.part(output, d, d)];
      real.addTo(re, a, 1);
      real.addTo(im, b, 1);
      imaginary?.addTo(re, b, -1);
      imaginary?.addTo(im, a, 1);
    },
    free() {
      real.free();
      imaginary?.free();
    },
  };
}
