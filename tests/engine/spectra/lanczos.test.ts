import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { flipHamiltonian, flipParts, type NumericTerm } from '../../../shared/spectra/hamiltonian.ts';
import { plainKernel as kernel } from '../../../shared/spectra/kernel/plain.ts';
import { hermitianEigen } from '../../../shared/spectra/solvers/dense.ts';
import { lowestLevels, type Lowest, type LowestRequest } from '../../../shared/spectra/solvers/lanczos.ts';
import { chain, denseMatrix, model, string } from './models.ts';

/** The solver itself, on matrices whose symmetries nobody has taken out. */
function lowest(spins: number, terms: readonly NumericTerm[], request: Partial<LowestRequest>): Lowest {
  const h = flipHamiltonian(flipParts(spins, terms), kernel);
  const run = lowestLevels(
    h,
    { count: 4, extra: 64, tolerance: 1e-10, degenerate: 1e-8, vectors: 200, products: 20_000, ...request },
    kernel,
  );
  for (;;) {
    const step = run.next();
    if (step.done) return step.value;
  }
}

const numeric = (terms: readonly (readonly [number, string])[], idle: string): NumericTerm[] =>
  terms.map(([re, text]) => ({ re, im: 0, string: string(text + idle) }));

const letters = (n: number) =>
  fc.array(fc.constantFrom('I', 'X', 'Y', 'Z'), { minLength: n, maxLength: n }).map((l) => l.join(''));
const random = fc.array(
  fc.tuple(
    fc.integer({ min: -4, max: 4 }).filter((c) => c !== 0),
    letters(6),
  ),
  { minLength: 8, maxLength: 30 },
);

describe('lowest levels by iteration', () => {
  it('agree with the dense road, real and complex, each level as often as idle spins repeat it', () => {
    fc.assert(
      fc.property(random, fc.integer({ min: 0, max: 3 }), (terms, idle) => {
        const dense = denseMatrix(model(6, terms));
        const expected = [...hermitianEigen(dense.re, dense.im, dense.size, false).values].flatMap((e) =>
          Array<number>(2 ** idle).fill(e),
        );
        const got = lowest(6 + idle, numeric(terms, 'I'.repeat(idle)), { count: 7 });
        expect(got.converged).toBe(true);
        expect(got.energies.length).toBeGreaterThanOrEqual(7);
        got.energies.forEach((e, k) => expect(e).toBeCloseTo(expected[k] ?? NaN, 7));
        got.residuals.forEach((r) => expect(r).toBeLessThan(1e-7));
        // The last multiplet is whole: the next level lies above it.
        if (got.complete)
          expect((expected[got.energies.length] ?? Infinity) - (got.energies.at(-1) ?? 0)).toBeGreaterThan(1e-9);
      }),
      { seed: 41, numRuns: 15 },
    );
  });

  it.each([2, 4, 8, 16])('find a %i-fold ground level in full, with a small window too', (fold) => {
    const ring = chain(7, 1, 0.8, true).terms.map((t) => ({
      ...t.coefficient.toFloat(new Map()),
      string: { ...t.string, n: 7 + Math.log2(fold) },
    }));
    for (const vectors of [200, fold + 12]) {
      const got = lowest(7 + Math.log2(fold), ring, { count: 1, extra: 20, vectors });
      expect(got.complete).toBe(true);
      expect(got.energies.length).toBe(fold);
      // −Σ_k sqrt(J² + h² − 2 J h cos k): P. Pfeuty, Ann. Phys. 57, 79 (1970), even sector.
      const e0 = -Array.from({ length: 7 }, (_, m) =>
        Math.sqrt(1.64 - 1.6 * Math.cos(((2 * m + 1) * Math.PI) / 7)),
      ).reduce((a, b) => a + b);
      got.energies.forEach((e) => expect(e).toBeCloseTo(e0, 8));
    }
  });

  it('say so when a multiplet is larger than what may be listed', () => {
    const terms = numeric(
      [
        [1, 'XZ'],
        [0.5, 'ZI'],
      ],
      'IIIIII',
    );
    const got = lowest(8, terms, { count: 1, extra: 10 });
    expect(got.complete).toBe(false);
    expect(got.energies.length).toBe(11);
  });

  it('return orthonormal eigenvectors', () => {
    const terms = numeric(
      [
        [1, 'XYIIII'],
        [0.7, 'ZZYIIX'],
        [0.4, 'IIXXYZ'],
        [0.9, 'ZIIIZI'],
        [1.1, 'YIYYII'],
        [0.3, 'IXIIII'],
      ],
      '',
    );
    const got = lowest(6, terms, { count: 5 });
    got.vectors.forEach((v, i) => {
      got.vectors.forEach((w, j) => expect(Math.abs(kernel.dot(v, w))).toBeCloseTo(i === j ? 1 : 0, 8));
    });
  });
});
