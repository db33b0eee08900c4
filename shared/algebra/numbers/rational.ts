import { BudgetSpent } from '../../limits.ts';

/** An exact rational: lowest terms, `den` positive, zero is 0/1. */
export interface Rational {
  readonly num: bigint;
  readonly den: bigint;
}

/** Largest numerator or denominator that is carried; beyond it a number is an error, not a slow program. */
const bits = 16_384;
const bound = 1n << BigInt(bits);

export const zero: Rational = { num: 0n, den: 1n };
export const one: Rational = { num: 1n, den: 1n };

export const abs = (n: bigint): bigint => (n < 0n ? -n : n);

/** Greatest common divisor, never negative; gcd(0, 0) = 0. */
export function gcd(a: bigint, b: bigint): bigint {
  let x = abs(a);
  let y = abs(b);
  while (y !== 0n) [x, y] = [y, x % y];
  return x;
}

/** num/den in lowest terms. Throws RangeError on den = 0 and BudgetSpent when a part passes 16384 bits. */
export function rational(num: bigint, den: bigint = 1n): Rational {
  if (den === 0n) throw new RangeError('a rational needs a denominator other than 0');
  if (den === 1n) return checked(num, den);
  const sign = den < 0n ? -1n : 1n;
  const g = gcd(num, den) * sign;
  return checked(num / g, den / g);
}

function checked(num: bigint, den: bigint): Rational {
  if (num > bound || num < -bound || den > bound)
    throw new BudgetSpent(`digits of an exact number (${String(bits)} bits)`);
  return { num, den };
}

export function add(a: Rational, b: Rational): Rational {
  if (a.den === 1n && b.den === 1n) return checked(a.num + b.num, 1n);
  return rational(a.num * b.den + b.num * a.den, a.den * b.den);
}
export const neg = (a: Rational): Rational => ({ num: -a.num, den: a.den });
export const sub = (a: Rational, b: Rational): Rational => add(a, neg(b));
export function mul(a: Rational, b: Rational): Rational {
  if (a.den === 1n && b.den === 1n) return checked(a.num * b.num, 1n);
  return rational(a.num * b.num, a.den * b.den);
}
/** 1/a. Throws RangeError on 0. */
export const inverse = (a: Rational): Rational => rational(a.den, a.num);
export const isZero = (a: Rational): boolean => a.num === 0n;
export const equals = (a: Rational, b: Rational): boolean => a.num === b.num && a.den === b.den;
/** −1, 0 or 1 as a is below, at or above b. */
export function compare(a: Rational, b: Rational): number {
  const left = a.num * b.den;
  const right = b.num * a.den;
  return left < right ? -1 : left > right ? 1 : 0;
}

/** "3/5", "-2". */
export const text = (a: Rational): string => (a.den === 1n ? String(a.num) : `${String(a.num)}/${String(a.den)}`);

/** Nearest float, also where numerator and denominator alone would overflow. */
export function toFloat(a: Rational): number {
  const direct = Number(a.num) / Number(a.den);
  if (Number.isFinite(Number(a.num)) && Number.isFinite(Number(a.den))) return direct;
  const length = (n: bigint) => n.toString(16).length * 4;
  const drop = length(a.num) - length(a.den);
  // keep 128 bits of the quotient, then put the power of two back
  const shift = BigInt(128 - drop);
  const scaled = shift >= 0n ? (a.num << shift) / a.den : a.num / (a.den << -shift);
  return Number(scaled) * 2 ** -Number(shift);
}

/** Integer square root: the largest r with r² <= n, for n >= 0 (Newton's iteration). */
export function integerSqrt(n: bigint): bigint {
  if (n < 2n) return n;
  let r = 1n << BigInt(Math.ceil(n.toString(2).length / 2));
  for (;;) {
    const next = (r + n / r) >> 1n;
    if (next >= r) return r;
    r = next;
  }
}

/**
 * n = outer² · inner with inner squarefree, for n >= 0 (0 gives outer 0, inner 1).
 * Trial division to 2^20; throws BudgetSpent where that cannot decide that the rest is squarefree.
 */
export function splitSquare(n: bigint): { outer: bigint; inner: bigint } {
  if (n === 0n) return { outer: 0n, inner: 1n };
  const whole = integerSqrt(n);
  if (whole * whole === n) return { outer: whole, inner: 1n };
  let rest = n;
  let outer = 1n;
  let inner = 1n;
  for (let p = 2n; p * p * p <= rest; p += p === 2n ? 1n : 2n) {
    if (p > 1_048_576n) throw new BudgetSpent('size of a number under a square root (2^60 after small factors)');
    while (rest % (p * p) === 0n) {
      rest /= p * p;
      outer *= p;
    }
    if (rest % p === 0n) {
      rest /= p;
      inner *= p;
    }
  }
  // what is left has at most two prime factors, so it is a square or squarefree
  const root = integerSqrt(rest);
  if (root * root === rest) return { outer: outer * root, inner };
  return { outer, inner: inner * rest };
}
