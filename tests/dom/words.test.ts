import { describe, expect, it } from 'vitest';
import { blocksOf } from '../../src/components/prose.tsx';
import { runsOf } from '../../src/components/formula.tsx';
import { renderToString } from '../../src/components/katex.ts';
import { numberText, witnessSentence } from '../../src/features/claims/evidence.ts';
import { printed } from '../../src/components/typography.ts';
import { matching } from '../../src/features/commands/commands.ts';
import { titleOf } from '../../src/features/spread/rows.ts';
import { claim } from './fixture.ts';

describe('sentences', () => {
  it.each([
    ['a $x$ b', ['a ', '=x', ' b']],
    ['costs \\$5', ['costs $5']],
    ['a lone $ sign', ['a lone $ sign']],
    ['$a$$b$', ['=a', '=b']],
  ])('%s', (text, expected) => {
    expect(runsOf(text).map((run) => (run.math ? `=${run.text}` : run.text))).toEqual(expected);
  });

  it.each([
    ['within 2.5e-14 on 3 x 3', 'within 2.5 × 10⁻¹⁴ on 3 × 3'],
    ['s^z[vertices(0, 0)] fails', '$\\pz{s^{z}}$ at vertex (0, 0) fails'],
    ['g^x[links.2(-1, 0)]', '$\\px{g^{x}}$ at link 2 (−1, 0)'],
    ['$2 x 3$ stays', '$2 x 3$ stays'],
    ['flip = -1', 'flip = −1'],
  ])('%s is printed as %s', (text, expected) => {
    expect(printed(text)).toBe(expected);
  });

  it.each([
    [0, '0'],
    [-2.5, '−2.5'],
    [2.5e-14, '2.5 × 10⁻¹⁴'],
    [0.1 + 0.2, '0.3'],
    [1e9, '1000000000'],
  ])('%d', (value, expected) => expect(numberText(value)).toBe(expected));

  it('a witness is one sentence, and none when it says nothing new', () => {
    const refuted = claim(1, 'commute', 'm', 'm does not commute', 'refuted');
    expect(witnessSentence({ ...refuted, witness: { words: 'they differ on one spin' } })).toBe(
      'they differ on one spin.',
    );
    expect(witnessSentence({ ...refuted, witness: { words: refuted.statement } })).toBeNull();
    expect(witnessSentence(refuted)).toBeNull();
  });
});

describe('prose', () => {
  it('is cut into blocks', () => {
    const text = '# Title\nA line\ngoes on.\n\n- one\n- two\n\n1. first\n\n> said\n\n$$x$$';
    expect(blocksOf(text)).toEqual([
      { what: 'heading', depth: 1, text: 'Title' },
      { what: 'paragraph', text: 'A line goes on.' },
      { what: 'list', ordered: false, items: ['one', 'two'] },
      { what: 'list', ordered: true, items: ['first'] },
      { what: 'quotation', text: 'said' },
      { what: 'display', text: 'x' },
    ]);
  });
});

describe('formulas', () => {
  it('ink the operators, and give the page no other class or address', () => {
    expect(renderToString('\\px{s^x}')).toContain('pauli-x');
    expect(renderToString('\\htmlClass{evil}{x}')).not.toContain('"enclosing evil');
    expect(renderToString('\\href{https://x.example}{x}')).not.toContain('href="https');
  });
  it('do not reach from one into the next', () => {
    renderToString('\\gdef\\px#1{gone}\\px{a}');
    expect(renderToString('\\px{b}')).toContain('pauli-x');
  });
});

describe('the keyboard’s line', () => {
  const commands = ['publish an edition', 'go to (1) Prose', 'add prose at the end'].map((words) => ({
    words,
    run: () => undefined,
  }));
  it('finds by the beginnings of words, what begins so first', () => {
    expect(matching(commands, 'p').map((one) => one.words)).toEqual([
      'publish an edition',
      'go to (1) Prose',
      'add prose at the end',
    ]);
    expect(matching(commands, 'ed pub').map((one) => one.words)).toEqual(['publish an edition']);
    expect(matching(commands, '')).toHaveLength(3);
  });
});

describe('titles in the contents', () => {
  it.each([
    ['prose', '## The *magnet*\nText', 'The magnet'],
    ['statements', '# A bare field\nmodel m = 1', 'A bare field'],
    ['statements', 'model ising = s', 'Model ising'],
    ['statements', 'lattice square torus 4 x 4\nspins s on vertices', 'The square lattice'],
    ['statements', 'audit map bonds', 'Audit map bonds'],
    ['statements', '', 'Empty entry'],
  ])('%s %j', (kind, text, expected) => expect(titleOf({ kind, text })).toBe(expected));
});
