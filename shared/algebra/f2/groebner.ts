import { BudgetSpent, type Budget } from '../../limits.ts';
import { fromPacked, isZero, pack, unpack, type Laurent, type LaurentVector } from './laurent.ts';

/**
 * Gröbner bases of submodules of R^m, R the Laurent polynomials over F2 in D variables, with memory of how each element comes from the generators.
 *
 * R is the polynomial ring in x_1 … x_D and one more variable y, modulo x_1 … x_D y = 1. Each generator v_g is written as (v_g, e_g) in m + k
 * components; in an order in which the first m components stand above the k others, an element whose first block vanished is a relation among the generators, and the
 * second block of any element tells how it is made. Buchberger's algorithm runs on the first block only (D. Cox, J. Little, D. O'Shea, Using Algebraic
 * Geometry, chapter 5, sections 2 and 3). The relation x_1 … x_D y = 1 is an element for each component of the first block.
 *
 * A term is one number: block, then the partial sums of its exponents (graded reverse lexicographic), then its component. Multiplying by a monomial adds.
 */
const digit = 1_024;
const components = 2_048;
type Element = readonly number[];

interface Lead {
  readonly element: Element;
  readonly exponents: readonly number[];
  readonly component: number;
}
interface Pair {
  readonly i: number;
  readonly j: number;
  readonly lcm: readonly number[];
  readonly degree: number;
}

/** The ring of one computation: how terms are written. */
export class TermOrder {
  readonly dimension: number;
  /** Number of variables, y included. */
  readonly variables: number;
  private readonly block: number;
  constructor(dimension: number) {
    this.dimension = dimension;
    this.variables = dimension + 1;
    this.block = digit ** this.variables * components;
  }
  /** The number that multiplying by a monomial adds. */
  monomial(exponents: readonly number[]): number {
    let sum = 0;
    let packed = 0;
    let place = components;
    // digits from the lowest: partial sums s_1, s_2, …, the degree highest
    for (const e of exponents) {
      sum += e;
      packed += sum * place;
      place *= digit;
    }
    if (sum >= digit) throw new BudgetSpent(`degree of a Gröbner basis (${String(digit)})`);
    return packed;
  }
  term(inFirst: boolean, component: number, exponents: readonly number[]): number {
    return (inFirst ? this.block : 0) + this.monomial(exponents) + (components - 1 - component);
  }
  isFirst(term: number): boolean {
    return term >= this.block;
  }
  component(term: number): number {
    return components - 1 - (term % components);
  }
  exponents(term: number): number[] {
    let rest = Math.floor((term % this.block) / components);
    let before = 0;
    const out: number[] = [];
    for (let v = 0; v < this.variables; v++) {
      const s = rest % digit;
      rest = (rest - s) / digit;
      out.push(s - before);
      before = s;
    }
    return out;
  }
  /** x^e with e of either sign as exponents of x_1 … x_D, y, none of them negative. */
  fromLaurent(exponents: readonly number[]): number[] {
    const y = -Math.min(0, ...exponents);
    return [...exponents.map((e) => e + y), y];
  }
  toLaurent(exponents: readonly number[]): number[] {
    const y = exponents[this.dimension] ?? 0;
    return exponents.slice(0, this.dimension).map((e) => e - y);
  }
}

/** Sum over F2 of two falling lists of terms. */
function add(a: Element, b: Element, shiftB: number): number[] {
  const out: number[] = [];
  let i = 0;
  let j = 0;
  while (i < a.length || j < b.length) {
    const p = a[i] ?? -1;
    const q = j < b.length ? (b[j] ?? 0) + shiftB : -1;
    if (p !== q) out.push(Math.max(p, q));
    if (p >= q) i++;
    if (q >= p) j++;
  }
  return out;
}

export class GroebnerBasis {
  private readonly order: TermOrder;
  private readonly budget: Budget;
  private readonly basis: Lead[] = [];
  private readonly byComponent = new Map<number, number[]>();
  private readonly found: LaurentVector[] = [];
  private readonly generatorCount: number;

  /** Basis of the module that the generators (vectors of one length m) span over the Laurent polynomials. Throws BudgetSpent. */
  constructor(generators: readonly LaurentVector[], dimension: number, length: number, budget: Budget) {
    this.order = new TermOrder(dimension);
    this.budget = budget;
    this.generatorCount = generators.length;
    if (length >= components || generators.length >= components)
      throw new BudgetSpent(`components of a module (${String(components)})`);
    let pairs: Pair[] = [];
    for (let c = 0; c < length; c++) pairs = this.include(this.unitRelation(c), pairs);
    const made = generators.map((v, g) => this.write(v, g)).sort((a, b) => (a[0] ?? 0) - (b[0] ?? 0));
    for (const element of made) pairs = this.take(element, pairs);
    for (;;) {
      const next = pairs.pop();
      if (!next) break;
      pairs = this.take(this.sPair(next), pairs);
    }
  }

  /** Relations among the generators: they generate all of them. Some may be redundant. */
  get syzygies(): readonly LaurentVector[] {
    return this.found;
  }

  /** Coefficients c_g with Σ c_g v_g = target; undefined if and only if the target is not in the module. */
  express(target: LaurentVector): LaurentVector | undefined {
    const rest = this.reduce(this.write(target, undefined));
    const [lead] = rest;
    if (lead !== undefined && this.order.isFirst(lead)) return undefined;
    return this.read(rest);
  }

  private unitRelation(component: number): Element {
    const ones = Array<number>(this.order.variables).fill(1);
    const zeros = ones.map(() => 0);
    return [this.order.term(true, component, ones), this.order.term(true, component, zeros)];
  }
  private write(v: LaurentVector, generator: number | undefined): Element {
    const { order } = this;
    const terms = v.flatMap((p: Laurent, c) =>
      p.map((m) => order.term(true, c, order.fromLaurent(unpack(m, order.dimension)))),
    );
    if (generator !== undefined) terms.push(order.term(false, generator, Array<number>(order.variables).fill(0)));
    return terms.sort((a, b) => b - a);
  }
  /** Second block as coefficients of the generators. */
  private read(element: Element): LaurentVector {
    const out: number[][] = Array.from({ length: this.generatorCount }, () => []);
    for (const term of element)
      out[this.order.component(term)]?.push(pack(this.order.toLaurent(this.order.exponents(term))));
    return out.map(fromPacked);
  }

  /** Reduces leading terms of the first block as far as they go. */
  private reduce(element: Element): Element {
    let rest = element;
    for (;;) {
      const [lead] = rest;
      if (lead === undefined || !this.order.isFirst(lead)) return rest;
      const divisor = this.divisor(lead);
      if (divisor === undefined) return rest;
      this.budget.spend(rest.length + divisor.element.length);
      rest = add(rest, divisor.element, lead - (divisor.element[0] ?? 0));
    }
  }
  private divisor(lead: number): Lead | undefined {
    const exponents = this.order.exponents(lead);
    const candidates = this.byComponent.get(this.order.component(lead)) ?? [];
    this.budget.spend(1 + candidates.length);
    for (const k of candidates) {
      const b = this.basis[k];
      if (b?.exponents.every((e, v) => e <= (exponents[v] ?? 0))) return b;
    }
    return undefined;
  }

  /** Second block rewritten with x_1 … x_D y = 1, which keeps its degrees small; it is nothing but a Laurent vector. */
  private tidied(element: Element): Element {
    const { order } = this;
    const first = element.filter((t) => order.isFirst(t));
    const odd = new Set<number>();
    for (const term of element) {
      if (order.isFirst(term)) continue;
      const exponents = order.exponents(term);
      const common = Math.min(...exponents);
      const reduced = common === 0 ? term : term - order.monomial(exponents.map(() => common));
      if (!odd.delete(reduced)) odd.add(reduced);
    }
    return [...first, ...[...odd].sort((a, b) => b - a)];
  }

  /** Reduces an element, and keeps what is left: as a basis element or, if its first block is gone, as a relation. */
  private take(element: Element, pairs: Pair[]): Pair[] {
    const rest = this.tidied(this.reduce(element));
    const [lead] = rest;
    if (lead === undefined) return pairs;
    if (this.order.isFirst(lead)) return this.include(rest, pairs);
    const relation = this.read(rest);
    if (!relation.every(isZero)) this.found.push(relation);
    return pairs;
  }

  /** Adds a basis element and its pairs, without those that the chain criterion makes superfluous (R. Gebauer, H. M. Möller, J. Symb. Comput. 6, 275 (1988)). */
  private include(element: Element, pairs: Pair[]): Pair[] {
    const { order, basis } = this;
    const lead = element[0] ?? 0;
    const j = basis.length;
    const component = order.component(lead);
    const exponents = order.exponents(lead);
    const same = this.byComponent.get(component) ?? [];
    const lcmWith = (e: readonly number[]): number[] => exponents.map((x, v) => Math.max(x, e[v] ?? 0));
    const divides = (a: readonly number[], b: readonly number[]): boolean => a.every((x, v) => x <= (b[v] ?? 0));
    const equal = (a: readonly number[], b: readonly number[]): boolean => a.every((x, v) => x === b[v]);
    const old = pairs.filter((p) => {
      const [a, b] = [basis[p.i], basis[p.j]];
      if (!a || !b || a.component !== component || !divides(exponents, p.lcm)) return true;
      return equal(lcmWith(a.exponents), p.lcm) || equal(lcmWith(b.exponents), p.lcm);
    });
    const fresh = same
      .map((i): Pair => {
        const lcm = lcmWith(basis[i]?.exponents ?? []);
        return { i, j, lcm, degree: lcm.reduce((s, e) => s + e, 0) };
      })
      .sort((a, b) => a.degree - b.degree);
    const kept: Pair[] = [];
    for (const p of fresh) if (!kept.some((q) => divides(q.lcm, p.lcm))) kept.push(p);
    this.budget.spend(1 + pairs.length + fresh.length * (1 + kept.length));
    basis.push({ element, exponents, component });
    this.byComponent.set(component, [...same, j]);
    return [...old, ...kept].sort((a, b) => b.degree - a.degree);
  }

  private sPair({ i, j, lcm }: Pair): Element {
    const [a, b] = [this.basis[i], this.basis[j]];
    if (!a || !b) return [];
    const up = (l: Lead): number => this.order.monomial(lcm.map((e, v) => e - (l.exponents[v] ?? 0)));
    const shiftA = up(a);
    this.budget.spend(a.element.length + b.element.length);
    return add(
      a.element.map((t) => t + shiftA),
      b.element,
      up(b),
    );
  }
}
