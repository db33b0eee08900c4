import { bit, fromPauli } from './string.ts';
import type { FiniteString } from './types.ts';

/**
 * A string i^phase X^x Z^z on n spins, as the spins it acts on: `spins` ascending, and for each of them `bits` = 1 (X), 2 (Z) or 3 (XZ). For strings of a few
 * spins on clusters of many thousands.
 */
export interface SparseString {
  readonly n: number;
  readonly spins: Int32Array;
  readonly bits: Uint8Array;
  readonly phase: number;
}

export const isSparse = (string: FiniteString | SparseString): string is SparseString => 'spins' in string;

/** i^phase times Pauli matrices in the order given; spins may repeat. */
export function sparseFromPauli(
  n: number,
  factors: readonly { readonly spin: number; readonly pauli: 'x' | 'y' | 'z' }[],
  phase = 0,
): SparseString {
  const at = new Map<number, number>();
  let k = phase;
  for (const { spin, pauli } of factors) {
    const old = at.get(spin) ?? 0;
    if (pauli !== 'z' && (old & 2) !== 0) k += 2;
    if (pauli === 'y') k += 1;
    at.set(spin, old ^ (pauli === 'x' ? 1 : pauli === 'z' ? 2 : 3));
  }
  const kept = [...at].filter(([, b]) => b !== 0).sort(([a], [b]) => a - b);
  return { n, spins: Int32Array.from(kept, ([s]) => s), bits: Uint8Array.from(kept, ([, b]) => b), phase: k & 3 };
}

export function toSparse(string: FiniteString | SparseString): SparseString {
  if (isSparse(string)) return string;
  const spins: number[] = [];
  for (let w = 0; w < string.x.length; w++)
    for (let rest = (string.x[w] ?? 0) | (string.z[w] ?? 0); rest !== 0; rest &= rest - 1)
      spins.push(w * 32 + 31 - Math.clz32(rest & -rest));
  return {
    n: string.n,
    spins: Int32Array.from(spins),
    bits: Uint8Array.from(spins, (s) => bit(string.x, s) + 2 * bit(string.z, s)),
    phase: string.phase,
  };
}

export function toDense(string: SparseString): FiniteString {
  const bare = fromPauli(
    string.n,
    [...string.spins].flatMap((spin, k) => {
      const b = string.bits[k] ?? 0;
      return [...(b & 1 ? [{ spin, pauli: 'x' as const }] : []), ...(b & 2 ? [{ spin, pauli: 'z' as const }] : [])];
    }),
  );
  return { ...bare, phase: string.phase & 3 };
}

/** Columns of a string in F2^2n: 2·spin for X, 2·spin + 1 for Z. Neighbouring spins stay neighbours. */
export function columnsOf(string: SparseString): number[] {
  const columns: number[] = [];
  string.spins.forEach((spin, k) => {
    const b = string.bits[k] ?? 0;
    if (b & 1) columns.push(2 * spin);
    if (b & 2) columns.push(2 * spin + 1);
  });
  return columns;
}

/** The string with phase 0 as a product of Pauli matrices that has these columns. */
export function fromColumns(n: number, columns: ArrayLike<number>): SparseString {
  const at = new Map<number, number>();
  for (let k = 0; k < columns.length; k++) {
    const c = columns[k] ?? 0;
    at.set(c >> 1, (at.get(c >> 1) ?? 0) ^ (c & 1 ? 2 : 1));
  }
  const factors = [...at].flatMap(([spin, b]) =>
    b === 0 ? [] : [{ spin, pauli: (['x', 'z', 'y'] as const)[b - 1] ?? 'x' }],
  );
  return sparseFromPauli(n, factors);
}

/** True if ab = ba; linear in the numbers of spins. */
export function sparseCommute(a: SparseString, b: SparseString): boolean {
  let odd = 0;
  for (let i = 0, j = 0; i < a.spins.length && j < b.spins.length;) {
    const difference = (a.spins[i] ?? 0) - (b.spins[j] ?? 0);
    if (difference === 0 && a.bits[i] !== b.bits[j]) odd ^= 1;
    if (difference <= 0) i++;
    if (difference >= 0) j++;
  }
  return odd === 0;
}

/** k in i^k times a product of Pauli matrices: 0 or 2 for a Hermitian string. */
export const sparsePauliPhase = (a: SparseString): number =>
  (a.phase - a.bits.reduce((count, b) => count + (b === 3 ? 1 : 0), 0)) & 3;

/** Running product of strings on n spins; its phase is exact. */
export class Product {
  private readonly x: Uint8Array;
  phase = 0;
  readonly n: number;
  constructor(n: number) {
    this.n = n;
    this.x = new Uint8Array(n);
  }
  /** Multiplies by the string from the right. */
  by(string: SparseString): void {
    let k = this.phase + string.phase;
    for (let i = 0; i < string.spins.length; i++) {
      const spin = string.spins[i] ?? 0;
      const old = this.x[spin] ?? 0;
      const b = string.bits[i] ?? 0;
      if ((old & 2) !== 0 && (b & 1) !== 0) k += 2;
      this.x[spin] = old ^ b;
    }
    this.phase = k & 3;
  }
  /** The product so far. */
  value(): SparseString {
    const spins: number[] = [];
    this.x.forEach((b, spin) => {
      if (b !== 0) spins.push(spin);
    });
    return {
      n: this.n,
      spins: Int32Array.from(spins),
      bits: Uint8Array.from(spins, (s) => this.x[s] ?? 0),
      phase: this.phase,
    };
  }
}
