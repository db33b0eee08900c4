import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { StabilizerGroup } from '../../../shared/algebra/finite/group.ts';
import { wrapExtended, wrapOrbit, wrapString } from '../../../shared/algebra/finite/wrap.ts';
import { adjointString, multiplyStrings, newString, translateString } from '../../../shared/algebra/pauli/string.ts';
import type { Cell } from '../../../shared/lattice/cells.ts';
import { loopLinks } from '../../../shared/lattice/windings.ts';
import { clusterOn, tableFor } from './dense.ts';
import { Coefficient } from '../../../shared/algebra/numbers/coefficient.ts';
import { equalOperators } from '../../../shared/algebra/pauli/family.ts';
import type { LocalString, Operator } from '../../../shared/algebra/pauli/types.ts';
import { newBudget } from '../../../shared/limits.ts';
import { straight } from '../../../shared/lattice/cluster.ts';
import { localRelations } from '../../../shared/maps/dictionary/local.ts';
import { keptCommutation } from '../../../shared/maps/dictionary/commutation.ts';
import { onSize } from '../../../shared/maps/dictionary/sizes.ts';
import type { DictionaryRule, MapDeclaration } from '../../../shared/language/values.ts';
import * as S from './support.ts';

type Dictionary = Extract<MapDeclaration, { kind: 'dictionary' }>;
const minus = (name: string) => S.symbol(name).neg();

function wegner(name: string, ...size: number[]) {
  const on = S.lattice(name, ...size);
  const { family } = on;
  const flip = S.symmetry('flip', S.wholeProduct(family, 's', 'x', 'vertices'));
  const values = S.valuesOf(on, [
    S.species(family, 's', 'vertices'),
    S.species(family, 'g', 'links'),
    flip,
    ...(family.plaquettes.length > 0
      ? [S.law(family, 'flat', 'plaquettes', (p) => S.on('g', 'z', S.around(family, p, 'links')))]
      : []),
  ]);
  const declaration = S.bonds(family);
  const ising = S.plus(
    S.sumOver(family, 'links', minus('J'), (l) => S.on('s', 'z', S.ends(family, l))),
    S.sumOver(family, 'vertices', minus('h'), (v) => S.on('s', 'x', [v])),
  );
  const gauge = S.plus(
    S.sumOver(family, 'links', minus('J'), (l) => S.on('g', 'z', [l])),
    S.sumOver(family, 'vertices', minus('h'), (v) => S.on('g', 'x', S.around(family, v, 'links'))),
  );
  return { on, family, values, declaration, ising, gauge, map: S.build(declaration, values, 'bonds') };
}

describe('images under a dictionary', () => {
  for (const [name, ...size] of [
    ['chain', 6],
    ['square', 4, 4],
    ['triangular', 3, 3],
    ['honeycomb', 3, 3],
    ['kagome', 3, 3],
    ['cubic', 2, 2, 2],
  ] as const)
    it(`sends the Ising model of the ${name} lattice to its gauge theory`, () => {
      const w = wegner(name, ...size);
      const image = S.value(w.map.image(w.ising, newBudget()));
      expect(equalOperators(image, w.gauge, { open: false })).toBe(true);
    });

  it('writes a far bond as a product of fewest generators', () => {
    const w = wegner('square', 4, 4);
    const far: Operator = {
      families: [
        {
          coefficient: Coefficient.one,
          string: S.on('s', 'z', [S.cellAt('vertices', 0, 0, 0), S.cellAt('vertices', 0, 2, 3)]),
          steps: [1, 1],
          needs: [],
        },
      ],
      extended: [],
    };
    const [image] = S.value(w.map.image(far, newBudget())).families;
    expect(image?.string.factors.length).toBe(5);
    expect(new Set(image?.string.factors.map((f) => f.pauli))).toEqual(new Set(['z']));
  });

  it('keeps the phase of Y: Y Z of neighbours is i X (ZZ), with the image i (X X) Z = X Y', () => {
    const w = wegner('chain', 6);
    const yz: Operator = {
      families: [
        {
          coefficient: Coefficient.one,
          string: {
            phase: 0,
            factors: [S.factor('s', 'y', S.cellAt('vertices', 0, 0)), S.factor('s', 'z', S.cellAt('vertices', 0, 1))],
          },
          steps: [1],
          needs: [],
        },
      ],
      extended: [],
    };
    const [image] = S.value(w.map.image(yz, newBudget())).families;
    expect(image?.coefficient.isOne()).toBe(true);
    expect(image?.string.factors.map((f) => f.pauli).sort()).toEqual(['x', 'y']);
  });

  it('refuses a charged term and names the declared symmetry', () => {
    const w = wegner('square', 4, 4);
    const outcome = w.map.image(
      S.sumOver(w.family, 'vertices', Coefficient.one, (v) => S.on('s', 'z', [v])),
      newBudget(),
    );
    expect(outcome.ok).toBe(false);
    if (outcome.ok) return;
    expect(outcome.refusal.symmetry?.text).toBe('flip = prod(v: vertices) s^x[v]');
  });

  it('finds a symmetry that nobody declared, local or extended', () => {
    const w = wegner('square', 4, 4);
    const reversed: Dictionary = {
      kind: 'dictionary',
      from: ['g'],
      to: ['s'],
      rules: w.declaration.rules.map((r): DictionaryRule => ({ ...r, left: r.right, right: r.left })),
    };
    const map = S.build(
      reversed,
      S.valuesOf(w.on, [S.species(w.family, 's', 'vertices'), S.species(w.family, 'g', 'links')]),
    );
    const outcome = map.image(
      S.sumOver(w.family, 'links', Coefficient.one, (l) => S.on('g', 'x', [l])),
      newBudget(),
    );
    expect(outcome.ok).toBe(false);
    if (outcome.ok) return;
    expect(outcome.refusal.symmetry?.text).toMatch(/g\^z/);
  });

  it('sends a product over the lattice to what its parts give', () => {
    const w = wegner('square', 4, 4);
    const image = S.value(w.map.imageExtended(S.wholeProduct(w.family, 's', 'x', 'vertices'), newBudget()));
    expect(image).toEqual({ phase: 0, parts: [] });
  });
});

describe('products', () => {
  it('go to products: the image of a product of left sides differs from that of right sides by a forced relation, sign and all', () => {
    const w = wegner('square', 3, 3);
    const cluster = clusterOn(w.on, straight(3, 3));
    const table = tableFor(cluster, [S.species(w.family, 'g', 'links')]);
    const flat = w.family.plaquettes.map((_, index) =>
      S.on('g', 'z', S.around(w.family, { kind: 'plaquettes', index, offset: [0, 0] }, 'links')),
    );
    const loops = [1, 2].map((d) => {
      const cells = loopLinks(w.family, d) as readonly { cell: Cell; steps: readonly number[] }[];
      return wrapExtended(table, cluster, {
        phase: 0,
        parts: cells.map((c) => ({ string: S.on('g', 'z', [c.cell]), steps: c.steps, needs: [] })),
      });
    });
    const forced = new StabilizerGroup(table.sites.length, [
      ...flat.flatMap((string) => wrapOrbit(table, cluster, { string, steps: [1, 1], needs: [] })),
      ...loops,
    ]);
    const use = fc.record({
      rule: fc.nat(2),
      by: fc.tuple(fc.integer({ min: 0, max: 2 }), fc.integer({ min: 0, max: 2 })),
    });
    fc.assert(
      fc.property(fc.array(use, { minLength: 1, maxLength: 6 }), (uses) => {
        const side = (which: 'left' | 'right') =>
          uses.reduce<LocalString>(
            (all, u) => {
              const s = w.declaration.rules[u.rule]?.[which];
              return s && 'factors' in s ? multiplyStrings(all, translateString(s, u.by)) : all;
            },
            { phase: 0, factors: [] },
          );
        const [left, right] = [side('left'), side('right')];
        const [image] = S.value(
          w.map.image(
            { families: [{ coefficient: Coefficient.one, string: left, steps: [0, 0], needs: [] }], extended: [] },
            newBudget(),
          ),
        ).families;
        if (!image) throw new Error('no image');
        const sign = ([1, 0, -1, 0] as const).findIndex(
          (re, k) =>
            image.coefficient.toFloat().re === re && image.coefficient.toFloat().im === ([0, 1, 0, -1][k] ?? 0),
        );
        const difference = multiplyStrings(adjointString(right), {
          phase: ((image.string.phase + sign) % 4) as 0,
          factors: image.string.factors,
        });
        const wrapped = wrapString(table, cluster, difference);
        expect(wrapped && forced.membership(wrapped)?.phase).toBe(0);
      }),
      { seed: 11, numRuns: 120 },
    );
  });
});

describe('a dictionary made from two circuits', () => {
  it('sends every string where the circuits do, signs and phases exact', () => {
    const on = S.lattice('chain', 6);
    const { family } = on;
    const values = S.valuesOf(on, [S.species(family, 's', 'vertices'), S.species(family, 't', 'vertices')]);
    const at = (n: number): Cell => S.cellAt('vertices', 0, n);
    const layer = fc.constantFrom<[string, number[], number]>(
      ['h', [0], 1],
      ['s', [0], 1],
      ['h', [0], 2],
      ['cz', [0, 1], 1],
      ['cx', [0, 1], 2],
      ['swap', [0, 1], 2],
      ['y', [1], 2],
    );
    const word = fc.array(fc.constantFrom('I', 'X', 'Y', 'Z'), { minLength: 4, maxLength: 4 });
    const circuit = (layers: [string, number[], number][]) =>
      S.build(
        {
          kind: 'circuit',
          layers: layers.map(([gate, targets, step]) => ({
            gate,
            gates: [{ targets: targets.map((n) => ({ species: 's', cell: at(n) })), steps: [step], needs: [] }],
            place: S.place,
          })),
        },
        values,
      );
    const single = (map: ReturnType<typeof circuit>, string: LocalString): LocalString => {
      const [f] = S.value(
        map.image(
          { families: [{ coefficient: Coefficient.one, string, steps: [0], needs: [] }], extended: [] },
          newBudget(),
        ),
      ).families;
      if (!f) throw new Error('no image');
      return { phase: f.coefficient.isOne() ? 0 : 2, factors: f.string.factors };
    };
    const renamed = (s: LocalString): LocalString => ({
      ...s,
      factors: s.factors.map((f) => ({ ...f, species: 't' })),
    });
    fc.assert(
      fc.property(
        fc.array(layer, { maxLength: 3 }),
        fc.array(layer, { maxLength: 3 }),
        word,
        (first, second, letters) => {
          const [left, right] = [circuit(first), circuit(second)];
          // x and z of both sublattices: generators of everything
          const rules = [0, 1].flatMap((n) =>
            (['x', 'z'] as const).map((pauli, k): DictionaryRule => ({
              left: single(left, S.on('s', pauli, [at(n)])),
              right: renamed(single(right, S.on('s', pauli, [at(n)]))),
              steps: [2],
              needs: [],
              anchor: at(n),
              place: S.place,
              rule: k,
              text: { left: '', right: '' },
            })),
          );
          const map = S.build({ kind: 'dictionary', from: ['s'], to: ['t'], rules }, values);
          const string = newString(
            letters.flatMap((l, n) => (l === 'I' ? [] : [S.factor('s', l.toLowerCase() as 'x', at(n))])),
          );
          if (string.factors.length === 0) return;
          const image = S.value(
            map.image(
              {
                families: [{ coefficient: Coefficient.one, string: single(left, string), steps: [2], needs: [] }],
                extended: [],
              },
              newBudget(),
            ),
          );
          const expected = single(right, string);
          const wanted: Operator = {
            families: [{ coefficient: Coefficient.one, string: renamed(expected), steps: [2], needs: [] }],
            extended: [],
          };
          expect(equalOperators(image, wanted, { open: false })).toBe(true);
        },
      ),
      { seed: 5, numRuns: 80 },
    );
  });
});

describe('relations of a dictionary', () => {
  it('keeps commutation at all sizes and finds the sectors of the square torus', () => {
    const w = wegner('square', 4, 4);
    expect(keptCommutation(w.declaration.rules, newBudget()).kept).toBe(true);
    const context = { values: w.values, lattice: w.on, family: w.family, open: false, name: 'bonds' };
    const found = onSize(w.declaration, context, straight(3, 3), newBudget());
    if ('problem' in found) throw new Error(found.problem);
    expect(found.leftSectors.map((s) => s.text)).toEqual(['flip = +1']);
    expect(found.rightSectors.map((s) => s.text)).toEqual([
      'flat = +1',
      'prod(l: loop(1)) g^z[l] = +1',
      'prod(l: loop(2)) g^z[l] = +1',
    ]);
    expect([found.leftDimension, found.rightDimension]).toEqual([8, 8]);
    expect(found.signBreak).toBeUndefined();
  });

  it("refutes XX, YY, ZZ of two spins sent to Z, Z' and ZZ': every commutator kept, one sign broken", () => {
    const on = S.lattice('chain', 4);
    const { family } = on;
    const pair = (pauli: 'x' | 'y' | 'z') => (v: Parameters<typeof S.ends>[1]) => S.on('p', pauli, [v]);
    const both = (pauli: 'x' | 'y' | 'z') => (v: Parameters<typeof S.ends>[1]) => ({
      phase: 0 as const,
      factors: [...pair(pauli)(v).factors, ...S.on('q', pauli, [v]).factors],
    });
    const declaration: Dictionary = {
      kind: 'dictionary',
      from: ['p', 'q'],
      to: ['a', 'b'],
      rules: [
        ...S.rules(family, 'vertices', 0, both('x'), (v) => S.on('a', 'z', [v])),
        ...S.rules(family, 'vertices', 1, both('y'), (v) => S.on('b', 'z', [v])),
        ...S.rules(family, 'vertices', 2, both('z'), (v) => ({
          phase: 0,
          factors: [...S.on('a', 'z', [v]).factors, ...S.on('b', 'z', [v]).factors],
        })),
      ],
    };
    const values = S.valuesOf(
      on,
      ['p', 'q', 'a', 'b'].map((n) => S.species(family, n, 'vertices')),
    );
    expect(keptCommutation(declaration.rules, newBudget()).kept).toBe(true);
    const found = onSize(
      declaration,
      { values, lattice: on, family, open: false, name: 'wrong' },
      straight(4),
      newBudget(),
    );
    if ('problem' in found) throw new Error(found.problem);
    expect(found.signBreak?.members.length).toBe(3);
    expect([found.signBreak?.leftPhase, found.signBreak?.rightPhase]).toEqual([2, 0]);
  });

  it('finds the pair of rules whose commutation breaks', () => {
    const w = wegner('square', 4, 4);
    const wrong = w.declaration.rules.map((r) =>
      r.rule === 0 ? r : { ...r, right: S.on('g', 'x', [S.cellAt('links', 0, 0, 0)]) },
    );
    const verdict = keptCommutation(wrong, newBudget());
    expect(verdict.kept).toBe(false);
    const [first] = verdict.broken;
    expect(first && first.leftOverlap.length % 2).not.toBe(first && first.rightOverlap.length % 2);
  });

  for (const [name, laws, ...size] of [
    ['square', 1, 3, 3],
    ['triangular', 2, 3, 3],
    ['honeycomb', 1, 3, 3],
    ['cubic', 3, 2, 2, 2],
  ] as const)
    it(`finds the local laws of the ${name} lattice's dual for every size: no flux through any plaquette`, () => {
      const w = wegner(name, ...size);
      const found = localRelations(
        w.declaration,
        { values: w.values, lattice: w.on, family: w.family, open: false, name: 'bonds' },
        newBudget(),
      );
      expect(found?.signBreak).toBeUndefined();
      expect(found?.leftLaws).toEqual([]);
      expect(found?.rightLaws.length).toBe(laws);
      expect(new Set(found?.rightLaws.map((l) => l.text))).toEqual(new Set(['flat = +1']));
      expect(found?.evidence.length).toBe((found?.left ?? 0) + (found?.right ?? 0));
    });

  it('finds the sign that breaks on the infinite lattice', () => {
    const on = S.lattice('chain', 4);
    const { family } = on;
    const two = (a: string, b: string, pauli: 'x' | 'y' | 'z') => (v: Cell) =>
      newString([S.factor(a, pauli, v), S.factor(b, pauli, v)]);
    const declaration: Dictionary = {
      kind: 'dictionary',
      from: ['p', 'q'],
      to: ['a', 'b'],
      rules: [
        ...S.rules(family, 'vertices', 0, two('p', 'q', 'x'), (v) => S.on('a', 'z', [v])),
        ...S.rules(family, 'vertices', 1, two('p', 'q', 'y'), (v) => S.on('b', 'z', [v])),
        ...S.rules(family, 'vertices', 2, two('p', 'q', 'z'), two('a', 'b', 'z')),
      ],
    };
    const values = S.valuesOf(
      on,
      ['p', 'q', 'a', 'b'].map((n) => S.species(family, n, 'vertices')),
    );
    const found = localRelations(declaration, { values, lattice: on, family, open: false, name: 'wrong' }, newBudget());
    expect(found?.signBreak).toMatchObject({ leftPhase: 2, rightPhase: 0 });
    expect(found?.signBreak?.members.map((m) => m.rule).sort()).toEqual([0, 1, 2]);
  });
});
