import { BudgetSpent, limits, newBudget, type Budget } from '../../limits.ts';
import { cellKey, shifted, type Cell, type Offset } from '../../lattice/cells.ts';
import { Coefficient } from '../numbers/coefficient.ts';
import { bodyKey, compareCells, factorOrder, siteKey, translateString } from './string.ts';
import type { Factor, Family, LocalString, Steps } from './types.ts';

/** How operators are brought to one form. */
export interface CollectOptions {
  /** True on lattices with an open direction: then missing cells matter, and `optional` and `needs` tell terms apart. Else they are dropped. */
  readonly open: boolean;
  readonly budget?: Budget;
}

/** Residues of a common period that are tabulated for one shape. */
const mostResidues = 65_536;

const phases = [Coefficient.one, Coefficient.i, Coefficient.one.neg(), Coefficient.i.neg()];
/** i^phase as a coefficient. */
export const phaseCoefficient = (phase: number): Coefficient => phases[((phase % 4) + 4) % 4] ?? Coefficient.one;

export const modulo = (n: number, m: number): number => ((n % m) + m) % m;
export const gcdOf = (a: number, b: number): number => (b === 0 ? Math.abs(a) : gcdOf(b, a % b));
export const lcmOf = (a: number, b: number): number => (a === 0 || b === 0 ? Math.max(a, b) : (a / gcdOf(a, b)) * b);

/** Sorted, once each, without cells that a factor demands anyway. */
function canonicalNeeds(needs: readonly Cell[], factors: readonly Factor[]): Cell[] {
  const demanded = new Set(factors.filter((f) => !f.optional).map((f) => cellKey(f.cell)));
  const kept = new Map<string, Cell>();
  for (const cell of needs) if (!demanded.has(cellKey(cell))) kept.set(cellKey(cell), cell);
  return [...kept.values()].sort(compareCells);
}

/** What two families with one table of coefficients share: Pauli product, pinned directions, what must exist. */
interface Shape {
  readonly key: string;
  /** Representative with its lowest corner at 0 in translated directions. */
  readonly string: LocalString;
  readonly needs: readonly Cell[];
  readonly pinned: readonly boolean[];
}

interface Placed {
  readonly shape: Shape;
  /** Where the lowest corner stands, modulo the steps; 0 in pinned directions. */
  readonly residue: Offset;
  readonly steps: Steps;
  readonly coefficient: Coefficient;
}

/** Lowest offset in each direction, over factors or, where there are none, over needed cells. */
function lowest(string: LocalString, needs: readonly Cell[], dimension: number): number[] {
  const cells = string.factors.length > 0 ? string.factors.map((f) => f.cell) : needs;
  return Array.from({ length: dimension }, (_, d) =>
    cells.reduce((least, c) => Math.min(least, c.offset[d] ?? 0), cells.length > 0 ? Infinity : 0),
  );
}

function place(family: Family, open: boolean): Placed {
  const { steps } = family;
  const factors = open
    ? family.string.factors
    : family.string.factors.map((f): Factor => (f.optional ? { species: f.species, cell: f.cell, pauli: f.pauli } : f));
  const needs = open ? canonicalNeeds(family.needs, factors) : [];
  const corner = lowest({ phase: 0, factors }, needs, steps.length).map((c, d) => (steps[d] === 0 ? 0 : c));
  const back = corner.map((c) => -c);
  const string = translateString({ phase: 0, factors }, back);
  const shapeNeeds = needs.map((cell) => shifted(cell, back));
  const pinned = steps.map((m) => m === 0);
  let coefficient = family.coefficient.mul(phaseCoefficient(family.string.phase));
  let kept = steps;
  if (factors.length === 0 && needs.length === 0) {
    // a bare constant on every m-th cell is 1/m of it on every cell
    const cells = steps.reduce((product, m) => product * Math.max(m, 1), 1);
    if (cells > 1) coefficient = coefficient.mul(Coefficient.rational(1, cells));
    kept = steps.map((m) => Math.min(m, 1));
  }
  const key = [
    pinned.map((p) => (p ? '.' : '*')).join(''),
    bodyKey(string),
    ...(open ? [string.factors.map((f) => (f.optional ? 'o' : '!')).join(''), shapeNeeds.map(cellKey).join(' ')] : []),
  ].join('|');
  const residue = corner.map((c, d) => (kept[d] ? modulo(c, kept[d]) : 0));
  return { shape: { key, string, needs: shapeNeeds, pinned }, residue, steps: kept, coefficient };
}

const at = (shape: Shape, residue: Offset, steps: Steps, coefficient: Coefficient): Family => ({
  coefficient,
  string: translateString(shape.string, residue),
  steps,
  needs: shape.needs.map((cell) => shifted(cell, residue)),
});

/** One family in canonical form: phase 0, lowest translate in the first period, needs sorted. */
export function canonicalFamily(family: Family, open: boolean): Family {
  const { shape, residue, steps, coefficient } = place(family, open);
  return at(shape, residue, steps, coefficient);
}

/** All residues of a period, in order; pinned directions (0) have one. */
export function* residues(period: Steps): Generator<number[]> {
  const here = period.map(() => 0);
  for (;;) {
    yield [...here];
    let d = period.length - 1;
    for (; d >= 0; d--) {
      here[d] = (here[d] ?? 0) + 1;
      if ((here[d] ?? 0) < Math.max(period[d] ?? 1, 1)) break;
      here[d] = 0;
    }
    if (d < 0) return;
  }
}

/** Number of residues of a period; throws BudgetSpent past the most that are tabulated. */
export function residueCount(period: Steps): number {
  const count = period.reduce((product, m) => product * Math.max(m, 1), 1);
  if (count > mostResidues) throw new BudgetSpent(`cells of a common period (${String(mostResidues)})`);
  return count;
}

/** Smallest divisor of the period along direction d under which a set of residues is invariant. */
function shortestPeriod(set: ReadonlyMap<string, Offset>, period: Steps, d: number): number {
  const full = period[d] ?? 0;
  for (let q = 1; q < full; q++) {
    if (full % q !== 0) continue;
    const invariant = [...set.values()].every((r) =>
      set.has(r.map((c, e) => (e === d ? modulo(c + q, full) : c)).join(',')),
    );
    if (invariant) return q;
  }
  return full;
}

/** The residues of one value, on the coarsest grid that holds them. */
export function coarsest(
  set: ReadonlyMap<string, Offset>,
  period: Steps,
): { readonly steps: Steps; readonly residues: readonly Offset[] } {
  const steps = period.map((m, d) => (m > 1 ? shortestPeriod(set, period, d) : m));
  const kept = new Map<string, Offset>();
  for (const r of set.values()) {
    const reduced = r.map((c, d) => (steps[d] ? modulo(c, steps[d]) : c));
    kept.set(reduced.join(','), reduced);
  }
  return { steps, residues: [...kept.values()] };
}

/** Families of one shape: tabulated over their common period, then written with one family for each value on the coarsest grid. */
function merge(placed: readonly Placed[], budget: Budget): Family[] {
  const [first] = placed;
  if (!first) return [];
  if (placed.length === 1)
    return first.coefficient.isZero() ? [] : [at(first.shape, first.residue, first.steps, first.coefficient)];
  const period = placed.reduce<number[]>((all, p) => all.map((m, d) => lcmOf(m, p.steps[d] ?? 0)), [...first.steps]);
  residueCount(period);
  const table = new Map<string, { residue: Offset; coefficient: Coefficient }>();
  for (const p of placed) {
    const repeats = period.map((m, d) => (m === 0 ? 1 : m / (p.steps[d] ?? 1)));
    for (const k of residues(repeats)) {
      budget.spend();
      const residue = p.residue.map((c, d) => c + (k[d] ?? 0) * (p.steps[d] ?? 0));
      const old = table.get(residue.join(','));
      table.set(residue.join(','), { residue, coefficient: old ? old.coefficient.add(p.coefficient) : p.coefficient });
    }
  }
  const byValue = new Map<string, { coefficient: Coefficient; set: Map<string, Offset> }>();
  for (const [key, { residue, coefficient }] of table) {
    if (coefficient.isZero()) continue;
    const value = byValue.get(coefficient.key()) ?? { coefficient, set: new Map<string, Offset>() };
    value.set.set(key, residue);
    byValue.set(coefficient.key(), value);
  }
  return [...byValue.values()].flatMap(({ coefficient, set }) => {
    const grid = coarsest(set, period);
    return grid.residues.map((r) => at(first.shape, r, grid.steps, coefficient));
  });
}

/** Order of families in an operator: constants last, then weight, then factors, then steps. */
export function compareFamilies(a: Family, b: Family): number {
  const [p, q] = [a.string.factors, b.string.factors];
  if (p.length !== q.length) return p.length === 0 ? 1 : q.length === 0 ? -1 : p.length - q.length;
  for (let k = 0; k < p.length; k++) {
    const [f, g] = [p[k], q[k]];
    if (!f || !g) continue;
    const order = factorOrder(f, g) || (f.pauli < g.pauli ? -1 : f.pauli > g.pauli ? 1 : 0);
    if (order !== 0) return order;
  }
  const [s, t] = [familyKey(a), familyKey(b)];
  return s < t ? -1 : s > t ? 1 : 0;
}

/** Key of a canonical family without its coefficient: product, steps and, on open lattices, what must exist. */
export const familyKey = (family: Family): string =>
  [
    family.steps.join(','),
    family.string.factors.map((f) => `${f.pauli}${f.optional ? '?' : ''}:${siteKey(f)}`).join(' '),
    family.needs.map(cellKey).join(' '),
  ].join('|');

/**
 * Sum of families in one canonical form: equal sums are equal as data, whatever the order or the periods they were written with.
 * Zeros are gone; every string has phase 0. Throws BudgetSpent past limits.families, or where periods have no common period in reach.
 */
export function collectFamilies(families: readonly Family[], { open, budget = newBudget() }: CollectOptions): Family[] {
  const shapes = new Map<string, Placed[]>();
  for (const family of families) {
    budget.spend(1 + family.string.factors.length);
    if (family.coefficient.isZero()) continue;
    const placed = place(family, open);
    const group = shapes.get(placed.shape.key);
    if (group) group.push(placed);
    else shapes.set(placed.shape.key, [placed]);
  }
  const collected = [...shapes.values()].flatMap((group) => merge(group, budget));
  if (collected.length > limits.families)
    throw new BudgetSpent(`Pauli families in one operator (${String(limits.families)})`);
  return collected.sort(compareFamilies);
}
