import { Coefficient } from '../algebra/numbers/coefficient.ts';
import * as Q from '../algebra/numbers/rational.ts';
import type { Rational } from '../algebra/numbers/rational.ts';
import type { Budget } from '../limits.ts';

/**
 * The canonical effective Hamiltonian for one multiset of perturbing Pauli strings.
 *
 * V = Σ λ_j T_j with Pauli strings T_j. Each T_j maps a common eigenspace of the (commuting, Pauli) terms of H0 to another, so the resolvent acts as a
 * number, and every operator of the series applied to the ground space is a number times the ordered product Π_A of a sub-multiset A. The whole theory is
 * therefore a calculation with numbers ω_A, h_A in the algebra Π_A Π_B = ±Π_{A+B}, and the coefficient of λ^M is that of Π_M. Scheme: Bloch's wave operator Ω
 * (C. Bloch, Nucl. Phys. 6, 329 (1958)), made unitary by the symmetric root, H = (Ω†Ω)^{1/2} P V Ω (Ω†Ω)^{-1/2} (J. des Cloizeaux, Nucl. Phys. 20, 321 (1960)). This is
 * the direct rotation, hence equal to the Schrieffer–Wolff transformation with block-off-diagonal generator (S. Bravyi, D. DiVincenzo, D. Loss, Ann. Phys. 326, 2793 (2011)) and to
 * Takahashi's series (M. Takahashi, J. Phys. C 10, 1289 (1977)). It is additive for independent systems, so that only connected multisets contribute.
 */
export interface ClusterShape {
  /** How often each string occurs, ≥ 1. */
  readonly multiplicities: readonly number[];
  /** Row j: bit i is set if T_i and T_j anticommute. */
  readonly anticommute: readonly number[];
  /** For each string the terms of H0 that it flips, by local number. */
  readonly flips: readonly (readonly number[])[];
}

/** The numbers to calculate with: exact, commutative. */
export interface Ring<T> {
  readonly zero: T;
  readonly one: T;
  add(a: T, b: T): T;
  mul(a: T, b: T): T;
  neg(a: T): T;
  /** 1/a; a is not zero. */
  inverse(a: T): T;
  isZero(a: T): boolean;
  rational(num: bigint, den: bigint): T;
  key(a: T): string;
}

export const rationals: Ring<Rational> = {
  zero: Q.zero,
  one: Q.one,
  add: Q.add,
  mul: Q.mul,
  neg: Q.neg,
  inverse: Q.inverse,
  isZero: Q.isZero,
  rational: Q.rational,
  key: Q.text,
};

export const functions: Ring<Coefficient> = {
  zero: Coefficient.zero,
  one: Coefficient.one,
  add: (a, b) => a.add(b),
  mul: (a, b) => a.mul(b),
  neg: (a) => a.neg(),
  inverse: (a) => a.pow(-1) ?? Coefficient.zero,
  isZero: (a) => a.isZero(),
  rational: (num, den) => Coefficient.rational(num, den),
  key: (a) => a.key(),
};

/** Sub-multisets of M, numbered in mixed radix (smaller ones have smaller numbers), and the signs of their products. */
class Subsets {
  readonly count: number;
  /** Digits of each, and the bit mask of the odd ones. */
  readonly digits: readonly (readonly number[])[];
  readonly odd: readonly number[];
  readonly weights: readonly number[];
  private readonly anticommute: readonly number[];

  constructor({ multiplicities, anticommute }: ClusterShape) {
    this.anticommute = anticommute;
    let all: number[][] = [[]];
    // the first string is the fastest digit
    for (const m of [...multiplicities].reverse())
      all = all.flatMap((rest) => Array.from({ length: m + 1 }, (_, k) => [k, ...rest]));
    const weights: number[] = [];
    multiplicities.reduce((w, m) => {
      weights.push(w);
      return w * (m + 1);
    }, 1);
    this.weights = weights;
    const number = (digits: readonly number[]): number => digits.reduce((sum, k, j) => sum + k * (weights[j] ?? 0), 0);
    const sorted: number[][] = [];
    for (const digits of all) sorted[number(digits)] = digits;
    this.digits = sorted;
    this.odd = sorted.map((digits) => digits.reduce((mask, k, j) => mask | ((k & 1) << j), 0));
    this.count = sorted.length;
  }

  /** True if b is part of a; then the rest has number a − b. */
  within(b: number, a: number): boolean {
    const [x, y] = [this.digits[b] ?? [], this.digits[a] ?? []];
    return x.every((k, j) => k <= (y[j] ?? 0));
  }

  /** Sign of Π_A Π_B against Π_{A+B}: each string of A passes those of B with smaller numbers. */
  crossing(a: number, b: number): boolean {
    const [x, y] = [this.odd[a] ?? 0, this.odd[b] ?? 0];
    let flips = 0;
    for (let rest = x; rest !== 0; rest &= rest - 1) {
      const i = 31 - Math.clz32(rest & -rest);
      flips ^= parity((this.anticommute[i] ?? 0) & y & ((1 << i) - 1));
    }
    return flips === 1;
  }

  /** Sign of Π_A† against Π_A: the order is reversed. */
  reversed(a: number): boolean {
    const x = this.odd[a] ?? 0;
    let flips = 0;
    for (let rest = x; rest !== 0; rest &= rest - 1) {
      const i = 31 - Math.clz32(rest & -rest);
      flips ^= parity((this.anticommute[i] ?? 0) & x & ((1 << i) - 1));
    }
    return flips === 1;
  }
}

function parity(word: number): number {
  let w = word;
  w ^= w >>> 16;
  w ^= w >>> 8;
  w ^= w >>> 4;
  return (0x6996 >>> (w & 15)) & 1;
}

/** Energy above the ground space for each parity pattern of strings; undefined where nothing is flipped. */
function excitations<T>(ring: Ring<T>, { flips }: ClusterShape, energies: readonly T[]): (T | undefined)[] {
  return Array.from({ length: 2 ** flips.length }, (_, mask) => {
    const odd = new Set<number>();
    flips.forEach((list, j) => {
      if (((mask >> j) & 1) === 0) return;
      for (const a of list) if (!odd.delete(a)) odd.add(a);
    });
    if (odd.size === 0) return undefined;
    return [...odd].reduce((sum, a) => ring.add(sum, energies[a] ?? ring.zero), ring.zero);
  });
}

/** Key of all that the coefficient depends on: clusters with equal keys have equal coefficients. */
export function shapeKey<T>(ring: Ring<T>, shape: ClusterShape, energies: readonly T[]): string {
  const levels = excitations(ring, shape, energies).map((e) => (e === undefined ? '0' : ring.key(e)));
  return `${shape.multiplicities.join()}|${shape.anticommute.join()}|${levels.join()}`;
}

/**
 * Coefficient of Π_M (the strings in order, each as often as it occurs) in the canonical effective Hamiltonian, without the couplings of V. `energies`: what each term
 * of H0 costs when flipped (2 |c|). M as a whole flips nothing, else the coefficient is zero. Throws BudgetSpent.
 */
export function clusterCoefficient<T>(ring: Ring<T>, shape: ClusterShape, energies: readonly T[], budget: Budget): T {
  const subsets = new Subsets(shape);
  const levels = excitations(ring, shape, energies);
  const level = (a: number): T | undefined => levels[subsets.odd[a] ?? 0];
  const { count } = subsets;
  if (level(count - 1) !== undefined) return ring.zero;
  const signed = (value: T, minus: boolean): T => (minus ? ring.neg(value) : value);
  const product = (x: readonly T[], y: readonly T[]): T[] => {
    const out = Array<T>(count).fill(ring.zero);
    for (let c = 0; c < count; c++)
      for (let a = 0; a <= c; a++) {
        budget.spend();
        const [p, q] = [x[a] ?? ring.zero, y[c - a] ?? ring.zero];
        if (ring.isZero(p) || ring.isZero(q) || !subsets.within(a, c)) continue;
        out[c] = ring.add(out[c] ?? ring.zero, signed(ring.mul(p, q), subsets.crossing(a, c - a)));
      }
    return out;
  };
  // Ω = Σ ω_A Π_A P and P V Ω = Σ h_A Π_A P
  const wave = Array<T>(count).fill(ring.zero);
  const bloch = Array<T>(count).fill(ring.zero);
  wave[0] = ring.one;
  for (let a = 1; a < count; a++) {
    let driven = ring.zero;
    subsets.weights.forEach((w, j) => {
      if ((subsets.digits[a]?.[j] ?? 0) === 0) return;
      const before = wave[a - w] ?? ring.zero;
      if (!ring.isZero(before)) driven = ring.add(driven, signed(before, subsets.crossing(w, a - w)));
    });
    const excited = level(a);
    if (excited === undefined) {
      bloch[a] = driven;
      continue;
    }
    let folded = ring.zero;
    for (let b = 1; b < a; b++) {
      budget.spend();
      const [p, q] = [wave[b] ?? ring.zero, bloch[a - b] ?? ring.zero];
      if (ring.isZero(p) || ring.isZero(q) || !subsets.within(b, a)) continue;
      folded = ring.add(folded, signed(ring.mul(p, q), subsets.crossing(b, a - b)));
    }
    wave[a] = ring.neg(ring.mul(ring.add(driven, ring.neg(folded)), ring.inverse(excited)));
  }
  // Ω†Ω − 1 on the ground space
  const overlap = Array<T>(count).fill(ring.zero);
  for (let c = 1; c < count; c++) {
    if (level(c) !== undefined) continue;
    for (let a = 1; a < c; a++) {
      budget.spend();
      const [p, q] = [wave[a] ?? ring.zero, wave[c - a] ?? ring.zero];
      if (ring.isZero(p) || ring.isZero(q) || !subsets.within(a, c)) continue;
      const minus = subsets.crossing(a, c - a) !== subsets.reversed(a);
      overlap[c] = ring.add(overlap[c] ?? ring.zero, signed(ring.mul(p, q), minus));
    }
  }
  const order = shape.multiplicities.reduce((sum, m) => sum + m, 0);
  const left = power(ring, overlap, product, order, 1n);
  const right = power(ring, overlap, product, order, -1n);
  return product(product(left, bloch), right)[count - 1] ?? ring.zero;
}

/** (1 + X)^(half/2) as a binomial series; X starts at second order. */
function power<T>(
  ring: Ring<T>,
  x: readonly T[],
  product: (a: readonly T[], b: readonly T[]) => T[],
  order: number,
  half: bigint,
): T[] {
  const sum = x.map(() => ring.zero);
  sum[0] = ring.one;
  let term: T[] = [...sum];
  let binomial = Q.one;
  for (let k = 1; 2 * k <= order; k++) {
    term = product(term, x);
    // (s choose k) = (s choose k − 1) (s − k + 1)/k with s = half/2
    binomial = Q.mul(binomial, Q.rational(half - 2n * BigInt(k) + 2n, 2n * BigInt(k)));
    const factor = ring.rational(binomial.num, binomial.den);
    term.forEach((t, c) => {
      if (!ring.isZero(t)) sum[c] = ring.add(sum[c] ?? ring.zero, ring.mul(factor, t));
    });
  }
  return sum;
}
