import type { Hamiltonian } from '../hamiltonian.ts';
import type { Kernel, Vector } from '../kernel/kernel.ts';
import { hermitianEigen, symmetricEigen } from './dense.ts';
import { fillSeeded, orthogonalise, type Window } from './window.ts';

/** A level that has converged, with its vector. */
export interface Locked {
  readonly energy: number;
  readonly residual: number;
  readonly vector: Vector;
}

export interface Ritz {
  /** Ascending. */
  readonly values: Float64Array;
  readonly residuals: Float64Array;
  /** Row j: coefficients of Ritz vector j in the first `done` vectors. */
  readonly re: Float64Array;
  readonly im: Float64Array;
}

/** The window of one run: `done` vectors that H has been applied to, and after them the pending ones. */
export class Band {
  done = 0;
  /** Products of this run, restarts notwithstanding. */
  steps = 0;
  private readonly h: Hamiltonian;
  private readonly kernel: Kernel;
  private readonly window: Window;
  private readonly outside: Vector[];
  private readonly size: number;
  private vectors: Vector[] = [];
  /** Projected matrix, (capacity × capacity), lower and upper part both kept. */
  private readonly capacity: number;
  private re: Float64Array;
  private im: Float64Array;

  constructor(h: Hamiltonian, kernel: Kernel, window: Window, outside: readonly Vector[], size: number) {
    this.h = h;
    this.kernel = kernel;
    this.window = window;
    this.outside = [...outside];
    this.size = Math.min(size, h.dimension + 1);
    this.capacity = this.size + 8;
    this.re = new Float64Array(this.capacity * this.capacity);
    this.im = new Float64Array(this.capacity * this.capacity);
  }

  isFull(): boolean {
    return this.vectors.length >= this.size;
  }

  /** Random orthonormal start vectors; fewer where the space is too small. */
  start(width: number, run: number): void {
    for (let k = 0; k < width; k++) {
      const w = this.window.make();
      fillSeeded(w, 1 + 31 * run + k);
      const before = this.window.norm(w);
      const { norm } = orthogonalise(this.window, [...this.outside, ...this.vectors], w);
      if (norm > 1e-10 * before) this.push(w, norm);
      else this.kernel.release(w);
    }
  }

  private push(w: Vector, norm: number): void {
    this.kernel.scale(1 / norm, w);
    this.vectors.push(w);
  }

  /** Applies H to the next pending vector. True when no pending vector is left: the window is closed under H. */
  step(): boolean {
    const v = this.vectors[this.done];
    if (!v) return true;
    const w = this.window.make();
    this.h.apply(v, w);
    const size = this.window.norm(w);
    // The neighbours hold nearly all of H v that lies in the window: with them gone, one pass over the rest mostly suffices.
    const near = Math.max(0, this.done - 2);
    const local = this.vectors.slice(near, this.done + 2);
    const first = this.window.products(local, w);
    this.window.subtract(local, first, w);
    const { c, norm } = orthogonalise(this.window, [...this.vectors, ...this.outside], w);
    for (let k = 0; k < this.vectors.length; k++) {
      const [a, b] = [first[0][k - near] ?? 0, first[1][k - near] ?? 0];
      this.put(k, this.done, (c[0][k] ?? 0) + a, (c[1][k] ?? 0) + b);
    }
    // What rounding leaves of a vector inside the window is no new direction.
    if (norm > 1e-13 * Math.max(size, this.largest())) {
      this.push(w, norm);
      this.put(this.vectors.length - 1, this.done, norm, 0);
    } else this.kernel.release(w);
    this.done++;
    this.steps++;
    return this.done === this.vectors.length;
  }

  private largest(): number {
    let most = 0;
    for (let k = 0; k < this.done; k++) most = Math.max(most, Math.abs(this.re[k * this.capacity + k] ?? 0));
    return most;
  }

  private put(row: number, column: number, re: number, im: number): void {
    this.re[row * this.capacity + column] = re;
    this.im[row * this.capacity + column] = im;
    this.re[column * this.capacity + row] = re;
    this.im[column * this.capacity + row] = row === column ? 0 : -im;
  }

  ritz(): Ritz {
    const n = this.done;
    const cut = (from: Float64Array) => {
      const out = new Float64Array(n * n);
      for (let r = 0; r < n; r++) out.set(from.subarray(r * this.capacity, r * this.capacity + n), r * n);
      return out;
    };
    const eigen = this.window.real
      ? symmetricEigen(cut(this.re), n, true)
      : hermitianEigen(cut(this.re), cut(this.im), n, true);
    const re = eigen.vectors ?? new Float64Array(n * n);
    const im = eigen.imaginary ?? new Float64Array(n * n);
    const residuals = new Float64Array(n);
    for (let j = 0; j < n; j++)
      residuals[j] = Math.sqrt(this.tail(re, im, j, n).reduce((sum, [a, b]) => sum + a * a + b * b, 0));
    return { values: eigen.values, residuals, re, im };
  }

  /** Couplings of Ritz vector j to the pending vectors. */
  private tail(re: Float64Array, im: Float64Array, j: number, n: number): [number, number][] {
    const out: [number, number][] = [];
    for (let p = n; p < this.vectors.length; p++) {
      let [a, b] = [0, 0];
      for (let k = 0; k < n; k++) {
        const [tr, ti] = [this.re[p * this.capacity + k] ?? 0, this.im[p * this.capacity + k] ?? 0];
        const [yr, yi] = [re[j * n + k] ?? 0, im[j * n + k] ?? 0];
        a += tr * yr - ti * yi;
        b += tr * yi + ti * yr;
      }
      out.push([a, b]);
    }
    return out;
  }

  /** Goes on with the Ritz vectors listed (default: the lowest `keep`) and the pending vectors; the others are given up. */
  restart(ritz: Ritz, keep: number, rows = Array.from({ length: keep }, (_, k) => k)): void {
    const n = this.done;
    const columns = rows.length;
    const re = new Float64Array(n * columns);
    const im = new Float64Array(n * columns);
    rows.forEach((row, j) => {
      for (let k = 0; k < n; k++) {
        re[k * columns + j] = ritz.re[row * n + k] ?? 0;
        im[k * columns + j] = ritz.im[row * n + k] ?? 0;
      }
    });
    const tails = rows.map((row) => this.tail(ritz.re, ritz.im, row, n));
    this.window.rotate(this.vectors.slice(0, n), re, im, columns);
    this.vectors.slice(columns, n).forEach((v) => this.kernel.release(v));
    this.vectors = [...this.vectors.slice(0, columns), ...this.vectors.slice(n)];
    this.done = columns;
    this.re.fill(0);
    this.im.fill(0);
    rows.forEach((row, j) => {
      this.put(j, j, ritz.values[row] ?? 0, 0);
      tails[j]?.forEach(([a, b], p) => this.put(columns + p, j, a, b));
    });
  }

  /** Takes converged Ritz vectors out of the window; later vectors stay orthogonal to them. */
  lock(ritz: Ritz, chosen: readonly number[]): Locked[] {
    const others = Array.from(ritz.values.keys()).filter((k) => !chosen.includes(k));
    const keep = others.slice(0, Math.max(0, Math.min(others.length, Math.floor(this.size / 2))));
    this.restart(ritz, 0, [...chosen, ...keep]);
    const taken = this.vectors.slice(0, chosen.length);
    this.vectors = this.vectors.slice(chosen.length);
    this.done -= chosen.length;
    this.shiftMatrix(chosen.length);
    this.outside.push(...taken);
    return chosen.map((k, j) => ({ energy: ritz.values[k] ?? 0, residual: ritz.residuals[k] ?? 0, vector: taken[j]! }));
  }

  private shiftMatrix(by: number): void {
    const shift = (from: Float64Array) => {
      const out = new Float64Array(from.length);
      for (let r = 0; r + by < this.capacity; r++) {
        out.set(from.subarray((r + by) * this.capacity + by, (r + by + 1) * this.capacity), r * this.capacity);
      }
      return out;
    };
    this.re = shift(this.re);
    this.im = shift(this.im);
  }

  release(): void {
    this.vectors.forEach((v) => this.kernel.release(v));
    this.vectors = [];
  }
}
