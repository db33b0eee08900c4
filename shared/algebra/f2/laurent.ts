import { BudgetSpent } from '../../limits.ts';

/**
 * A Laurent polynomial over F2: exponents of its monomials, packed and ascending, each once. In one to three variables x_1, x_2, x_3; the
 * monomial x^e stands for the translation by e. Exponents are packed as digits in base 2^17 (balanced), so that the product of monomials is the sum of
 * their numbers. Zero has none.
 */
export type Laurent = readonly number[];

/** A vector over the Laurent polynomials, one entry a component. */
export type LaurentVector = readonly Laurent[];

const base = 131_072;
const half = base / 2;
/** Largest exponent that is carried (a quarter of a digit, so that sums of two stay exact). */
const most = 32_767;

export const zero: Laurent = [];
export const one: Laurent = [0];

/** Packs exponents (one a direction, up to three). Throws BudgetSpent past 32767. */
export function pack(exponents: readonly number[]): number {
  let packed = 0;
  for (let d = exponents.length - 1; d >= 0; d--) {
    const e = exponents[d] ?? 0;
    if (Math.abs(e) > most) throw new BudgetSpent(`exponent of a Laurent polynomial (${String(most)})`);
    packed = packed * base + e;
  }
  return packed;
}

/** Exponents of a packed monomial in `dimension` variables. */
export function unpack(packed: number, dimension: number): number[] {
  const exponents: number[] = [];
  let rest = packed;
  for (let d = 0; d < dimension; d++) {
    const digit = ((((rest + half) % base) + base) % base) - half;
    exponents.push(digit);
    rest = (rest - digit) / base;
  }
  return exponents;
}

/** Sum of packed monomials: those that stand there an odd number of times. */
export function fromPacked(monomials: Iterable<number>): Laurent {
  const odd = new Set<number>();
  for (const m of monomials) if (!odd.delete(m)) odd.add(m);
  return [...odd].sort((a, b) => a - b);
}
export const fromMonomials = (monomials: Iterable<readonly number[]>): Laurent => fromPacked([...monomials].map(pack));

export const isZero = (a: Laurent): boolean => a.length === 0;
export const monomials = (a: Laurent, dimension: number): number[][] => a.map((m) => unpack(m, dimension));
export const key = (a: Laurent): string => a.join(' ');
export const equals = (a: Laurent, b: Laurent): boolean => a.length === b.length && a.every((m, k) => m === b[k]);

/** Sum of two ascending lists of which common entries cancel. */
export function add(a: Laurent, b: Laurent): Laurent {
  if (a.length === 0) return b;
  if (b.length === 0) return a;
  const out: number[] = [];
  let i = 0;
  let j = 0;
  while (i < a.length || j < b.length) {
    const p = a[i] ?? Infinity;
    const q = b[j] ?? Infinity;
    if (p !== q) out.push(Math.min(p, q));
    if (p <= q) i++;
    if (q <= p) j++;
  }
  return out;
}

/** x^e · a, for packed e. */
export const shift = (a: Laurent, packed: number): Laurent => (packed === 0 ? a : a.map((m) => m + packed));

export function mul(a: Laurent, b: Laurent): Laurent {
  const [short, long] = a.length < b.length ? [a, b] : [b, a];
  if (short.length === 1) return shift(long, short[0] ?? 0);
  return fromPacked(short.flatMap((m) => long.map((n) => m + n)));
}

/** The ring automorphism x -> 1/x. */
export const antipode = (a: Laurent): Laurent => a.map((m) => 0 - m).reverse();

export const zeroVector = (length: number): LaurentVector => Array.from({ length }, () => zero);
export const addVectors = (a: LaurentVector, b: LaurentVector): LaurentVector => a.map((p, k) => add(p, b[k] ?? zero));
export const scaleVector = (p: Laurent, a: LaurentVector): LaurentVector => a.map((q) => mul(p, q));
export const isZeroVector = (a: LaurentVector): boolean => a.every(isZero);
export const equalVectors = (a: LaurentVector, b: LaurentVector): boolean =>
  a.length === b.length && a.every((p, k) => equals(p, b[k] ?? zero));
/** Number of monomials in all components. */
export const vectorWeight = (a: LaurentVector): number => a.reduce((sum, p) => sum + p.length, 0);

/** Σ c_k v_k, for as many polynomials as vectors of `length` components. */
export const combine = (
  coefficients: LaurentVector,
  vectors: readonly LaurentVector[],
  length: number,
): LaurentVector =>
  vectors.reduce<LaurentVector>(
    (sum, v, k) => (isZero(coefficients[k] ?? zero) ? sum : addVectors(sum, scaleVector(coefficients[k] ?? zero, v))),
    zeroVector(length),
  );

/** The translate whose lowest corner (over all monomials) is at 0; equal for vectors that differ by a translation. */
export function normalised(a: LaurentVector, dimension: number): LaurentVector {
  const all = a.flatMap((p) => monomials(p, dimension));
  if (all.length === 0) return a;
  const low = Array.from({ length: dimension }, (_, d) =>
    all.reduce((least, e) => Math.min(least, e[d] ?? 0), Infinity),
  );
  const back = -pack(low);
  return a.map((p) => shift(p, back));
}
export const vectorKey = (a: LaurentVector): string => a.map(key).join('|');
