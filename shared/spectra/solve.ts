import type { FiniteModel } from '../algebra/finite/types.ts';
import { limits } from '../limits.ts';
import { enumeratedSector, type DiagonalRule, type EnumeratedFault } from './bases/enumerated.ts';
import type { Constraint } from './bases/packed.ts';
import { qubitSector, type Sector } from './bases/sector.ts';
import type { Hamiltonian, NumericTerm } from './hamiltonian.ts';
import type { Kernel, Vector } from './kernel/kernel.ts';
import { hermitianEigen, symmetricEigen, type Eigen } from './solvers/dense.ts';
import { lowestLevels, type Lowest } from './solvers/lanczos.ts';
import { multiplets, wholeMultiplets, type Multiplet } from './solvers/levels.ts';

/** The one door to spectra: lowest levels of a model on a cluster, in a sector. */

export interface SpectrumQuestion {
  readonly model: Pick<FiniteModel, 'terms' | 'constant' | 'table'>;
  /** Commuting strings with their values; they must commute with every term. */
  readonly constraints: readonly Constraint[];
  /** Diagonal rules; with any, the model is PHP on the states that obey them. */
  readonly rules?: readonly DiagonalRule[];
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
  | EnumeratedFault
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
  /** Spins that number them. */
  readonly spins: number;
  /** Ascending, with multiplicity, in the unit of the couplings: at least `levels` of them (or all), the last multiplet whole where it is not too large. */
  readonly energies: readonly number[];
  /** For each energy a bound: some level lies within it. Of dense solutions an estimate of rounding. */
  readonly residuals: readonly number[];
  readonly multiplets: readonly Multiplet[];
  readonly method: 'dense' | 'lanczos';
  readonly real: boolean;
  /** Terms that lead out of the states that the rules allow, by index. */
  readonly leaving: readonly number[];
  /** Present when asked for. */
  readonly space: EigenSpace | undefined;
}

/** Eigenvectors in the sector's basis; vector k belongs to energies[k]. Complex ones hold real parts, then imaginary parts. */
export interface EigenSpace {
  readonly sector: Sector;
  readonly real: boolean;
  readonly vectors: readonly Vector[];
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
/** Products with H after which the Lanczos method gives up. */
const mostProducts = 20_000;
const denseUpTo = 512;
const denseUpToWhenAll = 4096;

type Prepared =
  | { readonly ok: true; readonly sector: Sector; readonly cost: Cost; readonly dense: boolean }
  | { readonly ok: false; readonly fault: SolveFault };

/** Coefficients as numbers; the one place where exact ones are left. Errors of missing values are those of the coefficient. */
export function numericTerms(terms: FiniteModel['terms'], values: ReadonlyMap<string, number>): NumericTerm[] {
  return terms.map(({ coefficient, string }) => ({ ...coefficient.toFloat(values), string }));
}

function prepare(question: SpectrumQuestion, allowed: SolveLimits): Prepared {
  const { model, constraints, rules = [], values } = question;
  const n = model.table.sites.length;
  const terms = numericTerms(model.terms, values);
  const constant = model.constant.toFloat(values).re;
  const built =
    rules.length > 0
      ? enumeratedSector(n, terms, constant, rules, constraints, allowed.states)
      : qubitSector(n, terms, constant, constraints);
  if (!built.ok) return built;
  const sector = built.value;
  const { dimension } = sector;
  const many = question.levels * 8 > dimension;
  const dense = dimension <= denseUpTo || (many && dimension <= denseUpToWhenAll);
  return { ok: true, sector, dense, cost: dense ? denseCost(sector) : lanczosCost(sector, question.levels) };
}

function denseCost({ dimension, real, productCost, matrixBytes }: Sector): Cost {
  const parts = real ? 1 : 2;
  return {
    dimension,
    bytes: matrixBytes + 16 * parts * dimension ** 2,
    operations: productCost * dimension + 4 * parts ** 2 * dimension ** 3,
  };
}

function lanczosCost({ dimension, real, productCost, matrixBytes }: Sector, levels: number): Cost {
  const vectors = levels + windowVectors(levels);
  const steps = 120 + 40 * levels;
  const perVector = (real ? 8 : 16) * dimension;
  return {
    dimension,
    bytes: matrixBytes + vectors * perVector,
    operations: steps * (productCost + 2 * vectors * dimension * (real ? 1 : 4)),
  };
}

/** The least window that converges well; a larger one is used where memory allows. */
const windowVectors = (levels: number): number => Math.min(levels, 20) + 10;

/** What a question will cost, before it is solved, or why it has no answer. */
export function costOf(
  question: SpectrumQuestion,
  means: Pick<Means, 'limits'> = {},
): { readonly ok: true; readonly cost: Cost } | { readonly ok: false; readonly fault: SolveFault } {
  const prepared = prepare(question, { ...solveLimits, ...means.limits });
  return prepared.ok ? { ok: true, cost: prepared.cost } : prepared;
}

function overLimits(sector: Sector, cost: Cost, allowed: SolveLimits): SolveFault | undefined {
  const over = (what: 'spins' | 'bytes' | 'operations', needed: number, limit: number): SolveFault | undefined =>
    needed > limit ? { code: 'too large', what, needed, limit, cost } : undefined;
  return (
    (sector.kind === 'all states' ? over('spins', sector.spins, allowed.spins) : undefined) ??
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
  const prepared = prepare(question, allowed);
  if (!prepared.ok) return prepared;
  const { sector, cost, dense } = prepared;
  const fault = overLimits(sector, cost, allowed);
  if (fault) return { ok: false, fault };
  const h = sector.hamiltonian(means.kernel);
  try {
    return dense
      ? yield* solveDense(question, sector, h, means.kernel)
      : yield* solveLanczos(question, sector, h, means.kernel, allowed);
  } finally {
    h.free();
  }
}

/** `solve` driven to its end. */
export function solveNow(question: SpectrumQuestion, means: Means): SolveResult {
  const run = solve(question, means);
  for (;;) {
    const step = run.next();
    if (step.done) return step.value;
  }
}

function* solveDense(
  question: SpectrumQuestion,
  sector: Sector,
  h: Hamiltonian,
  kernel: Kernel,
): Generator<Progress, SolveResult> {
  const n = sector.dimension;
  const { re, im } = yield* denseMatrix(h, kernel);
  const wanted = question.vectors === true;
  const eigen = h.real ? realLevels(re, n, wanted, kernel) : hermitianEigen(re, im, n, wanted);
  const scale = Math.max(Math.abs(eigen.values[0] ?? 0), Math.abs(eigen.values[n - 1] ?? 0));
  const kept = wholeMultiplets(eigen.values, question.levels, tolerances.degenerate * scale);
  const energies = Array.from(eigen.values.subarray(0, kept));
  const vectors = wanted ? energies.map((_, k) => denseVector(eigen, k, n, h.real, kernel)) : [];
  return {
    ok: true,
    value: {
      dimension: n,
      spins: sector.spins,
      energies,
      // Backward error of the orthogonal reduction: a small multiple of n ε ‖H‖ (J. Wilkinson, The Algebraic Eigenvalue Problem (1965)).
      residuals: energies.map(() => n * 2.3e-16 * scale),
      multiplets: multiplets(energies, tolerances.degenerate * scale, true),
      method: 'dense',
      real: h.real,
      leaving: sector.leaving,
      space: wanted ? space(sector, h.real, vectors, kernel) : undefined,
    },
  };
}

function realLevels(matrix: Float64Array, n: number, vectors: boolean, kernel: Kernel): Eigen {
  const space = kernel.sweep?.(n);
  try {
    return symmetricEigen(matrix, n, vectors, space);
  } finally {
    space?.free();
  }
}

/** Columns of H, one product each; row-major, and H is Hermitian. */
function* denseMatrix(h: Hamiltonian, kernel: Kernel): Generator<Progress, { re: Float64Array; im: Float64Array }> {
  const n = h.dimension;
  const re = new Float64Array(n * n);
  const im = new Float64Array(h.real ? 0 : n * n);
  const length = h.real ? n : 2 * n;
  const [unit, column] = [kernel.vector(length), kernel.vector(length)];
  try {
    for (let k = 0; k < n; k++) {
      kernel.fill(unit, 0);
      unit.view[k] = 1;
      h.apply(unit, column);
      // Entry (r, k) is the conjugate of (k, r): the column, conjugated, is row k.
      re.set(column.view.subarray(0, n), k * n);
      if (!h.real) for (let r = 0; r < n; r++) im[k * n + r] = -(column.view[n + r] ?? 0);
      if (k % 256 === 255) yield { done: (0.5 * k) / n };
    }
  } finally {
    kernel.release(unit);
    kernel.release(column);
  }
  return { re, im };
}

function denseVector(
  eigen: { readonly vectors: Float64Array | undefined; readonly imaginary: Float64Array | undefined },
  k: number,
  n: number,
  real: boolean,
  kernel: Kernel,
): Vector {
  const v = kernel.vector(real ? n : 2 * n);
  if (eigen.vectors) v.view.set(eigen.vectors.subarray(k * n, k * n + n));
  if (eigen.imaginary) v.view.set(eigen.imaginary.subarray(k * n, k * n + n), n);
  return v;
}

function* solveLanczos(
  question: SpectrumQuestion,
  sector: Sector,
  h: Hamiltonian,
  kernel: Kernel,
  allowed: SolveLimits,
): Generator<Progress, SolveResult> {
  const perVector = (h.real ? 8 : 16) * sector.dimension;
  const room = Math.floor((allowed.bytes - sector.matrixBytes) / perVector);
  const request = {
    count: question.levels,
    extra: Math.max(0, Math.min(extraLevels, room - question.levels - windowVectors(question.levels))),
    tolerance: tolerances.residual,
    degenerate: tolerances.degenerate,
    vectors: room,
    products: mostProducts,
  };
  const run = lowestLevels(h, request, kernel);
  const expected = 120 + 40 * question.levels;
  try {
    for (;;) {
      const step = run.next();
      if (step.done) return lanczosResult(question, sector, h.real, step.value, kernel);
      yield { done: step.value / (step.value + expected) };
    }
  } finally {
    // Stopped from outside: lets the run give its memory back.
    run.return(undefined as never);
  }
}

function lanczosResult(
  question: SpectrumQuestion,
  sector: Sector,
  real: boolean,
  found: Lowest,
  kernel: Kernel,
): SolveResult {
  const keep = question.vectors === true && found.converged;
  if (!keep) found.vectors.forEach((v) => kernel.release(v));
  if (!found.converged)
    return { ok: false, fault: { code: 'not converged', products: found.products, found: found.energies.length } };
  const energies = Array.from(found.energies);
  return {
    ok: true,
    value: {
      dimension: sector.dimension,
      spins: sector.spins,
      energies,
      residuals: Array.from(found.residuals),
      multiplets: multiplets(energies, tolerances.degenerate * found.scale, found.complete),
      method: 'lanczos',
      real,
      leaving: sector.leaving,
      space: keep ? space(sector, real, found.vectors, kernel) : undefined,
    },
  };
}

function space(sector: Sector, real: boolean, vectors: readonly Vector[], kernel: Kernel): EigenSpace {
  return { sector, real, vectors, kernel, free: () => vectors.forEach((v) => kernel.release(v)) };
}
