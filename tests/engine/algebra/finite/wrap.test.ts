import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Coefficient } from '../../../../shared/algebra/numbers/coefficient.ts';
import {
  adjoint,
  commute,
  fromText,
  isHermitian,
  key,
  multiply,
  toPauli,
  fromPauli,
  toText,
  weight,
} from '../../../../shared/algebra/finite/string.ts';
import {
  isWrapProblem,
  PeriodMismatch,
  siteTable,
  wrapExtended,
  wrapOperator,
  wrapString,
} from '../../../../shared/algebra/finite/wrap.ts';
import type { FiniteString } from '../../../../shared/algebra/finite/types.ts';
import {
  canonicalExtended,
  extendedKey,
  isOrderFree,
  multiplyExtended,
} from '../../../../shared/algebra/pauli/extended.ts';
import { multiplyStrings, stringFromText } from '../../../../shared/algebra/pauli/string.ts';
import type { Extended, Family } from '../../../../shared/algebra/pauli/types.ts';
import { builtInFamily } from '../../../../shared/lattice/built-in.ts';
import { isLatticeProblem } from '../../../../shared/lattice/cells.ts';
import { newCluster } from '../../../../shared/lattice/cluster.ts';
import { clusterOf, denseMatrix, extendedOf, stringOn, times } from '../arbitraries.ts';

const settings = { seed: 3, numRuns: 200 };
const finite: fc.Arbitrary<FiniteString> = fc
  .tuple(
    fc.array(fc.constantFrom('I', 'X', 'Y', 'Z'), { minLength: 3, maxLength: 3 }),
    fc.constantFrom('+', '-', '+i', '-i'),
  )
  .map(([letters, sign]) => fromText(sign + letters.join('')));

describe('strings on numbered spins', () => {
  it('multiply, conjugate and commute as their matrices do', () => {
    fc.assert(
      fc.property(finite, finite, (a, b) => {
        expect(denseMatrix(multiply(a, b))).toEqual(
          times(denseMatrix(a), denseMatrix(b)).map((r) => r.map((c) => ({ re: c.re + 0, im: c.im + 0 }))),
        );
        expect(commute(a, b)).toBe(key(multiply(a, b)) === key(multiply(b, a)));
        expect(toText(multiply(a, adjoint(a)))).toBe('+III');
        expect(isHermitian(a)).toBe(key(a) === key(adjoint(a)));
      }),
      settings,
    );
  });
  it('read, print and take apart', () => {
    fc.assert(
      fc.property(finite, (a) => {
        expect(key(fromText(toText(a)))).toBe(key(a));
        const { phase, factors } = toPauli(a);
        expect(key(fromPauli(3, factors, phase))).toBe(key(a));
        expect(factors).toHaveLength(weight(a));
      }),
      settings,
    );
    expect(() => fromText('XQ')).toThrow(RangeError);
  });
});

describe('wrapping', () => {
  const tori = [
    [1, 1],
    [1, 3],
    [2, 2],
    [3, 2],
    [4, 4],
  ].map((l) => clusterOf('square', l));
  const text = (s: FiniteString | undefined): string => (s ? toText(s) : 'missing');
  it('is a homomorphism wherever factors do not reorder', () => {
    fc.assert(
      fc.property(stringOn(2, 3), stringOn(2, 3), (a, b) => {
        const { table, cluster } = clusterOf('square', [5, 6]);
        const [p, q] = [wrapString(table, cluster, a), wrapString(table, cluster, b)];
        expect(p && q && text(multiply(p, q))).toBe(text(wrapString(table, cluster, multiplyStrings(a, b))));
      }),
      settings,
    );
  });
  it('gives canonical products the same string, sign and all, on every torus', () => {
    let free = 0;
    fc.assert(
      fc.property(extendedOf(1, 3), (a) => {
        if (!isOrderFree(a)) return;
        free++;
        const form = canonicalExtended(a, { open: false });
        expect(extendedKey(canonicalExtended(form, { open: false }))).toBe(extendedKey(form));
        for (const { table, cluster } of tori)
          if (
            a.parts.every((p) => cluster.admits(p.steps)) &&
            [a, form].every((e) => e.parts.every((p) => cluster.admits(p.steps)))
          )
            if (a.parts.every((p) => p.steps.every((m) => m !== 0)) || cluster.unitCells === 16)
              expect(toText(wrapExtended(table, cluster, form))).toBe(toText(wrapExtended(table, cluster, a)));
      }),
      { ...settings, numRuns: 1500 },
    );
    expect(free).toBeGreaterThan(100);
  });
  it('takes products of order-free products to products', () => {
    let seen = 0;
    const { table, cluster } = clusterOf('square', [4, 4]);
    fc.assert(
      fc.property(extendedOf(1, 2), extendedOf(1, 2), (a, b) => {
        if (!isOrderFree({ phase: 0, parts: [...a.parts, ...b.parts] })) return;
        seen++;
        const product = multiplyExtended(a, b, { open: false });
        expect(toText(wrapExtended(table, cluster, product))).toBe(
          toText(multiply(wrapExtended(table, cluster, a), wrapExtended(table, cluster, b))),
        );
      }),
      { ...settings, numRuns: 1500 },
    );
    expect(seen).toBeGreaterThan(30);
  });
  const chain = (text: string, coefficient: Coefficient, steps = [1]): Family => ({
    coefficient,
    string: stringFromText(text),
    steps,
    needs: [],
  });
  it('collects what a small torus brings together, and says so', () => {
    const { table, cluster } = clusterOf('chain', [2]);
    const J = Coefficient.symbol('J');
    const model = wrapOperator(table, cluster, {
      families: [chain('Z0 Z1', J), chain('Z0 Z2', J), chain('1', J)],
      extended: [],
    });
    if (isWrapProblem(model)) return expect.fail(model.message);
    expect(model.terms.map((t) => [toText(t.string), t.coefficient.toText()])).toEqual([['+ZZII', '2*J']]);
    expect(model.constant.toText()).toBe('4*J');
    expect(model.notes).toHaveLength(2);
  });
  it('notes a translate that is not Hermitian where anticommuting factors meet', () => {
    const { table, cluster } = clusterOf('chain', [1]);
    const model = wrapOperator(table, cluster, { families: [chain('Z0 X1', Coefficient.one)], extended: [] });
    expect(!isWrapProblem(model) && model.notes.join()).toMatch(/not Hermitian/);
  });
  it('refuses a period that does not divide the size', () => {
    const { table, cluster } = clusterOf('chain', [3]);
    expect(wrapOperator(table, cluster, { families: [chain('X0', Coefficient.one, [2])], extended: [] })).toMatchObject(
      { problem: 'period' },
    );
    const odd: Extended = { phase: 0, parts: [{ string: stringFromText('X0'), steps: [2], needs: [] }] };
    expect(() => wrapExtended(table, cluster, odd)).toThrow(PeriodMismatch);
  });
  it('cuts and drops at an open edge', () => {
    const { table, cluster } = clusterOf('chain', [3], false);
    const star = stringFromText('X-1.0 X0.0', 'links');
    const cut: Family = {
      coefficient: Coefficient.one,
      string: { phase: 0, factors: star.factors.map((f) => ({ ...f, species: 'g', optional: true as const })) },
      steps: [1],
      needs: [{ kind: 'vertices', index: 0, offset: [0] }],
    };
    const texts = (families: Family[]): string[] => {
      const model = wrapOperator(table, cluster, { families, extended: [] });
      return isWrapProblem(model) ? [model.message] : model.terms.map((t) => toText(t.string)).sort();
    };
    expect(texts([cut])).toEqual(['+IIIIX', '+IIIXI', '+IIIXX']);
    expect(texts([chain('Z0 Z1', Coefficient.one)])).toEqual(['+IZZII', '+ZZIII']);
    expect(texts([chain('X0', Coefficient.one)])).toEqual(['+IIXII', '+IXIII', '+XIIII']);
  });
  it('leaves out of a product what does not stand at an open edge', () => {
    const { table, cluster } = clusterOf('chain', [3], false);
    const all = (text: string): Extended => ({
      phase: 0,
      parts: [{ string: stringFromText(text), steps: [1], needs: [] }],
    });
    expect(toText(wrapExtended(table, cluster, all('Z0')))).toBe('+ZZZII');
    expect(toText(wrapExtended(table, cluster, all('-Z0')))).toBe('-ZZZII');
    // bonds 01 and 12 stand, their product is Z on the ends
    expect(toText(wrapExtended(table, cluster, all('Z0 Z1')))).toBe('+ZIZII');
    expect(wrapString(table, cluster, stringFromText('Z2 Z3'))).toBeUndefined();
  });
  it('wraps tilted tori along their periods', () => {
    const family = builtInFamily('square');
    const cluster =
      family &&
      newCluster(
        { family, periodic: [true, true] },
        {
          periods: [
            [2, 2],
            [1, -2],
          ],
        },
      );
    if (!cluster || isLatticeProblem(cluster)) return expect.fail('a tilted torus of six cells');
    const table = siteTable(cluster, [{ name: 's', kind: 'vertices', classes: [0] }]);
    expect(table.sites).toHaveLength(6);
    const at = (offset: string) => text(wrapString(table, cluster, stringFromText(`X(${offset})`)));
    expect(at('0,0')).toBe(at('2,2'));
    expect(at('0,0')).toBe(at('1,-2'));
    expect(at('0,0')).not.toBe(at('1,1'));
    const flip: Extended = { phase: 0, parts: [{ string: stringFromText('Z(0,0)'), steps: [1, 1], needs: [] }] };
    expect(toText(wrapExtended(table, cluster, flip))).toBe('+ZZZZZZ');
  });
});
