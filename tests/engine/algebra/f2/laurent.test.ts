import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  add,
  addVectors,
  antipode,
  combine,
  equals,
  equalVectors,
  fromMonomials,
  isZero,
  isZeroVector,
  monomials,
  mul,
  normalised,
  one,
  pack,
  scaleVector,
  shift,
  unpack,
  vectorWeight,
  zero,
  type Laurent,
  type LaurentVector,
} from '../../../../shared/algebra/f2/laurent.ts';
import { dagger, kernel, LaurentModule } from '../../../../shared/algebra/f2/module.ts';
import { BudgetSpent, newBudget } from '../../../../shared/limits.ts';

const settings = { seed: 23, numRuns: 200 };
const exponents = (dimension: number, reach: number): fc.Arbitrary<number[]> =>
  fc.array(fc.integer({ min: -reach, max: reach }), { minLength: dimension, maxLength: dimension });
const polynomial = (dimension: number, reach = 3, most = 4): fc.Arbitrary<Laurent> =>
  fc.array(exponents(dimension, reach), { maxLength: most }).map(fromMonomials);
const vector = (dimension: number, length: number, reach = 1, most = 2): fc.Arbitrary<LaurentVector> =>
  fc.array(polynomial(dimension, reach, most), { minLength: length, maxLength: length });

describe('Laurent polynomials over F2', () => {
  it('are a commutative ring of characteristic two with an involution', () => {
    fc.assert(
      fc.property(polynomial(3), polynomial(3), polynomial(3), (a, b, c) => {
        expect(add(a, b)).toEqual(add(b, a));
        expect(mul(a, b)).toEqual(mul(b, a));
        expect(mul(mul(a, b), c)).toEqual(mul(a, mul(b, c)));
        expect(mul(a, add(b, c))).toEqual(add(mul(a, b), mul(a, c)));
        expect(add(a, a)).toEqual(zero);
        expect(mul(a, one)).toEqual(a);
        expect(antipode(mul(a, b))).toEqual(mul(antipode(a), antipode(b)));
        expect(antipode(antipode(a))).toEqual(a);
      }),
      settings,
    );
  });
  it('pack and unpack, shift by adding', () => {
    fc.assert(
      fc.property(exponents(3, 9_000), exponents(3, 9_000), (e, f) => {
        expect(unpack(pack(e), 3)).toEqual(e);
        expect(unpack(pack(e) + pack(f), 3)).toEqual(e.map((x, d) => x + (f[d] ?? 0)));
        expect(monomials(shift([pack(e)], pack(f)), 3)).toEqual([e.map((x, d) => x + (f[d] ?? 0))]);
      }),
      settings,
    );
    expect(() => pack([40_000])).toThrow(BudgetSpent);
  });
});

/** x^e as text: p('0,0 1,0') is 1 + x. */
const p = (text: string): Laurent =>
  fromMonomials(text === '' ? [] : text.split(' ').map((m) => m.split(',').map(Number)));

describe('modules', () => {
  it.each([1, 2, 3])('in %i variables: every syzygy is a relation, and known relations are generated', (dimension) => {
    let seen = 0;
    fc.assert(
      fc.property(fc.array(vector(dimension, 2), { minLength: 3, maxLength: 3 }), (generators) => {
        const module = new LaurentModule(generators, dimension, 2, newBudget(3_000_000));
        try {
          const syzygies = module.syzygies();
          for (const s of syzygies) expect(isZeroVector(combine(s, generators, 2))).toBe(true);
          // three vectors of two components always have a relation: the minors
          expect(syzygies.length).toBeGreaterThan(0);
          const [u, v, w] = generators;
          const minor = (a?: LaurentVector, b?: LaurentVector): Laurent =>
            add(mul(a?.[0] ?? zero, b?.[1] ?? zero), mul(a?.[1] ?? zero, b?.[0] ?? zero));
          const cramer: LaurentVector = [minor(v, w), minor(u, w), minor(u, v)];
          expect(isZeroVector(combine(cramer, generators, 2))).toBe(true);
          expect(new LaurentModule(syzygies, dimension, 3, newBudget(3_000_000)).contains(cramer)).toBe(true);
          seen++;
        } catch (error) {
          expect(error).toBeInstanceOf(BudgetSpent);
        }
      }),
      { ...settings, numRuns: 60 },
    );
    expect(seen).toBeGreaterThan(40);
  });
  it('decompose what was composed, no heavier than it was', () => {
    fc.assert(
      fc.property(
        fc.array(vector(2, 2), { minLength: 2, maxLength: 3 }),
        fc.array(polynomial(2, 2, 2), { minLength: 3, maxLength: 3 }),
        (generators, coefficients) => {
          const used = coefficients.slice(0, generators.length);
          const target = combine(used, generators, 2);
          const answer = new LaurentModule(generators, 2, 2, newBudget(5_000_000)).decompose(target);
          if (!answer.inside) return expect.fail('a combination is inside');
          expect(equalVectors(combine(answer.coefficients, generators, 2), target)).toBe(true);
          if (answer.least) expect(vectorWeight(answer.coefficients)).toBeLessThanOrEqual(vectorWeight(used));
        },
      ),
      { ...settings, numRuns: 80 },
    );
  });
  it('tell what is outside: an augmentation that vanishes on the generators shows it', () => {
    // all generators have an even number of monomials, so does every combination
    const even = polynomial(2, 2, 3).map((q) => mul(q, p('0,0 1,0')));
    fc.assert(
      fc.property(fc.array(even, { minLength: 2, maxLength: 3 }), polynomial(2, 2, 3), (generators, q) => {
        const target = q.length % 2 === 0 ? add(q, one) : q;
        fc.pre(target.length % 2 === 1);
        const module = new LaurentModule(
          generators.map((g) => [g]),
          2,
          1,
          newBudget(5_000_000),
        );
        expect(module.contains([target])).toBe(false);
        expect(module.decompose([target])).toEqual({ inside: false });
      }),
      { ...settings, numRuns: 40 },
    );
  });
  it('know Laurent units: a monomial generates everything', () => {
    expect(new LaurentModule([[p('3,-2')]], 2, 1).contains([p('0,0 -5,1')])).toBe(true);
    expect(new LaurentModule([[p('0,0 1,0')]], 2, 1).contains([one])).toBe(false);
  });
  it('find the relation of the links around a plaquette', () => {
    // Wegner 1971: Z Z on the links of a plaquette multiplies to one
    const bonds: LaurentVector[] = [[p('0,0 1,0')], [p('0,0 0,1')]];
    const module = new LaurentModule(bonds, 2, 1);
    expect(module.syzygies().map((s) => normalised(s, 2))).toEqual([[p('0,0 0,1'), p('0,0 1,0')]]);
    expect(module.verify([p('0,0 0,1'), p('0,0 1,0')], [zero])).toBeDefined();
    expect(module.verify([one, one], [zero])).toBeUndefined();
    const pair = module.decompose([p('0,0 2,1')]);
    expect(pair.inside && pair.least && vectorWeight(pair.coefficients)).toBe(3);
    expect(module.decompose([p('0,0')])).toEqual({ inside: false });
  });
  it('find the plaquettes that commute with all stars of the toric code, and nothing more', () => {
    // on links: star = (1 + 1/x, 1 + 1/y); Z strings that meet all stars evenly are generated by the plaquette
    const star: LaurentVector = [p('0,0 -1,0'), p('0,0 0,-1')];
    const found = kernel([star.map(antipode)], 2, 2);
    expect(found.map((v) => normalised(v, 2))).toEqual([[p('0,0 0,1'), p('0,0 1,0')]]);
  });
  it('have kernels that annihilate and a transpose that is an involution', () => {
    fc.assert(
      fc.property(fc.array(vector(2, 3), { minLength: 2, maxLength: 2 }), (rows) => {
        for (const w of kernel(rows, 2, 3, newBudget(5_000_000)))
          for (const row of rows)
            expect(isZero(row.reduce<Laurent>((sum, q, c) => add(sum, mul(q, w[c] ?? zero)), zero))).toBe(true);
        expect(dagger(dagger(rows, 3), 2)).toEqual(rows);
      }),
      { ...settings, numRuns: 40 },
    );
  });
  it('stop at their budget', () => {
    const wide = vector(3, 3, 2, 6);
    const [generators] = fc.sample(fc.array(wide, { minLength: 5, maxLength: 5 }), { seed: 1, numRuns: 1 });
    expect(() => new LaurentModule(generators ?? [], 3, 3, newBudget(20_000)).syzygies()).toThrow(BudgetSpent);
  });
  it('add and scale vectors', () => {
    const v: LaurentVector = [p('0,0'), p('1,0')];
    expect(equalVectors(addVectors(v, v), [zero, zero])).toBe(true);
    expect(equals(scaleVector(p('0,0 1,0'), v)[1] ?? zero, p('1,0 2,0'))).toBe(true);
  });
});
