import { BudgetSpent } from '../../limits.ts';
import * as Q from './rational.ts';
import type { Rational } from './rational.ts';

/** (re + i im)·sqrt(radicand), not zero. */
export interface SurdTerm {
  readonly radicand: bigint;
  readonly re: Rational;
  readonly im: Rational;
}

/**
 * An element of Q(i, sqrt 2, sqrt 3, sqrt 5, …): a sum of terms with distinct squarefree positive radicands, in rising order.
 * Square roots of distinct squarefree numbers are linearly independent over Q(i), so equal numbers are equal as data.
 */
export type Surd = readonly SurdTerm[];

export const zero: Surd = [];
export const fromRational = (r: Rational): Surd => (Q.isZero(r) ? zero : [{ radicand: 1n, re: r, im: Q.zero }]);
export const one: Surd = fromRational(Q.one);
export const imaginary: Surd = [{ radicand: 1n, re: Q.zero, im: Q.one }];

export const isZero = (a: Surd): boolean => a.length === 0;
export const isReal = (a: Surd): boolean => a.every((t) => Q.isZero(t.im));
export const isRational = (a: Surd): boolean =>
  a.length === 0 || (a.length === 1 && a[0]?.radicand === 1n && Q.isZero(a[0].im));
export const asRational = (a: Surd): Rational | undefined => (isRational(a) ? (a[0]?.re ?? Q.zero) : undefined);
export const isOne = (a: Surd): boolean => isRational(a) && a.length === 1 && Q.equals(a[0]?.re ?? Q.zero, Q.one);

/** Square root of a rational: a surd, with a factor i if it is negative. */
export function sqrtOfRational(r: Rational): Surd {
  if (Q.isZero(r)) return zero;
  const { outer, inner } = Q.splitSquare(Q.abs(r.num) * r.den);
  const size = Q.rational(outer, r.den);
  return [r.num > 0n ? { radicand: inner, re: size, im: Q.zero } : { radicand: inner, re: Q.zero, im: size }];
}

/** Independent square roots of one number. */
const mostRoots = 512;

function fromTerms(terms: Iterable<SurdTerm>): Surd {
  const byRadicand = new Map<bigint, SurdTerm>();
  for (const t of terms) {
    const old = byRadicand.get(t.radicand);
    byRadicand.set(t.radicand, old ? { radicand: t.radicand, re: Q.add(old.re, t.re), im: Q.add(old.im, t.im) } : t);
    if (byRadicand.size > mostRoots) throw new BudgetSpent(`square roots of one number (${String(mostRoots)})`);
  }
  return [...byRadicand.values()]
    .filter((t) => !Q.isZero(t.re) || !Q.isZero(t.im))
    .sort((a, b) => (a.radicand < b.radicand ? -1 : 1));
}

export function add(a: Surd, b: Surd): Surd {
  if (a.length === 0) return b;
  if (b.length === 0) return a;
  return fromTerms([...a, ...b]);
}
export const neg = (a: Surd): Surd => a.map((t) => ({ radicand: t.radicand, re: Q.neg(t.re), im: Q.neg(t.im) }));
export const sub = (a: Surd, b: Surd): Surd => add(a, neg(b));

function mulTerms(s: SurdTerm, t: SurdTerm): SurdTerm {
  const g = s.radicand === 1n || t.radicand === 1n ? 1n : Q.gcd(s.radicand, t.radicand);
  const radicand = (s.radicand / g) * (t.radicand / g);
  if (Q.isZero(s.im) && Q.isZero(t.im)) {
    const re = Q.mul(s.re, t.re);
    return { radicand, re: g === 1n ? re : Q.mul(re, Q.rational(g)), im: Q.zero };
  }
  const re = Q.sub(Q.mul(s.re, t.re), Q.mul(s.im, t.im));
  const im = Q.add(Q.mul(s.re, t.im), Q.mul(s.im, t.re));
  const scale = Q.rational(g);
  return { radicand, re: Q.mul(re, scale), im: Q.mul(im, scale) };
}

export function mul(a: Surd, b: Surd): Surd {
  const [s] = a;
  const [t] = b;
  if (!s || !t) return zero;
  if (a.length === 1 && b.length === 1) return [mulTerms(s, t)];
  return fromTerms(a.flatMap((x) => b.map((y) => mulTerms(x, y))));
}

/** Complex conjugate; square roots are positive and stay. */
export const conj = (a: Surd): Surd => a.map((t) => ({ ...t, im: Q.neg(t.im) }));

/**
 * A divisor > 1 of some radicand that divides or is coprime to every radicand, or undefined if all are 1.
 * (Found with gcds alone, so no radicand is ever factored.)
 */
function splitter(a: Surd): bigint | undefined {
  let r = a.find((t) => t.radicand !== 1n)?.radicand;
  for (let again = r !== undefined; again && r !== undefined;) {
    again = false;
    for (const t of a) {
      const g = Q.gcd(r, t.radicand);
      if (g > 1n && g < r) {
        r = g;
        again = true;
      }
    }
  }
  return r;
}

/** 1/a by rationalising one square root after another. Throws RangeError on zero. */
export function inverse(a: Surd): Surd {
  const [first] = a;
  if (!first) throw new RangeError('zero has no inverse');
  const r = splitter(a);
  if (r === undefined) {
    const norm = Q.inverse(Q.add(Q.mul(first.re, first.re), Q.mul(first.im, first.im)));
    return [{ radicand: 1n, re: Q.mul(first.re, norm), im: Q.neg(Q.mul(first.im, norm)) }];
  }
  // a = u + v, with v odd under sqrt(r) -> −sqrt(r); (u + v)(u − v) no longer holds r
  const other: Surd = a.map((t) =>
    t.radicand % r === 0n ? { radicand: t.radicand, re: Q.neg(t.re), im: Q.neg(t.im) } : t,
  );
  return mul(other, inverse(mul(a, other)));
}

export const equals = (a: Surd, b: Surd): boolean =>
  a.length === b.length &&
  a.every((s, k) => {
    const t = b[k];
    return t !== undefined && s.radicand === t.radicand && Q.equals(s.re, t.re) && Q.equals(s.im, t.im);
  });

/** Canonical text for keys, e.g. "1:3/5" or "2:0,1/2". */
export const key = (a: Surd): string =>
  a.map((t) => `${String(t.radicand)}:${Q.text(t.re)}${Q.isZero(t.im) ? '' : `,${Q.text(t.im)}`}`).join(' ');

export function toFloat(a: Surd): { re: number; im: number } {
  let re = 0;
  let im = 0;
  for (const t of a) {
    const root = t.radicand === 1n ? 1 : Math.sqrt(Number(t.radicand));
    re += root * Q.toFloat(t.re);
    im += root * Q.toFloat(t.im);
  }
  return { re, im };
}
