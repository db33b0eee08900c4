import type { Cell, CellKind } from '../../lattice/cells.ts';
import { fromMonomials, monomials, type LaurentVector } from '../f2/laurent.ts';
import { modulo, residues } from './collect.ts';
import { newString } from './string.ts';
import type { Factor, LocalString, Pauli, Steps } from './types.ts';

/** A class of spins: a species on one class of cells. */
export interface SpinClass {
  readonly species: string;
  readonly kind: CellKind;
  readonly index: number;
}

/**
 * How strings become vectors of Laurent polynomials: n classes of spins on an enlarged cell of `period` unit cells, each class once for each of its
 * positions. Component k < n counts X (and Y), component n + k counts Z (and Y); the monomial x^e is the enlarged cell e. Vector of length 2 n.
 */
export interface Frame {
  readonly period: Steps;
  readonly spins: readonly { readonly spin: SpinClass; readonly residue: readonly number[] }[];
  /** n: classes × positions in the enlarged cell. */
  readonly count: number;
  readonly dimension: number;
  toVector(string: LocalString): LaurentVector;
  /** The string with phase 0 that has this vector. */
  toString(vector: LaurentVector): LocalString;
}

const classText = (species: string, cell: Pick<Cell, 'kind' | 'index'>): string =>
  `${species} ${cell.kind} ${String(cell.index)}`;

/** A frame for these classes of spins; `period` (entries >= 1) is the enlarged cell on which staggered families are translation-invariant. */
export function newFrame(classes: readonly SpinClass[], period: Steps): Frame {
  const positions = [...residues(period)];
  const spins = classes.flatMap((spin) => positions.map((residue) => ({ spin, residue })));
  const numbers = new Map(
    spins.map(({ spin, residue }, k) => [`${classText(spin.species, spin)}@${residue.join(',')}`, k]),
  );
  const count = spins.length;
  return {
    period,
    spins,
    count,
    dimension: period.length,
    toVector(string) {
      const entries: number[][][] = Array.from({ length: 2 * count }, () => []);
      for (const { species, cell, pauli } of string.factors) {
        const residue = cell.offset.map((c, d) => modulo(c, period[d] ?? 1));
        const k = numbers.get(`${classText(species, cell)}@${residue.join(',')}`);
        if (k === undefined) throw new RangeError(`${species} on ${cell.kind} is not among the spins of this frame`);
        const at = cell.offset.map((c, d) => (c - (residue[d] ?? 0)) / (period[d] ?? 1));
        if (pauli !== 'z') entries[k]?.push(at);
        if (pauli !== 'x') entries[count + k]?.push(at);
      }
      return entries.map(fromMonomials);
    },
    toString(vector) {
      const paulis = new Map<string, { factor: Omit<Factor, 'pauli'>; pauli: Pauli }>();
      vector.forEach((p, component) => {
        const here = spins[component % count];
        if (!here) return;
        for (const e of monomials(p, period.length)) {
          const offset = e.map((c, d) => c * (period[d] ?? 1) + (here.residue[d] ?? 0));
          const key = `${String(component % count)}@${offset.join(',')}`;
          const { species, kind, index } = here.spin;
          const pauli = component < count ? 'x' : paulis.has(key) ? 'y' : 'z';
          paulis.set(key, { factor: { species, cell: { kind, index, offset } }, pauli });
        }
      });
      return {
        phase: 0,
        factors: newString([...paulis.values()].map(({ factor, pauli }) => ({ ...factor, pauli }))).factors,
      };
    },
  };
}

/** Classes of the spins that occur in strings, in canonical order. */
export function spinClasses(strings: Iterable<LocalString>): SpinClass[] {
  const found = new Map<string, SpinClass>();
  for (const string of strings)
    for (const { species, cell } of string.factors)
      found.set(classText(species, cell), { species, kind: cell.kind, index: cell.index });
  return [...found.entries()].sort(([a], [b]) => (a < b ? -1 : 1)).map(([, c]) => c);
}
