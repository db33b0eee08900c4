import type { FiniteString } from '../../algebra/finite/types.ts';
import { parity } from '../kernel/flips.ts';
import { bit, commute, fromBits, isZero, multiply, oddY, solveF2 } from './packed.ts';

/** Changes of basis that make the matrix of a Hamiltonian cheaper; each is exact and keeps the spectrum. */

/**
 * A frame in which Hermitian strings are real, if the strings allow one: complex conjugation K maps T to (−1)^(Y's) T,
 * so P K is kept by every T if <P, T> = Y's of T mod 2. For P with an even number of Y's, (1 + iP)/√2 carries P K to K:
 * strings that commute with P stay, the others become iPT. Derived here. Returns undefined when the linear system has
 * no such solution, and the identity when the strings are real already.
 */
export function realFrame(
  n: number,
  terms: readonly FiniteString[],
): ((string: FiniteString) => FiniteString) | undefined {
  if (terms.every((t) => oddY(t) === 0)) return (string) => string;
  const p = realPartner(n, terms, 'z') ?? realPartner(n, terms, 'any');
  if (!p) return undefined;
  return (string) => {
    if (commute(p, string)) return string;
    const product = multiply(p, string);
    return { ...product, phase: (product.phase + 1) & 3 };
  };
}

/** Hermitian string with an even number of Y's and <P, T> = Y's of T; of Z's alone (flips stay as they are) or any. */
function realPartner(n: number, terms: readonly FiniteString[], kind: 'z' | 'any'): FiniteString | undefined {
  const unknowns = kind === 'z' ? n : 2 * n;
  // Unknown s < n: a Z on site s (meets X of T); n + s: an X on site s (meets Z of T).
  const rows = terms.map((t) => {
    const row = new Uint8Array(unknowns + 1);
    for (let s = 0; s < n; s++) {
      row[s] = bit(t.x, s);
      if (kind === 'any') row[n + s] = bit(t.z, s);
    }
    row[unknowns] = oddY(t);
    return row;
  });
  const solved = solveF2(rows, unknowns);
  if (!solved) return undefined;
  const found = [solved.particular, ...solved.kernel.map((v) => v.map((b, k) => b ^ (solved.particular[k] ?? 0)))];
  for (const v of found) {
    const p = fromBits(n, v, kind);
    if (oddY(p) === 0) return p;
  }
  // A sum of two kernel vectors may have an even number of Y's where none alone has.
  for (const [k, a] of solved.kernel.entries()) {
    for (const b of solved.kernel.slice(0, k)) {
      const p = fromBits(
        n,
        a.map((value, i) => value ^ (b[i] ?? 0) ^ (solved.particular[i] ?? 0)),
        kind,
      );
      if (oddY(p) === 0) return p;
    }
  }
  return undefined;
}

/**
 * Strings that commute with all terms, sorted out: `laws` are independent, commute with each other and with every
 * symmetry but their own partner; law k has partners[k], a symmetry that anticommutes with it alone, or none. Where a law
 * has a partner, its two values have the same spectrum.
 */
export function symmetries(
  n: number,
  terms: readonly FiniteString[],
): { readonly laws: FiniteString[]; readonly partners: (FiniteString | undefined)[] } {
  const rows = terms.map((t) => {
    const row = new Uint8Array(2 * n + 1);
    for (let s = 0; s < n; s++) {
      row[s] = bit(t.x, s);
      row[n + s] = bit(t.z, s);
    }
    return row;
  });
  let rest = (solveF2(rows, 2 * n)?.kernel ?? []).map((v) => fromBits(n, v, 'any'));
  const laws: FiniteString[] = [];
  const partners: (FiniteString | undefined)[] = [];
  // Symplectic Gram-Schmidt: split off anticommuting pairs until the rest commutes.
  for (let first = rest.shift(); first; first = rest.shift()) {
    const law = first;
    const at = rest.findIndex((r) => !commute(law, r));
    const partner = at < 0 ? undefined : rest.splice(at, 1)[0];
    laws.push(law);
    partners.push(partner);
    if (!partner) continue;
    rest = rest.map((r) => {
      const byPartner = commute(law, r) ? r : multiply(r, partner);
      return commute(partner, r) ? byPartner : multiply(byPartner, law);
    });
  }
  return { laws: laws.map(asHermitian), partners };
}

/** The string with the phase of a product of Pauli matrices. */

function asHermitian({ n, x, z }: FiniteString): FiniteString {
  let count = 0;
  for (let s = 0; s < n; s++) count += bit(x, s) & bit(z, s);
  return { n, x, z, phase: count & 3 };
}

/** Number of different bit flips: what a product costs, in sweeps. */
const flipCount = (strings: readonly FiniteString[]): number =>
  new Set(strings.filter((s) => !isZero(s.x)).map((s) => s.x.join(','))).size;

/**
 * Exchanges X and Z on the first `spins` sites (at most 30) when that leaves fewer different bit flips. On the others the
 * strings are made of Z's alone.
 */
export function cheaperFrame(spins: number, strings: readonly FiniteString[]): (string: FiniteString) => FiniteString {
  const mask = 2 ** spins - 1;
  const turn = (s: FiniteString): FiniteString => {
    const [x, z] = [s.x[0] ?? 0, s.z[0] ?? 0];
    // Hadamard matrices: X^x Z^z becomes Z^x X^z = (−1)^(x·z) X^z Z^x.
    const turned = { n: s.n, x: Uint32Array.of(z & mask), z: Uint32Array.of((x & mask) | (z & ~mask)) };
    return { ...turned, phase: (s.phase + 2 * parity(x & z & mask)) & 3 };
  };
  return flipCount(strings.map(turn)) < flipCount(strings) ? turn : (s) => s;
}
