import { BudgetSpent } from '../../limits.ts';
import { Coefficient } from '../numbers/coefficient.ts';

/**
 * Exact matrices on a few spins: (2^k × 2^m) rows of coefficients. The first spin is the highest bit of an index, and |0> is Z = +1, so the rows of a
 * one-spin matrix are |0>, |1>. Pauli strings are letters, one a spin: "IXZ".
 */
export type Matrix = readonly (readonly Coefficient[])[];

/** Spins of one block; 4^8 strings are the most that are expanded. */
export const mostBlockSpins = 8;

export interface BlockTerm {
  readonly letters: string;
  readonly coefficient: Coefficient;
}

const { zero, one, i } = Coefficient;
const phases = [one, i, one.neg(), i.neg()] as const;

/** k with rows.length = 2^k. Throws RangeError for other sizes, BudgetSpent past 8 spins. */
function spinsOf(size: number): number {
  const k = Math.log2(size);
  if (!Number.isInteger(k)) throw new RangeError(`a block has 2^k states, not ${String(size)}`);
  if (k > mostBlockSpins) throw new BudgetSpent(`spins of a block (${String(mostBlockSpins)})`);
  return k;
}

export const zeroMatrix = (rows: number, columns: number): Matrix =>
  Array.from({ length: rows }, () => Array<Coefficient>(columns).fill(zero));
export const identityMatrix = (size: number): Matrix =>
  Array.from({ length: size }, (_, r) => Array.from({ length: size }, (_, c) => (r === c ? one : zero)));

/** A·B for (p × q) and (q × r). Throws RangeError if the shapes do not meet. */
export function multiplyMatrices(a: Matrix, b: Matrix): Matrix {
  const columns = b[0]?.length ?? 0;
  return a.map((row) => {
    if (row.length !== b.length)
      throw new RangeError(`a matrix of ${String(row.length)} columns meets one of ${String(b.length)} rows`);
    const out = Array<Coefficient>(columns).fill(zero);
    row.forEach((x, k) => {
      if (x.isZero()) return;
      b[k]?.forEach((y, c) => {
        if (!y.isZero()) out[c] = (out[c] ?? zero).add(x.mul(y));
      });
    });
    return out;
  });
}
export const adjointMatrix = (a: Matrix): Matrix =>
  Array.from({ length: a[0]?.length ?? 0 }, (_, c) => a.map((row) => (row[c] ?? zero).conj()));
export const addMatrices = (a: Matrix, b: Matrix): Matrix =>
  a.map((row, r) => row.map((x, c) => x.add(b[r]?.[c] ?? zero)));
export const scaleMatrix = (a: Matrix, by: Coefficient): Matrix => a.map((row) => row.map((x) => x.mul(by)));
export const equalMatrices = (a: Matrix, b: Matrix): boolean =>
  a.length === b.length &&
  a.every((row, r) => row.length === b[r]?.length && row.every((x, c) => x.equals(b[r]?.[c] ?? zero)));

/** Matrix of i^phase times a Pauli string, (2^k × 2^k) for k letters. Throws RangeError on other letters. */
export function pauliMatrix(letters: string, phase = 0): Matrix {
  const size = 2 ** letters.length;
  spinsOf(size);
  const { x, z, y } = masks(letters);
  return Array.from({ length: size }, (_, r) =>
    Array.from({ length: size }, (_, c) =>
      (r ^ c) === x ? (phases[(phase + y + 2 * parity(c & z)) & 3] ?? one) : zero,
    ),
  );
}

/** Bit masks of X and Z parts, first letter highest; number of Y: the string is i^y X^x Z^z. */
function masks(letters: string): { x: number; z: number; y: number } {
  let [x, z, y] = [0, 0, 0];
  for (const letter of letters) {
    if (!'IXYZ'.includes(letter)) throw new RangeError(`"${letter}" is not one of I, X, Y, Z`);
    x = 2 * x + (letter === 'X' || letter === 'Y' ? 1 : 0);
    z = 2 * z + (letter === 'Z' || letter === 'Y' ? 1 : 0);
    y += letter === 'Y' ? 1 : 0;
  }
  return { x, z, y };
}
function parity(n: number): number {
  let p = 0;
  for (let rest = n; rest !== 0; rest &= rest - 1) p ^= 1;
  return p;
}
const lettersOf = (x: number, z: number, k: number): string =>
  Array.from({ length: k }, (_, s) => 'IXZY'[((x >> (k - 1 - s)) & 1) + 2 * ((z >> (k - 1 - s)) & 1)] ?? 'I').join('');

/**
 * The expansion of a square matrix in Pauli strings, without those of coefficient 0: c_P = tr(P M) / 2^k, by one Walsh transform for each X part.
 */
export function pauliExpansion(matrix: Matrix): BlockTerm[] {
  const size = matrix.length;
  const k = spinsOf(size);
  if (matrix.some((row) => row.length !== size)) throw new RangeError('a Pauli expansion needs a square matrix');
  const scale = Coefficient.rational(1, size);
  const terms: BlockTerm[] = [];
  for (let x = 0; x < size; x++) {
    // M = Σ_z c(x, z) i^y X^x Z^z, so M[c ^ x][c] = Σ_z c i^y (−1)^(z·c)
    let values = Array.from({ length: size }, (_, c) => matrix[c ^ x]?.[c] ?? zero);
    if (values.every((v) => v.isZero())) continue;
    for (let step = 1; step < size; step *= 2)
      values = values.map((v, c) => (c & step ? (values[c ^ step] ?? zero).sub(v) : v.add(values[c | step] ?? zero)));
    for (const [z, v] of values.entries()) {
      if (v.isZero()) continue;
      const letters = lettersOf(x, z, k);
      const y = [...letters].filter((l) => l === 'Y').length;
      terms.push({ letters, coefficient: v.mul(scale).mul(phases[-y & 3] ?? one) });
    }
  }
  return terms.sort((a, b) => (a.letters < b.letters ? -1 : 1));
}

/** The matrix of a sum of Pauli strings on k spins. */
export const fromExpansion = (terms: readonly BlockTerm[], k: number): Matrix =>
  terms.reduce<Matrix>(
    (sum, t) => addMatrices(sum, scaleMatrix(pauliMatrix(t.letters), t.coefficient)),
    zeroMatrix(2 ** k, 2 ** k),
  );

/** Rank over the field of coefficients (couplings generic), by elimination. */
export function matrixRank(a: Matrix): number {
  let rows = a.map((row) => [...row]);
  let rank = 0;
  for (let c = 0; c < (a[0]?.length ?? 0); c++) {
    const p = rows.findIndex((row) => !(row[c] ?? zero).isZero());
    const pivot = rows[p];
    if (!pivot) continue;
    rank++;
    rows = rows
      .filter((_, r) => r !== p)
      .map((row) => {
        const factor = (row[c] ?? zero).div(pivot[c] ?? one) ?? zero;
        return factor.isZero() ? row : row.map((x, k) => x.sub(factor.mul(pivot[k] ?? zero)));
      });
  }
  return rank;
}
