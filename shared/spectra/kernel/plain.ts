import { blockGroups, blockPattern, diagonalValues, lowBits, type BlockGroup, type Diagonal } from './flips.ts';
import type { FlipForm, Kernel, Prepared, RowForm, Vector } from './kernel.ts';

/** Entries of the pieces in which many vectors are swept together: 16 KiB each. */
const piece = 2048;

const vector = (view: Float64Array): Vector => ({ length: view.length, view });

/** The kernel in typed arrays; runs anywhere. */
export const plainKernel: Kernel = {
  name: 'plain',
  vector: (length) => vector(new Float64Array(length)),
  release: () => undefined,
  part: (v, offset, length) => vector(v.view.subarray(offset, offset + length)),
  fill: (v, value) => void v.view.fill(value),
  copy: (from, to) => to.view.set(from.view),
  dot: (a, b) => dot(a.view, b.view, 0, a.length),
  axpy: (alpha, x, y) => axpy(alpha, x.view, y.view, 0, y.length),
  scale(alpha, x) {
    const v = x.view;
    for (let k = 0; k < v.length; k++) v[k] = alpha * (v[k] ?? 0);
  },
  dots(vectors, w, out) {
    out.fill(0, 0, vectors.length);
    sweep(w.length, (from, to) => {
      vectors.forEach((v, k) => (out[k] = (out[k] ?? 0) + dot(v.view, w.view, from, to)));
    });
  },
  combine(vectors, coefficients, w) {
    sweep(w.length, (from, to) => {
      vectors.forEach((v, k) => axpy(coefficients[k] ?? 0, v.view, w.view, from, to));
    });
  },
  rotate(vectors, matrix, columns) {
    const length = vectors[0]?.length ?? 0;
    const work = new Float64Array(piece * columns);
    sweep(length, (from, to) => {
      work.fill(0);
      for (let j = 0; j < columns; j++) {
        const target = work.subarray(j * piece, j * piece + (to - from));
        vectors.forEach((v, k) => axpy(matrix[k * columns + j] ?? 0, v.view.subarray(from, to), target, 0, to - from));
      }
      for (let j = 0; j < columns; j++) vectors[j]?.view.set(work.subarray(j * piece, j * piece + (to - from)), from);
    });
  },
  prepareFlips,
  prepareRows,
};

function sweep(length: number, visit: (from: number, to: number) => void): void {
  for (let from = 0; from < length; from += piece) visit(from, Math.min(length, from + piece));
}

/** Four sums, so that one addition need not wait for the one before. */
function dot(a: Float64Array, b: Float64Array, from: number, to: number): number {
  let s0 = 0;
  let s1 = 0;
  let s2 = 0;
  let s3 = 0;
  let k = from;
  for (; k + 3 < to; k += 4) {
    s0 += a[k]! * b[k]!;
    s1 += a[k + 1]! * b[k + 1]!;
    s2 += a[k + 2]! * b[k + 2]!;
    s3 += a[k + 3]! * b[k + 3]!;
  }
  for (; k < to; k++) s0 += a[k]! * b[k]!;
  return s0 + s1 + (s2 + s3);
}

function axpy(alpha: number, x: Float64Array, y: Float64Array, from: number, to: number): void {
  if (alpha === 0) return;
  for (let k = from; k < to; k++) y[k] = y[k]! + alpha * x[k]!;
}

function prepareFlips(form: FlipForm): Prepared {
  const groups = blockGroups(form);
  const diagonal = form.diagonal.length > 0 ? diagonalValues(form) : undefined;
  const low = lowBits(form.spins);
  const dimension = 2 ** form.spins;
  return {
    dimension,
    bytes:
      (diagonal ? diagonal.values.byteLength + (diagonal.index?.byteLength ?? 0) : 0) +
      groups.reduce((sum, g) => sum + g.tables.byteLength, 0),
    addTo(output, input, sign) {
      const out = output.view;
      const source = input.view;
      for (let start = 0; start < dimension; start += 2 ** low) {
        if (diagonal) addDiagonal(diagonal, out, source, start, 2 ** low, sign);
        for (const group of groups) addBlock(group, out, source, start, low, sign);
      }
    },
    free: () => undefined,
  };
}

function addDiagonal(
  d: Diagonal,
  out: Float64Array,
  source: Float64Array,
  start: number,
  size: number,
  sign: number,
): void {
  const { values, index } = d;
  const end = start + size;
  if (index) for (let k = start; k < end; k++) out[k] = out[k]! + sign * values[index[k]!]! * source[k]!;
  else for (let k = start; k < end; k++) out[k] = out[k]! + sign * values[k]! * source[k]!;
}

/** Adds one group's part of the block of targets that begins at `start`. */
function addBlock(
  group: BlockGroup,
  out: Float64Array,
  source: Float64Array,
  start: number,
  low: number,
  sign: number,
): void {
  const size = 2 ** low;
  const from = start ^ group.xHigh;
  const { xLow, tables } = group;
  if (group.constant !== undefined) {
    const c = sign * group.constant;
    for (let k = 0; k < size; k++) out[start + k] = out[start + k]! + c * source[from + (k ^ xLow)]!;
    return;
  }
  const at = blockPattern(group, from >>> low) * size;
  for (let k = 0; k < size; k++) {
    const j = k ^ xLow;
    out[start + k] = out[start + k]! + sign * tables[at + j]! * source[from + j]!;
  }
}

function prepareRows(form: RowForm): Prepared {
  const { starts, columns, values, dimension } = form;
  return {
    dimension,
    bytes: starts.byteLength + columns.byteLength + values.byteLength,
    addTo(output, input, sign) {
      const out = output.view;
      const source = input.view;
      for (let r = 0; r < dimension; r++) {
        let sum = 0;
        const end = starts[r + 1]!;
        for (let k = starts[r]!; k < end; k++) sum += values[k]! * source[columns[k]!]!;
        out[r] = out[r]! + sign * sum;
      }
    },
    free: () => undefined,
  };
}
