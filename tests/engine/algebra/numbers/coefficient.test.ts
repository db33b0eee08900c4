import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Coefficient, MissingValue, type CoefficientData } from '../../../../shared/algebra/numbers/coefficient.ts';
import { BudgetSpent } from '../../../../shared/limits.ts';

const C = Coefficient;
const J = C.symbol('J');
const h = C.symbol('h');
const root = (n: number) => C.sqrt(C.rational(n)) ?? C.zero;
const over = (a: Coefficient, b: Coefficient) => a.div(b) ?? C.zero;

const leaf = fc.oneof(
  fc.tuple(fc.integer({ min: -6, max: 6 }), fc.integer({ min: 1, max: 4 })).map(([n, d]) => C.rational(n, d)),
  fc.constantFrom(J, h, C.symbol('K'), C.i, root(2), root(3), root(6), root(-2)),
);
const coefficient: fc.Arbitrary<Coefficient> = fc.letrec<{ c: Coefficient }>((tie) => ({
  c: fc.oneof(
    { maxDepth: 3 },
    leaf,
    fc.tuple(tie('c'), tie('c')).map(([a, b]) => a.add(b)),
    fc.tuple(tie('c'), tie('c')).map(([a, b]) => a.mul(b)),
    fc.tuple(tie('c'), tie('c')).map(([a, b]) => a.div(b) ?? a),
  ),
})).c;
const settings = { seed: 7, numRuns: 150 };
const values = new Map([
  ['J', 0.7],
  ['h', 1.9],
  ['K', -0.37],
]);
const same = (a: Coefficient, b: Coefficient) => {
  expect(a.key()).toBe(b.key());
  expect(a.equals(b)).toBe(true);
};

describe('the field of coefficients', () => {
  it('has one canonical form, whatever the order of the work', () => {
    fc.assert(
      fc.property(coefficient, coefficient, coefficient, (a, b, c) => {
        same(a.add(b), b.add(a));
        same(a.mul(b), b.mul(a));
        same(a.add(b).add(c), a.add(b.add(c)));
        same(a.mul(b).mul(c), a.mul(b.mul(c)));
        same(a.mul(b.add(c)), a.mul(b).add(a.mul(c)));
        same(a.sub(a), C.zero);
      }),
      settings,
    );
  });
  it('inverts whatever is not zero', () => {
    fc.assert(
      fc.property(coefficient, coefficient, (a, b) => {
        if (b.isZero()) expect(a.div(b)).toBeUndefined();
        else {
          same(over(a, b).mul(b), a);
          same(over(b, b), C.one);
        }
      }),
      settings,
    );
  });
  it('conjugates as a field automorphism of order two', () => {
    fc.assert(
      fc.property(coefficient, coefficient, (a, b) => {
        same(a.mul(b).conj(), a.conj().mul(b.conj()));
        same(a.conj().conj(), a);
        expect(a.add(a.conj()).isReal()).toBe(true);
      }),
      settings,
    );
  });
  it('agrees with floats', () => {
    fc.assert(
      fc.property(coefficient, coefficient, (a, b) => {
        const [x, y, p] = [a.toFloat(values), b.toFloat(values), a.mul(b).toFloat(values)];
        const size = 1 + Math.hypot(x.re, x.im) * Math.hypot(y.re, y.im);
        fc.pre(Number.isFinite(size) && size < 1e6);
        expect(Math.abs(p.re - (x.re * y.re - x.im * y.im)) / size).toBeLessThan(1e-8);
        expect(Math.abs(p.im - (x.re * y.im + x.im * y.re)) / size).toBeLessThan(1e-8);
      }),
      settings,
    );
  });
  it('returns from plain data', () => {
    fc.assert(
      fc.property(coefficient, (a) => {
        same(C.fromData(JSON.parse(JSON.stringify(a)) as CoefficientData), a);
      }),
      settings,
    );
  });
  it('substitutes as a homomorphism', () => {
    const at = new Map([
      ['J', C.rational(2, 3)],
      ['K', root(2)],
    ]);
    fc.assert(
      fc.property(coefficient, coefficient, (a, b) => {
        try {
          same(a.substitute(at).mul(b.substitute(at)), a.mul(b).substitute(at));
        } catch (error) {
          expect(error).toBeInstanceOf(RangeError);
        }
      }),
      settings,
    );
  });
});

describe('values', () => {
  it.each([
    ['0.6', '3/5'],
    ['1e-3', '1/1000'],
    ['12', '12'],
    ['2.50E1', '25'],
    ['-0.125', '-1/8'],
  ])('reads the decimal %s as %s', (decimal, text) => {
    expect(C.fromDecimal(decimal).toText()).toBe(text);
  });
  it.each(['', '.5', '1.', 'x', '1e'])('refuses %j as a decimal', (text) => {
    expect(() => C.fromDecimal(text)).toThrow(RangeError);
  });
  it('knows square roots', () => {
    expect(over(C.one, root(2)).toText()).toBe('sqrt(2)/2');
    same(root(8), C.rational(2).mul(root(2)));
    same(root(-4), C.i.mul(C.rational(2)));
    same(root(6), root(2).mul(root(3)));
    same(over(C.one, C.one.add(root(2))), root(2).sub(C.one));
    expect(C.sqrt(J)).toBeUndefined();
    expect(C.sqrt(root(2))).toBeUndefined();
  });
  it.each([
    [J.mul(C.rational(-1, 2)), '-1/2*J'],
    [C.rational(3, 5), '3/5'],
    [C.i, '1i'],
    [C.zero, '0'],
    [J.neg(), '-J'],
    [over(J, h.mul(C.rational(2))), 'J/(2*h)'],
    [over(J.add(h), h), '(J + h)/h'],
    [over(C.one, J.sub(h)), '1/(J - h)'],
    [root(3).mul(J).mul(C.rational(1, 2)), '1/2*sqrt(3)*J'],
    [over(C.one, J), '1/J'],
  ])('prints %#', (c, text) => {
    expect(c.toText()).toBe(text);
  });
  it('reduces quotients', () => {
    same(over(J.mul(J).sub(h.mul(h)), J.sub(h)), J.add(h));
    same(over(J.mul(J), J.mul(h)), over(J, h));
    expect(over(J.add(h).pow(4) ?? C.zero, J.add(h).pow(3) ?? C.zero).toText()).toBe('J + h');
  });
  it('names every missing value', () => {
    expect(() => J.add(C.symbol('A')).toFloat(new Map())).toThrow(new MissingValue(['A', 'J']));
  });
  it('stops before it explodes', () => {
    const wide = ['a', 'b', 'c', 'd', 'e', 'f'].reduce((sum, n) => sum.add(C.symbol(n)), C.zero);
    expect(() => wide.pow(64)).toThrow(BudgetSpent);
    const tall = () => {
      let c = C.rational(3);
      for (let k = 0; k < 8; k++) c = c.pow(64) ?? c;
      return c;
    };
    expect(tall).toThrow(BudgetSpent);
    expect(() => J.pow(65)).toThrow(RangeError);
  });
  it('makes floats of huge quotients', () => {
    const big = C.rational(10n ** 400n + 1n, 3n * 10n ** 400n);
    expect(big.toFloat().re).toBeCloseTo(1 / 3, 15);
  });
});
