/**
 * Dense matrices for tests, written apart from the engine: Pauli words on n spins as (2^n × 2^n) complex matrices, and all levels of a
 * Hermitian matrix by Jacobi rotations. Spin s is bit s of a basis index; bit 0 means Z = +1.
 */

export interface Complex {
  readonly n: number;
  readonly re: Float64Array;
  readonly im: Float64Array;
}

export const zeros = (n: number): Complex => ({ n, re: new Float64Array(n * n), im: new Float64Array(n * n) });

export function identity(n: number): Complex {
  const m = zeros(n);
  for (let k = 0; k < n; k++) m.re[k * n + k] = 1;
  return m;
}

/** Adds (re + i im) times the product of one-spin Pauli matrices, first factor leftmost; factors may repeat a spin. */
export function addWord(
  m: Complex,
  word: readonly { readonly spin: number; readonly pauli: string }[],
  re: number,
  im = 0,
): void {
  for (let column = 0; column < m.n; column++) {
    let row = column;
    let [a, b] = [re, im];
    for (const { spin, pauli } of [...word].reverse()) {
      const set = (row >> spin) & 1;
      if (pauli === 'y') [a, b] = set === 0 ? [-b, a] : [b, -a];
      if (pauli === 'z' && set === 1) [a, b] = [-a, -b];
      if (pauli !== 'z') row ^= 1 << spin;
    }
    m.re[row * m.n + column]! += a;
    m.im[row * m.n + column]! += b;
  }
}

export function times(a: Complex, b: Complex): Complex {
  const { n } = a;
  const c = zeros(n);
  for (let i = 0; i < n; i++)
    for (let k = 0; k < n; k++) {
      const [p, q] = [a.re[i * n + k]!, a.im[i * n + k]!];
      if (p === 0 && q === 0) continue;
      for (let j = 0; j < n; j++) {
        c.re[i * n + j]! += p * b.re[k * n + j]! - q * b.im[k * n + j]!;
        c.im[i * n + j]! += p * b.im[k * n + j]! + q * b.re[k * n + j]!;
      }
    }
  return c;
}

/** All eigenvalues of a real symmetric matrix, ascending, by cyclic Jacobi rotations. */
export function symmetricLevels(n: number, source: Float64Array): number[] {
  const a = source.slice();
  const off = (): number => {
    let sum = 0;
    for (let i = 0; i < n; i++) for (let j = 0; j < i; j++) sum += a[i * n + j]! ** 2;
    return sum;
  };
  const total = a.reduce((sum, x) => sum + x * x, 0) || 1;
  for (let sweep = 0; sweep < 60 && off() > 1e-26 * total; sweep++)
    for (let p = 0; p < n; p++)
      for (let q = p + 1; q < n; q++) {
        const apq = a[p * n + q]!;
        if (Math.abs(apq) < 1e-300) continue;
        const theta = (a[q * n + q]! - a[p * n + p]!) / (2 * apq);
        const t = Math.sign(theta || 1) / (Math.abs(theta) + Math.sqrt(theta * theta + 1));
        const c = 1 / Math.sqrt(t * t + 1);
        const s = t * c;
        for (let k = 0; k < n; k++) {
          const [x, y] = [a[k * n + p]!, a[k * n + q]!];
          a[k * n + p] = c * x - s * y;
          a[k * n + q] = s * x + c * y;
        }
        for (let k = 0; k < n; k++) {
          const [x, y] = [a[p * n + k]!, a[q * n + k]!];
          a[p * n + k] = c * x - s * y;
          a[q * n + k] = s * x + c * y;
        }
      }
  return Array.from({ length: n }, (_, k) => a[k * n + k]!).sort((x, y) => x - y);
}

/** All levels of a Hermitian matrix, ascending: those of [[A, −B], [B, A]], each of which stands there twice. */
export function hermitianLevels(m: Complex): number[] {
  const { n } = m;
  if (m.im.every((x) => Math.abs(x) < 1e-13)) return symmetricLevels(n, m.re);
  const doubled = new Float64Array(4 * n * n);
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++) {
      doubled[i * 2 * n + j] = doubled[(i + n) * 2 * n + j + n] = m.re[i * n + j]!;
      doubled[(i + n) * 2 * n + j] = m.im[i * n + j]!;
      doubled[i * 2 * n + j + n] = -m.im[i * n + j]!;
    }
  return symmetricLevels(2 * n, doubled).filter((_, k) => k % 2 === 0);
}

/**
 * Levels of H on the states where commuting Hermitian operators are +1: those of P H P + (1 − P) far, below `far`. All matrices (n × n).
 */
export function levelsWhere(h: Complex, plusOne: readonly Complex[]): number[] {
  let projector = identity(h.n);
  for (const g of plusOne) {
    const half = identity(h.n);
    for (let k = 0; k < half.re.length; k++) {
      half.re[k] = (half.re[k]! + g.re[k]!) / 2;
      half.im[k] = g.im[k]! / 2;
    }
    projector = times(projector, half);
  }
  const inside = times(times(projector, h), projector);
  const far = 1e4;
  for (let i = 0; i < h.n; i++)
    for (let j = 0; j < h.n; j++) {
      const at = i * h.n + j;
      inside.re[at]! += far * ((i === j ? 1 : 0) - projector.re[at]!);
      inside.im[at]! -= far * projector.im[at]!;
    }
  return hermitianLevels(inside).filter((level) => level < far / 2);
}
