import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { enumerateStates, type DiagonalRule } from '../../../shared/spectra/bases/enumerated.ts';
import { commute, multiply, type Constraint } from '../../../shared/spectra/bases/packed.ts';
import { plainKernel } from '../../../shared/spectra/kernel/plain.ts';
import { groundMean } from '../../../shared/spectra/observe.ts';
import { hermitianEigen } from '../../../shared/spectra/solvers/dense.ts';
import { costOf, solve, solveNow, type SpectrumQuestion } from '../../../shared/spectra/solve.ts';
import { ask, chain, denseMatrix, model, placed, string, torus } from './models.ts';

const means = { kernel: plainKernel };

function solved(question: SpectrumQuestion) {
  const result = solveNow(question, means);
  if (!result.ok) throw new Error(JSON.stringify(result.fault));
  return result.value;
}

function fault(question: SpectrumQuestion) {
  const result = solveNow(question, means);
  if (result.ok) throw new Error('expected a refusal');
  return result.fault;
}

function expectLevels(got: readonly number[], expected: ArrayLike<number>, digits = 8): void {
  got.forEach((e, k) => expect(e).toBeCloseTo(expected[k] ?? NaN, digits));
}

/** All levels of P H P, P the projector onto the states where the constraints hold, from dense matrices. */
function projected(
  m: ReturnType<typeof model>,
  constraints: readonly Constraint[],
  allowed: (b: number) => boolean = () => true,
): number[] {
  const { re, im, size } = denseMatrix(m);
  // A penalty far above the model's norm lifts all other states: exact, because everything commutes or is cut out.
  const penalty = 1000;
  for (const { string: s, value } of constraints) {
    const p = denseMatrix(model(s.n, [[-0.5 * penalty * value, s]], 0.5 * penalty));
    p.re.forEach((v, k) => (re[k] = (re[k] ?? 0) + v));
    p.im.forEach((v, k) => (im[k] = (im[k] ?? 0) + v));
  }
  for (let b = 0; b < size; b++) {
    if (allowed(b)) continue;
    for (let c = 0; c < size; c++) re[b * size + c] = re[c * size + b] = im[b * size + c] = im[c * size + b] = 0;
    re[b * size + b] = penalty;
  }
  return [...hermitianEigen(re, im, size, false).values].filter((e) => e < 0.3 * penalty);
}

const letters = (n: number) =>
  fc.array(fc.constantFrom('I', 'X', 'Y', 'Z'), { minLength: n, maxLength: n }).map((l) => l.join(''));
const coefficients = fc.integer({ min: -4, max: 4 }).filter((c) => c !== 0);

describe('sector of Pauli constraints', () => {
  it('has the spectrum of the projected model, and the dimension of the sector', () => {
    fc.assert(
      fc.property(
        fc.array(letters(5), { minLength: 1, maxLength: 4 }),
        fc.array(fc.tuple(coefficients, letters(5)), { minLength: 12, maxLength: 24 }),
        fc.array(fc.boolean(), { minLength: 4, maxLength: 4 }),
        (laws, terms, signs) => {
          const constraints: Constraint[] = [];
          laws.forEach((text, k) => {
            const s = string(text);
            if (constraints.every((c) => commute(c.string, s)))
              constraints.push({ string: s, value: signs[k] ? 1 : -1 });
          });
          const kept = terms.filter(([, t]) => constraints.every((c) => commute(c.string, string(t))));
          const m = model(5, kept, 0.5);
          const expected = projected(m, constraints);
          const result = solveNow(ask(m, 64, { constraints }), means);
          if (expected.length === 0) {
            expect(result).toMatchObject({ ok: false, fault: { code: 'no state' } });
            return;
          }
          if (!result.ok) throw new Error(result.fault.code);
          expect(result.value.dimension).toBe(expected.length);
          expect(result.value.energies.length).toBe(expected.length);
          expectLevels(result.value.energies, expected);
        },
      ),
      { seed: 21, numRuns: 150 },
    );
  });

  it('refuses with the pair', () => {
    const m = chain(3, 1, 1, true);
    expect(fault(ask(m, 1, { constraints: [{ string: string('ZII'), value: 1 }] }))).toMatchObject({
      code: 'term leaves',
      term: 3,
      constraint: 0,
    });
    expect(
      fault(
        ask(m, 1, {
          constraints: [
            { string: string('XXX'), value: 1 },
            { string: string('ZII'), value: 1 },
          ],
        }),
      ),
    ).toMatchObject({ code: 'constraints clash', constraints: [0, 1] });
    expect(
      fault(
        ask(m, 1, {
          constraints: [
            { string: string('XXX'), value: 1 },
            { string: string('XXX'), value: -1 },
          ],
        }),
      ),
    ).toMatchObject({ code: 'no state', constraint: 1 });
  });
});

describe('sector of diagonal rules', () => {
  const rule = (
    sites: number[],
    relation: DiagonalRule['relation'],
    bound = 0,
    weights = sites.map(() => 1),
  ): DiagonalRule => ({ sites, weights, relation, bound });
  const obeys = (b: number, r: DiagonalRule): boolean => {
    const sum = r.sites.reduce((s, site, k) => s + (r.weights[k] ?? 0) * ((b >> site) & 1), 0);
    return {
      '==': sum === r.bound,
      '<=': sum <= r.bound,
      '>=': sum >= r.bound,
      even: sum % 2 === 0,
      odd: sum % 2 !== 0,
    }[r.relation];
  };

  it('lists exactly the states that obey, and finds each', () => {
    const rules = fc.record({
      sites: fc.uniqueArray(fc.nat(7), { minLength: 1, maxLength: 5 }),
      weights: fc.array(fc.integer({ min: -2, max: 2 }), { minLength: 5, maxLength: 5 }),
      relation: fc.constantFrom('==' as const, '<=' as const, '>=' as const, 'even' as const, 'odd' as const),
      bound: fc.integer({ min: -2, max: 3 }),
    });
    fc.assert(
      fc.property(fc.array(rules, { minLength: 0, maxLength: 4 }), (list) => {
        const expected = Array.from({ length: 256 }, (_, b) => b).filter((b) => list.every((r) => obeys(b, r)));
        const states = enumerateStates(8, list, 1000);
        expect([...(states?.words.subarray(0, states.count) ?? [])].sort((a, b) => a - b)).toEqual(expected);
        for (let b = 0; b < 256; b++) expect((states?.find(Uint32Array.of(b)) ?? -1) >= 0).toBe(expected.includes(b));
      }),
      { seed: 22, numRuns: 200 },
    );
  });

  it('counts blockaded rings past one word: the Lucas number of 40', () => {
    const ring = Array.from({ length: 40 }, (_, s) => rule([s, (s + 1) % 40], '<=', 1));
    expect(enumerateStates(40, ring, 100)).toBeUndefined();
    let [a, b] = [2, 1];
    for (let k = 0; k < 20; k++) [a, b] = [b, a + b];
    const ring20 = Array.from({ length: 20 }, (_, s) => rule([s + 17, ((s + 1) % 20) + 17], '<=', 1));
    const idle = [...Array.from({ length: 17 }, (_, s) => s), 37, 38, 39].map((s) => rule([s], '==', 0));
    expect(enumerateStates(40, [...ring20, ...idle], 1e6)?.count).toBe(a);
  });

  it('projects, and lists the terms that leave', () => {
    const n = 6;
    const rules = Array.from({ length: n }, (_, s) => rule([s, (s + 1) % n], '<=', 1));
    const m = chain(n, 0.3, 1, true);
    const result = solved(ask(m, 100, { rules }));
    const expected = projected(m, [], (b) => rules.every((r) => obeys(b, r)));
    expect(result.dimension).toBe(18);
    expectLevels(result.energies, expected);
    expect(result.leaving).toEqual([6, 7, 8, 9, 10, 11]);
  });

  it('adds terms of one flip before it calls them leaving: exchange keeps the number', () => {
    const n = 5;
    const terms: [number, ReturnType<typeof placed>][] = [];
    for (let s = 0; s < n; s++)
      for (const p of ['X', 'Y', 'Z']) terms.push([0.7, placed(n, { [s]: p, [(s + 1) % n]: p })]);
    const m = model(n, terms, 1);
    const rules = [rule([0, 1, 2, 3, 4], '==', 2)];
    const result = solved(ask(m, 100, { rules }));
    expect(result.leaving).toEqual([]);
    expect(result.dimension).toBe(10);
    expectLevels(
      result.energies,
      projected(m, [], (b) => rules.every((r) => obeys(b, r))),
    );
  });

  it('joins rules and constraints: every random sector that is possible', () => {
    let checked = 0;
    fc.assert(
      fc.property(
        fc.array(letters(5), { minLength: 1, maxLength: 3 }),
        fc.array(fc.tuple(coefficients, letters(5)), { minLength: 12, maxLength: 24 }),
        fc.array(fc.boolean(), { minLength: 3, maxLength: 3 }),
        fc.constantFrom('even' as const, 'odd' as const, '<=' as const),
        (laws, terms, signs, relation) => {
          const constraints: Constraint[] = [];
          laws.forEach((text, k) => {
            const s = string(text);
            if (constraints.every((c) => commute(c.string, s)))
              constraints.push({ string: s, value: signs[k] ? 1 : -1 });
          });
          const kept = terms.filter(([, t]) => constraints.every((c) => commute(c.string, string(t))));
          const m = model(5, kept);
          const rules = [rule([0, 1, 3], relation, 2)];
          const result = solveNow(ask(m, 64, { rules, constraints }), means);
          if (!result.ok && result.fault.code === 'rule broken by constraint') {
            const law = constraints[result.fault.constraint];
            expect((law?.string.x[0] ?? 0) & 0b1011).not.toBe(0);
            return;
          }
          const expected = projected(m, constraints, (b) => rules.every((r) => obeys(b, r)));
          if (!result.ok) {
            expect(['no state', 'rules allow no state']).toContain(result.fault.code);
            expect(expected.length).toBe(0);
            return;
          }
          checked++;
          expect(result.value.dimension).toBe(expected.length);
          expectLevels(result.value.energies, expected);
        },
      ),
      { seed: 23, numRuns: 200 },
    );
    expect(checked).toBeGreaterThan(40);
  });
});

describe('levels and means', () => {
  it('uses idle spins and symmetries, and still lists each level as often as it stands', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(coefficients, letters(5)), { minLength: 1, maxLength: 14 }), (terms) => {
        const small = model(5, terms);
        const wide = solved(
          ask(
            model(
              8,
              terms.map(([c, t]) => [c, `${t}III`] as const),
            ),
            20,
          ),
        );
        expectLevels(
          wide.energies,
          projected(small, []).flatMap((e) => Array<number>(8).fill(e)),
          8,
        );
        expect(wide.dimension).toBe(256);
        expect(wide.multiplets[0]?.multiplicity).toBe(
          8 * projected(small, []).filter((e, _, all) => Math.abs(e - (all[0] ?? 0)) < 1e-7).length,
        );
      }),
      { seed: 24, numRuns: 40 },
    );
  });

  it('stops when told, and yields progress that grows', () => {
    const run = solve(ask(chain(11, 1, 1, true), 4), means);
    let last = 0;
    for (let k = 0; k < 30; k++) {
      const step = run.next();
      if (step.done) throw new Error('finished early');
      expect(step.value.done).toBeGreaterThanOrEqual(last);
      expect(step.value.done).toBeLessThan(1);
      last = step.value.done;
    }
    expect(run.return({ ok: false, fault: { code: 'rules allow no state' } }).done).toBe(true);
  });

  it('gives means in a degenerate ground space that no basis of it changes', () => {
    // Ordered phase without field: the two ferromagnets. Z is ±1 in them, the mean over the space is 0, Z Z is 1.
    const result = solved(ask(chain(11, 1, 0, true), 1, { vectors: true }));
    expect(result.multiplets[0]?.multiplicity).toBe(2);
    expect(groundMean(result, [{ re: 1, im: 0, string: placed(11, { 0: 'Z' }) }])).toBeCloseTo(0, 9);
    expect(groundMean(result, [{ re: 1, im: 0, string: placed(11, { 0: 'Z', 5: 'Z' }) }], 2)).toBeCloseTo(3, 9);
    const h = solved(ask(torus(4, 3, 1, 2), 1, { vectors: true }));
    const energy = groundMean(
      h,
      torus(4, 3, 1, 2).terms.map((t) => ({ ...t.coefficient.toFloat(new Map()), string: t.string })),
    );
    expect(energy).toBeCloseTo(h.energies[0] ?? NaN, 8);
  });
});

describe('one door', () => {
  it('knows the cost before, and refuses what does not fit with it', () => {
    const question = ask(chain(20, 1, 1, true), 6);
    const cost = costOf(question);
    expect(cost).toMatchObject({ ok: true, cost: { dimension: 2 ** 20 } });
    expect(solveNow(question, { ...means, limits: { bytes: 1e6 } })).toMatchObject({
      ok: false,
      fault: { code: 'too large', what: 'bytes', limit: 1e6 },
    });
    expect(solveNow(question, { ...means, limits: { spins: 12 } })).toMatchObject({
      ok: false,
      fault: { code: 'too large', what: 'spins', needed: 20 },
    });
  });

  it('returns all levels when more are asked for than there are', () => {
    const result = solved(ask(chain(4, 1, 1, true), 1000));
    expect(result.energies.length).toBe(16);
    expect(result.multiplets.every((m) => m.complete)).toBe(true);
  });

  it('keeps complex models complex where no frame makes them real', () => {
    // X Y Z on three spins in all cyclic orders with a field in every direction has no antiunitary Pauli symmetry.
    const m = model(3, [
      [1, 'XYZ'],
      [0.5, 'YZX'],
      [0.3, 'ZXY'],
      [0.2, 'XII'],
      [0.4, 'IYI'],
      [0.7, 'IIZ'],
      [0.1, 'YII'],
      [0.6, 'ZII'],
      [0.9, 'IXI'],
      [0.25, 'IZI'],
      [0.35, 'IIX'],
      [0.45, 'IIY'],
    ]);
    const result = solved(ask(m, 8));
    expect(result.real).toBe(false);
    expectLevels(result.energies, projected(m, []));
    const turned = solved(
      ask(
        model(2, [
          [1, 'YX'],
          [0.5, 'YI'],
          [0.25, 'IZ'],
        ]),
        4,
      ),
    );
    expect(turned.real).toBe(true);
    expectLevels(
      turned.energies,
      projected(
        model(2, [
          [1, 'YX'],
          [0.5, 'YI'],
          [0.25, 'IZ'],
        ]),
        [],
      ),
    );
  });

  it('products of strings keep their phases: i X Z = Y', () => {
    expect(multiply(string('X'), string('Z')).phase).toBe(0);
    expect(multiply(string('Y'), string('Y'))).toMatchObject({ phase: 0, x: Uint32Array.of(0), z: Uint32Array.of(0) });
  });
});
