import { describe, expect, it } from 'vitest';
import type { Coefficient } from '../../../shared/algebra/numbers/coefficient.ts';
import { keepsRule } from '../../../shared/audits/keeps-rule.ts';
import { gradeOf } from '../../../shared/audits/grades.ts';
import { family, lattice, minus, model, number, operator, plus, product, rule, spins, values } from './values.ts';

const square = lattice('square', 'torus', 4, 4);
const one = rule('one', '==', 1, [
  {
    sites: [
      ['d?:l0(0,0)', 1],
      ['d?:l0(-1,0)', 1],
      ['d?:l1(0,0)', 1],
      ['d?:l1(0,-1)', 1],
    ],
    anchor: 'v0(0,0)',
    steps: [1, 1],
  },
]);
const d = spins('d', 'links', [0, 1]);
const around = ['l0(0,0)', 'l1(1,0)', 'l0(0,1)', 'l1(0,0)'] as const;

/** |0101><1010| + hc around a plaquette: a sum of eight strings. */
const flips = [
  ...product([plus('d', around[0]), minus('d', around[1]), plus('d', around[2]), minus('d', around[3])], [1, 1]),
  ...product([minus('d', around[0]), plus('d', around[1]), minus('d', around[2]), plus('d', around[3])], [1, 1]),
];

describe('moves and rules', () => {
  it('ring moves keep the dimer rule, on every size that is not too small', () => {
    const op = operator(...flips);
    expect(op.families).toHaveLength(8);
    const finding = keepsRule('ring', one, values(square, d, one, model('ring', op)));
    expect(gradeOf(finding.evidence)).toBe('proved');
    expect(finding.figures).toMatchObject({ terms: 8, commuting: 8, moves: 1 });
  });

  it('the bare product of X around a plaquette does not', () => {
    const op = operator(family(1, around.map((c) => `dx:${c}`).join(' '), [1, 1]));
    const finding = keepsRule('bare', one, values(square, d, one, model('bare', op)));
    expect(gradeOf(finding.evidence)).toBe('refuted');
    const witness = finding.witness as { flip: string[]; before: { bit: number }[]; words: string };
    expect(witness.flip).toHaveLength(4);
    expect(witness.words).toContain('breaks one');
  });

  it('a single flip of a dimer does not, a diagonal term does', () => {
    const field = values(square, d, one, model('field', operator(family(1, 'dx:l0(0,0)', [1, 1]))));
    expect(gradeOf(keepsRule('field', one, field).evidence)).toBe('refuted');
    const count = values(square, d, one, model('count', operator(family(1, 'dz:l0(0,0) dz:l0(0,1)', [1, 1]))));
    expect(gradeOf(keepsRule('count', one, count).evidence)).toBe('proved');
  });

  it('X X + Y Y keeps the number on a bond, X X alone does not', () => {
    const chain = lattice('chain', 'torus', 6);
    const s = spins('s', 'vertices', [0]);
    // the number on three neighbours: hopping at the rim changes it, hopping within does not
    const pair = rule('pair', '==', 1, [
      {
        sites: [
          ['s:v0(0)', 1],
          ['s:v0(1)', 1],
        ],
        anchor: 'v0(0)',
        steps: [2],
      },
    ]);
    const within = operator(family(1, 'sx:v0(0) sx:v0(1)', [2]), family(1, 'sy:v0(0) sy:v0(1)', [2]));
    const alone = operator(family(1, 'sx:v0(0) sx:v0(1)', [2]));
    const across = operator(family(1, 'sx:v0(1) sx:v0(2)', [2]), family(1, 'sy:v0(1) sy:v0(2)', [2]));
    const all = values(chain, s, pair, model('within', within), model('alone', alone), model('across', across));
    expect(gradeOf(keepsRule('within', pair, all).evidence)).toBe('proved');
    // of one excited spin of two, X X makes one again: kept as well
    expect(gradeOf(keepsRule('alone', pair, all).evidence)).toBe('proved');
    expect(gradeOf(keepsRule('across', pair, all).evidence)).toBe('refuted');
    const most = rule('most', '<=', 1, [
      {
        sites: [
          ['s:v0(0)', 1],
          ['s:v0(1)', 1],
        ],
        anchor: 'v0(0)',
        steps: [2],
      },
    ]);
    const more = values(chain, s, most, model('within', within), model('alone', alone));
    expect(gradeOf(keepsRule('within', most, more).evidence)).toBe('proved');
    // |00> -> |11>
    expect(gradeOf(keepsRule('alone', most, more).evidence)).toBe('refuted');
  });

  it('a blockaded flip keeps the blockade, a free one does not', () => {
    const chain = lattice('chain', 'torus', 6);
    const s = spins('s', 'vertices', [0]);
    const blockade = rule('blockade', '<=', 1, [
      {
        sites: [
          ['s:v0(0)', 1],
          ['s:v0(1)', 1],
        ],
        anchor: 'v0(0)',
        steps: [1],
      },
    ]);
    const empty = (where: string): [Coefficient, string][] => [
      [number(1, 2), ''],
      [number(1, 2), `sz:${where}`],
    ];
    const pxp = product([empty('v0(-1)'), [[1, 'sx:v0(0)']], empty('v0(1)')], [1]);
    const all = values(
      chain,
      s,
      blockade,
      model('pxp', operator(...pxp)),
      model('free', operator(family(1, 'sx:v0(0)', [1]))),
    );
    const kept = keepsRule('pxp', blockade, all);
    expect(gradeOf(kept.evidence)).toBe('proved');
    expect(kept.figures).toMatchObject({ terms: 4, commuting: 4, moves: 1 });
    expect(gradeOf(keepsRule('free', blockade, all).evidence)).toBe('refuted');
  });
});

describe('several rules together', () => {
  it('count in one another’s states', () => {
    const chain = lattice('chain', 'torus', 6);
    const s = spins('s', 'vertices', [0]);
    const apart = rule('apart', '<=', 1, [
      {
        sites: [
          ['s:v0(0)', 1],
          ['s:v0(1)', 1],
        ],
        anchor: 'v0(0)',
        steps: [1],
      },
    ]);
    const few = rule('few', '<=', 2, [
      {
        sites: [
          ['s:v0(0)', 1],
          ['s:v0(1)', 1],
          ['s:v0(2)', 1],
        ],
        anchor: 'v0(0)',
        steps: [1],
      },
    ]);
    // one that hops beside a pair makes three in a row; where neighbours exclude each other there is no pair
    const hop = operator(family(1, 'sx:v0(0) sx:v0(1)', [1]), family(1, 'sy:v0(0) sy:v0(1)', [1]));
    const all = values(chain, s, apart, few, model('m', hop));
    expect(gradeOf(keepsRule('m', few, all).evidence)).toBe('refuted');
    expect(gradeOf(keepsRule('m', few, all, [apart, few]).evidence)).toBe('proved');
    expect(gradeOf(keepsRule('m', apart, all, [apart, few]).evidence)).toBe('refuted');
  });
});
