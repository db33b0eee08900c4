import type { FiniteString } from '../../algebra/finite/types.ts';
import { parity } from '../kernel/flips.ts';

/** Exact work on packed strings i^phase X^x Z^z, as far as bases need it. All strings have the same n. */

/** A demand on the sector: the Hermitian string has the given eigenvalue. */
export interface Constraint {
  readonly string: FiniteString;
  readonly value: 1 | -1;
}

/** Parity of the number of sites where both have a one: a·b over F2. */
export function overlap(a: Uint32Array, b: Uint32Array): number {
  let bits = 0;
  for (let w = 0; w < a.length; w++) bits ^= (a[w] ?? 0) & (b[w] ?? 0);
  return parity(bits);
}

export const commute = (a: FiniteString, b: FiniteString): boolean => (overlap(a.x, b.z) ^ overlap(a.z, b.x)) === 0;

/** Product a·b. Moving Z^z of a past X^x of b costs (−1)^(z·x), so the phase is that of a plus that of b plus 2 z·x. */
export function multiply(a: FiniteString, b: FiniteString): FiniteString {
  const x = a.x.map((word, w) => word ^ (b.x[w] ?? 0));
  const z = a.z.map((word, w) => word ^ (b.z[w] ?? 0));
  return { n: a.n, x, z, phase: (a.phase + b.phase + 2 * overlap(a.z, b.x)) & 3 };
}

/** Multiplies by −1 when `negative`. */
export const signed = (a: FiniteString, negative: boolean): FiniteString =>
  negative ? { ...a, phase: (a.phase + 2) & 3 } : a;

export const bit = (words: Uint32Array, site: number): number => ((words[site >>> 5] ?? 0) >>> (site & 31)) & 1;

export const isZero = (words: Uint32Array): boolean => words.every((word) => word === 0);

export const isIdentity = (a: FiniteString): boolean => isZero(a.x) && isZero(a.z);

/** Parity of the number of Y's; a string is real in the Z basis if and only if it and the phase agree. */
export const oddY = (a: FiniteString): number => overlap(a.x, a.z);

/** True if the string equals its adjoint: (i^k X^x Z^z)† = i^(−k) (−1)^(x·z) X^x Z^z. */
export const hermitian = (a: FiniteString): boolean => (a.phase & 1) === oddY(a);

/** The string without one site; what stood there must have been accounted for. */
export function dropSite(a: FiniteString, site: number): FiniteString {
  return { n: a.n - 1, x: dropBit(a.x, site, a.n), z: dropBit(a.z, site, a.n), phase: a.phase };
}

function dropBit(words: Uint32Array, site: number, n: number): Uint32Array {
  const out = new Uint32Array(Math.max(1, (n + 30) >>> 5));
  const at = site >>> 5;
  for (let w = 0; w < out.length; w++) {
    const here = words[w] ?? 0;
    const next = words[w + 1] ?? 0;
    const shifted = (here >>> 1) | ((next & 1) << 31);
    if (w < at) out[w] = here;
    else if (w > at) out[w] = shifted;
    else {
      const keep = 2 ** (site & 31) - 1;
      out[w] = (here & keep) | (shifted & ~keep);
    }
  }
  return out;
}

/** Sites where the string is not the identity, ascending. */
export function support(a: FiniteString): number[] {
  const sites: number[] = [];
  for (let s = 0; s < a.n; s++) if (bit(a.x, s) | bit(a.z, s)) sites.push(s);
  return sites;
}

/** The Hermitian string of a 0/1 vector: Z on site s for s < n, X on site s for n + s (kind 'any'). */
export function fromBits(n: number, v: Uint8Array, kind: 'z' | 'any'): FiniteString {
  const x = new Uint32Array(Math.max(1, (n + 31) >>> 5));
  const z = new Uint32Array(x.length);
  for (let s = 0; s < n; s++) {
    const place = 2 ** (s & 31);
    if (v[s]) z[s >>> 5] = (z[s >>> 5] ?? 0) | place;
    if (kind === 'any' && v[n + s]) x[s >>> 5] = (x[s >>> 5] ?? 0) | place;
  }
  return { n, x, z, phase: overlap(x, z) };
}

/** Solves rows · v = last column over F2: one solution and a basis of the kernel, or undefined. */
export function solveF2(
  rows: Uint8Array[],
  unknowns: number,
): { particular: Uint8Array; kernel: Uint8Array[] } | undefined {
  const pivots: number[] = [];
  let rank = 0;
  for (let c = 0; c < unknowns && rank < rows.length; c++) {
    const at = rows.findIndex((row, r) => r >= rank && row[c] === 1);
    if (at < 0) continue;
    const pivot = rows[at];
    const first = rows[rank];
    if (!pivot || !first) continue;
    rows[at] = first;
    rows[rank] = pivot;
    rows.forEach((row, r) => {
      if (r !== rank && row[c] === 1) for (let k = c; k <= unknowns; k++) row[k] = (row[k] ?? 0) ^ (pivot[k] ?? 0);
    });
    pivots.push(c);
    rank++;
  }
  if (rows.some((row, r) => r >= rank && row[unknowns] === 1)) return undefined;
  const particular = new Uint8Array(unknowns);
  pivots.forEach((c, r) => (particular[c] = rows[r]?.[unknowns] ?? 0));
  const kernel: Uint8Array[] = [];
  for (let c = 0; c < unknowns; c++) {
    if (pivots.includes(c)) continue;
    const v = new Uint8Array(unknowns);
    v[c] = 1;
    pivots.forEach((p, r) => (v[p] = rows[r]?.[c] ?? 0));
    kernel.push(v);
  }
  return { particular, kernel };
}
