import { BudgetSpent, newBudget, type Budget } from '../../limits.ts';
import * as S from './surd.ts';
import type { Surd } from './surd.ts';

/** A product of powers of symbols: names in rising order, exponents > 0. `key` is unique, '' for 1. */
export interface Monomial {
  readonly powers: readonly (readonly [name: string, exponent: number])[];
  readonly degree: number;
  readonly key: string;
}

/** One term, its coefficient not zero. */
export interface Term {
  readonly monomial: Monomial;
  readonly coefficient: Surd;
}

/** A polynomial over surds: terms with distinct monomials, falling in `compareMonomials`. Zero has none. */
export type Polynomial = readonly Term[];

/** Largest number of terms that is carried. */
const mostTerms = 4_096;
/** Products that one multiplication may form. */
const mostProducts = 200_000;

export function monomial(powers: Iterable<readonly [string, number]>): Monomial {
  const sorted = [...powers].filter(([, e]) => e !== 0).sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0));
  return {
    powers: sorted,
    degree: sorted.reduce((sum, [, e]) => sum + e, 0),
    key: sorted.map(([n, e]) => (e === 1 ? n : `${n}^${String(e)}`)).join('*'),
  };
}
export const unit: Monomial = monomial([]);

/** Graded lexicographic order: positive if a stands before (is larger than) b. */
export function compareMonomials(a: Monomial, b: Monomial): number {
  if (a.degree !== b.degree) return a.degree - b.degree;
  for (let k = 0; ; k++) {
    const p = a.powers[k];
    const q = b.powers[k];
    if (!p || !q) return (p ? 1 : 0) - (q ? 1 : 0);
    if (p[0] !== q[0]) return p[0] < q[0] ? 1 : -1;
    if (p[1] !== q[1]) return p[1] - q[1];
  }
}

export function mulMonomials(a: Monomial, b: Monomial): Monomial {
  if (a.degree === 0) return b;
  if (b.degree === 0) return a;
  const powers = new Map(a.powers);
  for (const [n, e] of b.powers) powers.set(n, (powers.get(n) ?? 0) + e);
  return monomial(powers);
}

/** a/b, or undefined if b does not divide a. */
export function divMonomials(a: Monomial, b: Monomial): Monomial | undefined {
  if (b.degree === 0) return a;
  const powers = new Map(a.powers);
  for (const [n, e] of b.powers) {
    const left = (powers.get(n) ?? 0) - e;
    if (left < 0) return undefined;
    powers.set(n, left);
  }
  return monomial(powers);
}

/** Largest monomial that divides every term (1 for zero). */
export function commonMonomial(p: Polynomial): Monomial {
  const [first, ...rest] = p;
  let powers = new Map(first?.monomial.powers ?? []);
  for (const t of rest) {
    const here = new Map(t.monomial.powers);
    powers = new Map([...powers].map(([n, e]) => [n, Math.min(e, here.get(n) ?? 0)]));
  }
  return monomial(powers);
}

export const zero: Polynomial = [];
export const constant = (c: Surd): Polynomial => (S.isZero(c) ? zero : [{ monomial: unit, coefficient: c }]);
export const one: Polynomial = constant(S.one);
export const symbol = (name: string): Polynomial => [{ monomial: monomial([[name, 1]]), coefficient: S.one }];
export const isConstant = (p: Polynomial): boolean => p.length === 0 || (p.length === 1 && p[0]?.monomial.degree === 0);

function fromTerms(terms: Iterable<Term>): Polynomial {
  const byKey = new Map<string, Term>();
  // roots count too: each monomial has a sum of them
  let size = 0;
  for (const t of terms) {
    const old = byKey.get(t.monomial.key);
    const next = old ? { monomial: t.monomial, coefficient: S.add(old.coefficient, t.coefficient) } : t;
    byKey.set(t.monomial.key, next);
    size += next.coefficient.length - (old?.coefficient.length ?? 0);
    if (size > mostTerms) throw new BudgetSpent(`terms of a coefficient (${String(mostTerms)})`);
  }
  const kept = [...byKey.values()].filter((t) => !S.isZero(t.coefficient));
  return kept.length < 2 ? kept : kept.sort((a, b) => compareMonomials(b.monomial, a.monomial));
}

export function add(a: Polynomial, b: Polynomial): Polynomial {
  if (a.length === 0) return b;
  if (b.length === 0) return a;
  return fromTerms([...a, ...b]);
}
export const scale = (a: Polynomial, by: Surd): Polynomial =>
  S.isZero(by) ? zero : a.map((t) => ({ monomial: t.monomial, coefficient: S.mul(t.coefficient, by) }));
export const neg = (a: Polynomial): Polynomial =>
  a.map((t) => ({ monomial: t.monomial, coefficient: S.neg(t.coefficient) }));
export const sub = (a: Polynomial, b: Polynomial): Polynomial => add(a, neg(b));

/** Products that a polynomial is a sum of: one for each root of each monomial. */
export const sizeOf = (a: Polynomial): number => a.reduce((n, t) => n + t.coefficient.length, 0);

export function mul(a: Polynomial, b: Polynomial, budget?: Budget): Polynomial {
  budget?.spend(a.length * b.length);
  if (a.length > 1 && b.length > 1 && sizeOf(a) * sizeOf(b) > mostProducts)
    throw new BudgetSpent(`products in one coefficient (${String(mostProducts)})`);
  const [s] = a;
  const [t] = b;
  if (!s || !t) return zero;
  if (a.length === 1 && b.length === 1)
    return [{ monomial: mulMonomials(s.monomial, t.monomial), coefficient: S.mul(s.coefficient, t.coefficient) }];
  function* products(): Generator<Term> {
    for (const x of a)
      for (const y of b)
        yield { monomial: mulMonomials(x.monomial, y.monomial), coefficient: S.mul(x.coefficient, y.coefficient) };
  }
  return fromTerms(products());
}

/** a/b if b divides a, else undefined (division by the leading term, which is exact in a monomial order). */
export function divideExactly(a: Polynomial, b: Polynomial, budget?: Budget): Polynomial | undefined {
  const [lead] = b;
  if (!lead) return undefined;
  const inverse = S.inverse(lead.coefficient);
  const quotient: Term[] = [];
  let rest = a;
  for (let top = rest[0]; top; top = rest[0]) {
    const m = divMonomials(top.monomial, lead.monomial);
    if (!m) return undefined;
    const term: Term = { monomial: m, coefficient: S.mul(top.coefficient, inverse) };
    quotient.push(term);
    rest = sub(rest, mul([term], b, budget));
  }
  return quotient;
}

export const equals = (a: Polynomial, b: Polynomial): boolean =>
  a.length === b.length &&
  a.every((t, k) => t.monomial.key === b[k]?.monomial.key && S.equals(t.coefficient, b[k].coefficient));

export const key = (a: Polynomial): string => a.map((t) => `${S.key(t.coefficient)}[${t.monomial.key}]`).join('+');

export const symbols = (a: Polynomial): ReadonlySet<string> =>
  new Set(a.flatMap((t) => t.monomial.powers.map(([n]) => n)));

/** Divided by its leading coefficient. */
export const monic = (a: Polynomial): Polynomial => (a[0] ? scale(a, S.inverse(a[0].coefficient)) : a);

/** Coefficients of the powers of one symbol, index = exponent. */
function inSymbol(a: Polynomial, name: string): Polynomial[] {
  const out: Term[][] = [];
  for (const t of a) {
    const e = t.monomial.powers.find(([n]) => n === name)?.[1] ?? 0;
    while (out.length <= e) out.push([]);
    out[e]?.push({ monomial: monomial(t.monomial.powers.filter(([n]) => n !== name)), coefficient: t.coefficient });
  }
  return out.map(fromTerms);
}
const power = (name: string, e: number): Polynomial => [{ monomial: monomial([[name, e]]), coefficient: S.one }];

/** Pseudo-remainder of a by b as polynomials in `name`. */
function pseudoRemainder(a: Polynomial, b: Polynomial, name: string, budget: Budget): Polynomial {
  const divisor = inSymbol(b, name);
  const degree = divisor.length - 1;
  const lead = divisor[degree] ?? zero;
  let rest = a;
  for (;;) {
    const parts = inSymbol(rest, name);
    const top = parts.length - 1;
    if (rest.length === 0 || top < degree) return rest;
    const factor = mul(parts[top] ?? zero, power(name, top - degree), budget);
    rest = sub(mul(rest, lead, budget), mul(factor, b, budget));
  }
}

/**
 * Monic greatest common divisor over the field of surds (zero only for two zeros): contents by recursion over the symbols, then the primitive
 * remainder sequence (W. S. Brown, J. ACM 18, 478 (1971)). Throws BudgetSpent.
 */
export function gcd(
  a: Polynomial,
  b: Polynomial,
  budget: Budget = newBudget(20_000, 'steps of a greatest common divisor'),
): Polynomial {
  if (a.length === 0) return monic(b);
  if (b.length === 0) return monic(a);
  if (isConstant(a) || isConstant(b)) return one;
  const [nameA, nameB] = [symbols(a), symbols(b)];
  for (const n of nameA) if (!nameB.has(n)) return gcd(content(a, n, budget), b, budget);
  for (const n of nameB) if (!nameA.has(n)) return gcd(a, content(b, n, budget), budget);
  const name = [...nameA].sort()[0] ?? '';
  const [contentA, contentB] = [content(a, name, budget), content(b, name, budget)];
  const common = gcd(contentA, contentB, budget);
  let [x, y] = [divided(a, contentA, budget), divided(b, contentB, budget)];
  if (inSymbol(x, name).length < inSymbol(y, name).length) [x, y] = [y, x];
  while (y.length > 0) {
    const r = pseudoRemainder(x, y, name, budget);
    [x, y] = [y, r.length === 0 ? r : monic(divided(r, content(r, name, budget), budget))];
  }
  // the last primitive remainder; free of `name` means the primitive parts are coprime
  return monic(inSymbol(x, name).length === 1 ? common : mul(common, x, budget));
}

/** gcd of the coefficients of the powers of `name`. */
function content(a: Polynomial, name: string, budget: Budget): Polynomial {
  return inSymbol(a, name).reduce((g, c) => (isConstant(g) && g.length > 0 ? g : gcd(g, c, budget)), zero);
}

function divided(a: Polynomial, by: Polynomial, budget: Budget): Polynomial {
  const q = isConstant(by) ? scale(a, S.inverse(by[0]?.coefficient ?? S.one)) : divideExactly(a, by, budget);
  if (!q) throw new Error('content does not divide its polynomial');
  return q;
}
