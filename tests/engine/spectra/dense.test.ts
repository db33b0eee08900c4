import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { hermitianEigen, symmetricEigen } from '../../../shared/spectra/solvers/dense.ts';

/** Random Hermitian matrix from a list of numbers; `levels` distinct rows repeated give degeneracies. */
function matrices(n: number, numbers: readonly number[]): { re: Float64Array; im: Float64Array } {
  const re = new Float64Array(n * n);
  const im = new Float64Array(n * n);
  let k = 0;
  const next = () => numbers[k++ % numbers.length] ?? 0;
  for (let r = 0; r < n; r++) {
    for (let c = 0; c <= r; c++) {
      re[r * n + c] = re[c * n + r] = next();
      im[r * n + c] = c === r ? 0 : next();
      im[c * n + r] = -(im[r * n + c] ?? 0);
    }
  }
  return { re, im };
}

const entries = fc.array(fc.integer({ min: -3, max: 3 }), { minLength: 5, maxLength: 150 });

describe('dense eigensolver', () => {
  it('returns vectors with A v = λ v, orthonormal, ascending: real symmetric', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 12 }), entries, (n, numbers) => {
        const { re } = matrices(n, numbers);
        const { values, vectors } = symmetricEigen(re.slice(), n, true);
        const v = vectors ?? new Float64Array(0);
        for (let j = 0; j < n; j++) {
          expect(values[j] ?? NaN).toBeGreaterThanOrEqual((values[j - 1] ?? -Infinity) - 1e-12);
          for (let r = 0; r < n; r++) {
            let sum = 0;
            for (let c = 0; c < n; c++) sum += (re[r * n + c] ?? 0) * (v[j * n + c] ?? 0);
            expect(sum).toBeCloseTo((values[j] ?? NaN) * (v[j * n + r] ?? NaN), 9);
          }
          for (let l = 0; l < n; l++) {
            let sum = 0;
            for (let c = 0; c < n; c++) sum += (v[l * n + c] ?? 0) * (v[j * n + c] ?? 0);
            expect(sum).toBeCloseTo(l === j ? 1 : 0, 10);
          }
        }
        const alone = symmetricEigen(re.slice(), n, false).values;
        alone.forEach((value, j) => expect(value).toBeCloseTo(values[j] ?? NaN, 9));
      }),
      { seed: 11, numRuns: 150 },
    );
  });

  it('does the same for Hermitian matrices', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 10 }), entries, (n, numbers) => {
        const { re, im } = matrices(n, numbers);
        const { values, vectors, imaginary } = hermitianEigen(re.slice(), im.slice(), n, true);
        const [vr, vi] = [vectors ?? new Float64Array(0), imaginary ?? new Float64Array(0)];
        for (let j = 0; j < n; j++) {
          let norm = 0;
          for (let r = 0; r < n; r++) {
            let [sr, si] = [0, 0];
            for (let c = 0; c < n; c++) {
              const [a, b] = [re[r * n + c] ?? 0, im[r * n + c] ?? 0];
              const [x, y] = [vr[j * n + c] ?? 0, vi[j * n + c] ?? 0];
              sr += a * x - b * y;
              si += a * y + b * x;
            }
            expect(sr).toBeCloseTo((values[j] ?? NaN) * (vr[j * n + r] ?? NaN), 9);
            expect(si).toBeCloseTo((values[j] ?? NaN) * (vi[j * n + r] ?? NaN), 9);
            norm += (vr[j * n + r] ?? 0) ** 2 + (vi[j * n + r] ?? 0) ** 2;
          }
          expect(norm).toBeCloseTo(1, 10);
        }
        const trace = Array.from({ length: n }, (_, k) => re[k * n + k] ?? 0).reduce((a, b) => a + b, 0);
        expect(values.reduce((a, b) => a + b, 0)).toBeCloseTo(trace, 9);
      }),
      { seed: 12, numRuns: 150 },
    );
  });
});
