import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Coefficient } from '../../../shared/algebra/numbers/coefficient.ts';
import { wrapExtended, wrapOrbit } from '../../../shared/algebra/finite/wrap.ts';
import { gateNamed } from '../../../shared/algebra/pauli/clifford.ts';
import { commuteOrbits } from '../../../shared/algebra/pauli/commutation.ts';
import { equalOperators, multiplyOperators } from '../../../shared/algebra/pauli/family.ts';
import { multiplyStrings, newString } from '../../../shared/algebra/pauli/string.ts';
import type { LocalString, Operator, Pauli } from '../../../shared/algebra/pauli/types.ts';
import type { CircuitLayer, MapDeclaration, MapValue, StateRule } from '../../../shared/language/values.ts';
import { straight } from '../../../shared/lattice/cluster.ts';
import { newBudget } from '../../../shared/limits.ts';
import { pulledBack } from '../../../shared/maps/states/state-map.ts';
import { isometryOf } from '../../../shared/maps/states/isometry.ts';
import {
  clusterOn,
  dagger,
  dense,
  distance,
  moments,
  stringMatrix,
  tableFor,
  times,
  zeros,
  type Dense,
} from './dense.ts';
import * as S from './support.ts';

const C = Coefficient;
const couplings = new Map([
  ['J', 1],
  ['h', 0.7],
  ['K', 0.45],
  ['e', 0.3],
  ['w', 1],
  ['d', 0.4],
]);
const settings = { seed: 20, numRuns: 40 };

const vertex = (n: number) => S.cellAt('vertices', 0, n);
const one = (steps: number[], ...factors: [string, Pauli, number][]): Operator => ({
  families: [
    { coefficient: C.one, string: newString(factors.map(([s, p, n]) => S.factor(s, p, vertex(n)))), steps, needs: [] },
  ],
  extended: [],
});
/** A random local string on three neighbouring vertices of a chain. */
const letters = fc.array(fc.constantFrom('I', 'X', 'Y', 'Z'), { minLength: 3, maxLength: 3 });
const fromLetters = (word: readonly string[], name = 's'): LocalString =>
  newString(word.flatMap((l, n) => (l === 'I' ? [] : [S.factor(name, l.toLowerCase() as Pauli, vertex(n))])));

describe('minimal coupling', () => {
  const setting = (name: string, ...size: number[]) => {
    const on = S.lattice(name, ...size);
    const { family } = on;
    const flip = S.symmetry('flip', S.wholeProduct(family, 's', 'x', 'vertices'));
    const species = [S.species(family, 's', 'vertices'), S.species(family, 'g', 'links')];
    const values = S.valuesOf(on, [...species, flip]);
    const gauge = species[1];
    if (!gauge) throw new Error('no field');
    const declaration: MapDeclaration = { kind: 'gauge', symmetry: flip, gauge };
    return { on, family, species, values, declaration, map: S.build(declaration, values, 'minimal') };
  };

  for (const [name, ...size] of [
    ['chain', 4],
    ['square', 3, 3],
    ['honeycomb', 2, 2],
    ['cubic', 2, 2, 2],
  ] as const)
    it(`puts the field on each link of the ${name} lattice, and every image obeys the Gauss law`, () => {
      const { family, map, on, species } = setting(name, ...size);
      const ising = S.plus(
        S.sumOver(family, 'links', S.symbol('J').neg(), (l) => S.on('s', 'z', S.ends(family, l))),
        S.sumOver(family, 'vertices', S.symbol('h').neg(), (v) => S.on('s', 'x', [v])),
      );
      const expected = S.plus(
        S.sumOver(family, 'links', S.symbol('J').neg(), (l) =>
          newString([...S.ends(family, l).map((c) => S.factor('s', 'z', c)), S.factor('g', 'z', l)]),
        ),
        S.sumOver(family, 'vertices', S.symbol('h').neg(), (v) => S.on('s', 'x', [v])),
      );
      const image = S.value(map.image(ising, newBudget()));
      expect(equalOperators(image, expected, { open: false })).toBe(true);
      const law = map.laws.get('gauss');
      expect(law?.families.length).toBe(family.vertices.length);
      const cluster = clusterOn(on, on.size);
      const table = tableFor(cluster, species);
      const strings = law?.families.flatMap((f) => wrapOrbit(table, cluster, f)) ?? [];
      expect(strings.length).toBe(cluster.count('vertices'));
      for (const f of image.families)
        for (const l of law?.families ?? []) expect(commuteOrbits(f, l).commutes).toBe(true);
    });

  it('takes neutral strings and refuses charged ones, and on a chain, where no flux is, keeps products with their phases', () => {
    const { map } = setting('chain', 6);
    const pinned = (string: LocalString): Operator => ({
      families: [{ coefficient: C.one, string, steps: [0], needs: [] }],
      extended: [],
    });
    const odd = (s: LocalString) => s.factors.filter((f) => f.pauli !== 'x').length % 2 === 1;
    let products = 0;
    fc.assert(
      fc.property(letters, letters, (a, b) => {
        const [p, q] = [fromLetters(a), fromLetters(b)] as const;
        const [first, second, both] = [p, q, multiplyStrings(p, q)].map((s) => map.image(pinned(s), newBudget()));
        expect(first?.ok).toBe(!odd(p));
        expect(second?.ok).toBe(!odd(q));
        if (!first?.ok || !second?.ok || !both) return;
        products++;
        const product = multiplyOperators(first.value, second.value, { open: false });
        expect(product && equalOperators(product, S.value(both), { open: false })).toBe(true);
      }),
      { seed: 3, numRuns: 200 },
    );
    expect(products).toBeGreaterThan(20);
  });

  it('refuses a charged term with the symmetry as its witness', () => {
    const { map, family } = setting('square', 3, 3);
    const outcome = map.image(
      S.sumOver(family, 'vertices', C.one, (v) => S.on('s', 'z', [v])),
      newBudget(),
    );
    expect(outcome.ok ? '' : outcome.refusal.symmetry?.text).toBe('flip');
  });

  it('joins charges that are no neighbours along a shortest path, and says so', () => {
    const { map } = setting('square', 3, 3);
    const far: Operator = {
      families: [
        {
          coefficient: C.one,
          string: S.on('s', 'z', [S.cellAt('vertices', 0, 0, 0), S.cellAt('vertices', 0, 1, 1)]),
          steps: [1, 1],
          needs: [],
        },
      ],
      extended: [],
    };
    const [image] = S.value(map.image(far, newBudget())).families;
    expect(image?.string.factors.filter((f) => f.species === 'g').length).toBe(2);
    expect(map.cautions(far, newBudget())).toHaveLength(1);
  });

  it('gauges a symmetry of one sublattice: only its spins are charged', () => {
    const on = S.lattice('chain', 4);
    const { family } = on;
    const even = S.symmetry('even', {
      phase: 0,
      parts: [{ string: S.on('s', 'x', [vertex(0)]), steps: [2], needs: [] }],
    });
    const species = [S.species(family, 's', 'vertices'), S.species(family, 'g', 'links')] as const;
    const map = S.build({ kind: 'gauge', symmetry: even, gauge: species[1] }, S.valuesOf(on, [...species, even]));
    const bond = S.value(map.image(one([2], ['s', 'z', 0], ['s', 'z', 2]), newBudget())).families[0];
    expect(bond?.string.factors.filter((f) => f.species === 'g').length).toBe(2);
    const free = S.value(map.image(one([2], ['s', 'z', 1]), newBudget())).families[0];
    expect(free?.string.factors.length).toBe(1);
    expect(map.image(one([1], ['s', 'z', 0]), newBudget()).ok).toBe(false);
    expect(
      map.laws
        .get('gauss')
        ?.families.map((f) => f.string.factors.length)
        .sort(),
    ).toEqual([2, 3]);
  });

  it('has the spectrum of the unitary gauge in its Gauss sector (chain of 3, by traces)', () => {
    const { family, on, species, values, map, declaration } = setting('chain', 3);
    const gauss = map.laws.get('gauss');
    const [matter] = species;
    if (!gauss || !matter) throw new Error('no law');
    const model = S.plus(
      S.sumOver(family, 'links', S.symbol('J').neg(), (l) =>
        newString([...S.ends(family, l).map((c) => S.factor('s', 'z', c)), S.factor('g', 'z', l)]),
      ),
      S.sumOver(family, 'vertices', S.symbol('h').neg(), (v) => S.on('s', 'x', [v])),
      S.sumOver(family, 'links', S.symbol('e').neg(), (l) => S.on('g', 'x', [l])),
    );
    const solve = S.build({ kind: 'solve', law: gauss, species: matter }, values);
    const slim = S.value(solve.image(model, newBudget()));
    const cluster = clusterOn(on, straight(3));
    const all = tableFor(cluster, species);
    const field = tableFor(cluster, species.slice(1));
    let projector = stringMatrix({ ...wrapExtended(all, cluster, { phase: 0, parts: [] }), phase: 0 });
    for (const f of gauss.families)
      for (const s of wrapOrbit(all, cluster, f)) {
        const half = zeros(projector.n);
        const g = stringMatrix(s);
        for (let k = 0; k < half.re.length; k++) {
          half.re[k] = ((g.re[k] ?? 0) + (k % (half.n + 1) === 0 ? 1 : 0)) / 2;
          half.im[k] = (g.im[k] ?? 0) / 2;
        }
        projector = times(projector, half);
      }
    const inSector = times(projector, dense(model, cluster, all, couplings));
    const [left, right] = [moments(inSector, 5), moments(dense(slim, cluster, field, couplings), 5)];
    left.forEach((m, k) => {
      expect(m).toBeCloseTo(right[k] ?? NaN, 8);
    });
    // and back: restoring the matter gives an operator that agrees modulo the law
    const back = S.build(
      {
        kind: 'inverse',
        of: {
          what: 'map',
          name: 'u',
          place: S.place,
          text: '',
          declaration: { kind: 'solve', law: gauss, species: matter },
          map: solve,
        } satisfies MapValue,
      },
      values,
    );
    const again = S.value(solve.image(S.value(back.image(slim, newBudget())), newBudget()));
    expect(equalOperators(again, slim, { open: false })).toBe(true);
    const ungauged = S.build(
      {
        kind: 'inverse',
        of: { what: 'map', name: 'm', place: S.place, text: '', declaration, map } satisfies MapValue,
      },
      values,
    );
    expect(ungauged.image(model, newBudget()).ok).toBe(false);
  });

  it('will not solve a law that holds no spin of its own', () => {
    const { family, values, species } = setting('chain', 4);
    const pair = S.law(family, 'pair', 'links', (l) => S.on('s', 'x', S.ends(family, l)));
    const [matter] = species;
    if (!matter) throw new Error('no matter');
    expect(() => S.build({ kind: 'solve', law: pair, species: matter }, values)).toThrow(/its own copy/);
  });
});

describe('circuits', () => {
  const on = S.lattice('chain', 4);
  const { family } = on;
  const species = [S.species(family, 's', 'vertices')];
  const values = S.valuesOf(on, species);
  const layer = (gate: string, targets: number[], steps: number[] = [1]): CircuitLayer => ({
    gate,
    gates: [{ targets: targets.map((n) => ({ species: 's', cell: vertex(n) })), steps, needs: [] }],
    place: S.place,
  });
  const cluster = clusterOn(on, straight(4));
  const table = tableFor(cluster, species);

  /** The unitary of one layer on the ring of four, by the gates' own matrices. */
  const unitary = ({ gate, gates }: CircuitLayer): Dense => {
    const g = gateNamed(gate);
    if (!g) throw new Error(gate);
    let all = stringMatrix({ ...wrapExtended(table, cluster, { phase: 0, parts: [] }), phase: 0 });
    for (const { targets, steps } of gates)
      for (const by of cluster.orbit(steps)) {
        const spins = targets.map(
          (t) =>
            table.number({ ...t, cell: { ...t.cell, offset: t.cell.offset.map((c, d) => c + (by[d] ?? 0)) } }) ?? 0,
        );
        const u = zeros(16);
        for (let col = 0; col < 16; col++) {
          const from = spins.reduce((n, s) => 2 * n + ((col >> s) & 1), 0);
          g.matrix.forEach((row, to) => {
            const [re = 0, im = 0] = row[from] ?? [];
            let state = col;
            spins.forEach((s, k) => {
              const b = (to >> (spins.length - 1 - k)) & 1;
              state = (state & ~(1 << s)) | (b << s);
            });
            const scale = g.half ? Math.SQRT1_2 : 1;
            u.re[state * 16 + col] = (u.re[state * 16 + col] ?? 0) + re * scale;
            u.im[state * 16 + col] = (u.im[state * 16 + col] ?? 0) + im * scale;
          });
        }
        all = times(u, all);
      }
    return all;
  };

  const layers = fc.array(
    fc.oneof(
      fc
        .tuple(fc.constantFrom('h', 's', 'sdg', 'x', 'y', 'z'), fc.constantFrom(1, 2, 0))
        .map(([g, step]) => layer(g, [0], [step])),
      fc.constantFrom(
        layer('cz', [0, 1]),
        layer('cx', [0, 1], [2]),
        layer('cy', [1, 0], [2]),
        layer('swap', [1, 2], [2]),
        layer('cz', [0, 1], [0]),
      ),
    ),
    { minLength: 1, maxLength: 4 },
  );

  it('agree with U O U† by dense matrices, moving, staggered and standing gates alike; the inverse undoes them', () => {
    fc.assert(
      fc.property(layers, letters, fc.constantFrom([1], [2], [0]), (list, word, steps) => {
        const string = fromLetters(word);
        if (string.factors.length === 0) return;
        const operator: Operator = { families: [{ coefficient: C.one, string, steps, needs: [] }], extended: [] };
        const declaration: MapDeclaration = { kind: 'circuit', layers: list };
        const map = S.build(declaration, values);
        const image = S.value(map.image(operator, newBudget()));
        const u = list.reduce(
          (all, l) => times(unitary(l), all),
          stringMatrix({ ...wrapExtended(table, cluster, { phase: 0, parts: [] }), phase: 0 }),
        );
        const expected = times(times(u, dense(operator, cluster, table, couplings)), dagger(u));
        expect(distance(dense(image, cluster, table, couplings), expected)).toBeLessThan(1e-9);
        const inverse = S.build(
          { kind: 'inverse', of: { what: 'map', name: 'c', place: S.place, text: '', declaration, map } },
          values,
        );
        expect(equalOperators(S.value(inverse.image(image, newBudget())), operator, { open: false })).toBe(true);
      }),
      settings,
    );
  });

  it('undo the cluster chain', () => {
    const map = S.build({ kind: 'circuit', layers: [layer('cz', [0, 1])] }, values);
    const image = S.value(map.image(one([1], ['s', 'z', -1], ['s', 'x', 0], ['s', 'z', 1]), newBudget()));
    expect(equalOperators(image, one([1], ['s', 'x', 0]), { open: false })).toBe(true);
  });

  it('refuse a line whose gates do not commute', () => {
    expect(() => S.build({ kind: 'circuit', layers: [layer('cx', [0, 1])] }, values)).toThrow(/do not commute/);
    expect(() => S.build({ kind: 'circuit', layers: [layer('swap', [0, 1])] }, values)).toThrow(/do not commute/);
  });
});

describe('state maps', () => {
  const on = S.lattice('chain', 2);
  const { family } = on;
  const names = ['p', 'q', 'a', 'b'];
  const species = names.map((n) => S.species(family, n, 'vertices'));
  const values = S.valuesOf(on, species);
  const half = C.one.div(C.sqrt(C.rational(2)) ?? C.one) ?? C.one;
  const rule = (bits: string, ...amplitudes: [string, Coefficient][]): StateRule => ({
    bits,
    amplitudes: new Map(amplitudes),
    place: S.place,
  });
  const site = (name: string) => ({ species: name, cell: vertex(0) });
  const declaration = (rules: StateRule[]): Extract<MapDeclaration, { kind: 'states' }> => ({
    kind: 'states',
    from: ['p', 'q'],
    to: ['a', 'b'],
    blocks: [{ from: [site('p'), site('q')], to: [site('a'), site('b')], steps: [1], anchor: vertex(0) }],
    rules,
  });
  const pack = declaration([
    rule('00', ['00', C.one]),
    rule('10', ['01', half], ['10', half]),
    rule('01', ['01', half], ['10', half.neg()]),
  ]);
  const bell = declaration([
    rule('00', ['00', half], ['11', half]),
    rule('01', ['01', half], ['10', half]),
    rule('10', ['00', half], ['11', half.neg()]),
    rule('11', ['01', half], ['10', half.neg()]),
  ]);
  const codeOnly = declaration([rule('00', ['00', C.one]), rule('11', ['11', C.one])]);

  /** V on the ring of two cells as a 16 × 16 matrix from p, q to a, b. */
  const wholeIsometry = (d: typeof pack): Dense => {
    const { matrix } = isometryOf(d);
    const cluster = clusterOn(on, straight(2));
    const [source, target] = [tableFor(cluster, species.slice(0, 2)), tableFor(cluster, species.slice(2))];
    const out = zeros(16);
    const index = (table: typeof source, list: string[], n: number, state: number) =>
      list.reduce(
        (bits, name) => 2 * bits + ((state >> (table.number({ species: name, cell: vertex(n) }) ?? 0)) & 1),
        0,
      );
    for (let r = 0; r < 16; r++)
      for (let c = 0; c < 16; c++) {
        let amplitude = 1;
        for (const n of [0, 1])
          amplitude *= matrix[index(target, ['a', 'b'], n, r)]?.[index(source, ['p', 'q'], n, c)]?.toFloat().re ?? 0;
        out.re[r * 16 + c] = amplitude;
      }
    return out;
  };

  const words = fc
    .tuple(letters, letters)
    .map(([p, q]) =>
      newString([...fromLetters(p.slice(0, 2), 'p').factors, ...fromLetters(q.slice(0, 2), 'q').factors]),
    );

  for (const [name, d] of [
    ['pack', pack],
    ['bell', bell],
    ['code', codeOnly],
  ] as const)
    it(`agree with V O V† on the image, by dense matrices (${name})`, () => {
      const map = S.build(d, values, name);
      const cluster = clusterOn(on, straight(2));
      const [source, target] = [tableFor(cluster, species.slice(0, 2)), tableFor(cluster, species.slice(2))];
      const v = wholeIsometry(d);
      const projector = times(v, dagger(v));
      fc.assert(
        fc.property(words, fc.constantFrom([1], [0]), (string, steps) => {
          const operator: Operator = {
            families: [{ coefficient: C.rational(1, 2), string, steps, needs: [] }],
            extended: [],
          };
          const image = S.value(map.image(operator, newBudget()));
          const got = times(times(projector, dense(image, cluster, target, couplings)), projector);
          const expected = times(times(v, dense(operator, cluster, source, couplings)), dagger(v));
          expect(distance(got, expected)).toBeLessThan(1e-9);
          // the levels on the image are those of the operator that is pulled back, on the listed states
          const context = { values, lattice: on, family, open: false, name };
          const back = S.value(pulledBack(d, context).image(image, newBudget()));
          const listed = times(dagger(v), v);
          const there = times(times(listed, dense(back, cluster, source, couplings)), listed);
          const whole = times(times(listed, dense(operator, cluster, source, couplings)), listed);
          expect(distance(there, whole)).toBeLessThan(1e-9);
        }),
        settings,
      );
    });

  it('write a Bell basis change in single strings, and invert it', () => {
    const map = S.build(bell, values);
    const image = S.value(map.image(one([1], ['p', 'x', 0]), newBudget()));
    expect(image.families.length).toBe(1);
    const inverse = S.build(
      { kind: 'inverse', of: { what: 'map', name: 'bell', place: S.place, text: '', declaration: bell, map } },
      values,
    );
    expect(equalOperators(S.value(inverse.image(image, newBudget())), one([1], ['p', 'x', 0]), { open: false })).toBe(
      true,
    );
    expect(() =>
      S.build(
        { kind: 'inverse', of: { what: 'map', name: 'pack', place: S.place, text: '', declaration: pack, map } },
        values,
      ),
    ).toThrow(/no inverse/);
  });

  it('find stabilizers, forbidden states, broken orthonormality and what leaves', () => {
    expect(isometryOf(codeOnly).stabilizers).toEqual([{ letters: 'ZZ', sign: 1 }]);
    expect(isometryOf(pack).forbidden).toEqual(['11']);
    expect(isometryOf(pack).stabilizers).toEqual([]);
    const broken = isometryOf(declaration([rule('00', ['00', C.one]), rule('01', ['00', half], ['11', half])]));
    expect(broken.overlaps.map((o) => [o.first, o.second])).toEqual([['00', '01']]);
    const map = S.build(pack, values, 'pack');
    expect(map.cautions(one([1], ['p', 'x', 0]), newBudget())).toHaveLength(1);
    expect(map.cautions(one([1], ['p', 'z', 0]), newBudget())).toHaveLength(0);
    // p^x (1 + q^z) / 2 raises p only where q is down: it stays
    const kept = S.plus(one([1], ['p', 'x', 0]), one([1], ['p', 'x', 0], ['q', 'z', 0]));
    expect(map.cautions(kept, newBudget())).toHaveLength(0);
  });
});
