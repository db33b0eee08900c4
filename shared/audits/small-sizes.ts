import { sparseCommute, toSparse, type SparseString } from '../algebra/finite/sparse.ts';
import type { SiteTable } from '../algebra/finite/types.ts';
import { PeriodMismatch, siteTable, wrapExtended, wrapOrbit } from '../algebra/finite/wrap.ts';
import { lcmOf } from '../algebra/pauli/collect.ts';
import type { Values } from '../language/values.ts';
import { isLatticeProblem, type LatticeFamily } from '../lattice/cells.ts';
import { isStraight, newCluster, sizeText, straight, type Cluster } from '../lattice/cluster.ts';
import { BudgetSpent, newBudget, type Budget } from '../limits.ts';
import { stringPhrase } from '../maps/phrases.ts';
import type { Piece } from './pieces.ts';
import { spanOf, speciesOfPieces, stringsOf } from './reach.ts';
import { speciesCells } from './sector.ts';

/** What small tori and open edges add to a verdict on the infinite lattice: decided size by size, exactly. */

/** All tuples of extents, shortest first. */
function tuples(ranges: readonly (readonly number[])[]): number[][] {
  const all = ranges.reduce<number[][]>(
    (heads, range) => heads.flatMap((head) => range.map((l) => [...head, l])),
    [[]],
  );
  const volume = (extents: readonly number[]): number => extents.reduce((product, l) => product * l, 1);
  return all.sort((a, b) => volume(a) - volume(b) || Math.max(...a) - Math.max(...b));
}

const upTo = (n: number): number[] => Array.from({ length: n }, (_, k) => k + 1);

/** All strings of a piece that stand on a cluster. Throws PeriodMismatch, BudgetSpent. */
function wrapPiece(table: SiteTable, cluster: Cluster, piece: Piece, budget: Budget): SparseString[] {
  const strings =
    piece.kind === 'orbit'
      ? wrapOrbit(table, cluster, { ...piece.orbit, needs: piece.needs }, budget)
      : [wrapExtended(table, cluster, piece.extended, budget)];
  return strings.map(toSparse);
}

/** The first pair of strings, one of each list, that anticommute. Only pairs that share a spin are looked at. */
function clash(
  left: readonly SparseString[],
  right: readonly SparseString[],
  budget: Budget,
): { left: SparseString; right: SparseString } | undefined {
  const at = new Map<number, SparseString[]>();
  for (const string of right)
    for (const spin of string.spins) {
      const here = at.get(spin);
      if (here) here.push(string);
      else at.set(spin, [string]);
    }
  for (const a of left) {
    const met = new Set([...a.spins].flatMap((spin) => at.get(spin) ?? []));
    for (const b of met) {
      budget.spend(1 + a.spins.length + b.spins.length);
      if (!sparseCommute(a, b)) return { left: a, right: b };
    }
  }
  return undefined;
}

/** Most unit cells of the declared torus for it to be looked at besides those of extents 1 to 3. */
const smallCells = 36;

/**
 * Cautions that list the tori of extents 1 to 3 (and the declared torus, where it is small) on which pairs that do not commute on
 * the infinite lattice commute after all, because the overlap wraps onto itself. Empty where there are none, or the
 * lattice is no torus. Sizes that a period does not fit are passed over.
 */
export function smallTori(
  pairs: readonly { readonly term: Piece | undefined; readonly law: Piece }[],
  values: Values,
): string[] {
  const { lattice } = values;
  const whole = pairs.flatMap(({ term, law }) => (term ? [{ term, law }] : []));
  if (!lattice || whole.length === 0 || !lattice.periodic.every(Boolean)) return [];
  const species = speciesCells(values, speciesOfPieces(whole.flatMap(({ term, law }) => [term, law])));
  const sizes = tuples(lattice.family.vectors.map(() => [1, 2, 3])).map((extents) => straight(...extents));
  const declared = sizeText(lattice.size);
  const cells = newCluster(lattice, lattice.size);
  if (!isLatticeProblem(cells) && cells.unitCells <= smallCells && !sizes.some((size) => sizeText(size) === declared))
    sizes.push(lattice.size);
  const budget = newBudget(4_000_000, 'operations on small tori');
  const wrapped: string[] = [];
  try {
    for (const size of sizes) {
      const cluster = newCluster(lattice, size);
      if (isLatticeProblem(cluster)) continue;
      const table = siteTable(cluster, species);
      const commutes = whole.every(({ term, law }) => {
        const strings = fits(() => ({
          a: wrapPiece(table, cluster, term, budget),
          b: wrapPiece(table, cluster, law, budget),
        }));
        return strings && !clash(strings.a, strings.b, budget);
      });
      if (commutes) wrapped.push(sizeText(size));
    }
  } catch (error) {
    if (!(error instanceof BudgetSpent)) throw error;
  }
  if (wrapped.length === 0) return [];
  const here = wrapped.includes(declared) ? ', the declared size among them' : '';
  return [
    `on ${inWords(wrapped)} the overlap wraps onto itself and cancels${here}; the verdict speaks of the lattice at large`,
  ];
}

function fits<T>(run: () => T): T | undefined {
  try {
    return run();
  } catch (error) {
    if (error instanceof PeriodMismatch) return undefined;
    throw error;
  }
}

const inWords = (list: readonly string[]): string =>
  list.length < 2 ? list.join('') : `${list.slice(0, -1).join(', ')} and ${list.at(-1) ?? ''}`;

/** What decides the boundary along one direction: the widest string, the common step, and how far pinned strings stand from the corner. */
function widths(
  family: LatticeFamily,
  pieces: readonly Piece[],
  d: number,
): { width: number; step: number; pinned: number } {
  let [width, step, pinned] = [1, 1, 0];
  for (const { cells, steps } of pieces.flatMap(stringsOf)) {
    const span = spanOf(family, cells, d);
    const m = steps[d] ?? 0;
    if (m > 0) step = lcmOf(step, m);
    if (!span) continue;
    width = Math.max(width, span.high - span.low + 1);
    if (m === 0) pinned = Math.max(pinned, span.high + 1);
  }
  return { width, step, pinned };
}

/** Most cells of the largest open lattice looked at, and most sizes. */
const edgeLimits = { cells: 4_096, sizes: 400, operations: 12_000_000 } as const;

export interface BoundaryVerdict {
  /** Continues "commutes … on every size"; empty where no direction is open. */
  readonly words: string;
  readonly cautions: string[];
  /** Set where pairs that commute in the bulk do not at an edge: how many terms, and one pair. */
  readonly failure?: { readonly terms: number; readonly witness: Record<string, unknown> };
}

/**
 * Whether pairs that commute on the infinite lattice do so at open edges, where strings are cut. Decided by brute force on every
 * combination of open extents 1 … 2w + m − 1, w the width of the widest string in vertices and m the common step: two strings that meet span at most 2w − 1
 * vertices, so from L = 2w − 2 on they see at most one edge of each direction, and what such a pair is depends on its place relative to that
 * edge and, at the far edge, on L modulo m alone. Periodic directions are taken long enough not to wrap. A pair that fails on smaller lattices alone is a caution,
 * unless one of them is the declared one. Derived here.
 */
export function boundaryPairs(terms: readonly Piece[], laws: readonly Piece[], values: Values): BoundaryVerdict {
  const { lattice } = values;
  if (!lattice || lattice.periodic.every(Boolean)) return { words: '', cautions: [] };
  const { family, periodic, size: declared } = lattice;
  const all = [...terms, ...laws];
  const reach = family.vectors.map((_, d) => widths(family, all, d));
  const enough = reach.map(({ width, pinned }) => 2 * width + pinned);
  const top = reach.map(({ step }, d) => (enough[d] ?? 1) + step - 1);
  const ranges = reach.map(({ step }, d) =>
    periodic[d] ? [Math.ceil((enough[d] ?? 1) / step) * step] : upTo(top[d] ?? 1),
  );
  const sizes = tuples(ranges);
  const fitting = sizes
    .filter((extents) => extents.reduce((product, l) => product * l, 1) <= edgeLimits.cells)
    .slice(0, edgeLimits.sizes);
  const species = speciesCells(values, speciesOfPieces(all));
  const budget = newBudget(edgeLimits.operations, 'operations at open edges');
  const failing = new Set<number>();
  const small: string[] = [];
  let witness: Record<string, unknown> | undefined;
  let looked = 0;
  const here = isStraight(declared) ? declared.periods.map((row, d) => row[d] ?? 1) : [];
  try {
    for (const extents of fitting) {
      const found = clashesOn(extents, terms, laws, values, species, budget);
      looked++;
      if (found.size === 0) continue;
      const counts =
        extents.every((l, d) => periodic[d] || l >= (enough[d] ?? 1)) ||
        extents.every((l, d) => periodic[d] || l === here[d]);
      if (!counts) {
        small.push(sizeText(straight(...extents)));
        continue;
      }
      for (const [term, pair] of found) {
        failing.add(term);
        witness ??= pair;
      }
    }
  } catch (error) {
    if (!(error instanceof BudgetSpent)) throw error;
  }
  if (witness) return { words: '', cautions: [], failure: { terms: failing.size, witness } };
  const cautions =
    small.length > 0 ? [`on open lattices as small as ${inWords(small.slice(0, 6))} edges meet and it fails`] : [];
  if (looked === sizes.length) return { words: ', also at the open boundary', cautions };
  const last = fitting[looked - 1];
  return {
    words: last ? `, at the open boundary on the ${String(looked)} smallest sizes` : '',
    cautions: [
      ...cautions,
      `the open boundary was looked at on ${String(looked)} of the ${String(sizes.length)} sizes that decide it${last ? `, up to ${sizeText(straight(...last))}` : ''}`,
    ],
  };
}

/** Terms that anticommute with a law on one open lattice, each with a pair as a witness. */
function clashesOn(
  extents: readonly number[],
  terms: readonly Piece[],
  laws: readonly Piece[],
  values: Values,
  species: ReturnType<typeof speciesCells>,
  budget: Budget,
): Map<number, Record<string, unknown>> {
  const found = new Map<number, Record<string, unknown>>();
  const { lattice } = values;
  const cluster = lattice && newCluster(lattice, straight(...extents));
  if (!lattice || !cluster || isLatticeProblem(cluster)) return found;
  const table = siteTable(cluster, species);
  const wrapped = laws.map((law) => ({ name: law.name, strings: wrapPiece(table, cluster, law, budget) }));
  terms.forEach((term, k) => {
    const strings = wrapPiece(table, cluster, term, budget);
    for (const law of wrapped) {
      const pair = clash(strings, law.strings, budget);
      if (!pair) continue;
      found.set(k, edgeWitness(k, law.name, pair, table, extents, lattice.family));
      return;
    }
  });
  return found;
}

function edgeWitness(
  term: number,
  law: string,
  pair: { readonly left: SparseString; readonly right: SparseString },
  table: SiteTable,
  extents: readonly number[],
  family: LatticeFamily,
): Record<string, unknown> {
  const letters = ['x', 'z', 'y'] as const;
  const factorsOf = (string: SparseString) =>
    [...string.spins].flatMap((spin, k) => {
      const site = table.sites[spin];
      return site ? [{ ...site, pauli: letters[(string.bits[k] ?? 1) - 1] ?? 'x' }] : [];
    });
  const [left, right] = [factorsOf(pair.left), factorsOf(pair.right)];
  const [leftText, rightText] = [left, right].map((factors) => stringPhrase({ phase: 0, factors }, family));
  const size = sizeText(straight(...extents));
  return {
    term,
    law,
    size,
    left: { text: leftText, string: left },
    right: { text: rightText, string: right },
    words: `on the open ${size} lattice ${leftText ?? ''} anticommutes with ${law}, which is cut there to ${rightText ?? ''}`,
  };
}
