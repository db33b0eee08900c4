import katex from 'katex';
import { describe, expect, it } from 'vitest';
import { Coefficient } from '../../../shared/algebra/numbers/coefficient.ts';
import { collect } from '../../../shared/algebra/pauli/family.ts';
import type { Operator } from '../../../shared/algebra/pauli/types.ts';
import { coefficientSpoken, coefficientText } from '../../../shared/typeset/coefficients.ts';
import { extendedTex } from '../../../shared/typeset/extended.ts';
import { lawTex, typesetContext } from '../../../shared/typeset/declarations.ts';
import { nameTex } from '../../../shared/typeset/names.ts';
import { operatorSpoken, operatorTex } from '../../../shared/typeset/operators.ts';
import { rolesOf } from '../../../shared/typeset/roles.ts';
import type { LatticeFamily } from '../../../shared/lattice/cells.ts';
import { nearestPairs } from '../../../shared/lattice/pairs.ts';
import { loopLinks } from '../../../shared/lattice/windings.ts';
import * as S from '../maps/support.ts';

const C = Coefficient;
const minus = (name: string) => S.symbol(name).neg();
const over = (a: Coefficient, b: Coefficient) => a.div(b) ?? C.zero;

function setting(name: string, ...laws: ReturnType<typeof S.law>[]) {
  const on = S.lattice(name, ...S.familyNamed(name).vectors.map(() => 3));
  const values = S.valuesOf(on, [S.species(on.family, 's', 'vertices'), S.species(on.family, 'g', 'links'), ...laws]);
  const context = typesetContext(values);
  if (!context) throw new Error('no lattice');
  return { family: on.family, context };
}

const ising = (family: LatticeFamily): Operator =>
  S.plus(
    S.sumOver(family, 'links', minus('J'), (l) => S.on('s', 'z', S.ends(family, l))),
    S.sumOver(family, 'vertices', minus('h'), (v) => S.on('s', 'x', [v])),
  );
const higgs = (family: LatticeFamily): Operator =>
  S.plus(
    S.sumOver(family, 'links', minus('J'), (l) => ({
      phase: 0,
      factors: [S.factor('g', 'z', l), ...S.on('s', 'z', S.ends(family, l)).factors],
    })),
    S.sumOver(family, 'vertices', minus('h'), (v) => S.on('s', 'x', [v])),
    S.sumOver(family, 'plaquettes', minus('K'), (p) => S.on('g', 'z', S.around(family, p, 'links'))),
    S.sumOver(family, 'links', minus('e'), (l) => S.on('g', 'x', [l])),
  );
const gauss = (family: LatticeFamily) =>
  S.law(family, 'G', 'vertices', (v) => ({
    phase: 0,
    factors: [...S.on('g', 'x', S.around(family, v, 'links')).factors, S.factor('s', 'x', v)],
  }));

describe('coefficients and names', () => {
  it.each([
    [C.fromDecimal('0.6').mul(S.symbol('J')), '\\frac{3 J}{5}'],
    [
      over(S.symbol('Jx').pow(2)?.mul(S.symbol('Jy')) ?? C.zero, C.rational(-16).mul(S.symbol('Jz').pow(3) ?? C.one)),
      '-\\frac{J_{x}^{2} J_{y}}{16 J_{z}^{3}}',
    ],
    [S.symbol('J').add(S.symbol('h')), 'J + h'],
    [C.rational(1), '1'],
    [C.i, '\\mathrm{i}'],
  ])('%# reads as TeX', (c, tex) => {
    const told = coefficientText(c);
    // the order of couplings in a product and a sum is the canonical one
    expect([...told].sort().join('')).toBe([...tex].sort().join(''));
    expect(() => katex.renderToString(told, { throwOnError: true })).not.toThrow();
  });
  it('are said with one stroke, the sign apart', () => {
    const c = over(S.symbol('J').pow(2) ?? C.zero, C.rational(-16).mul(S.symbol('Jx').pow(3) ?? C.one));
    expect(coefficientSpoken(c)).toEqual({ negative: true, words: 'J squared over 16 Jx to the power 3' });
    expect(coefficientSpoken(C.rational(3, 5).mul(S.symbol('h')))).toEqual({ negative: false, words: '3 h over 5' });
    expect(coefficientSpoken(C.one)).toEqual({ negative: false, words: '' });
    expect(coefficientSpoken(S.symbol('J').sub(S.symbol('h'))).words).toMatch(/^the quantity /);
  });
  it.each([
    ['J', 'J'],
    ['Jx', 'J_{x}'],
    ['w1', 'w_{1}'],
    ['sigma', '\\sigma'],
    ['Jring', 'J_{\\mathrm{ring}}'],
    ['minimal', '\\mathit{minimal}'],
    ['K_perp', 'K_{\\mathrm{perp}}'],
  ])('the name %s reads %s', (name, tex) => {
    expect(nameTex(name)).toBe(tex);
  });
});

describe('sums as a theorist writes them', () => {
  it('gathers the classes of links on every lattice into one sum', () => {
    for (const name of ['chain', 'square', 'triangular', 'honeycomb', 'kagome', 'cubic']) {
      const { family, context } = setting(name);
      expect(operatorTex(ising(family), context)).toBe(
        '-J\\sum_{\\langle a,b\\rangle}s^{z}_{a} s^{z}_{b} - h\\sum_{v}s^{x}_{v}',
      );
    }
  });

  it('recognises star, rim and hopping', () => {
    const { family, context } = setting('square');
    expect(operatorTex(higgs(family), context)).toBe(
      '-J\\sum_{l=\\langle a,b\\rangle}s^{z}_{a} g^{z}_{l} s^{z}_{b} - h\\sum_{v}s^{x}_{v} - K\\sum_{p}\\prod_{l\\in p}g^{z}_{l} - e\\sum_{l}g^{x}_{l}',
    );
    const star = S.sumOver(family, 'vertices', minus('h'), (v) => S.on('g', 'x', S.around(family, v, 'links')));
    expect(operatorTex(star, context)).toBe('-h\\sum_{v}\\prod_{l\\ni v}g^{x}_{l}');
    expect(operatorTex(star, context, 'page')).toBe('-h\\sum_{v}\\prod_{l\\ni v}\\px{g^{x}_{l}}');
  });

  it('names a declared law, and spells it out without a name', () => {
    const family = S.familyNamed('square');
    const law = S.law(family, 'A', 'vertices', (v) => S.on('g', 'x', S.around(family, v, 'links')));
    const { context } = setting('square', law);
    const star = S.sumOver(family, 'vertices', minus('h'), (v) => S.on('g', 'x', S.around(family, v, 'links')));
    expect(operatorTex(star, context)).toBe('-h\\sum_{v}A_{v}');
    expect(lawTex(law, context)).toBe('A_{v} = \\prod_{l\\ni v}g^{x}_{l} = +1');
  });

  it('tells classes, staggered sums, pinned terms and shifts apart', () => {
    const { family, context } = setting('honeycomb');
    const strong = S.sumOver(family, 'links', minus('Jz'), (l) => S.on('s', 'z', S.ends(family, l)));
    expect(operatorTex({ ...strong, families: strong.families.slice(2) }, context)).toBe(
      '-J_{z}\\sum_{\\langle a,b\\rangle\\in 3}s^{z}_{a} s^{z}_{b}',
    );
    const chain = setting('chain');
    const at = (n: number) => S.cellAt('vertices', 0, n);
    const one = (steps: number[], ...factors: ['x' | 'y' | 'z', number][]): Operator => ({
      families: [
        {
          coefficient: C.one,
          string: { phase: 0, factors: factors.map(([p, n]) => S.factor('s', p, at(n))) },
          steps,
          needs: [],
        },
      ],
      extended: [],
    });
    expect(operatorTex(one([1], ['z', -1], ['x', 0], ['z', 1]), chain.context)).toBe(
      '\\sum_{v}s^{z}_{v-1} s^{x}_{v} s^{z}_{v+1}',
    );
    expect(operatorTex(one([2], ['x', 1]), chain.context)).toBe('\\sum_{v:\\,v\\equiv 1\\,(2)}s^{x}_{v}');
    expect(operatorTex(one([1], ['z', -1], ['x', 0], ['x', 1], ['x', 2], ['x', 3], ['y', 4]), chain.context)).toBe(
      '\\sum_{v}s^{z}_{v} s^{y}_{v+5} \\prod_{k=0}^{3}s^{x}_{v+1+k}',
    );
    expect(operatorTex(one([0], ['z', 0], ['z', 3]), chain.context)).toBe('s^{z}_{0} s^{z}_{3}');
    const square = setting('square');
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
    expect(operatorTex(far, square.context)).toBe('\\sum_{v}s^{z}_{v} s^{z}_{v+\\hat{1}+\\hat{2}}');
  });

  it('writes all second neighbours as one sum, a part of them by shifts', () => {
    for (const name of ['square', 'triangular', 'honeycomb', 'kagome', 'cubic']) {
      const { family, context } = setting(name);
      const pairs = nearestPairs(family, 2) as readonly {
        a: ReturnType<typeof S.cellAt>;
        b: ReturnType<typeof S.cellAt>;
      }[];
      const families = pairs.map(({ a, b }) => ({
        coefficient: minus('J'),
        string: S.on('s', 'z', [a, b]),
        steps: S.every(family),
        needs: [],
      }));
      const whole = collect([{ families, extended: [] }], { open: false });
      expect(operatorTex(whole, context)).toBe(
        '-J\\sum_{\\langle\\!\\langle a,b\\rangle\\!\\rangle}s^{z}_{a} s^{z}_{b}',
      );
      const part = collect([{ families: families.slice(1), extended: [] }], { open: false });
      expect(operatorTex(part, context)).not.toContain('langle');
    }
  });

  it('names cycles around the lattice', () => {
    const { family, context } = setting('square');
    const cells = loopLinks(family, 2);
    if (!Array.isArray(cells)) throw new Error('no loop');
    const loop = {
      phase: 0 as const,
      parts: (cells as { cell: ReturnType<typeof S.cellAt>; steps: number[] }[]).map((c) => ({
        string: S.on('g', 'z', [c.cell]),
        steps: c.steps,
        needs: [],
      })),
    };
    expect(extendedTex(loop, context, 'plain')).toBe('\\prod_{l\\in C_{2}}g^{z}_{l}');
    expect(extendedTex(S.wholeProduct(family, 's', 'x', 'vertices'), context, 'plain')).toBe('\\prod_{v}s^{x}_{v}');
  });

  it('gives standard LaTeX that KaTeX reads, braces in every subscript, and words for the ear', () => {
    for (const name of ['square', 'triangular', 'kagome', 'cubic']) {
      const { family, context } = setting(name);
      const tex = operatorTex(collect([higgs(family)], { open: false }), context);
      expect(() => katex.renderToString(tex, { throwOnError: true })).not.toThrow();
      expect(tex).not.toMatch(/[_^][^{]/);
    }
    const { family, context } = setting('square');
    expect(operatorSpoken(ising(family), context)).toBe(
      'minus J times the sum over links of s z on both ends of the link, minus h times the sum over vertices of s x on the vertex',
    );
  });
});

describe('roles', () => {
  const kinds = (family: LatticeFamily, operator: Operator, laws: ReturnType<typeof S.law>[] = [], gauge = true) =>
    rolesOf({
      family,
      operator,
      species: new Map([['s', 'vertices' as const], ...(gauge ? [['g', 'links' as const] as const] : [])]),
      laws: laws.flatMap((l) => l.families),
    });
  const distinct = (list: readonly string[]) => [...new Set(list)];

  for (const name of ['square', 'triangular', 'honeycomb', 'kagome', 'cubic'])
    it(`are the same on the ${name} lattice`, () => {
      const family = S.familyNamed(name);
      expect(distinct(kinds(family, ising(family), [], false))).toEqual(['Ising exchange', 'transverse field']);
      expect(distinct(kinds(family, higgs(family), [gauss(family)]))).toEqual([
        'matter hopping',
        'matter mass',
        'magnetic',
        'electric',
      ]);
      const dual = S.plus(
        S.sumOver(family, 'links', minus('J'), (l) => S.on('g', 'z', [l])),
        S.sumOver(family, 'vertices', minus('h'), (v) => S.on('g', 'x', S.around(family, v, 'links'))),
      );
      const flat = S.law(family, 'flat', 'plaquettes', (p) => S.on('g', 'z', S.around(family, p, 'links')));
      expect(distinct(kinds(family, dual, [flat]))).toEqual(['electric', 'star']);
      expect(distinct(kinds(family, dual))).toEqual(['electric', 'star']);
      const code = S.plus(
        S.sumOver(family, 'vertices', C.one, (v) => S.on('g', 'x', S.around(family, v, 'links'))),
        S.sumOver(family, 'plaquettes', C.one, (p) => S.on('g', 'z', S.around(family, p, 'links'))),
      );
      expect(distinct(kinds(family, code))).toEqual(['star', 'magnetic']);
      const laws = S.sumOver(family, 'vertices', C.one, (v) => ({
        phase: 0,
        factors: [...S.on('g', 'x', S.around(family, v, 'links')).factors, S.factor('s', 'x', v)],
      }));
      expect(distinct(kinds(family, laws))).toEqual(['Gauss']);
    });
});
