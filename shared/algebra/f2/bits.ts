import { limits, newBudget, type Budget } from '../../limits.ts';

/** A row over F2 as the columns that hold a 1, in any order; a column that is named twice cancels. */
export type Row = ArrayLike<number>;

/** What became of a row: `independent`, or a sum of rows that were inserted before. */
export interface Inserted {
  /** Number of the row, in order of insertion. */
  readonly row: number;
  readonly independent: boolean;
}

const wordsOf = (columns: number): number => (columns + 31) >>> 5;

/** Columns of the set bits of packed words, ascending. */
export function setBits(words: Uint32Array): Int32Array {
  let count = 0;
  for (const w of words) for (let rest = w; rest !== 0; rest &= rest - 1) count++;
  const out = new Int32Array(count);
  let at = 0;
  for (let w = 0; w < words.length; w++)
    for (let rest = words[w] ?? 0; rest !== 0; rest &= rest - 1) out[at++] = w * 32 + 31 - Math.clz32(rest & -rest);
  return out;
}

/**
 * Elimination over F2, one row at a time, with memory of how each row was reduced.
 * The pivot of a row is its highest column: rows whose highest columns differ need no work, so that neighbouring rows of a lattice numbered by place
 * meet only few others (the reduction used for persistent homology; H. Edelsbrunner, D. Letscher, A. Zomorodian, Discrete Comput. Geom. 28, 511 (2002)).
 * Reduced rows are kept sparse while they are, packed in 32-bit words where that is shorter.
 */
export class Echelon {
  readonly columns: number;
  private readonly budget: Budget;
  /** For each pivot row: its bits, as columns (Int32Array) or packed (Uint32Array). */
  private readonly pivots: (Int32Array | Uint32Array)[] = [];
  /** pivotOf[c]: number of the pivot row with highest column c, or −1. */
  private readonly pivotOf: Int32Array;
  /** For each pivot row, the inserted row that it came from and the pivot rows that were added to it. */
  private readonly source: number[] = [];
  private readonly history: Int32Array[] = [];
  /** For each inserted row that was not independent, the pivot rows that sum to it. */
  private readonly dependent = new Map<number, Int32Array>();
  private readonly scratch: Uint32Array;
  private inserted = 0;

  constructor(columns: number, budget: Budget = newBudget(limits.operations * 50, 'operations of F2 elimination')) {
    this.columns = columns;
    this.budget = budget;
    this.pivotOf = new Int32Array(columns).fill(-1);
    this.scratch = new Uint32Array(wordsOf(columns));
  }

  /** Number of independent rows. */
  get rank(): number {
    return this.pivots.length;
  }
  /** Number of rows inserted. */
  get rows(): number {
    return this.inserted;
  }

  private load(row: Row): void {
    const { scratch } = this;
    for (let k = 0; k < row.length; k++) {
      const c = row[k] ?? 0;
      if (c < 0 || c >= this.columns) throw new RangeError(`column ${String(c)} is not among ${String(this.columns)}`);
      scratch[c >>> 5] = (scratch[c >>> 5] ?? 0) ^ (1 << (c & 31));
    }
  }

  private addPivot(pivot: number): void {
    const { scratch } = this;
    const row = this.pivots[pivot];
    if (row instanceof Int32Array) {
      for (let k = 0; k < row.length; k++) {
        const c = row[k] ?? 0;
        scratch[c >>> 5] = (scratch[c >>> 5] ?? 0) ^ (1 << (c & 31));
      }
      this.budget.spend(row.length);
    } else if (row) {
      for (let w = 0; w < row.length; w++) scratch[w] = (scratch[w] ?? 0) ^ (row[w] ?? 0);
      this.budget.spend(row.length);
    }
  }

  /** Reduces the loaded row; returns the pivot rows added and the highest column that is left (−1: nothing). */
  private reduceLoaded(): { added: number[]; top: number } {
    const { scratch } = this;
    const added: number[] = [];
    for (let w = scratch.length - 1; w >= 0;) {
      const word = scratch[w] ?? 0;
      if (word === 0) {
        w--;
        continue;
      }
      const top = w * 32 + 31 - Math.clz32(word);
      const pivot = this.pivotOf[top] ?? -1;
      if (pivot < 0) return { added, top };
      this.addPivot(pivot);
      added.push(pivot);
    }
    return { added, top: -1 };
  }

  /** Takes in one row. */
  insert(row: Row): Inserted {
    this.budget.spend(1 + row.length + (this.scratch.length >>> 3));
    const number = this.inserted++;
    this.load(row);
    const { added, top } = this.reduceLoaded();
    if (top < 0) {
      this.dependent.set(number, Int32Array.from(added));
      return { row: number, independent: false };
    }
    const sparse = setBits(this.scratch);
    this.pivotOf[top] = this.pivots.length;
    this.pivots.push(sparse.length > this.scratch.length ? this.scratch.slice() : sparse);
    this.source.push(number);
    this.history.push(Int32Array.from(added));
    this.scratch.fill(0);
    return { row: number, independent: true };
  }

  /** The inserted rows whose sum is the sum of the given pivot rows, ascending. */
  private expand(added: Int32Array): number[] {
    const odd = new Uint8Array(this.pivots.length);
    let highest = -1;
    for (const p of added) {
      odd[p] = (odd[p] ?? 0) ^ 1;
      if (p > highest) highest = p;
    }
    const rows: number[] = [];
    // a pivot row was reduced by earlier ones only
    for (let p = highest; p >= 0; p--) {
      if (odd[p] !== 1) continue;
      rows.push(this.source[p] ?? 0);
      for (const q of this.history[p] ?? []) odd[q] = (odd[q] ?? 0) ^ 1;
    }
    this.budget.spend(2 + (highest >> 3) + rows.length);
    return rows.sort((a, b) => a - b);
  }

  /** The rows that sum to zero with an inserted row that was not independent, itself included, ascending; undefined if it was independent. */
  relation(row: number): number[] | undefined {
    const added = this.dependent.get(row);
    return added && [...this.expand(added), row];
  }

  /** All relations found so far, one for each dependent row: a basis of the sums of rows that vanish. */
  relations(): number[][] {
    return [...this.dependent.keys()].map((row) => this.relation(row) ?? []);
  }

  /** The inserted rows that sum to `row`, ascending; undefined if it is not in their span. */
  solve(row: Row): number[] | undefined {
    this.load(row);
    const { added, top } = this.reduceLoaded();
    if (top >= 0) {
      this.scratch.fill(0);
      return undefined;
    }
    return this.expand(Int32Array.from(added));
  }

  /** What is left of a row after reduction by the pivots (ascending columns); empty if and only if it is in the span. */
  remainder(row: Row): Int32Array {
    this.load(row);
    this.reduceLoaded();
    const rest = setBits(this.scratch);
    this.scratch.fill(0);
    return rest;
  }
}

/** Rank of rows over F2. */
export function rank(rows: readonly Row[], columns: number, budget?: Budget): number {
  const echelon = new Echelon(columns, budget);
  for (const row of rows) echelon.insert(row);
  return echelon.rank;
}

/** Rows of the transposed matrix (columns × rows). */
export function transpose(rows: readonly Row[], columns: number): number[][] {
  const out: number[][] = Array.from({ length: columns }, () => []);
  rows.forEach((row, r) => {
    for (let k = 0; k < row.length; k++) out[row[k] ?? 0]?.push(r);
  });
  return out;
}

/** Basis of the vectors that meet every row evenly, each as its columns, ascending. */
export function kernel(rows: readonly Row[], columns: number, budget?: Budget): number[][] {
  const echelon = new Echelon(rows.length, budget);
  for (const column of transpose(rows, columns)) echelon.insert(column);
  return echelon.relations();
}

/** Rows whose sum is `target`, ascending; undefined if there are none. */
export function solve(rows: readonly Row[], columns: number, target: Row, budget?: Budget): number[] | undefined {
  const echelon = new Echelon(columns, budget);
  for (const row of rows) echelon.insert(row);
  return echelon.solve(target);
}
