import type { FiniteString } from '../../algebra/finite/types.ts';
import {
  bit,
  commute,
  dropSite,
  hermitian,
  isIdentity,
  multiply,
  oddY,
  overlap,
  signed,
  support,
  type Constraint,
} from './packed.ts';

/**
 * Dropping one spin for each independent constraint (S. Bravyi, J. M. Gambetta, A. Mezzacapo, K. Temme,
 * arXiv:1701.08213 (2017)): exact, in the sector of a group of commuting signed strings.
 *
 * For one constraint g = v take a spin p and a Pauli matrix q on p that anticommutes with g. Each string that commutes
 * with g equals, in the sector, v g times itself, and exactly one of the two commutes with q: at p it is 1 or q. Leaving
 * out p is then an isomorphism of the strings modulo g with the strings on the other spins; it is what the Clifford
 * unitary (q + g)/√2, which turns g into the single-spin q, does to them. q is X or Z, so that a real string stays real.
 */

/** Why there is no sector. Indices are those of the given constraints (and of the terms, for `leaves`). */
export type SectorFault =
  | { readonly code: 'not Hermitian'; readonly constraint: number }
  | { readonly code: 'constraints clash'; readonly constraints: readonly [number, number] }
  | { readonly code: 'no state'; readonly constraint: number }
  | { readonly code: 'term leaves'; readonly term: number; readonly constraint: number };

/** A map of strings on the spins before to strings on fewer spins, which keeps products and signs. */
export interface Reduction {
  /** Spins that are left. */
  readonly spins: number;
  /** Number of independent constraints. */
  readonly rank: number;
  /** Image of a string; undefined when it does not commute with the constraints (its block in the sector is zero). */
  readonly reduce: (string: FiniteString) => FiniteString | undefined;
}

/** One dropped spin: q = X if `pivotX`, else Z, on spin `site` (numbered as at that step). */
interface Step {
  /** The constraint with its value as sign, so that it is +1 in the sector. */
  readonly law: FiniteString;
  readonly site: number;
  readonly pivotX: boolean;
}

/**
 * Sector of the constraints for the given strings of n spins. `terms` are checked against each constraint; an empty
 * list checks none. Returns a fault as a value. Costs (constraints × (constraints + terms)) products of n bits.
 */
export function dropQubits(
  n: number,
  terms: readonly FiniteString[],
  constraints: readonly Constraint[],
): { readonly ok: true; readonly value: Reduction } | { readonly ok: false; readonly fault: SectorFault } {
  const fault = firstFault(terms, constraints);
  if (fault) return { ok: false, fault };
  const steps: Step[] = [];
  for (const [k, constraint] of constraints.entries()) {
    const law = run(steps, signed(constraint.string, constraint.value === -1));
    if (isIdentity(law)) {
      if (law.phase !== 0) return { ok: false, fault: { code: 'no state', constraint: k } };
    } else steps.push(step(law));
  }
  return { ok: true, value: reduction(n, constraints, steps) };
}

function reduction(n: number, constraints: readonly Constraint[], steps: readonly Step[]): Reduction {
  return {
    spins: n - steps.length,
    rank: steps.length,
    reduce: (string) => (constraints.every((c) => commute(c.string, string)) ? run(steps, string) : undefined),
  };
}

function firstFault(terms: readonly FiniteString[], constraints: readonly Constraint[]): SectorFault | undefined {
  for (const [k, { string }] of constraints.entries()) {
    if (!hermitian(string)) return { code: 'not Hermitian', constraint: k };
    const other = constraints.slice(0, k).findIndex((c) => !commute(c.string, string));
    if (other >= 0) return { code: 'constraints clash', constraints: [other, k] };
  }
  for (const [k, { string }] of constraints.entries()) {
    const term = terms.findIndex((t) => !commute(t, string));
    if (term >= 0) return { code: 'term leaves', term, constraint: k };
  }
  return undefined;
}

/** Prefers a spin where the law is a pure Z or X: there the products with the law add no Y. */
function step(law: FiniteString): Step {
  const sites = support(law);
  const site = sites.find((s) => !(bit(law.x, s) && bit(law.z, s))) ?? sites[0] ?? 0;
  return { law, site, pivotX: bit(law.z, site) === 1 };
}

function run(steps: readonly Step[], string: FiniteString): FiniteString {
  let s = string;
  for (const { law, site, pivotX } of steps) {
    // Anticommutes with q: take the other representative. Commuting strings have a commuting product, in either order.
    if (bit(pivotX ? s.z : s.x, site) === 1) s = multiply(s, law);
    s = dropSite(s, site);
  }
  return s;
}

/**
 * A frame in which Hermitian strings are real, if the strings allow one: complex conjugation K maps T to (−1)^(Y's) T,
 * so P K is kept by every T if <P, T> = Y's of T mod 2. For P with an even number of Y's, (1 + iP)/√2 carries P K to K:
 * strings that commute with P stay, the others become iPT. Derived here. Returns undefined when the linear system has
 * no such solution, and the identity when the strings are real already.
 */
export function realFrame(
  n: number,
  terms: readonly FiniteString[],
): ((string: FiniteString) => FiniteString) | undefined {
  if (terms.every((t) => oddY(t) === 0)) return (string) => string;
  const p = realPartner(n, terms, 'z') ?? realPartner(n, terms, 'any');
  if (!p) return undefined;
  return (string) => {
    if (commute(p, string)) return string;
    const product = multiply(p, string);
    return { ...product, phase: (product.phase + 1) & 3 };
  };
}

/** Hermitian string with an even number of Y's and <P, T> = Y's of T; of Z's alone (flips stay as they are) or any. */
function realPartner(n: number, terms: readonly FiniteString[], kind: 'z' | 'any'): FiniteString | undefined {
  const unknowns = kind === 'z' ? n : 2 * n;
  // Unknown s < n: a Z on site s (meets X of T); n + s: an X on site s (meets Z of T).
  const rows = terms.map((t) => {
    const row = new Uint8Array(unknowns + 1);
    for (let s = 0; s < n; s++) {
      row[s] = bit(t.x, s);
      if (kind === 'any') row[n + s] = bit(t.z, s);
    }
    row[unknowns] = oddY(t);
    return row;
  });
  const solved = solveF2(rows, unknowns);
  if (!solved) return undefined;
  const found = [solved.particular, ...solved.kernel.map((v) => v.map((b, k) => b ^ (solved.particular[k] ?? 0)))];
  for (const v of found) {
    const p = fromBits(n, v, kind);
    if (oddY(p) === 0) return p;
  }
  // A sum of two kernel vectors may have an even number of Y's where none alone has.
  for (const [k, a] of solved.kernel.entries()) {
    for (const b of solved.kernel.slice(0, k)) {
      const p = fromBits(
        n,
        a.map((value, i) => value ^ (b[i] ?? 0) ^ (solved.particular[i] ?? 0)),
        kind,
      );
      if (oddY(p) === 0) return p;
    }
  }
  return undefined;
}

function fromBits(n: number, v: Uint8Array, kind: 'z' | 'any'): FiniteString {
  const x = new Uint32Array(Math.max(1, (n + 31) >>> 5));
  const z = new Uint32Array(x.length);
  for (let s = 0; s < n; s++) {
    const place = 2 ** (s & 31);
    if (v[s]) z[s >>> 5] = (z[s >>> 5] ?? 0) | place;
    if (kind === 'any' && v[n + s]) x[s >>> 5] = (x[s >>> 5] ?? 0) | place;
  }
  return { n, x, z, phase: overlap(x, z) };
}

/** Solves rows · v = last column over F2: one solution and a basis of the kernel, or undefined. */
function solveF2(rows: Uint8Array[], unknowns: number): { particular: Uint8Array; kernel: Uint8Array[] } | undefined {
  const pivots: number[] = [];
  let rank = 0;
  for (let c = 0; c < unknowns && rank < rows.length; c++) {
    const at = rows.findIndex((row, r) => r >= rank && row[c] === 1);
    if (at < 0) continue;
    const pivot = rows[at];
    const first = rows[rank];
    if (!pivot || !first) continue;
    rows[at] = first;
    rows[rank] = pivot;
    rows.forEach((row, r) => {
      if (r !== rank && row[c] === 1) for (let k = c; k <= unknowns; k++) row[k] = (row[k] ?? 0) ^ (pivot[k] ?? 0);
    });
    pivots.push(c);
    rank++;
  }
  if (rows.some((row, r) => r >= rank && row[unknowns] === 1)) return undefined;
  const particular = new Uint8Array(unknowns);
  pivots.forEach((c, r) => (particular[c] = rows[r]?.[unknowns] ?? 0));
  const kernel: Uint8Array[] = [];
  for (let c = 0; c < unknowns; c++) {
    if (pivots.includes(c)) continue;
    const v = new Uint8Array(unknowns);
    v[c] = 1;
    pivots.forEach((p, r) => (v[p] = rows[r]?.[c] ?? 0));
    kernel.push(v);
  }
  return { particular, kernel };
}
