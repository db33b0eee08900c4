import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Coefficient } from '../../../../shared/algebra/numbers/coefficient.ts';
import {
  adjointOperator,
  collect,
  constantOperator,
  equalOperators,
  multiplyOperators,
  notHermitian,
  pinnedOperator,
  refineFamily,
  scaleOperator,
  spread,
} from '../../../../shared/algebra/pauli/family.ts';
import {
  adjointString,
  equalStrings,
  identityString,
  multiplyStrings,
  newString,
  overlap,
  stringFromText,
  stringText,
  translateString,
} from '../../../../shared/algebra/pauli/string.ts';
import type { Factor, Family, LocalString, Operator, Pauli } from '../../../../shared/algebra/pauli/types.ts';
import { BudgetSpent } from '../../../../shared/limits.ts';

const settings = { seed: 11, numRuns: 200 };
const C = Coefficient;
const torus = { open: false };
const factor: fc.Arbitrary<Factor> = fc.record({
  species: fc.constantFrom('s', 'g'),
  cell: fc.record({
    kind: fc.constant('vertices' as const),
    index: fc.integer({ min: 0, max: 1 }),
    offset: fc.tuple(fc.integer({ min: -2, max: 2 }), fc.integer({ min: -2, max: 2 })),
  }),
  pauli: fc.constantFrom<Pauli>('x', 'y', 'z'),
});
const string: fc.Arbitrary<LocalString> = fc
  .tuple(fc.array(factor, { maxLength: 5 }), fc.integer({ min: 0, max: 3 }))
  .map(([factors, phase]) => newString(factors, phase));
const family: fc.Arbitrary<Family> = fc.record({
  coefficient: fc.constantFrom(C.one, C.one.neg(), C.symbol('J'), C.rational(2), C.i),
  string,
  steps: fc.constantFrom([1, 1], [2, 1], [2, 2], [0, 1], [0, 0], [3, 1]),
  needs: fc.constant([]),
});
const sum = (...families: Family[]): Operator => ({ families, extended: [] });

describe('strings', () => {
  it.each([
    ['X0', 'Y0', 'i sZ0'],
    ['Y0', 'X0', '-i sZ0'],
    ['Z0', 'X0', 'i sY0'],
    ['X0 Z1', 'Z0 X1', 'sY0 sY1'],
    ['-X0', 'i X0', '-i 1'],
  ])('%s times %s is %s', (a, b, product) => {
    expect(stringText(multiplyStrings(stringFromText(a), stringFromText(b)))).toBe(product);
  });
  it('form a group', () => {
    fc.assert(
      fc.property(string, string, string, (a, b, c) => {
        expect(equalStrings(multiplyStrings(multiplyStrings(a, b), c), multiplyStrings(a, multiplyStrings(b, c)))).toBe(
          true,
        );
        expect(equalStrings(multiplyStrings(a, adjointString(a)), identityString)).toBe(true);
        const [ab, ba] = [multiplyStrings(a, b), multiplyStrings(b, a)];
        expect((ab.phase - ba.phase + 4) % 4).toBe(overlap(a, b).length % 2 === 0 ? 0 : 2);
      }),
      settings,
    );
  });
});

describe('collection', () => {
  it('does not depend on order, representative or period', () => {
    fc.assert(
      fc.property(fc.array(family, { maxLength: 5 }), fc.integer({ min: -2, max: 2 }), (families, k) => {
        const rewritten = [...families].reverse().flatMap((f) =>
          refineFamily(
            {
              ...f,
              string: translateString(
                f.string,
                f.steps.map((m) => m * k),
              ),
            },
            f.steps.map((m) => m * 2),
          ),
        );
        expect(collect([sum(...rewritten)], torus)).toEqual(collect([sum(...families)], torus));
      }),
      settings,
    );
  });
  it('is idempotent, linear, and cancels', () => {
    fc.assert(
      fc.property(fc.array(family, { maxLength: 5 }), (families) => {
        const once = collect([sum(...families)], torus);
        expect(collect([once], torus)).toEqual(once);
        expect(equalOperators(once, sum(...families), torus)).toBe(true);
        expect(collect([once, scaleOperator(once, C.one.neg())], torus).families).toEqual([]);
        expect(once.families.every((f) => f.string.phase === 0)).toBe(true);
      }),
      settings,
    );
  });
  it('joins the two halves of a staggered sum', () => {
    const x = (at: number): Family => ({
      coefficient: C.one,
      string: stringFromText(`X${String(at)}`),
      steps: [2],
      needs: [],
    });
    expect(collect([sum(x(0), x(1))], torus).families.map((f) => f.steps)).toEqual([[1]]);
    expect(collect([sum(x(0), x(3))], torus)).toEqual(collect([sum(x(5), x(-2))], torus));
    const alternating = collect([sum(x(0), { ...x(1), coefficient: C.one.neg() })], torus);
    expect(alternating.families.map((f) => [stringText(f.string), f.steps, f.coefficient.toText()])).toEqual([
      ['sX0', [2], '1'],
      ['sX1', [2], '-1'],
    ]);
  });
  it('keeps what tells terms apart at an open edge, and only there', () => {
    const cell = { kind: 'vertices' as const, index: 0, offset: [0] };
    const cut: Family = {
      coefficient: C.one,
      string: { phase: 0, factors: [{ species: 's', cell, pauli: 'x', optional: true }] },
      steps: [1],
      needs: [],
    };
    const whole: Family = { ...cut, string: stringFromText('X0') };
    expect(collect([sum(cut, whole)], { open: true }).families).toHaveLength(2);
    expect(collect([sum(cut, whole)], torus).families).toHaveLength(1);
    const demanded: Family = { ...whole, needs: [cell] };
    expect(collect([sum(demanded, whole)], { open: true }).families).toHaveLength(1);
  });
  it('refuses periods without a common period in reach', () => {
    const x = (m: number): Family => ({ coefficient: C.one, string: stringFromText('X0'), steps: [m], needs: [] });
    expect(() => collect([sum(x(23), x(19), x(17), x(13))], torus)).toThrow(BudgetSpent);
  });
});

describe('products and conjugates', () => {
  const pinned = fc
    .array(fc.tuple(string, fc.constantFrom(C.one, C.symbol('J'), C.i)), { maxLength: 3 })
    .map((terms): Operator => ({
      families: terms.map(([s, coefficient]) => ({ coefficient, string: s, steps: [0, 0], needs: [] })),
      extended: [],
    }));
  it('are associative, distribute, and conjugate in reverse', () => {
    fc.assert(
      fc.property(pinned, pinned, pinned, (a, b, c) => {
        const times = (p: Operator, q: Operator) =>
          multiplyOperators(p, q, torus) ?? expect.fail('pinned operators multiply');
        expect(times(times(a, b), c)).toEqual(times(a, times(b, c)));
        expect(times(a, collect([b, c], torus))).toEqual(collect([times(a, b), times(a, c)], torus));
        expect(collect([adjointOperator(times(a, b))], torus)).toEqual(times(adjointOperator(b), adjointOperator(a)));
      }),
      settings,
    );
  });
  it('scale a lattice sum by a constant, and refuse to multiply two of them', () => {
    const model = spread(pinnedOperator(stringFromText('X0 Z1'), 1), [1]);
    expect(multiplyOperators(constantOperator(C.symbol('J'), 1), model, torus)?.families[0]?.coefficient.toText()).toBe(
      'J',
    );
    expect(multiplyOperators(model, model, torus)).toBeUndefined();
  });
  it('find the part that is not Hermitian', () => {
    const good = spread(pinnedOperator(stringFromText('X0'), 1), [1]);
    const bad = spread(pinnedOperator(stringFromText('i Z0'), 1), [1]);
    expect(notHermitian(collect([good, bad], torus), torus).families.map((f) => stringText(f.string))).toEqual(['sZ0']);
    expect(notHermitian(collect([good, bad, adjointOperator(bad)], torus), torus).families).toEqual([]);
  });
});
