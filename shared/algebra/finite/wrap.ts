import type { Cell, CellKind, Offset } from '../../lattice/cells.ts';
import type { Cluster } from '../../lattice/cluster.ts';
import { determinant } from '../../lattice/vectors.ts';
import { limits, newBudget, type Budget } from '../../limits.ts';
import { Coefficient } from '../numbers/coefficient.ts';
import { phaseCoefficient } from '../pauli/collect.ts';
import { stringText } from '../pauli/string.ts';
import type { Extended, Factor, Family, LocalString, Operator, Site, Steps } from '../pauli/types.ts';
import { bodyKey, fromPauli, identityOn, isIdentity, multiply, pauliPhase, turned } from './string.ts';
import { sparseFromPauli, type SparseString } from './sparse.ts';
import type { FiniteModel, FiniteString, SiteTable } from './types.ts';

/** A species on a cluster: its cells are those of the classes listed. */
export interface SpeciesCells {
  readonly name: string;
  readonly kind: CellKind;
  readonly classes: readonly number[];
}

/** An operator does not fit on a size: its period does not divide the extents. */
export interface WrapProblem {
  readonly problem: 'period';
  readonly steps: Steps;
  readonly message: string;
}
export const isWrapProblem = (value: FiniteModel | WrapProblem): value is WrapProblem => 'problem' in value;

/** Thrown where a caller did not ask `admits` first. */
export class PeriodMismatch extends Error {
  readonly steps: Steps;
  constructor(steps: Steps) {
    super(periodMessage(steps));
    this.name = 'PeriodMismatch';
    this.steps = steps;
  }
}
const periodMessage = (steps: Steps): string =>
  `the size has to be a multiple of the period ${steps.map((m) => Math.max(m, 1)).join(' x ')}`;

/** Spins of the species on a cluster: species by species, each in the order of the numbers of its cells. */
export function siteTable(cluster: Cluster, species: readonly SpeciesCells[]): SiteTable {
  const sites: Site[] = [];
  const numbers = new Map<string, Int32Array>();
  for (const { name, kind, classes } of species) {
    const ofCell = new Int32Array(cluster.count(kind)).fill(-1);
    const wanted = new Set(classes);
    for (const [k, cell] of cluster.cells(kind).entries()) {
      if (!wanted.has(cell.index)) continue;
      ofCell[k] = sites.length;
      sites.push({ species: name, cell });
    }
    numbers.set(`${name} ${kind}`, ofCell);
  }
  return {
    sites,
    number(site) {
      const ofCell = numbers.get(`${site.species} ${site.cell.kind}`);
      const k = ofCell && cluster.number(site.cell);
      const spin = k === undefined ? -1 : (ofCell?.[k] ?? -1);
      return spin < 0 ? undefined : spin;
    },
  };
}

const moved = (cell: Cell, by: Offset): Cell => ({
  kind: cell.kind,
  index: cell.index,
  offset: cell.offset.map((c, d) => c + (by[d] ?? 0)),
});

/** A string on numbered spins, factor by factor in its order on the infinite lattice; spins repeat where it wraps onto itself. */
interface Landed {
  readonly factors: readonly { readonly spin: number; readonly pauli: Factor['pauli'] }[];
}

/** Where the translate by `by` lands; undefined if it does not stand on this (open) lattice. */
function land(
  table: SiteTable,
  cluster: Cluster,
  string: LocalString,
  needs: readonly Cell[],
  by: Offset,
): Landed | undefined {
  if (needs.some((cell) => cluster.number(moved(cell, by)) === undefined)) return undefined;
  const factors: { spin: number; pauli: Factor['pauli'] }[] = [];
  for (const f of string.factors) {
    const spin = table.number({ species: f.species, cell: moved(f.cell, by) });
    if (spin !== undefined) factors.push({ spin, pauli: f.pauli });
    else if (!f.optional) return undefined;
  }
  // nothing of it is here: a translate past the edge, not an empty product
  if (factors.length === 0 && string.factors.length > 0 && needs.length === 0) return undefined;
  return { factors };
}

/**
 * A local string on the cluster; factors that come to lie on one spin are multiplied in canonical order, phases exact. Undefined where it does not stand: a
 * cell that it names, or one of `needs`, is missing. `needs` are moved by `by`, the string is taken as it is.
 */
export function wrapString(
  table: SiteTable,
  cluster: Cluster,
  string: LocalString,
  { needs = [], by = [] }: { readonly needs?: readonly Cell[]; readonly by?: Offset } = {},
): FiniteString | undefined {
  const still = needs.map((cell) => moved(cell, by));
  const landed = land(table, cluster, string, still, []);
  return landed && fromPauli(table.sites.length, landed.factors, string.phase);
}

/** `wrapString` as a sparse string, for clusters of many thousand spins. */
export function wrapSparse(
  table: SiteTable,
  cluster: Cluster,
  string: LocalString,
  { needs = [], by = [] }: { readonly needs?: readonly Cell[]; readonly by?: Offset } = {},
): SparseString | undefined {
  const landed = land(
    table,
    cluster,
    string,
    needs.map((cell) => moved(cell, by)),
    [],
  );
  return landed && sparseFromPauli(table.sites.length, landed.factors, string.phase);
}

/** Lowest and highest offsets of what a translate touches. */
function reach(string: LocalString, needs: readonly Cell[], dimension: number): { low: number[]; high: number[] } {
  const cells = [...string.factors.map((f) => f.cell), ...needs];
  const along = (pick: (...n: number[]) => number) =>
    Array.from({ length: dimension }, (_, d) => (cells.length === 0 ? 0 : pick(...cells.map((c) => c.offset[d] ?? 0))));
  return { low: along(Math.min), high: along(Math.max) };
}

/** Translates of a part: all that may stand on the cluster; for a bare constant one for each period within the extents. */
function orbit(cluster: Cluster, string: LocalString, needs: readonly Cell[], steps: Steps): Offset[] {
  const { low, high } = reach(string, needs, cluster.dimension);
  const all = cluster.orbit(steps, low, high);
  if (string.factors.length > 0 || needs.length > 0) return all;
  return all.filter((by) =>
    by.every((c, d) => cluster.periodic[d] || (c >= 0 && c < (cluster.size.periods[d]?.[d] ?? 1))),
  );
}

/** Visits every translate of a family or part that stands on the cluster. */
function eachTranslate(
  table: SiteTable,
  cluster: Cluster,
  part: { readonly string: LocalString; readonly steps: Steps; readonly needs: readonly Cell[] },
  budget: Budget,
  visit: (landed: Landed, by: Offset) => void,
): void {
  for (const by of orbit(cluster, part.string, part.needs, part.steps)) {
    budget.spend(1 + part.string.factors.length);
    const landed = land(table, cluster, part.string, part.needs, by);
    if (landed) visit(landed, by);
  }
}

/** A seam around a periodic direction (from 1): terms that reach across it are conjugated by an on-site symmetry on the far side. */
export interface Seam {
  readonly symmetry: Extended;
  readonly direction: number;
}

/** How often an offset has gone around period `d`: the whole part of its coordinate along the periods, exact (Cramer's rule). */
function windings({ periods }: Cluster['size'], offset: Offset, d: number): number {
  const whole = determinant(periods);
  const part = determinant(periods.map((row, k) => (k === d ? offset : row)));
  return Math.floor((whole < 0 ? -part : part) / Math.abs(whole));
}

/** True if a string anticommutes with a product of one Pauli matrix on each spin, counting only the factors chosen. */
export function anticommutesOnSite(
  string: LocalString,
  { parts }: Extended,
  counts: (factor: Factor) => boolean = () => true,
): boolean {
  let odd = false;
  for (const f of string.factors)
    for (const part of parts)
      for (const p of part.string.factors)
        if (
          p.species === f.species &&
          p.cell.kind === f.cell.kind &&
          p.cell.index === f.cell.index &&
          p.pauli !== f.pauli &&
          counts(f)
        )
          odd = !odd;
  return odd;
}

/** True if the seams give a translate the sign −1. */
export function crosses(
  table: SiteTable,
  cluster: Cluster,
  string: LocalString,
  by: Offset,
  seams: readonly Seam[],
): boolean {
  return (
    seams.filter(({ symmetry, direction }) =>
      anticommutesOnSite(string, symmetry, (f) => {
        const cell = moved(f.cell, by);
        const stands = table.number({ species: f.species, cell }) !== undefined;
        return stands && windings(cluster.size, cell.offset, direction - 1) % 2 !== 0;
      }),
    ).length %
      2 ===
    1
  );
}

/**
 * Every translate of a string that stands on the cluster, phases exact, each once for each translate (equal ones are kept).
 * Throws PeriodMismatch where the period does not divide the size, BudgetSpent.
 */
export function wrapOrbit(
  table: SiteTable,
  cluster: Cluster,
  part: { readonly string: LocalString; readonly steps: Steps; readonly needs: readonly Cell[] },
  budget: Budget = newBudget(limits.operations, 'operations of wrapping an orbit'),
): FiniteString[] {
  if (!cluster.admits(part.steps)) throw new PeriodMismatch(part.steps);
  const strings: FiniteString[] = [];
  eachTranslate(table, cluster, part, budget, ({ factors }) => {
    budget.spend(1 + (table.sites.length >>> 5));
    strings.push(fromPauli(table.sites.length, factors, part.string.phase));
  });
  return strings;
}

/** What wrapping did to one family. */
interface Wrapped {
  constant: number;
  coincident: number;
  notHermitian: number;
}

const times = (count: number, what: string): string => `${String(count)} ${what}${count === 1 ? '' : 's'}`;

function sentences(family: Family, wrapped: Wrapped): string[] {
  const name = stringText(family.string);
  const notes: string[] = [];
  if (family.string.factors.length > 0 && wrapped.constant > 0)
    notes.push(`${times(wrapped.constant, 'translate')} of ${name} wrap to a constant on this size`);
  if (wrapped.coincident > 0)
    notes.push(`${times(wrapped.coincident, 'translate')} of ${name} coincide with another term on this size`);
  if (wrapped.notHermitian > 0)
    notes.push(
      `${times(wrapped.notHermitian, 'translate')} of ${name} are not Hermitian on this size: factors that anticommute meet on one spin`,
    );
  return notes;
}

/** Sums the translates of all families and the extended terms, with what wrapping did to each. */
class Gathering {
  readonly terms = new Map<string, { coefficient: Coefficient; readonly string: FiniteString }>();
  constant = Coefficient.zero;
  /** Returns what became of the term. */
  add(string: FiniteString, coefficient: Coefficient): 'constant' | 'coincident' | 'new' {
    const k = pauliPhase(string);
    const whole = k === 0 ? coefficient : coefficient.mul(phaseCoefficient(k));
    if (isIdentity(string)) {
      this.constant = this.constant.add(whole);
      return 'constant';
    }
    const key = bodyKey(string);
    const old = this.terms.get(key);
    if (old) old.coefficient = old.coefficient.add(whole);
    else this.terms.set(key, { coefficient: whole, string: turned(string, -k) });
    return old ? 'coincident' : 'new';
  }
}

/**
 * A model on a cluster: every family summed over its translates, equal strings collected (each with phase 0 as a product of Pauli matrices), the identity
 * put into `constant`. Open edges: factors from cut geometry are left out, terms that name a missing cell are dropped. A period that
 * does not divide the size is the problem returned. Each family must commute with the symmetries of the seams, which sit between the last
 * unit cell of their direction and the first. Throws BudgetSpent.
 */
export function wrapOperator(
  table: SiteTable,
  cluster: Cluster,
  operator: Operator,
  budget: Budget = newBudget(limits.operations, 'operations of wrapping a model'),
  seams: readonly Seam[] = [],
): FiniteModel | WrapProblem {
  const misfit = [...operator.families, ...operator.extended.flatMap((t) => t.extended.parts)].find(
    (p) => !cluster.admits(p.steps),
  );
  if (misfit) return { problem: 'period', steps: misfit.steps, message: periodMessage(misfit.steps) };
  const n = table.sites.length;
  const gathering = new Gathering();
  const notes: string[] = [];
  for (const family of operator.families) {
    const wrapped: Wrapped = { constant: 0, coincident: 0, notHermitian: 0 };
    eachTranslate(table, cluster, family, budget, ({ factors }, by) => {
      budget.spend(1 + (n >>> 5));
      const turn = crosses(table, cluster, family.string, by, seams) ? 2 : 0;
      const string = fromPauli(n, factors, family.string.phase + turn);
      if (family.coefficient.isReal() && pauliPhase(string) % 2 === 1) wrapped.notHermitian++;
      const became = gathering.add(string, family.coefficient);
      if (became !== 'new') wrapped[became]++;
    });
    notes.push(...sentences(family, wrapped));
  }
  for (const { coefficient, extended } of operator.extended)
    gathering.add(wrapExtended(table, cluster, extended, budget), coefficient);
  return {
    table,
    terms: [...gathering.terms.values()].filter((t) => !t.coefficient.isZero()),
    constant: gathering.constant,
    notes,
  };
}

/**
 * A product string on the cluster: its parts in order, each over the translates that stand. Throws PeriodMismatch where a period does not divide the
 * size (ask `cluster.admits` first), BudgetSpent.
 */
export function wrapExtended(
  table: SiteTable,
  cluster: Cluster,
  extended: Extended,
  budget: Budget = newBudget(limits.operations, 'operations of wrapping a product'),
): FiniteString {
  const n = table.sites.length;
  let product = turned(identityOn(n), extended.phase);
  for (const part of extended.parts) {
    if (!cluster.admits(part.steps)) throw new PeriodMismatch(part.steps);
    const factors: { spin: number; pauli: Factor['pauli'] }[] = [];
    let phase = 0;
    eachTranslate(table, cluster, part, budget, (landed) => {
      factors.push(...landed.factors);
      phase += part.string.phase;
    });
    product = multiply(product, fromPauli(n, factors, phase));
  }
  return product;
}
