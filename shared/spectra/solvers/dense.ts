import type { Sweep } from '../kernel/kernel.ts';

/**
 * All levels of a small matrix: Householder reduction to a real tridiagonal matrix, then the implicit QL method
 * (H. Bowdler, R. Martin, C. Reinsch, J. Wilkinson, Numer. Math. 11, 293 (1968); Hermitian reduction as in LAPACK zhetd2).
 */

export interface Eigen {
  /** Ascending, n of them. */
  readonly values: Float64Array;
  /** Row j (n entries from j × n) is the normalised eigenvector of values[j]; imaginary parts for complex matrices. */
  readonly vectors: Float64Array | undefined;
  readonly imaginary: Float64Array | undefined;
}

/**
 * Eigenvalues, and eigenvectors if asked for, of a row-major real symmetric (n × n) matrix; only its lower triangle is
 * read, and overwritten. 4/3 n³ steps without vectors. `space` lends the arrays and the inner loop of a kernel.
 */
export function symmetricEigen(
  matrix: Float64Array,
  n: number,
  vectors: boolean,
  space: Sweep = plainSweep(matrix, n),
): Eigen {
  const diagonal = new Float64Array(n);
  const off = new Float64Array(n);
  const taus = new Float64Array(n);
  if (space.matrix !== matrix) space.matrix.set(matrix);
  tridiagonalise(space, n, diagonal, off, taus);
  const rows = vectors ? identity(n) : undefined;
  implicitQl(diagonal, off, rows);
  if (rows) {
    for (let j = 0; j < n; j++) {
      for (let i = n - 2; i >= 0; i--) reflect(rows, j * n, space.matrix, i * n, i + 1, n, taus[i]!);
    }
  }
  return sorted(diagonal, rows, undefined);
}

/** As symmetricEigen, for a Hermitian matrix re + i im, both row-major (n × n); overwrites both. */
export function hermitianEigen(re: Float64Array, im: Float64Array, n: number, vectors: boolean): Eigen {
  const diagonal = new Float64Array(n);
  const off = new Float64Array(n);
  const taus = new Float64Array(2 * n);
  const reflectors = hermitianTridiagonal(re, im, n, diagonal, off, taus);
  const rows = vectors ? identity(n) : undefined;
  implicitQl(diagonal, off, rows);
  const imaginary = vectors ? new Float64Array(n * n) : undefined;
  if (rows && imaginary) {
    for (let i = n - 2; i >= 0; i--) {
      const v = reflectors[i];
      if (!v) continue;
      for (let j = 0; j < n; j++) reflectComplex(rows, imaginary, j * n, v, i + 1, taus[2 * i]!, taus[2 * i + 1]!);
    }
  }
  return sorted(diagonal, rows, imaginary);
}

function identity(n: number): Float64Array {
  const rows = new Float64Array(n * n);
  for (let j = 0; j < n; j++) rows[j * n + j] = 1;
  return rows;
}

/**
 * Householder reduction. The update of one step and the product of the next are one sweep over the matrix, so that each
 * entry is fetched once a step. Reflector i stands in row i of the upper triangle, from column i + 1, its first entry 1.
 */
function tridiagonalise(space: Sweep, n: number, d: Float64Array, e: Float64Array, taus: Float64Array): void {
  const { matrix: a, v, w, u, y } = space;
  v.fill(0);
  w.fill(0);
  for (let i = 0; i < n - 1; i++) {
    // Column i must be up to date before its reflector can be made.
    const [vi, wi] = [v[i]!, w[i]!];
    for (let r = i; r < n; r++) a[r * n + i] = a[r * n + i]! - v[r]! * wi - w[r]! * vi;
    d[i] = a[i * n + i]!;
    const tau = makeReflector(a, n, i, u, e);
    taus[i] = tau;
    space.run(i + 1);
    let yu = 0;
    for (let r = i + 1; r < n; r++) yu += y[r]! * u[r]!;
    const shift = 0.5 * tau * tau * yu;
    for (let r = i + 1; r < n; r++) {
      w[r] = tau * y[r]! - shift * u[r]!;
      v[r] = u[r]!;
      a[i * n + r] = u[r]!;
    }
  }
  const last = n - 1;
  if (n > 0) d[last] = a[last * n + last]! - 2 * v[last]! * w[last]!;
}

/** The arrays and the loop of `Sweep` without a kernel. */
function plainSweep(a: Float64Array, n: number): Sweep {
  const [v, w, u, y] = [new Float64Array(n), new Float64Array(n), new Float64Array(n), new Float64Array(n)];
  return {
    matrix: a,
    v,
    w,
    u,
    y,
    run(from) {
      y.fill(0, from);
      for (let r = from; r < n; r++) {
        const row = r * n;
        const [vr, wr, ur] = [v[r]!, w[r]!, u[r]!];
        let sum = 0;
        for (let c = from; c < r; c++) {
          const value = a[row + c]! - vr * w[c]! - wr * v[c]!;
          a[row + c] = value;
          sum += value * u[c]!;
          y[c] = y[c]! + value * ur;
        }
        const value = a[row + r]! - 2 * vr * wr;
        a[row + r] = value;
        y[r] = y[r]! + sum + value * ur;
      }
    },
    free: () => undefined,
  };
}

/** Reflector of column i below the diagonal into u; sets e[i] and returns tau (0: nothing to do). */
function makeReflector(a: Float64Array, n: number, i: number, u: Float64Array, e: Float64Array): number {
  let scale = 0;
  for (let r = i + 2; r < n; r++) scale = Math.max(scale, Math.abs(a[r * n + i]!));
  const alpha = a[(i + 1) * n + i]!;
  u[i + 1] = 1;
  if (scale === 0) {
    for (let r = i + 2; r < n; r++) u[r] = 0;
    e[i] = alpha;
    return 0;
  }
  scale = Math.max(scale, Math.abs(alpha));
  let sum = 0;
  for (let r = i + 1; r < n; r++) sum += (a[r * n + i]! / scale) ** 2;
  const beta = -Math.sign(alpha || 1) * scale * Math.sqrt(sum);
  for (let r = i + 2; r < n; r++) u[r] = a[r * n + i]! / (alpha - beta);
  e[i] = beta;
  return (beta - alpha) / beta;
}

/** rows[at …] −= tau (v · row) v over columns from … n − 1. */
function reflect(
  rows: Float64Array,
  at: number,
  v: Float64Array,
  vAt: number,
  from: number,
  n: number,
  tau: number,
): void {
  if (tau === 0) return;
  let sum = 0;
  for (let c = from; c < n; c++) sum += v[vAt + c]! * rows[at + c]!;
  sum *= tau;
  for (let c = from; c < n; c++) rows[at + c] = rows[at + c]! - sum * v[vAt + c]!;
}

/** Complex reflectors as [re, im] pairs of arrays indexed by row; `taus` interleaved. Off-diagonals come out real. */
function hermitianTridiagonal(
  re: Float64Array,
  im: Float64Array,
  n: number,
  d: Float64Array,
  e: Float64Array,
  taus: Float64Array,
): (readonly [Float64Array, Float64Array])[] {
  const reflectors: (readonly [Float64Array, Float64Array])[] = [];
  for (let i = 0; i < n - 1; i++) {
    d[i] = re[i * n + i]!;
    const vr = new Float64Array(n);
    const vi = new Float64Array(n);
    reflectors.push([vr, vi]);
    const ar = re[(i + 1) * n + i]!;
    const ai = im[(i + 1) * n + i]!;
    let tail = 0;
    for (let r = i + 2; r < n; r++) tail += re[r * n + i]! ** 2 + im[r * n + i]! ** 2;
    vr[i + 1] = 1;
    if (tail === 0 && ai === 0) {
      e[i] = ar;
      continue;
    }
    const beta = -Math.sign(ar || 1) * Math.sqrt(ar * ar + ai * ai + tail);
    const [tr, ti] = [(beta - ar) / beta, -ai / beta];
    taus[2 * i] = tr;
    taus[2 * i + 1] = ti;
    const size = (ar - beta) ** 2 + ai * ai;
    for (let r = i + 2; r < n; r++) {
      const [xr, xi] = [re[r * n + i]!, im[r * n + i]!];
      vr[r] = (xr * (ar - beta) + xi * ai) / size;
      vi[r] = (xi * (ar - beta) - xr * ai) / size;
    }
    e[i] = beta;
    updateHermitian(re, im, n, i + 1, vr, vi, tr, ti);
  }
  if (n > 0) d[n - 1] = re[n * n - 1]!;
  return reflectors;
}

/** A −= v w† + w v† on the trailing block from row `from`, with w = tau A v − (tau/2) (w†v) v as in zhetd2. */
function updateHermitian(
  re: Float64Array,
  im: Float64Array,
  n: number,
  from: number,
  vr: Float64Array,
  vi: Float64Array,
  tr: number,
  ti: number,
): void {
  const wr = new Float64Array(n);
  const wi = new Float64Array(n);
  let hr = 0;
  let hi = 0;
  for (let r = from; r < n; r++) {
    let [sr, si] = [0, 0];
    for (let c = from; c < n; c++) {
      // Only the lower triangle is kept: above it take the conjugate.
      const k = c <= r ? r * n + c : c * n + r;
      const x = re[k]!;
      const y = c <= r ? im[k]! : -im[k]!;
      sr += x * vr[c]! - y * vi[c]!;
      si += x * vi[c]! + y * vr[c]!;
    }
    wr[r] = tr * sr - ti * si;
    wi[r] = tr * si + ti * sr;
    hr += wr[r]! * vr[r]! + wi[r]! * vi[r]!;
    hi += wr[r]! * vi[r]! - wi[r]! * vr[r]!;
  }
  const ar = -0.5 * (tr * hr - ti * hi);
  const ai = -0.5 * (tr * hi + ti * hr);
  for (let r = from; r < n; r++) {
    wr[r] = wr[r]! + ar * vr[r]! - ai * vi[r]!;
    wi[r] = wi[r]! + ar * vi[r]! + ai * vr[r]!;
  }
  for (let r = from; r < n; r++) {
    for (let c = from; c <= r; c++) {
      const k = r * n + c;
      re[k] = re[k]! - (vr[r]! * wr[c]! + vi[r]! * wi[c]!) - (wr[r]! * vr[c]! + wi[r]! * vi[c]!);
      im[k] = im[k]! - (vi[r]! * wr[c]! - vr[r]! * wi[c]!) - (wi[r]! * vr[c]! - wr[r]! * vi[c]!);
    }
  }
}

/** row −= tau (v† row) v */
function reflectComplex(
  re: Float64Array,
  im: Float64Array,
  at: number,
  [vr, vi]: readonly [Float64Array, Float64Array],
  from: number,
  tr: number,
  ti: number,
): void {
  const n = vr.length;
  let [sr, si] = [0, 0];
  for (let c = from; c < n; c++) {
    sr += vr[c]! * re[at + c]! + vi[c]! * im[at + c]!;
    si += vr[c]! * im[at + c]! - vi[c]! * re[at + c]!;
  }
  const [fr, fi] = [tr * sr - ti * si, tr * si + ti * sr];
  if (fr === 0 && fi === 0) return;
  for (let c = from; c < n; c++) {
    re[at + c] = re[at + c]! - (fr * vr[c]! - fi * vi[c]!);
    im[at + c] = im[at + c]! - (fr * vi[c]! + fi * vr[c]!);
  }
}

/** Implicit QL on a real tridiagonal matrix (diagonal d, off[i] between i and i + 1); rotates `rows` along, if given. */
function implicitQl(d: Float64Array, e: Float64Array, rows: Float64Array | undefined): void {
  const n = d.length;
  if (n > 0) e[n - 1] = 0;
  // Relative to the whole matrix: among many levels near 0 the neighbours alone would give no measure.
  let size = 0;
  for (let k = 0; k < n; k++) size = Math.max(size, Math.abs(d[k]!) + Math.abs(e[k]!));
  for (let l = 0; l < n; l++) {
    for (let sweep = 0; ; sweep++) {
      let m = l;
      while (m < n - 1 && Math.abs(e[m]!) > 2.3e-16 * size) m++;
      if (m === l) break;
      if (sweep === 80)
        throw new Error(
          `the QL method found no level ${String(l)} in 80 sweeps: is an entry of the matrix not finite?`,
        );
      qlSweep(d, e, rows, l, m);
    }
  }
}

function qlSweep(d: Float64Array, e: Float64Array, rows: Float64Array | undefined, l: number, m: number): void {
  let g = (d[l + 1]! - d[l]!) / (2 * e[l]!);
  let r = Math.hypot(g, 1);
  g = d[m]! - d[l]! + e[l]! / (g + (g < 0 ? -r : r));
  let [s, c, p] = [1, 1, 0];
  for (let i = m - 1; i >= l; i--) {
    const f = s * e[i]!;
    const b = c * e[i]!;
    r = Math.sqrt(f * f + g * g);
    e[i + 1] = r;
    if (r === 0) {
      d[i + 1] = d[i + 1]! - p;
      e[m] = 0;
      return;
    }
    s = f / r;
    c = g / r;
    g = d[i + 1]! - p;
    const t = (d[i]! - g) * s + 2 * c * b;
    p = s * t;
    d[i + 1] = g + p;
    g = c * t - b;
    if (rows) turnRows(rows, d.length, i, c, s);
  }
  d[l] = d[l]! - p;
  e[l] = g;
  e[m] = 0;
}

function turnRows(rows: Float64Array, n: number, i: number, c: number, s: number): void {
  const a = i * n;
  const b = a + n;
  for (let k = 0; k < n; k++) {
    const f = rows[b + k]!;
    const g = rows[a + k]!;
    rows[b + k] = s * g + c * f;
    rows[a + k] = c * g - s * f;
  }
}

function sorted(values: Float64Array, rows: Float64Array | undefined, imaginary: Float64Array | undefined): Eigen {
  const n = values.length;
  const order = Array.from(values.keys()).sort((a, b) => values[a]! - values[b]!);
  const pick = (from: Float64Array | undefined) => {
    if (!from) return undefined;
    const out = new Float64Array(n * n);
    order.forEach((from_, to) => out.set(from.subarray(from_ * n, from_ * n + n), to * n));
    return out;
  };
  return { values: Float64Array.from(order, (k) => values[k]!), vectors: pick(rows), imaginary: pick(imaginary) };
}
