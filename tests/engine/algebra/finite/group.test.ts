import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Echelon, kernel, rank, solve } from '../../../../shared/algebra/f2/bits.ts';
import { StabilizerGroup } from '../../../../shared/algebra/finite/group.ts';
import { fromColumns, columnsOf, sparseCommute, toDense, toSparse } from '../../../../shared/algebra/finite/sparse.ts';
import {
  commute,
  fromText,
  identityOn,
  isHermitian,
  key,
  multiply,
  pauliPhase,
  toText,
} from '../../../../shared/algebra/finite/string.ts';
import type { FiniteString } from '../../../../shared/algebra/finite/types.ts';
import { wrapString } from '../../../../shared/algebra/finite/wrap.ts';
import { newString, translateString } from '../../../../shared/algebra/pauli/string.ts';
import type { Pauli } from '../../../../shared/algebra/pauli/types.ts';
import { isLatticeProblem } from '../../../../shared/lattice/cells.ts';
import { clusterOf } from '../arbitraries.ts';

const settings = { seed: 17, numRuns: 200 };
const sum = (rows: readonly (readonly number[])[]): string => {
  const odd = new Set<number>();
  for (const c of rows.flat()) if (!odd.delete(c)) odd.add(c);
  return [...odd].sort((a, b) => a - b).join();
};

describe('elimination over F2', () => {
  const columns = 70;
  const row = fc.uniqueArray(fc.integer({ min: 0, max: columns - 1 }), { maxLength: 12 });
  const rows = fc.array(
    fc.oneof(
      row,
      row.map((r) => r.map((c) => c % 9)).map((r) => [...new Set(r)]),
    ),
    { maxLength: 40 },
  );
  it('finds relations that sum to zero, as many as rank leaves', () => {
    fc.assert(
      fc.property(rows, (m) => {
        const echelon = new Echelon(columns);
        for (const r of m) echelon.insert(r);
        const relations = echelon.relations();
        expect(echelon.rank + relations.length).toBe(m.length);
        for (const r of relations) expect(sum(r.map((k) => m[k] ?? []))).toBe('');
        expect(rank(relations, m.length)).toBe(relations.length);
      }),
      settings,
    );
  });
  it('solves what is in the span and only that', () => {
    fc.assert(
      fc.property(rows, fc.array(fc.nat(100), { maxLength: 6 }), row, (m, picks, other) => {
        const inside = picks.flatMap((k) => (m.length > 0 ? [m[k % m.length] ?? []] : []));
        const found = solve(m, columns, inside.flat());
        expect(found && sum(found.map((k) => m[k] ?? []))).toBe(sum(inside));
        const answer = solve(m, columns, other);
        if (answer) expect(sum(answer.map((k) => m[k] ?? []))).toBe(sum([other]));
        else expect(rank([...m, other], columns)).toBe(rank(m, columns) + 1);
      }),
      settings,
    );
  });
  it('has a kernel of the right dimension that meets every row evenly', () => {
    fc.assert(
      fc.property(rows, (m) => {
        const basis = kernel(m, columns);
        expect(basis.length).toBe(columns - rank(m, columns));
        for (const v of basis) for (const r of m) expect(r.filter((c) => v.includes(c)).length % 2).toBe(0);
      }),
      settings,
    );
  });
  it('refuses a column that is not there', () => {
    expect(() => rank([[3]], 3)).toThrow(RangeError);
  });
});

const n = 4;
const string: fc.Arbitrary<FiniteString> = fc
  .tuple(fc.array(fc.constantFrom('I', 'I', 'X', 'Y', 'Z'), { minLength: n, maxLength: n }), fc.constantFrom('+', '-'))
  .map(([letters, sign]) => fromText(sign + letters.join('')));
/** Strings that commute: those of a list that commute with all before. */
const commuting = fc
  .array(string, { maxLength: 14 })
  .map((all) => all.reduce<FiniteString[]>((kept, s) => (kept.every((k) => commute(k, s)) ? [...kept, s] : kept), []));

/** All elements of a group of commuting strings, by brute force. */
function elements(generators: readonly FiniteString[]): Map<string, FiniteString> {
  const all = new Map<string, FiniteString>([[key(identityOn(n)), identityOn(n)]]);
  for (let size = 0; size !== all.size;) {
    size = all.size;
    for (const e of [...all.values()]) for (const g of generators) all.set(key(multiply(e, g)), multiply(e, g));
  }
  return all;
}

describe('a group of signed strings', () => {
  it('has relations whose members multiply to their phase, and knows −1', () => {
    fc.assert(
      fc.property(commuting, (generators) => {
        const group = new StabilizerGroup(n, generators);
        expect(group.commutes).toBe(true);
        const all = elements(generators);
        const minusOne = { ...identityOn(n), phase: 2 };
        expect(group.containsMinusOne).toBe(all.has(key(minusOne)));
        expect(2 ** group.rank * (group.containsMinusOne ? 2 : 1)).toBe(all.size);
        expect(group.relations().length).toBe(generators.length - group.rank);
        for (const { members, phase } of group.relations()) {
          const product = members.reduce((p, k) => multiply(p, generators[k] ?? identityOn(n)), identityOn(n));
          expect(key(product)).toBe(key({ ...identityOn(n), phase }));
        }
      }),
      settings,
    );
  });
  it('answers membership with the sign', () => {
    fc.assert(
      fc.property(commuting, string, (generators, s) => {
        const group = new StabilizerGroup(n, generators);
        const found = group.membership(s);
        const all = elements(generators);
        const [plus, minus] = [all.has(key(s)), all.has(key({ ...s, phase: (s.phase + 2) & 3 }))];
        expect(found !== undefined).toBe(plus || minus);
        if (!found) return;
        expect(found.phase === 0 ? plus : minus).toBe(true);
        const product = found.members.reduce((p, k) => multiply(p, generators[k] ?? identityOn(n)), identityOn(n));
        expect(key(product)).toBe(key({ ...s, phase: (s.phase + found.phase) & 3 }));
      }),
      settings,
    );
  });
  it('has logical operators with the algebra of qubits', () => {
    fc.assert(
      fc.property(commuting, (generators) => {
        const group = new StabilizerGroup(n, generators);
        const pairs = group.logicalOperators();
        expect(pairs.length).toBe(group.logicalCount);
        const flat = pairs.flatMap(({ x, z }) => [x, z]);
        for (const [i, a] of flat.entries()) {
          expect(isHermitian(a) && pauliPhase(a) === 0).toBe(true);
          expect(generators.every((g) => commute(a, g))).toBe(true);
          for (const [j, b] of flat.entries()) expect(commute(a, b)).toBe(!(i !== j && i >> 1 === j >> 1));
        }
      }),
      settings,
    );
  });
  it('finds a pair that anticommutes', () => {
    fc.assert(
      fc.property(fc.array(string, { maxLength: 8 }), (generators) => {
        const group = new StabilizerGroup(n, generators);
        const pair = group.anticommutingPair();
        const brute = generators.some((a, i) => generators.some((b, j) => i < j && !commute(a, b)));
        expect(pair !== undefined).toBe(brute);
        if (pair)
          expect(commute(generators[pair[0]] ?? identityOn(n), generators[pair[1]] ?? identityOn(n))).toBe(false);
      }),
      settings,
    );
    const mixed = new StabilizerGroup(1, [fromText('X'), fromText('Z')]);
    expect(mixed.containsMinusOne).toBe(true);
    expect(() => mixed.logicalOperators()).toThrow(RangeError);
  });
  it('keeps sparse and dense strings the same', () => {
    fc.assert(
      fc.property(string, string, (a, b) => {
        expect(toText(toDense(toSparse(a)))).toBe(toText(a));
        expect(sparseCommute(toSparse(a), toSparse(b))).toBe(commute(a, b));
        expect(toText(toDense(fromColumns(n, columnsOf(toSparse(a)))))).toBe(`+${toText(a).slice(1)}`);
      }),
      settings,
    );
  });
});

describe('the toric code', () => {
  // A. Yu. Kitaev, Ann. Phys. 303, 2 (2003): stars and plaquettes of an L × L torus obey two relations, four states are degenerate
  it.each([
    [1, 1],
    [2, 2],
    [2, 3],
    [5, 4],
  ])('on %i x %i leaves two qubits', (...lengths) => {
    const { cluster, table } = clusterOf('square', lengths);
    if (isLatticeProblem(cluster)) return expect.fail(cluster.message);
    const link = (pauli: Pauli, index: number, offset: number[]) => ({
      species: 'g',
      cell: { kind: 'links' as const, index, offset },
      pauli,
    });
    const star = newString([link('x', 0, [0, 0]), link('x', 0, [-1, 0]), link('x', 1, [0, 0]), link('x', 1, [0, -1])]);
    const rim = newString([link('z', 0, [0, 0]), link('z', 1, [1, 0]), link('z', 0, [0, 1]), link('z', 1, [0, 0])]);
    const strings = [star, rim].flatMap((s) =>
      cluster.translations().flatMap((by) => wrapString(table, cluster, translateString(s, by)) ?? []),
    );
    const links = 2 * cluster.unitCells;
    // the vertices carry spins of the table too, which no law touches
    const group = new StabilizerGroup(table.sites.length, strings);
    expect(group.commutes).toBe(true);
    expect(links - group.rank).toBe(2);
    expect(group.relations()).toHaveLength(2);
    expect(group.relations().every((r) => r.phase === 0 && r.members.length === cluster.unitCells)).toBe(true);
  });
});
