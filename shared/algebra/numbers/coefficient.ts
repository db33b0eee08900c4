import { BudgetSpent, limits } from '../../limits.ts';
import * as P from './polynomial.ts';
import type { Polynomial } from './polynomial.ts';
import * as Q from './rational.ts';
import * as S from './surd.ts';
import type { Surd } from './surd.ts';
import { coefficientText, needsBracket, type TermParts } from './text.ts';

export type { TermParts } from './text.ts';

/** A coupling without a value was asked for its number. */
export class MissingValue extends Error {
  readonly names: readonly string[];
  constructor(names: readonly string[]) {
    super(`no value for ${names.join(', ')}`);
    this.name = 'MissingValue';
    this.names = names;
  }
}

/** One product as plain data: numerator, denominator, 1 with i, radicand, powers of couplings. */
export type TermData = readonly [
  num: string,
  den: string,
  imaginary: 0 | 1,
  radicand: string,
  powers: readonly (readonly [string, number])[],
];
/** A coefficient as plain data: terms of the numerator and, where there is one, of the denominator. */
export type CoefficientData = readonly [numerator: readonly TermData[], denominator?: readonly TermData[]];

/**
 * An exact coefficient: a quotient of polynomials in real coupling symbols over Q(i, square roots). One canonical form: numerator and
 * denominator coprime, the denominator monic in the graded order of `polynomial.ts`; equal coefficients have equal keys. Immutable.
 * Work that explodes (terms, digits, greatest common divisors) throws BudgetSpent.
 */
export class Coefficient {
  private readonly numerator: Polynomial;
  private readonly denominator: Polynomial;
  #cachedKey: string | undefined;
  #cachedParts: { readonly numerator: readonly TermParts[]; readonly denominator: readonly TermParts[] } | undefined;

  private constructor(numerator: Polynomial, denominator: Polynomial) {
    this.numerator = numerator;
    this.denominator = denominator;
  }

  static readonly zero = new Coefficient(P.zero, P.one);
  static readonly one = new Coefficient(P.one, P.one);
  /** The imaginary unit. */
  static readonly i = new Coefficient(P.constant(S.imaginary), P.one);

  static fromBigInt(n: bigint): Coefficient {
    return Coefficient.fromSurd(S.fromRational(Q.rational(n)));
  }
  /** n/d for integers; throws RangeError on d = 0. */
  static rational(n: bigint | number, d: bigint | number = 1n): Coefficient {
    return Coefficient.fromSurd(S.fromRational(Q.rational(BigInt(n), BigInt(d))));
  }
  static fromSurd(c: Surd): Coefficient {
    return S.isOne(c) ? Coefficient.one : new Coefficient(P.constant(c), P.one);
  }
  /** Exact value of a decimal: "12", "0.6" = 3/5, "1e-3" = 1/1000, "-2.5E2". Throws RangeError on other text, BudgetSpent past |exponent| 400. */
  static fromDecimal(text: string): Coefficient {
    const m = /^([+-]?)(\d+)(?:\.(\d+))?(?:[eE]([+-]?\d+))?$/.exec(text.trim());
    if (!m) throw new RangeError(`"${text}" is not a decimal number`);
    const [, sign = '', whole = '', fraction = '', exponent = '0'] = m;
    if (whole.length + fraction.length > 1_000) throw new BudgetSpent('digits of a decimal (1000)');
    if (Math.abs(Number(exponent)) > 400) throw new BudgetSpent('exponent of a decimal (400)');
    const digits = BigInt(`${whole}${fraction}`) * (sign === '-' ? -1n : 1n);
    const shift = Number(exponent) - fraction.length;
    const ten = 10n ** BigInt(Math.abs(shift));
    return shift >= 0 ? Coefficient.fromBigInt(digits * ten) : Coefficient.rational(digits, ten);
  }
  /** A coupling, taken as real. */
  static symbol(name: string): Coefficient {
    return new Coefficient(P.symbol(name), P.one);
  }
  /** Square root of a rational constant, i·sqrt(−c) where it is negative; undefined for anything else. */
  static sqrt(c: Coefficient): Coefficient | undefined {
    const r = c.asRational();
    return r && Coefficient.fromSurd(S.sqrtOfRational(r));
  }

  /** The canonical quotient; undefined if the denominator is zero. */
  private static quotient(num: Polynomial, den: Polynomial): Coefficient | undefined {
    const [lead] = den;
    if (!lead) return undefined;
    if (num.length === 0) return Coefficient.zero;
    if (P.isConstant(den)) return new Coefficient(P.scale(num, S.inverse(lead.coefficient)), P.one);
    let [n, d] = [num, den];
    if (den.length === 1) {
      const common = P.commonMonomial([...num, ...den]);
      [n, d] = [Coefficient.without(num, common), Coefficient.without(den, common)];
    } else {
      const g = P.gcd(num, den);
      if (!P.isConstant(g)) [n, d] = [P.divideExactly(num, g) ?? num, P.divideExactly(den, g) ?? den];
    }
    const scale = S.inverse(d[0]?.coefficient ?? S.one);
    return new Coefficient(P.scale(n, scale), P.isConstant(d) ? P.one : P.scale(d, scale));
  }
  private static without(p: Polynomial, m: P.Monomial): Polynomial {
    return p.map((t) => ({ monomial: P.divMonomials(t.monomial, m) ?? t.monomial, coefficient: t.coefficient }));
  }
  private static of(num: Polynomial, den: Polynomial): Coefficient {
    const q = den === P.one ? new Coefficient(num, P.one) : Coefficient.quotient(num, den);
    if (!q) throw new Error('a canonical denominator is never zero');
    return q;
  }

  add(other: Coefficient): Coefficient {
    if (this.denominator === other.denominator || P.equals(this.denominator, other.denominator))
      return Coefficient.of(P.add(this.numerator, other.numerator), this.denominator);
    return Coefficient.of(
      P.add(P.mul(this.numerator, other.denominator), P.mul(other.numerator, this.denominator)),
      P.mul(this.denominator, other.denominator),
    );
  }
  neg(): Coefficient {
    return new Coefficient(P.neg(this.numerator), this.denominator);
  }
  sub(other: Coefficient): Coefficient {
    return this.add(other.neg());
  }
  mul(other: Coefficient): Coefficient {
    if (this.denominator === P.one && other.denominator === P.one)
      return new Coefficient(P.mul(this.numerator, other.numerator), P.one);
    return Coefficient.of(P.mul(this.numerator, other.numerator), P.mul(this.denominator, other.denominator));
  }
  /** this/other; undefined if other is zero. */
  div(other: Coefficient): Coefficient | undefined {
    return Coefficient.quotient(P.mul(this.numerator, other.denominator), P.mul(this.denominator, other.numerator));
  }
  /** Complex conjugate; couplings are real. */
  conj(): Coefficient {
    const bar = (p: Polynomial) => p.map((t) => ({ ...t, coefficient: S.conj(t.coefficient) }));
    return Coefficient.of(bar(this.numerator), this.denominator === P.one ? P.one : bar(this.denominator));
  }
  /** Integer power; undefined for zero to a negative power. Throws RangeError unless |n| <= limits.exponent. */
  pow(n: number): Coefficient | undefined {
    if (!Number.isInteger(n) || Math.abs(n) > limits.exponent)
      throw new RangeError(`the exponent ${String(n)} is not an integer of at most ${String(limits.exponent)}`);
    if (n < 0) return Coefficient.one.div(this)?.pow(-n);
    let out = Coefficient.one;
    let base: Coefficient = this;
    for (let e = n; e > 0; e >>= 1) {
      if (e & 1) out = out.mul(base);
      if (e > 1) base = base.mul(base);
    }
    return out;
  }

  equals(other: Coefficient): boolean {
    return P.equals(this.numerator, other.numerator) && P.equals(this.denominator, other.denominator);
  }
  isZero(): boolean {
    return this.numerator.length === 0;
  }
  isOne(): boolean {
    return this.isConstant() && S.isOne(this.numerator[0]?.coefficient ?? S.zero);
  }
  /** True if it is real for every real value of the couplings. */
  isReal(): boolean {
    return this.denominator === P.one ? this.numerator.every((t) => S.isReal(t.coefficient)) : this.equals(this.conj());
  }
  /** True if it holds no coupling. */
  isConstant(): boolean {
    return P.isConstant(this.numerator) && P.isConstant(this.denominator);
  }
  /** The rational that this is; undefined if it holds a coupling, a root or i. */
  asRational(): Q.Rational | undefined {
    return this.isConstant() ? S.asRational(this.numerator[0]?.coefficient ?? S.zero) : undefined;
  }
  /** The constant that this is; undefined if it holds a coupling. */
  asSurd(): Surd | undefined {
    return this.isConstant() ? (this.numerator[0]?.coefficient ?? S.zero) : undefined;
  }
  /** Equal if and only if the coefficients are. */
  key(): string {
    this.#cachedKey ??=
      this.denominator === P.one ? P.key(this.numerator) : `${P.key(this.numerator)}/${P.key(this.denominator)}`;
    return this.#cachedKey;
  }
  symbols(): ReadonlySet<string> {
    return new Set([...P.symbols(this.numerator), ...P.symbols(this.denominator)]);
  }

  /** Replaces couplings; names that are not in `values` stay. Throws RangeError if a denominator becomes zero. */
  substitute(values: ReadonlyMap<string, Coefficient>): Coefficient {
    if (![...this.symbols()].some((n) => values.has(n))) return this;
    const into = (p: Polynomial): Coefficient =>
      p.reduce((sum, t) => {
        let term = Coefficient.fromSurd(t.coefficient);
        for (const [n, e] of t.monomial.powers) {
          const power = (values.get(n) ?? Coefficient.symbol(n)).pow(e);
          if (power) term = term.mul(power);
        }
        return sum.add(term);
      }, Coefficient.zero);
    const out = into(this.numerator).div(into(this.denominator));
    if (!out) throw new RangeError(`${this.toText()} has a denominator that becomes 0`);
    return out;
  }

  /** Products that it is written with, at least 1: what working with it costs. */
  get size(): number {
    return Math.max(1, P.sizeOf(this.numerator) + (this.denominator === P.one ? 0 : P.sizeOf(this.denominator)));
  }

  /** Its number for given values of the couplings. Throws MissingValue with all names that have none; a zero denominator gives NaN or Infinity. */
  toFloat(values: ReadonlyMap<string, number> = new Map()): { re: number; im: number } {
    const missing = [...this.symbols()].filter((n) => !values.has(n)).sort();
    if (missing.length > 0) throw new MissingValue(missing);
    const n = floatOf(this.numerator, values);
    if (this.denominator === P.one) return n;
    const d = floatOf(this.denominator, values);
    if (d.im === 0) return { re: n.re / d.re, im: n.im / d.re };
    const norm = d.re * d.re + d.im * d.im;
    return { re: (n.re * d.re + n.im * d.im) / norm, im: (n.im * d.re - n.re * d.im) / norm };
  }

  /** Numerator and denominator as sums of products, for typesetting; the denominator is [1] when there is none. */
  parts(): { readonly numerator: readonly TermParts[]; readonly denominator: readonly TermParts[] } {
    this.#cachedParts ??= { numerator: termParts(this.numerator), denominator: termParts(this.denominator) };
    return this.#cachedParts;
  }
  /** Plain data, whole in itself: what JSON.stringify writes and `fromData` reads. Equal coefficients give equal data. */
  toJSON(): CoefficientData {
    const data = (terms: readonly TermParts[]): TermData[] =>
      terms.map((t) => [String(t.num), String(t.den), t.imaginary ? 1 : 0, String(t.radicand), t.powers]);
    const { numerator, denominator } = this.parts();
    return this.denominator === P.one ? [data(numerator)] : [data(numerator), data(denominator)];
  }
  /** Inverse of `toJSON`. Throws RangeError on a zero denominator, SyntaxError on digits that are none. */
  static fromData([numerator, denominator]: CoefficientData): Coefficient {
    const sum = (terms: readonly TermData[]): Coefficient =>
      terms.reduce((all, [num, den, imaginary, radicand, powers]) => {
        const root = S.sqrtOfRational(Q.rational(BigInt(radicand)));
        const size = Coefficient.fromSurd(S.mul(root, S.fromRational(Q.rational(BigInt(num), BigInt(den)))));
        const term = powers.reduce<Coefficient>(
          (c, [name, e]) => c.mul(new Coefficient([{ monomial: P.monomial([[name, e]]), coefficient: S.one }], P.one)),
          imaginary === 1 ? size.mul(Coefficient.i) : size,
        );
        return all.add(term);
      }, Coefficient.zero);
    const out = denominator ? sum(numerator).div(sum(denominator)) : sum(numerator);
    if (!out) throw new RangeError('the denominator of a coefficient is 0');
    return out;
  }
  /** Operator-language text that parses back to this: "-1/2*J", "sqrt(2)/2", "3/5", "1i", "(J + h)/(2*K)". */
  toText(): string {
    return coefficientText(this.parts());
  }
  /** `toText`, in brackets where it could not stand as the first factor of a product. */
  toFactorText(): string {
    return needsBracket(this.parts()) ? `(${this.toText()})` : this.toText();
  }
}

function floatOf(p: Polynomial, values: ReadonlyMap<string, number>): { re: number; im: number } {
  let re = 0;
  let im = 0;
  for (const t of p) {
    const c = S.toFloat(t.coefficient);
    const m = t.monomial.powers.reduce((product, [n, e]) => product * (values.get(n) ?? NaN) ** e, 1);
    re += c.re * m;
    im += c.im * m;
  }
  return { re, im };
}

function termParts(p: Polynomial): TermParts[] {
  return p.flatMap((t) =>
    t.coefficient.flatMap((s) =>
      (
        [
          ['re', false],
          ['im', true],
        ] as const
      ).flatMap(([part, imaginary]) =>
        Q.isZero(s[part]) ? [] : [{ ...s[part], imaginary, radicand: s.radicand, powers: t.monomial.powers }],
      ),
    ),
  );
}
