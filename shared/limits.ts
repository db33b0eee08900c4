/**
 * The numbers that bound the work of the engine, and the budget that every long loop spends from.
 * A limit that is met is an error with its number in it, never a hang.
 */
export const limits = {
  /** Characters of one source. */
  sourceCharacters: 1_000_000,
  /** Depth of nested brackets in an expression. */
  nesting: 100,
  /** Statements of one source. */
  statements: 1_000,
  /** Pauli families in one operator. */
  families: 20_000,
  /** Factors of one Pauli string. */
  factors: 4_096,
  /** Largest absolute integer exponent. */
  exponent: 64,
  /** Cells of one kind on a finite lattice used for exact (F2) work. */
  cells: 200_000,
  /** Spins for numerical work, after dropping those fixed by a sector. */
  spins: 26,
  /** Largest extent of a lattice in unit cells. */
  extent: 1_000,
  /** Largest period of a condition or of a staggered coefficient, in unit cells. */
  period: 24,
  /** Elementary steps of one evaluation (parse, check and expand of one source). */
  operations: 40_000_000,
} as const;

/** Thrown by `Budget.spend` and caught once for each statement; `limit` says in words what ran out. */
export class BudgetSpent extends Error {
  readonly limit: string;
  constructor(limit: string) {
    super(`limit reached: ${limit}`);
    this.name = 'BudgetSpent';
    this.limit = limit;
  }
}

/** A count of elementary steps; every loop whose length a user controls spends from one. */
export interface Budget {
  /** Takes `steps` (default 1); throws BudgetSpent when none are left. */
  spend(steps?: number): void;
  readonly left: number;
}

/** A budget of `operations` steps; `what` names the work in the error. */
export function newBudget(operations: number = limits.operations, what = 'operations'): Budget {
  let left = operations;
  return {
    spend(steps = 1) {
      left -= steps;
      if (left < 0) throw new BudgetSpent(`${what} (${String(operations)})`);
    },
    get left() {
      return left;
    },
  };
}
