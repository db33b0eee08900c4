import type { FiniteModel } from '../algebra/finite/types.ts';
import { limits } from '../limits.ts';
import { enumeratedSector, type DiagonalRule } from './bases/enumerated.ts';
import { imageSector } from './bases/image.ts';
import type { ImageBlocks, ImageFault } from './bases/image-blocks.ts';
import type { Constraint } from './bases/packed.ts';
import { qubitSector, type Block, type Sector } from './bases/sector.ts';
import type { NumericTerm } from './hamiltonian.ts';
import type { Kernel, Vector } from './kernel/kernel.ts';
import { denseLevels, diagonalLevels, type Found } from './solvers/all-levels.ts';
import { lowestLevels, type Board, type Lowest } from './solvers/lanczos.ts';
import { multiplets, wholeMultiplets, type Multiplet } from './solvers/levels.ts';

/** The one door to spectra: lowest levels of a model on a cluster, in a sector. */

export interface SpectrumQuestion {
  readonly model: Pick<FiniteModel, 'terms' | 'constant' | 'table'>;
  /** Commuting strings with their values; they must commute with every term. */
  readonly constraints: readonly Constraint[];
  /** Diagonal rules; with any, the model is PHP on the states that obey them. */
  readonly rules?: readonly DiagonalRule[];
  /** Blocks with orthonormal vectors; with any, the model is PHP on the product of their spans and the other spins. */
  readonly images?: readonly ImageBlocks[];
  /** Values of the couplings, by name. */
  readonly values: ReadonlyMap<string, number>;
  /** Levels wanted, counted with multiplicity; more than the dimension: all. */
  readonly levels: number;
  /** Also keep the eigenvectors, for `observe.ts`. */
  readonly vectors?: boolean;
}

export interface SolveLimits {
  /** Spins that are left in the sector. */
  readonly spins: number;
  /** States of an enumerated basis. */
  readonly states: number;
  readonly bytes: number;
  /** Multiplications. */
  readonly operations: number;
}

export const solveLimits: SolveLimits = { spins: limits.spins, states: 4_000_000, bytes: 2 ** 30, operations: 5e12 };

export interface Means {
  readonly kernel: Kernel;
  readonly limits?: Partial<SolveLimits>;
}

/** What a solution will take; memory and work are estimates for the usual number of steps. */
export interface Cost {
  readonly dimension: number;
  readonly bytes: number;
  /** Multiplications. */
  readonly operations: number;
}

export type SolveFault =
  | ImageFault
  | { readonly code: 'too many spins'; readonly spins: number }
  | {
      readonly code: 'too large';
      readonly what: 'spins' | 'bytes' | 'operations';
      readonly needed: number;
      readonly limit: number;
      readonly cost: Cost;
    }
  | { readonly code: 'not converged'; readonly products: number; readonly found: number };

export interface Spectrum {
  /** States in the sector. */
  readonly dimension: number;
  /** Spins left by the constraints. */
  readonly spins: number;
  /**
   * Ascending, with multiplicity, in the unit of the couplings: at least `levels` of them (or all), the last multiplet
   * whole where it is not too large to list.
   */
  readonly energies: readonly number[];
  /** For each energy a bound: some level lies within it. Of dense solutions an estimate of rounding. */
  readonly residuals: readonly number[];
  readonly multiplets: readonly Multiplet[];
  readonly method: Method;
  readonly real: boolean;
  /** Terms that lead out of the states that the rules or images allow, by index. */
  readonly leaving: readonly number[];
  /** Present when asked for. */
  readonly space: EigenSpace | undefined;
}

/** How levels were found: read off a diagonal, by reduction of the full matrix, or by iteration. */
export type Method = 'diagonal' | 'dense' | 'lanczos';

/** An eigenvector in the basis of its block, which stands for `copies` levels. Complex ones hold real parts, then imaginary parts. */
export interface EigenVector {
  readonly block: Block;
  /** Number of the block in its sector. */
  readonly blockNumber: number;
  readonly vector: Vector;
}

/** Eigenvectors in the order of the energies, copies left out. */
export interface EigenSpace {
  readonly copies: number;
  readonly vectors: readonly EigenVector[];
  readonly kernel: Kernel;
  /** Gives the memory back; the vectors must not be used afterwards. */
  free(): void;
}

export interface Progress {
  /** From 0 to 1, an estimate. */
  readonly done: number;
}

export type SolveResult =
  { readonly ok: true; readonly value: Spectrum } | { readonly ok: false; readonly fault: SolveFault };

/** Relative to the largest level: residuals are pushed below the first, levels closer than the second are one multiplet. */
export const tolerances = { residual: 1e-10, degenerate: 1e-8 } as const;

/** Levels beyond those asked for that are computed to complete the last multiplet. */
const extraLevels = 64;
/** Products with H in one block after which the Lanczos method gives up. */
const mostProducts = 20_000;
const denseUpTo = 512;
const denseUpToWhenAll = 4096;
/** Part of the memory allowed that vectors and matrices may fill; the rest is for small tables and for the program itself. */
const usable = 0.85;
/** Equal levels that are written out one by one; `multiplets` has the full number. */
const mostListed = 4096;

interface Plan {
  readonly sector: Sector;
  readonly cost: Cost;
  readonly method: Method;
  /** Levels wanted of one copy. */
  readonly count: number;
}

/** Coefficients as numbers; the one place where exact ones are left. Errors of missing values are those of the coefficient. */
export function numericTerms(terms: FiniteModel['terms'], values: ReadonlyMap<string, number>): NumericTerm[] {
  return terms.map(({ coefficient, string }) => ({ ...coefficient.toFloat(values), string }));
}

function plan(
  question: SpectrumQuestion,
  allowed: SolveLimits,
): { readonly ok: true; readonly plan: Plan } | { readonly ok: false; readonly fault: SolveFault } {
  const { model, constraints, rules = [], images = [], values, levels } = question;
  const n = model.table.sites.length;
  const terms = numericTerms(model.terms, values);
  const constant = model.constant.toFloat(values).re;
  const build = (all: boolean) =>
    images.length > 0
      ? imageSector(n, terms, constant, images, rules, constraints, allowed.states)
      : rules.length > 0
        ? enumeratedSector(n, terms, constant, rules, constraints, allowed.states)
        : qubitSector(n, terms, constant, constraints, all);
  let built = build(false);
  if (!built.ok) return built;
  const many = manyLevels(built.value, levels);
  if (many && built.value.kind === 'all states') built = build(true);
  if (!built.ok) return built;
  const sector = built.value;
  const largest = Math.max(...sector.blocks.map((b) => b.dimension));
  const dense = largest <= denseUpTo || (many && largest <= denseUpToWhenAll);
  const method = sector.blocks.every((b) => b.diagonal) ? 'diagonal' : dense ? 'dense' : 'lanczos';
  const count = Math.max(1, Math.ceil(levels / sector.copies));
  return { ok: true, plan: { sector, method, count, cost: estimate(sector, method, count) } };
}

/** So many levels that the full matrix is the better road. */
const manyLevels = ({ copies, blocks }: Sector, levels: number): boolean =>
  8 * levels > copies * blocks.reduce((sum, b) => sum + b.dimension, 0);

function estimate(sector: Sector, method: Method, count: number): Cost {
  const blocks = sector.blocks.map((b) => blockCost(b, method, count));
  const most = (pick: (b: { bytes: number; operations: number }) => number) =>
    blocks.reduce((m, b) => Math.max(m, pick(b)), 0);
  return {
    dimension: sector.dimension,
    // Blocks are solved side by side where memory allows, and one after the other where it does not.
    bytes: most((b) => b.bytes),
    operations: blocks.reduce((sum, b) => sum + b.operations, 0),
  };
}

function blockCost(block: Block, method: Method, count: number): { bytes: number; operations: number } {
  const { dimension, real, productCost, matrixBytes } = block;
  const parts = real ? 1 : 2;
  if (method === 'diagonal') return { bytes: 32 * dimension, operations: 40 * dimension };
  if (method === 'dense') {
    return {
      bytes: matrixBytes + 16 * parts * dimension ** 2,
      operations: productCost * dimension + 4 * parts ** 2 * dimension ** 3,
    };
  }
  const vectors = leastVectors(count);
  const steps = 120 + 40 * count;
  return {
    bytes: matrixBytes + vectors * 8 * parts * dimension,
    operations: steps * (productCost + 2 * vectors * dimension * parts ** 2),
  };
}

/** Vectors without which the iteration would crawl: those found, and a window. */
const leastVectors = (count: number): number => count + Math.min(count, 12) + 6;

/** What a question will cost, before it is solved, or why it has no answer. */
export function costOf(
  question: SpectrumQuestion,
  means: Pick<Means, 'limits'> = {},
): { readonly ok: true; readonly cost: Cost } | { readonly ok: false; readonly fault: SolveFault } {
  const planned = plan(question, { ...solveLimits, ...means.limits });
  return planned.ok ? { ok: true, cost: planned.plan.cost } : planned;
}

function overLimits({ sector, cost }: Plan, allowed: SolveLimits): SolveFault | undefined {
  const over = (what: 'spins' | 'bytes' | 'operations', needed: number, limit: number): SolveFault | undefined =>
    needed > limit ? { code: 'too large', what, needed, limit, cost } : undefined;
  const states = sector.blocks.reduce((sum, b) => sum + b.dimension, 0);
  return (
    (sector.kind === 'all states' ? over('spins', Math.ceil(Math.log2(states)), allowed.spins) : undefined) ??
    over('bytes', cost.bytes, allowed.bytes) ??
    over('operations', cost.operations, allowed.operations)
  );
}

/**
 * Lowest levels of the model in the sector. Yields progress now and then, between products with H; to stop, do not go on
 * (and call `return`, which frees the memory). Refusals are values. Throws what `toFloat` throws for a coupling without a
 * value, and NotHermitian.
 */
export function* solve(question: SpectrumQuestion, means: Means): Generator<Progress, SolveResult> {
  const allowed = { ...solveLimits, ...means.limits };
  const planned = plan(question, allowed);
  if (!planned.ok) return planned;
  const fault = overLimits(planned.plan, allowed);
  if (fault) return { ok: false, fault };
  const { sector, method, count } = planned.plan;
  if (method === 'lanczos') return yield* iterate(question, planned.plan, means.kernel, allowed);
  const found: Found[] = [];
  const vectors = question.vectors === true ? count + extraLevels : 0;
  for (const [k, block] of sector.blocks.entries()) {
    const levels = block.diagonal?.();
    if (levels) found.push(diagonalLevels(levels, count, tolerances.degenerate, vectors, means.kernel));
    else {
      const run = denseLevels(block, vectors, means.kernel);
      for (let step = run.next(); ; step = run.next()) {
        if (step.done) {
          found.push(step.value);
          break;
        }
        yield { done: (k + step.value) / sector.blocks.length };
      }
    }
    yield { done: (k + 1) / sector.blocks.length };
  }
  return { ok: true, value: join(question, planned.plan, found, means.kernel) };
}

/** `solve` driven to its end. */
export function solveNow(question: SpectrumQuestion, means: Means): SolveResult {
  const run = solve(question, means);
  for (;;) {
    const step = run.next();
    if (step.done) return step.value;
  }
}

/** Lanczos in all blocks: side by side where memory allows, so that each learns early what the others have, else in turn. */
function* iterate(
  question: SpectrumQuestion,
  { sector, count }: Plan,
  kernel: Kernel,
  allowed: SolveLimits,
): Generator<Progress, SolveResult> {
  const { blocks } = sector;
  const matrices = blocks.reduce((sum, b) => sum + b.matrixBytes, 0);
  const perVector = Math.max(...blocks.map((b) => (b.real ? 8 : 16) * b.dimension));
  const room = Math.floor((usable * allowed.bytes - matrices) / perVector);
  const together = room >= blocks.length * (leastVectors(count) + 8);
  const share = together ? Math.floor(room / blocks.length) : room;
  const boards = newBoards(blocks.length, count);
  const results: (Lowest | undefined)[] = blocks.map(() => undefined);
  const waiting = [...blocks.keys()];
  const running = new Map<number, Generator<number, Lowest>>();
  const hamiltonians = blocks.map((b) => b.hamiltonian(kernel));
  let products = 0;
  try {
    while (waiting.length > 0 || running.size > 0) {
      while (waiting.length > 0 && (together || running.size === 0)) {
        const k = waiting.shift() ?? 0;
        const held = together ? 0 : results.reduce((sum, r) => sum + (r?.vectors.length ?? 0), 0);
        running.set(k, lowestLevels(hamiltonians[k]!, request(question, count, share - held, boards[k]!), kernel));
      }
      for (const [k, run] of running) {
        const step = run.next();
        if (step.done) {
          results[k] = step.value;
          running.delete(k);
        } else yield { done: ++products / (products + (120 + 40 * count) * blocks.length) };
      }
    }
  } finally {
    // Stopped from outside, or out of memory: the runs give their memory back.
    running.forEach((run) => run.return(undefined as never));
    if (running.size > 0 || waiting.length > 0) results.forEach((r) => r?.vectors.forEach((v) => kernel.release(v)));
    hamiltonians.forEach((h) => h.free());
  }
  const found = results.filter((r) => r !== undefined);
  if (found.some((r) => !r.converged)) {
    found.forEach((r) => r.vectors.forEach((v) => kernel.release(v)));
    return {
      ok: false,
      fault: { code: 'not converged', products, found: found.reduce((sum, r) => sum + r.energies.length, 0) },
    };
  }
  return { ok: true, value: join(question, { sector, count, method: 'lanczos' }, found, kernel) };
}

function request(question: SpectrumQuestion, count: number, vectors: number, board: Board) {
  return {
    count,
    extra: Math.max(2, Math.min(extraLevels, vectors - leastVectors(count))),
    tolerance: tolerances.residual,
    degenerate: tolerances.degenerate,
    vectors,
    products: mostProducts + 200 * question.levels,
    board,
  };
}

/** One board for each block: together they bound the count-th level of all blocks from above. */
function newBoards(blocks: number, count: number): Board[] {
  const bounds: (readonly number[])[] = Array.from({ length: blocks }, () => []);
  return bounds.map((_, k) => ({
    report: (list) => void (bounds[k] = list),
    ceiling: () => bounds.flat().sort((a, b) => a - b)[count - 1] ?? Infinity,
  }));
}

/** Levels of all blocks in one list. Vectors that are not kept are released. */
function join(
  question: SpectrumQuestion,
  { sector, count, method }: Omit<Plan, 'cost'>,
  found: readonly Found[],
  kernel: Kernel,
): Spectrum {
  const scale = Math.max(...found.map((f) => f.scale));
  const tolerance = tolerances.degenerate * scale;
  const all = found.flatMap((f, b) =>
    Array.from(f.energies, (energy, k) => ({ energy, residual: f.residuals[k] ?? 0, b, k })),
  );
  all.sort((x, y) => x.energy - y.energy);
  const kept = all.slice(
    0,
    wholeMultiplets(
      all.map((x) => x.energy),
      count,
      tolerance,
    ),
  );
  const vectors: EigenVector[] = [];
  for (const { b, k } of question.vectors === true ? kept : []) {
    const [block, vector] = [sector.blocks[b], found[b]?.vectors[k]];
    if (block && vector) vectors.push({ block, blockNumber: b, vector });
  }
  const used = new Set(vectors.map((v) => v.vector));
  found.forEach((f) => f.vectors.forEach((v) => used.has(v) || kernel.release(v)));
  const listed = kept.flatMap((x) => Array<typeof x>(Math.min(sector.copies, mostListed)).fill(x));
  listed.length = Math.min(listed.length, Math.max(mostListed, question.levels));
  return {
    dimension: sector.dimension,
    spins: sector.spins,
    energies: listed.map((x) => x.energy),
    residuals: listed.map((x) => x.residual),
    multiplets: multiplets(
      kept.map((x) => x.energy),
      tolerance,
      found.every((f) => f.complete),
      sector.copies,
    ),
    method,
    real: sector.blocks.every((b) => b.real),
    leaving: sector.leaving,
    space: question.vectors === true ? space(sector.copies, vectors, kernel) : undefined,
  };
}

function space(copies: number, vectors: readonly EigenVector[], kernel: Kernel): EigenSpace {
  return { copies, vectors, kernel, free: () => vectors.forEach((v) => kernel.release(v.vector)) };
}
