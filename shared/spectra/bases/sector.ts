import type { FiniteString } from '../../algebra/finite/types.ts';
import {
  cheaperFrame,
  flipHamiltonian,
  flipParts,
  isReal,
  type Hamiltonian,
  type NumericTerm,
} from '../hamiltonian.ts';
import type { Kernel } from '../kernel/kernel.ts';
import { dropQubits, realFrame, type SectorFault } from './drop-qubits.ts';
import type { Constraint } from './packed.ts';

/** How the states of a sector are numbered, and the matrices of operators in it. */
export interface Sector {
  readonly kind: 'all states' | 'enumerated';
  /** Spins that number the states; for an enumerated basis those of the model. */
  readonly spins: number;
  readonly dimension: number;
  /** True if the Hamiltonian's matrix is real in this basis. */
  readonly real: boolean;
  /** Work of one product with H, in multiplications. */
  readonly productCost: number;
  /** Memory of the matrix beside the vectors, in bytes (an estimate from above). */
  readonly matrixBytes: number;
  /** Indices of terms that (with their partners of the same flip) lead out of an enumerated basis; H is PHP. */
  readonly leaving: readonly number[];
  /** The model's Hamiltonian. */
  hamiltonian(kernel: Kernel): Hamiltonian;
  /**
   * P O P for any Hermitian O of the model's spins; strings that do not commute with the constraints have no part in it.
   * For real vectors only the real part of the matrix counts; `complex` asks for complex vectors.
   */
  operator(terms: readonly NumericTerm[], constant: number, kernel: Kernel, complex: boolean): Hamiltonian;
}

/** The sector of commuting constraints, all 2^spins states of the spins that are left. */
export function qubitSector(
  n: number,
  terms: readonly NumericTerm[],
  constant: number,
  constraints: readonly Constraint[],
):
  | { readonly ok: true; readonly value: Sector }
  | { readonly ok: false; readonly fault: SectorFault | { readonly code: 'too many spins'; readonly spins: number } } {
  const strings = terms.map((t) => t.string);
  const dropped = dropQubits(n, strings, constraints);
  if (!dropped.ok) return dropped;
  const { spins, reduce } = dropped.value;
  if (spins > 30) return { ok: false, fault: { code: 'too many spins', spins } };
  const reduced = strings.map((s) => reduce(s)).filter((s) => s !== undefined);
  const toReal = realFrame(spins, reduced) ?? ((s: FiniteString) => s);
  const toCheap = cheaperFrame(reduced.map(toReal));
  const image = (all: readonly NumericTerm[]): NumericTerm[] =>
    all.flatMap((t) => {
      const string = reduce(t.string);
      return string ? [{ ...t, string: toCheap(toReal(string)) }] : [];
    });
  const parts = flipParts(spins, image(terms), constant);
  const dimension = 2 ** spins;
  const weight = [parts.real, parts.imaginary].reduce(
    (sum, f) => sum + 1 + f.flips.reduce((s, g) => s + g.terms.length, 0),
    0,
  );
  return {
    ok: true,
    value: {
      kind: 'all states',
      spins,
      dimension,
      real: isReal(parts),
      productCost: weight * dimension,
      matrixBytes: 2 * dimension * (isReal(parts) ? 1 : 2) + 2 ** 20,
      leaving: [],
      hamiltonian: (kernel) => flipHamiltonian(parts, kernel),
      operator(others, shift, kernel, complex) {
        const all = flipParts(spins, image(others), shift);
        const none = { spins, diagonal: [], flips: [] };
        return flipHamiltonian(complex ? all : { real: all.real, imaginary: none }, kernel, complex);
      },
    },
  };
}
