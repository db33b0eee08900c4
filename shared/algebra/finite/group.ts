import { limits, newBudget, type Budget } from '../../limits.ts';
import { Echelon } from '../f2/bits.ts';
import {
  columnsOf,
  fromColumns,
  Product,
  sparseCommute,
  sparsePauliPhase,
  toDense,
  toSparse,
  type SparseString,
} from './sparse.ts';
import type { FiniteString } from './types.ts';

/** A product of generators, in order of their numbers, that is i^phase times the identity. */
export interface Relation {
  readonly members: readonly number[];
  readonly phase: number;
}

/** How a string follows from generators: their product, in order of their numbers, is i^phase times the string. */
export interface Membership {
  readonly members: readonly number[];
  readonly phase: number;
}

/**
 * The group that signed Pauli strings on one cluster generate: rank, relations with their signs, membership, logical operators.
 * Exact. Strings may be dense or sparse; on large clusters sparse ones cost less. Work is bounded by the budget (BudgetSpent).
 */
export class StabilizerGroup {
  readonly n: number;
  readonly generators: readonly SparseString[];
  /** Numbers of generators none of which follows from earlier ones, ascending; with these the group has 2^rank elements up to signs. */
  readonly independent: readonly number[];
  private readonly echelon: Echelon;
  private readonly budget: Budget;
  private cachedRelations: readonly Relation[] | undefined;
  private cachedPair: readonly [number, number] | 'none' | undefined;

  constructor(
    n: number,
    strings: readonly (FiniteString | SparseString)[],
    budget: Budget = newBudget(limits.operations * 50, 'operations of a stabilizer group'),
  ) {
    this.n = n;
    this.budget = budget;
    this.generators = strings.map(toSparse);
    for (const g of this.generators)
      if (g.n !== n) throw new RangeError(`a generator on ${String(g.n)} spins in a group on ${String(n)}`);
    this.echelon = new Echelon(2 * n, budget);
    const columns = this.generators.map(columnsOf);
    this.independent = columns.flatMap((row, k) => (this.echelon.insert(row).independent ? [k] : []));
  }

  /** Number of independent generators. */
  get rank(): number {
    return this.echelon.rank;
  }
  /** n − rank: the logical qubits, where the generators commute. */
  get logicalCount(): number {
    return this.n - this.rank;
  }

  /** The first two generators that anticommute; undefined if all commute. Looks only at pairs that share a spin. */
  anticommutingPair(): readonly [number, number] | undefined {
    this.cachedPair ??= this.findPair() ?? 'none';
    return this.cachedPair === 'none' ? undefined : this.cachedPair;
  }
  get commutes(): boolean {
    return this.anticommutingPair() === undefined;
  }

  private findPair(): readonly [number, number] | undefined {
    const at: { string: number; bits: number }[][] = Array.from({ length: this.n }, () => []);
    const odd = new Uint8Array(this.generators.length);
    for (const [j, g] of this.generators.entries()) {
      const touched: number[] = [];
      g.spins.forEach((spin, k) => {
        const bits = g.bits[k] ?? 0;
        const here = at[spin] ?? [];
        this.budget.spend(1 + here.length);
        for (const other of here)
          if (other.bits !== bits) {
            odd[other.string] = (odd[other.string] ?? 0) ^ 1;
            touched.push(other.string);
          }
        here.push({ string: j, bits });
      });
      const first = touched.filter((i) => odd[i] === 1).sort((a, b) => a - b)[0];
      if (first !== undefined) return [first, j];
      for (const i of touched) odd[i] = 0;
    }
    return undefined;
  }

  /** Product of generators in order of their numbers. */
  product(members: readonly number[]): SparseString {
    const product = new Product(this.n);
    for (const m of members) {
      const g = this.generators[m];
      if (g) {
        this.budget.spend(1 + g.spins.length);
        product.by(g);
      }
    }
    return product.value();
  }

  private phaseOf(members: readonly number[]): number {
    const product = new Product(this.n);
    for (const m of members) {
      const g = this.generators[m];
      this.budget.spend(1 + (g?.spins.length ?? 0));
      if (g) product.by(g);
    }
    return product.phase;
  }

  /** A basis of the relations among the generators, one for each that follows from earlier ones, with the phases of their products. */
  relations(): readonly Relation[] {
    this.cachedRelations ??= this.echelon.relations().map((members) => ({ members, phase: this.phaseOf(members) }));
    return this.cachedRelations;
  }

  /** A relation whose product is −1 (or ±i): no state obeys all generators. Undefined if there is none; meaningful where they commute. */
  contradiction(): Relation | undefined {
    return this.relations().find((r) => r.phase !== 0);
  }
  /** True if −1 is in the group. Two generators that anticommute put it there: (ab)² = −1. */
  get containsMinusOne(): boolean {
    return (
      !this.commutes || this.contradiction() !== undefined || this.generators.some((g) => sparsePauliPhase(g) % 2 === 1)
    );
  }

  /** The generators whose product is the string up to a phase, and that phase; undefined if it is not in the group for any phase. */
  membership(string: FiniteString | SparseString): Membership | undefined {
    const target = toSparse(string);
    const members = this.echelon.solve(columnsOf(target));
    return members && { members, phase: (this.phaseOf(members) - target.phase) & 3 };
  }

  /**
   * Logical operators: pairs (X̄, Z̄) that commute with all generators and with one another but for partners, which anticommute; one pair for each logical
   * qubit, Hermitian, shortened by generators where one makes them lighter. Symplectic Gram–Schmidt on the centraliser (M. M. Wilde, Phys. Rev. A 79, 062322 (2009)).
   * Throws RangeError if the generators do not commute.
   */
  logicalOperators(): readonly { readonly x: FiniteString; readonly z: FiniteString }[] {
    if (!this.commutes) throw new RangeError('logical operators need generators that commute');
    const candidates = this.centralizer().filter((columns) => {
      this.budget.spend(columns.length);
      return this.echelonWithLogicals().insert(columns).independent;
    });
    this.logicalEchelon = undefined;
    return this.pairUp(candidates.map((columns) => this.lighter(columns)));
  }

  private logicalEchelon: Echelon | undefined;
  private echelonWithLogicals(): Echelon {
    if (!this.logicalEchelon) {
      this.logicalEchelon = new Echelon(2 * this.n, this.budget);
      for (const k of this.independent) {
        const g = this.generators[k];
        if (g) this.logicalEchelon.insert(columnsOf(g));
      }
    }
    return this.logicalEchelon;
  }

  /** A basis of the strings that commute with all generators, as columns. */
  private centralizer(): number[][] {
    const meets: number[][] = Array.from({ length: 2 * this.n }, () => []);
    for (const [row, k] of this.independent.entries()) {
      const g = this.generators[k];
      // X on a spin is seen by the Z of a generator, and the other way round
      for (const c of g ? columnsOf(g) : []) meets[c ^ 1]?.push(row);
    }
    const echelon = new Echelon(Math.max(this.independent.length, 1), this.budget);
    for (const row of meets) echelon.insert(row);
    return echelon.relations();
  }

  /** Multiplied by generators as long as one of them takes spins off it. */
  private lighter(columns: readonly number[]): SparseString {
    let best = fromColumns(this.n, columns);
    for (let again = true; again;) {
      again = false;
      for (const k of this.independent) {
        const g = this.generators[k];
        if (!g) continue;
        this.budget.spend(g.spins.length + best.spins.length);
        const product = fromColumns(this.n, [...columnsOf(best), ...columnsOf(g)]);
        if (product.spins.length < best.spins.length) {
          best = product;
          again = true;
        }
      }
    }
    return best;
  }

  private pairUp(candidates: readonly SparseString[]): { x: FiniteString; z: FiniteString }[] {
    const times = (a: SparseString, b: SparseString): SparseString =>
      fromColumns(this.n, [...columnsOf(a), ...columnsOf(b)]);
    let rest = [...candidates].sort((a, b) => a.spins.length - b.spins.length);
    const pairs: { x: FiniteString; z: FiniteString }[] = [];
    for (let x = rest.shift(); x; x = rest.shift()) {
      const first = x;
      const k = rest.findIndex((c) => !sparseCommute(first, c));
      const z = rest[k];
      if (!z) throw new Error('the form on the centraliser modulo the group is not degenerate');
      rest.splice(k, 1);
      rest = rest.map((c) => {
        this.budget.spend(first.spins.length + z.spins.length + c.spins.length);
        const withZ = sparseCommute(first, c) ? c : times(c, z);
        return sparseCommute(z, c) ? withZ : times(withZ, first);
      });
      pairs.push({ x: toDense(first), z: toDense(z) });
    }
    return pairs;
  }
}
