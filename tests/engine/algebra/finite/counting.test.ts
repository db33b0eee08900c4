import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { countingRule, countStates, type CountingRule } from '../../../../shared/algebra/finite/counting.ts';
import { fromPauli } from '../../../../shared/algebra/finite/string.ts';
import { Coefficient } from '../../../../shared/algebra/numbers/coefficient.ts';
import { rational } from '../../../../shared/algebra/numbers/rational.ts';
import type { RuleRelation } from '../../../../shared/algebra/pauli/rule.ts';
import { BudgetSpent, newBudget } from '../../../../shared/limits.ts';
import { clusterOf } from '../arbitraries.ts';

const C = Coefficient;
const n = 7;
const relation = fc.constantFrom<RuleRelation>('==', '<=', '>=', 'even', 'odd');
const term = fc.record({
  spins: fc.uniqueArray(fc.integer({ min: 0, max: n - 1 }), { minLength: 1, maxLength: 2 }),
  weight: fc.constantFrom(1, -1, 2, -3),
});
const rule = fc.record({
  terms: fc.array(term, { maxLength: 5 }),
  constant: fc.integer({ min: -2, max: 2 }),
  relation,
  bound: fc.integer({ min: -2, max: 3 }),
});
type Rule = typeof rule extends fc.Arbitrary<infer T> ? T : never;

const built = (r: Rule): CountingRule =>
  countingRule(
    r.terms.map((t) => ({
      coefficient: C.rational(t.weight),
      string: fromPauli(
        n,
        t.spins.map((spin) => ({ spin, pauli: 'z' as const })),
      ),
    })),
    C.rational(r.constant),
    r.relation,
    C.rational(r.bound),
  );
function holds(r: Rule, bits: number): boolean {
  const z = (s: number): number => ((bits >> s) & 1 ? -1 : 1);
  const value = r.terms.reduce((sum, t) => sum + t.weight * t.spins.reduce((p, s) => p * z(s), 1), r.constant);
  if (r.relation === 'even' || r.relation === 'odd') return Math.abs(value % 2) === (r.relation === 'odd' ? 1 : 0);
  return r.relation === '==' ? value === r.bound : r.relation === '<=' ? value <= r.bound : value >= r.bound;
}

/** Every vertex of an open square has exactly one dimer. */
function dimers(width: number, height: number): { spins: number; rules: CountingRule[] } {
  const { cluster } = clusterOf('square', [width, height], false);
  const rules = cluster.cells('vertices').map((v): CountingRule => {
    const [x = 0, y = 0] = v.offset;
    const links = [
      [0, x, y],
      [0, x - 1, y],
      [1, x, y],
      [1, x, y - 1],
    ].flatMap(([index = 0, a = 0, b = 0]) => cluster.number({ kind: 'links', index, offset: [a, b] }) ?? []);
    return {
      kind: 'linear',
      sites: links,
      weights: links.map(() => rational(1n)),
      relation: '==',
      bound: rational(1n),
    };
  });
  return { spins: cluster.count('links'), rules };
}

describe('counting', () => {
  it('agrees with listing all states', () => {
    fc.assert(
      fc.property(fc.array(rule, { maxLength: 4 }), (rules) => {
        let brute = 0n;
        for (let bits = 0; bits < 2 ** n; bits++) if (rules.every((r) => holds(r, bits))) brute++;
        expect(countStates(n, rules.map(built))).toBe(brute);
      }),
      { seed: 31, numRuns: 250 },
    );
  });
  it('leaves free spins free', () => {
    expect(countStates(70, [])).toBe(2n ** 70n);
  });
  // P. W. Kasteleyn, Physica 27, 1209 (1961); M. E. Fisher, Phys. Rev. 124, 1664 (1961): 12 988 816 coverings of the chessboard
  it.each([
    [2, 2, 2n],
    [4, 4, 36n],
    [6, 6, 6728n],
    [8, 8, 12988816n],
    [3, 3, 0n],
  ])('dimer coverings of the open %i x %i square: %s', (width, height, count) => {
    const { spins, rules } = dimers(width, height);
    expect(countStates(spins, rules)).toBe(count);
  });
  it('stops at its budget', () => {
    const { spins, rules } = dimers(8, 8);
    expect(() => countStates(spins, rules, newBudget(1_000))).toThrow(BudgetSpent);
  });
  it('refuses rules it cannot count with', () => {
    const x = { coefficient: C.one, string: fromPauli(2, [{ spin: 0, pauli: 'x' as const }]) };
    expect(() => countingRule([x], C.zero, '==', C.one)).toThrow(RangeError);
    const z = { coefficient: C.symbol('J'), string: fromPauli(2, [{ spin: 0, pauli: 'z' as const }]) };
    expect(() => countingRule([z], C.zero, '==', C.one)).toThrow(/rational weights/);
  });
});
