import type { Hamiltonian } from '../hamiltonian.ts';
import type { Kernel, Vector } from '../kernel/kernel.ts';
import { Band, type Locked, type Ritz } from './band.ts';
import { newWindow, type Window } from './window.ts';

/**
 * Lowest levels by a banded, thick-restart Lanczos method with locking (K. Wu, H. Simon, SIAM J. Matrix Anal. Appl. 22,
 * 602 (2000); bands: A. Ruhe, Math. Comp. 33, 680 (1979)). The window is kept orthonormal in full.
 *
 * Multiplicities: a Krylov space with b random start vectors holds min(b, m) copies of an m-fold level. So a level that
 * was found fewer than b times is complete; else new starts, orthogonal to all that is locked, look for more copies until
 * the rest of the space is seen to lie higher.
 */
/** What blocks of one sector tell each other: levels of all of them bound what each still has to look for. */
export interface Board {
  /** Upper bounds for the lowest levels of this block: found ones and Ritz values, with multiplicity. */
  report(bounds: readonly number[]): void;
  /** Levels above this are not wanted. */
  ceiling(): number;
}

export interface LowestRequest {
  /** Levels wanted, with multiplicity. */
  readonly count: number;
  /** At most so many more are computed to complete the last multiplet. */
  readonly extra: number;
  /** Residual bound to reach, relative to the largest level seen. */
  readonly tolerance: number;
  /** Levels closer than this (relative to the same scale) are one multiplet. */
  readonly degenerate: number;
  /** Vectors that may be held, window and locked ones together. */
  readonly vectors: number;
  /** Products with H after which the search gives up. */
  readonly products: number;
  readonly board?: Board;
}

export interface Lowest {
  /** Ascending. */
  readonly energies: Float64Array;
  /** ‖H v − E v‖ of each, in the unit of the energies: some level lies that near. */
  readonly residuals: Float64Array;
  readonly vectors: readonly Vector[];
  /** True if all copies of every level listed are there (up to the rule above). */
  readonly complete: boolean;
  readonly converged: boolean;
  readonly products: number;
  /** Largest |level| seen: what the tolerances are relative to. */
  readonly scale: number;
}

/** Products before which no run is believed to have seen the low end. */
const leastSteps = 12;

/**
 * Start vectors of a run. The first has one, which converges in the fewest products; runs that look for further copies of
 * levels have two where the window has room, so that a copy that one start nearly misses is seen by the other.
 */
const startWidth = (run: number, window: number): number => (run === 0 || window < 12 ? 1 : 2);

/** Yields the number of products done. The vectors returned belong to the caller, who releases them. */
export function* lowestLevels(h: Hamiltonian, request: LowestRequest, kernel: Kernel): Generator<number, Lowest> {
  const window = newWindow(kernel, h.dimension, h.real);
  const search = new Search(h, request, kernel, window);
  let finished = false;
  try {
    for (let run = 0; ; run++) {
      const verdict = yield* search.run(run);
      if (verdict === 'again') continue;
      finished = true;
      return search.finish(verdict === 'done');
    }
  } finally {
    // Stopped from outside, or out of memory.
    if (!finished) search.locked.forEach((l) => kernel.release(l.vector));
  }
}

class Search {
  readonly locked: Locked[] = [];
  products = 0;
  private readonly h: Hamiltonian;
  private readonly request: LowestRequest;
  private readonly kernel: Kernel;
  private readonly window: Window;
  /** Largest |level| seen: the unit of tolerances. */
  private scale = 0;
  private complete = false;
  /** A level that belongs to the last multiplet was left out, because there are too many. */
  private cut = false;

  constructor(h: Hamiltonian, request: LowestRequest, kernel: Kernel, window: Window) {
    this.h = h;
    this.request = request;
    this.kernel = kernel;
    this.window = window;
  }

  /** Energy up to which levels are wanted: the last wanted one and its multiplet; infinite while too few are known. */
  private wantedUpTo(): number {
    const { count, degenerate } = this.request;
    const sorted = this.locked.map((l) => l.energy).sort((a, b) => a - b);
    const ceiling = this.request.board?.ceiling() ?? Infinity;
    return Math.min(sorted[count - 1] ?? Infinity, ceiling) + degenerate * this.scale;
  }

  private full(): boolean {
    return this.locked.length >= this.request.count + this.request.extra || this.locked.length >= this.h.dimension;
  }

  /** One Krylov space from fresh starts. Says whether to start another, or that all is found, or that the steps ran out. */
  *run(run: number): Generator<number, 'again' | 'done' | 'exhausted'> {
    const width = Math.min(startWidth(run, this.windowSize()), this.h.dimension - this.locked.length);
    const band = new Band(
      this.h,
      this.kernel,
      this.window,
      this.locked.map((l) => l.vector),
      this.windowSize(),
    );
    const found: number[] = [];
    try {
      band.start(width, run);
      for (;;) {
        if (this.products >= this.request.products) return 'exhausted';
        const ended = band.step();
        this.products++;
        yield this.products;
        if (!ended && !band.isFull() && band.done % 4 !== 0) continue;
        const ritz = band.ritz();
        this.scale = Math.max(
          this.scale,
          ...[ritz.values[0], ritz.values[ritz.values.length - 1]].map((v) => Math.abs(v ?? 0)),
          1e-300,
        );
        const taken = this.take(band, ritz, ended, found, width);
        if (taken === 'finished') return this.judge(found, width);
        if (ended) return this.locked.length >= this.h.dimension ? this.judge([], width) : 'again';
        if (band.isFull()) band.restart(band.ritz(), this.keep(band));
      }
    } finally {
      band.release();
    }
  }

  /** Vectors for the window beside those locked already. */
  private windowSize(): number {
    const { count, extra, vectors } = this.request;
    const comfortable = Math.max(24, 2 * Math.min(count, 40) + 12);
    const room = vectors - 1 - Math.min(this.locked.length, count + extra);
    return Math.max(6, Math.min(comfortable, room));
  }

  private keep(band: Band): number {
    const missing = Math.max(1, this.request.count - this.locked.length);
    return Math.max(1, Math.min(Math.max(missing + 3, Math.floor(band.done / 2)), band.done - 2));
  }

  /**
   * Locks what has converged at the low end. Finished when the lowest level left is known to lie above all that is wanted.
   * Levels are locked from below without gaps, so that none is overlooked beneath a locked one of this run.
   */
  private take(band: Band, ritz: Ritz, ended: boolean, found: number[], width: number): 'finished' | 'more' {
    const bound = this.request.tolerance * this.scale;
    let k = 0;
    const chosen: number[] = [];
    const known = this.locked.map((l) => l.energy);
    const { board, count, degenerate } = this.request;
    board?.report([...known, ...ritz.values.subarray(0, count)]);
    const ceiling = board?.ceiling() ?? Infinity;
    const limit = () => {
      const sorted = [...known, ...chosen.map((c) => ritz.values[c] ?? 0)].sort((a, b) => a - b);
      return Math.min(sorted[count - 1] ?? Infinity, ceiling) + degenerate * this.scale;
    };
    let above = false;
    for (; k < ritz.values.length; k++) {
      const value = ritz.values[k] ?? 0;
      const residual = ritz.residuals[k] ?? 0;
      if (this.liesAbove(value - limit(), residual, width) && (ended || band.steps >= leastSteps)) {
        above = true;
        break;
      }
      if (!(residual <= bound) || value > limit()) break;
      if (known.length + chosen.length >= this.request.count + this.request.extra) {
        this.cut = true;
        above = true;
        break;
      }
      chosen.push(k);
    }
    // A first run of one start is followed by another in any case: it may stop as soon as it has enough.
    if (width === 1 && found.length === known.length && known.length + chosen.length >= count) above = true;
    const all = ended && k === ritz.values.length;
    // Locking costs a rotation of the window: wait until it ends the run, or until a restart is due anyway.
    if (!(above || all || ended || band.isFull()) || chosen.length === 0) return above ? 'finished' : 'more';
    const taken = band.lock(ritz, chosen);
    for (const one of taken) {
      this.locked.push(one);
      found.push(one.energy);
    }
    return above ? 'finished' : 'more';
  }

  /**
   * Is nothing left below a Ritz value that stands by `distance` above what is wanted? Its residual alone says only that a
   * level is near it; a lower one that the starts nearly miss would mix into it and show as a residual of the order of the
   * distance. A tenth leaves such a mixture a weight of a hundredth, for which all starts must have missed it; with a
   * single start more is asked.
   */
  private liesAbove(distance: number, residual: number, width: number): boolean {
    return distance > 0 && residual <= (width > 1 ? 0.1 : 0.02) * distance && residual <= 1e-2 * this.scale;
  }

  /** After a run that reached the end of what is wanted: is every level complete? */
  private judge(found: readonly number[], width: number): 'again' | 'done' {
    const limit = this.wantedUpTo();
    const near = this.request.degenerate * this.scale;
    const suspect = found.filter((e) => e <= limit && found.filter((f) => Math.abs(f - e) <= near).length >= width);
    if (this.locked.length >= this.h.dimension) this.complete = true;
    else if (this.cut || (this.full() && suspect.length > 0)) this.complete = false;
    else if (suspect.length > 0) return 'again';
    else this.complete = true;
    return 'done';
  }

  finish(converged: boolean): Lowest {
    const limit = this.wantedUpTo();
    const sorted = [...this.locked].sort((a, b) => a.energy - b.energy);
    const listed = sorted.filter((l) => l.energy <= limit);
    sorted.slice(listed.length).forEach((l) => this.kernel.release(l.vector));
    return {
      energies: Float64Array.from(listed, (l) => l.energy),
      residuals: this.residuals(listed),
      vectors: listed.map((l) => l.vector),
      complete: this.complete,
      converged,
      products: this.products,
      scale: this.scale,
    };
  }

  /** ‖H v − E v‖, computed anew: what the iteration believed is not the evidence. */
  private residuals(listed: readonly Locked[]): Float64Array {
    const w = this.window.make();
    const out = Float64Array.from(listed, (l) => {
      this.h.apply(l.vector, w);
      this.kernel.axpy(-l.energy, l.vector, w);
      return this.window.norm(w);
    });
    this.kernel.release(w);
    return out;
  }
}
