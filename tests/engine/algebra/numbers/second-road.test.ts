import fc from 'fast-check';
import { all, create } from 'mathjs';
import { describe, expect, it } from 'vitest';
import { Coefficient } from '../../../../shared/algebra/numbers/coefficient.ts';
import { adjointMatrix, multiplyMatrices } from '../../../../shared/algebra/pauli/block.ts';

/** Exact coefficients against an independent library: mathjs reads the same text and evaluates it in floating point. */
const math = create(all ?? {}, {});

const values = new Map([
  ['J', 1.25],
  ['h', -0.75],
  ['K', 2.5],
]);

/** An expression as the engine holds it, and as text for mathjs. */
interface Both {
  readonly exact: Coefficient;
  readonly text: string;
}

const leaf: fc.Arbitrary<Both> = fc.oneof(
  fc.constantFrom(...values.keys()).map((name) => ({ exact: Coefficient.symbol(name), text: name })),
  fc.tuple(fc.integer({ min: -9, max: 9 }), fc.integer({ min: 1, max: 9 })).map(([n, d]) => ({
    exact: Coefficient.rational(n, d),
    text: `(${String(n)}/${String(d)})`,
  })),
  fc.integer({ min: 2, max: 12 }).map((n) => ({
    exact: Coefficient.sqrt(Coefficient.rational(n, 1)) ?? Coefficient.zero,
    text: `sqrt(${String(n)})`,
  })),
  fc.constant({ exact: Coefficient.i, text: 'i' }),
);

const expression = fc.letrec<{ whole: Both }>((tie) => ({
  whole: fc.oneof(
    { maxDepth: 4, depthSize: 'small' },
    leaf,
    fc.tuple(fc.constantFrom('+', '-', '*'), tie('whole'), tie('whole')).map(([sign, a, b]) => ({
      exact: sign === '+' ? a.exact.add(b.exact) : sign === '-' ? a.exact.sub(b.exact) : a.exact.mul(b.exact),
      text: `(${a.text} ${sign} ${b.text})`,
    })),
  ),
})).whole;

const asComplex = (value: unknown): { re: number; im: number } => {
  const { re, im } = math.complex(value as number);
  return { re, im };
};

describe('coefficients by a second road', () => {
  it('have the value that mathjs finds for the same text', () => {
    fc.assert(
      fc.property(expression, ({ exact, text }) => {
        const ours = exact.toFloat(values);
        const theirs = asComplex(math.evaluate(text, Object.fromEntries(values)));
        const scale = 1 + Math.hypot(theirs.re, theirs.im);
        expect(Math.abs(ours.re - theirs.re)).toBeLessThan(1e-9 * scale);
        expect(Math.abs(ours.im - theirs.im)).toBeLessThan(1e-9 * scale);
      }),
      { seed: 20261201, numRuns: 300 },
    );
  });

  it('are printed as text that mathjs evaluates to the same', () => {
    fc.assert(
      fc.property(expression, ({ exact }) => {
        const ours = exact.toFloat(values);
        const theirs = asComplex(math.evaluate(exact.toText().replaceAll('1i', 'i'), Object.fromEntries(values)));
        const scale = 1 + Math.hypot(ours.re, ours.im);
        expect(Math.hypot(ours.re - theirs.re, ours.im - theirs.im)).toBeLessThan(1e-9 * scale);
      }),
      { seed: 20261202, numRuns: 200 },
    );
  });

  it('give Gram matrices that mathjs finds too', () => {
    const entry = fc.tuple(fc.integer({ min: -5, max: 5 }), fc.integer({ min: 1, max: 5 }));
    const matrix = fc.array(fc.array(entry, { minLength: 3, maxLength: 3 }), { minLength: 4, maxLength: 4 });
    fc.assert(
      fc.property(matrix, (rows) => {
        const exact = rows.map((row) => row.map(([n, d]) => Coefficient.rational(n, d).mul(Coefficient.i)));
        const gram = multiplyMatrices(adjointMatrix(exact), exact);
        const floats = math.matrix(rows.map((row) => row.map(([n, d]) => math.complex(0, n / d))));
        const theirs = math.multiply(math.ctranspose(floats), floats).toArray() as unknown[][];
        gram.forEach((row, r) =>
          row.forEach((value, c) => {
            const ours = value.toFloat(new Map());
            const other = asComplex(theirs[r]?.[c]);
            expect(Math.hypot(ours.re - other.re, ours.im - other.im)).toBeLessThan(1e-9);
          }),
        );
      }),
      { seed: 20261203, numRuns: 60 },
    );
  });
});
