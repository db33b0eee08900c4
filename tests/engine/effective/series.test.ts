import { describe, expect, it } from 'vitest';
import { siteTable, wrapOperator, isWrapProblem, wrapOrbit } from '../../../shared/algebra/finite/wrap.ts';
import type { Operator } from '../../../shared/algebra/pauli/types.ts';
import type { Coefficient } from '../../../shared/algebra/numbers/coefficient.ts';
import { speciesCells } from '../../../shared/audits/sector.ts';
import { effectiveHamiltonian, Refused } from '../../../shared/effective/series.ts';
import type { Values } from '../../../shared/language/values.ts';
import { isLatticeProblem } from '../../../shared/lattice/cells.ts';
import { newCluster, straight } from '../../../shared/lattice/cluster.ts';
import { newBudget } from '../../../shared/limits.ts';
import { plainKernel } from '../../../shared/spectra/kernel/plain.ts';
import { solveNow } from '../../../shared/spectra/solve.ts';
import { valuesOf } from '../audits/source.ts';

const modelOf = (values: Values, name: string): Operator => {
  const value = values.find(name);
  if (value?.what !== 'model') throw new Error(`no model ${name}`);
  return value.operator;
};

const signWith =
  (floats: ReadonlyMap<string, number>) =>
  (c: Coefficient): 1 | -1 | undefined => {
    const x = c.toFloat(floats).re;
    return x > 0 ? 1 : x < 0 ? -1 : undefined;
  };

/** The lowest levels of an operator on a ring of cells, in the space where every term of `fixed` has the given sign. */
function levels(
  values: Values,
  operator: Operator,
  { cells, count }: { readonly cells: number; readonly count: number },
  couplings: ReadonlyMap<string, number>,
  fixed?: { readonly operator: Operator; readonly value: 1 | -1 },
): readonly number[] {
  const { lattice } = values;
  const cluster = lattice && newCluster(lattice, straight(cells));
  if (!cluster || isLatticeProblem(cluster)) throw new Error('no cluster');
  const table = siteTable(cluster, speciesCells(values, new Set(['p', 'q'])));
  const model = wrapOperator(table, cluster, operator);
  if (isWrapProblem(model)) throw new Error(model.message);
  const constraints = (fixed?.operator.families ?? []).flatMap((f) =>
    wrapOrbit(table, cluster, f).map((string) => ({ string, value: fixed?.value ?? 1 })),
  );
  const solved = solveNow({ model, constraints, values: couplings, levels: count }, { kernel: plainKernel });
  if (!solved.ok) throw new Error(solved.fault.code);
  return solved.value.energies;
}

/** Strong rungs of two spins, coupled in a row by terms that do not commute. */
const ladder = `lattice chain torus 5
spins p on vertices
spins q on vertices
couplings J = 1, a = 1, b = 1, c = 1
model bare = - J sum(v: vertices) p^z[v] q^z[v]
model whole = bare
  - 7/10 a sum(v: vertices) q^x[v] p^x[v + (1)]
  - 4/10 b sum(v: vertices) q^y[v] p^z[v + (1)]
  + 3/10 c sum(v: vertices) p^x[v]
  + 2/10 a sum(v: vertices) q^z[v]`;

describe('effective Hamiltonians', () => {
  // a ring of as many cells as orders would add processes that wind
  it.each([
    [1, { cells: 4, count: 16 }],
    [2, { cells: 4, count: 16 }],
    [3, { cells: 4, count: 16 }],
    [4, { cells: 5, count: 3 }],
  ])('to order %i differ from the whole model at the next order', (order, ring) => {
    const values = valuesOf(ladder);
    const bare = modelOf(values, 'bare');
    const { operator } = effectiveHamiltonian(
      modelOf(values, 'whole'),
      bare,
      order,
      signWith(new Map([['J', 1]])),
      newBudget(100_000_000),
    );
    const worst = (scale: number): number => {
      const couplings = new Map([['J', 1], ...['a', 'b', 'c'].map((n) => [n, scale] as const)]);
      const exact = levels(values, modelOf(values, 'whole'), ring, couplings);
      const found = levels(values, operator, ring, couplings, { operator: bare, value: 1 });
      expect(found.length).toBeGreaterThanOrEqual(ring.count);
      return Math.max(...found.slice(0, ring.count).map((e, k) => Math.abs(e - (exact[k] ?? 0))));
    };
    const [large, small] = [worst(0.08), worst(0.04)];
    expect(large).toBeGreaterThan(1e-9);
    // halving V divides the error by 2^(order + 1), up to corrections of the next order
    expect(Math.log2(large / small)).toBeGreaterThan(order + 0.6);
  });

  it('hold for either sign of the strong coupling', () => {
    const text = ladder.replace('J = 1', 'J = -1');
    const values = valuesOf(text);
    const bare = modelOf(values, 'bare');
    const couplings = new Map([
      ['J', -1],
      ['a', 0.03],
      ['b', 0.03],
      ['c', 0.03],
    ]);
    const { operator } = effectiveHamiltonian(
      modelOf(values, 'whole'),
      bare,
      3,
      signWith(couplings),
      newBudget(100_000_000),
    );
    const exact = levels(values, modelOf(values, 'whole'), { cells: 4, count: 16 }, couplings);
    const found = levels(values, operator, { cells: 4, count: 16 }, couplings, { operator: bare, value: -1 });
    for (const [k, e] of found.entries()) expect(Math.abs(e - (exact[k] ?? 0))).toBeLessThan(2e-6);
  });

  it('hold where terms of the unperturbed model cost different energies', () => {
    const text = `lattice chain torus 5
spins p on vertices
spins q on vertices
couplings J = 1, K = 1/2, a = 1
model bare = - J sum(v: vertices) p^z[v] q^z[v] + K sum(v: vertices) q^z[v] p^z[v + (1)]
model whole = bare - a sum(v: vertices) (p^x[v] + 1/3 q^x[v]) - 1/2 a sum(v: vertices) p^x[v] q^x[v]`;
    const values = valuesOf(text);
    const bare = modelOf(values, 'bare');
    const { operator } = effectiveHamiltonian(
      modelOf(values, 'whole'),
      bare,
      3,
      signWith(
        new Map([
          ['J', 1],
          ['K', 0.5],
        ]),
      ),
      newBudget(100_000_000),
    );
    // an Ising ring in disguise: the ground space is twofold and nothing splits it before it winds
    expect(operator.families.every((f) => f.string.factors.length === 0)).toBe(true);
    // even number of cells: the ring is not frustrated
    const error = (a: number): number => {
      const couplings = new Map([
        ['J', 1],
        ['K', 0.5],
        ['a', a],
      ]);
      const [exact] = levels(values, modelOf(values, 'whole'), { cells: 4, count: 1 }, couplings);
      const constant = operator.families.reduce((sum, f) => sum + f.coefficient.toFloat(couplings).re, 0);
      return Math.abs((exact ?? 0) - 4 * constant);
    };
    expect(Math.log2(error(0.04) / error(0.02))).toBeGreaterThan(3.6);
  });

  it('refuse what has no such ground space, with the reason', () => {
    const text = (bare: string): string => `lattice chain torus 5
spins p on vertices
spins q on vertices
couplings J = 1, K
model bare = ${bare}
model whole = bare + sum(v: vertices) q^x[v]`;
    const run = (bare: string): unknown => {
      const values = valuesOf(text(bare));
      const sign = (c: Coefficient): 1 | -1 | undefined => (c.isConstant() ? signWith(new Map())(c) : undefined);
      return effectiveHamiltonian(modelOf(values, 'whole'), modelOf(values, 'bare'), 2, sign, newBudget());
    };
    expect(() => run('sum(v: vertices) p^x[v] + sum(v: vertices) p^z[v]')).toThrow(/do not commute/);
    expect(() => run('K sum(v: vertices) p^x[v]')).toThrow(/sign of K/);
    // Z, Z and Z Z all wanted at -1
    expect(() => run('sum(v: vertices) (p^z[v] + q^z[v] + p^z[v] q^z[v])')).toThrow(/frustrated/);
    expect(() => run('p^z[vertices(0)]')).toThrow(Refused);
  });
});
