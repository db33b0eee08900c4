import { Echelon } from '../algebra/f2/bits.ts';
import { columnsOf, toSparse, type SparseString } from '../algebra/finite/sparse.ts';
import { siteTable, wrapExtended, wrapOrbit } from '../algebra/finite/wrap.ts';
import { lcmOf } from '../algebra/pauli/collect.ts';
import type { Orbit } from '../algebra/pauli/commutation.ts';
import { translateString } from '../algebra/pauli/string.ts';
import type { Extended } from '../algebra/pauli/types.ts';
import type { SpinClass } from '../algebra/pauli/vector.ts';
import { isLatticeProblem, type Lattice } from '../lattice/cells.ts';
import { newCluster, sizeText, straight, type Cluster } from '../lattice/cluster.ts';
import { BudgetSpent, newBudget, type Budget } from '../limits.ts';
import type { Progress } from './audit.ts';
import { fewestGenerators, foldedCommutant, repeated, type Folded } from './foldings.ts';
import type { speciesCells } from './sector.ts';

/** The search for Pauli symmetries: algebra proposes, tori decide whether anything is missing. */

/** What is asked: the translated families of a model and the spins it lives on. */
export interface Model {
  readonly lattice: Lattice;
  readonly orbits: readonly Orbit[];
  readonly classes: readonly SpinClass[];
  readonly species: ReturnType<typeof speciesCells>;
  readonly period: readonly number[];
}

/** Everything that was found at one repeat length, and how it stands on tori. */
export interface Found {
  readonly repeat: number;
  /** The longest repeat length that was tried. */
  readonly tried: number;
  readonly local: readonly Folded[];
  /** No generating set of the local ones is smaller; undefined where that was not settled. */
  readonly fewest: number | undefined;
  /** Subsystem families with one representative; global strings one by one. */
  readonly extended: readonly { readonly kind: 'subsystem' | 'global'; readonly extended: Extended }[];
  readonly sizes: readonly string[];
  /** Sizes on which more strings commute than the found ones generate, with how many more. */
  readonly unexplained: readonly { readonly size: string; readonly more: number }[];
}

/** Nonempty sets of directions, small ones first. */
function directionSets(dimension: number): number[][] {
  const all = Array.from({ length: 2 ** dimension - 1 }, (_, k) =>
    Array.from({ length: dimension }, (__, d) => d).filter((d) => ((k + 1) >> d) & 1),
  );
  return all.sort((a, b) => a.length - b.length);
}

/** Extents of the tori on which completeness is tested. */
const series: Readonly<Record<number, readonly (readonly number[])[]>> = {
  1: [[3], [4], [5], [6], [7], [8], [9], [12]],
  2: [
    [3, 3],
    [3, 4],
    [4, 4],
    [4, 5],
    [5, 5],
    [6, 6],
    [7, 7],
    [8, 8],
  ],
  3: [
    [3, 3, 3],
    [3, 3, 4],
    [4, 4, 4],
    [3, 4, 5],
  ],
};

const mostSpins = 1_600;

/** The tori for a period: those of the series that fit, or the series in units of the period where few of them do. */
function toriOf(model: Model, repeat: number): Cluster[] {
  const { lattice, period, classes } = model;
  const unit = period.map((m) => lcmOf(m, repeat));
  const list = series[period.length] ?? [];
  const fit = list.filter((extents) => extents.every((l, d) => l % (unit[d] ?? 1) === 0));
  const short = [1, 2, 3]
    .map((k) => unit.map((m) => Math.max(k, 1) * m))
    .filter((extents) => extents.every((l) => l >= 3));
  const chosen = fit.length >= 3 ? fit : [...fit, ...short.filter((s) => !fit.some((f) => f.join() === s.join()))];
  return chosen.flatMap((extents) => {
    const cells = extents.reduce((a, b) => a * b, 1);
    const cluster = newCluster({ family: lattice.family, periodic: extents.map(() => true) }, straight(...extents));
    return isLatticeProblem(cluster) || cells * classes.length > mostSpins ? [] : [cluster];
  });
}

/** Shifts of a string that repeats along some directions, on a torus: all that tell translates apart. */
function shiftsOf(cluster: Cluster, folded: Folded): number[][] {
  const reach = cluster.size.periods.map((row, d) => (folded.steps[d] ? (folded.steps[d] ?? 1) : (row[d] ?? 1)));
  return reach.reduce<number[][]>(
    (heads, l) => heads.flatMap((head) => Array.from({ length: l }, (_, c) => [...head, c])),
    [[]],
  );
}

const shiftedBy = (folded: Folded, by: readonly number[]): Extended =>
  repeated(translateString(folded.string, by), folded.steps);

/** The shifts by which each found one adds independent strings on a torus, in order, and how many strings are left unexplained. */
function ranks(
  model: Model,
  cluster: Cluster,
  local: readonly Folded[],
  folded: readonly Folded[],
  budget: Budget,
): { added: number[][][]; more: number } {
  const table = siteTable(cluster, model.species);
  const n = table.sites.length;
  const terms = new Echelon(2 * n, budget);
  for (const orbit of model.orbits)
    for (const string of wrapOrbit(table, cluster, { ...orbit, needs: [] }, budget))
      terms.insert(columnsOf(toSparse(string)));
  const found = new Echelon(2 * n, budget);
  const take = (one: Folded): number[][] =>
    shiftsOf(cluster, one).filter((by) => {
      const string: SparseString = toSparse(wrapExtended(table, cluster, shiftedBy(one, by), budget));
      return found.insert(columnsOf(string)).independent;
    });
  local.forEach(take);
  const added = folded.map(take);
  return { added, more: 2 * n - terms.rank - found.rank };
}

/** Growing with the size (a family of subsystem symmetries), bounded (global), or nothing new. */
function classified(added: readonly number[], cells: readonly number[]): 'subsystem' | 'global' | undefined {
  if (added.every((a) => a === 0)) return undefined;
  const smallest = added[cells.indexOf(Math.min(...cells))] ?? 0;
  const largest = added[cells.indexOf(Math.max(...cells))] ?? 0;
  return largest > smallest && smallest > 0 ? 'subsystem' : 'global';
}

/**
 * All strings that commute with the model's terms, as far as they are local or repeat by `repeat` cells along some directions, and what they leave
 * unexplained on tori. Subsystem and global are told apart by what a family adds as the torus grows. Throws BudgetSpent.
 */
export function* search(model: Model, repeat: number, budget: Budget): Generator<Progress, Found> {
  const { orbits, classes, period } = model;
  const dimension = period.length;
  const local = foldedCommutant(orbits, dimension, classes, [], 1, budget);
  const fewest = atMost(() => fewestGenerators(local, classes, period, newBudget(4_000_000)));
  yield { done: 0.3, doing: 'local symmetries' };
  const folded = directionSets(dimension).flatMap((along) =>
    foldedCommutant(orbits, dimension, classes, along, repeat, budget),
  );
  yield { done: 0.6, doing: 'symmetries that repeat' };
  const tori = toriOf(model, repeat);
  const all = tori.map((cluster) => ranks(model, cluster, local, folded, budget));
  const cells = tori.map((cluster) => cluster.unitCells);
  const extended = folded.flatMap((one, k) => {
    const added = all.map((r) => r.added[k] ?? []);
    const kind = classified(
      added.map((shifts) => shifts.length),
      cells,
    );
    if (!kind) return [];
    const most = added.reduce((a, b) => (b.length > a.length ? b : a));
    const shifts = kind === 'global' ? most : most.slice(0, 1);
    return shifts.map((by) => ({ kind, extended: shiftedBy(one, by) }));
  });
  const sizes = tori.map((cluster) => sizeText(cluster.size));
  const unexplained = all.flatMap(({ more }, k) => (more > 0 ? [{ size: sizes[k] ?? '', more }] : []));
  return { repeat, tried: repeat, local, fewest, extended, sizes, unexplained };
}

/** What the run gives, or undefined where its budget does not last. */
function atMost<T>(run: () => T): T | undefined {
  try {
    return run();
  } catch (error) {
    if (error instanceof BudgetSpent) return undefined;
    throw error;
  }
}
