import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { newDerivation } from '../../../shared/derivation/derive.ts';
import { compareEntries, compareReports, negative } from '../../../shared/notebook/compare.ts';
import { piecesOf } from '../../../shared/notebook/pieces.ts';

const derivation = newDerivation();
const report = (text: string) => structuredClone(derivation.derive(text));
const compare = (left: string, right: string) => compareReports(report(left), report(right));
const same = { models: [], declarations: [], claims: [] };

const source = `lattice square torus 4 x 4
spins s on vertices
spins g on links
couplings J = 1, h = 0.6, K
law G(v: vertices) = prod(l: star(v)) g^x[l]
law flat(p: plaquettes) = prod(l: rim(p)) g^z[l]
model ising =
  - J sum(l: links) s^z[l.a] s^z[l.b]
  - h sum(v: vertices) s^x[v]
model gauge = - J sum(p: plaquettes) prod(l: rim(p)) g^z[l] - h sum(l: links) g^x[l]
map bonds from s to g
  s^z[l.a] s^z[l.b] => g^z[l] for l: links
  s^x[v] => prod(l: star(v)) g^x[l] for v: vertices
audit map bonds
audit commute gauge with G
`;

describe('pieces of two texts', () => {
  const text = fc
    .array(fc.constantFrom('a', 'b', 'the ', 'law', '\n', ' ', 'σ', '.', 'x y\n'))
    .map((all) => all.join(''));
  it('join to the one and to the other', () => {
    fc.assert(
      fc.property(text, text, (left, right) => {
        const pieces = piecesOf(left, right);
        const join = (which: string) => pieces.filter((piece) => ['same', which].includes(piece.in)).map((p) => p.text);
        expect([join('left').join(''), join('right').join('')]).toEqual([left, right]);
        pieces.forEach((piece, at) => expect(piece.text !== '' && pieces[at + 1]?.in !== piece.in).toBe(true));
      }),
      { seed: 7, numRuns: 400 },
    );
  });

  it('keep as much as a longest common subsequence has', () => {
    fc.assert(
      fc.property(fc.array(fc.constantFrom('a', 'b', 'c')), fc.array(fc.constantFrom('a', 'b', 'c')), (left, right) => {
        const pieces = piecesOf(left.join(' '), right.join(' '));
        const kept = pieces.filter((piece) => piece.in === 'same').map((piece) => piece.text);
        const tokens = (all: readonly string[]) => all.join(' ').match(/\s+|\w+/g) ?? [];
        expect((kept.join('').match(/\s|\w/g) ?? []).length).toBe(longest(tokens(left), tokens(right)));
      }),
      { seed: 8, numRuns: 200 },
    );
  });

  function longest(a: readonly string[], b: readonly string[]): number {
    let row = new Array<number>(b.length + 1).fill(0);
    for (const x of a) {
      const next = [0];
      b.forEach((y, j) => next.push(x === y ? (row[j] ?? 0) + 1 : Math.max(row[j + 1] ?? 0, next[j] ?? 0)));
      row = next;
    }
    return row[b.length] ?? 0;
  }

  it('compare texts by lines where they share few words, and large ones in one piece at last', () => {
    const lines = (seed: number) =>
      Array.from({ length: 3000 }, (_, k) => `${String((k * seed) % 7919)} ${String(k)} x\n`);
    const [a, b] = [lines(31).join(''), lines(37).join('')];
    const pieces = piecesOf(a, b);
    expect(
      pieces
        .filter((piece) => piece.in !== 'right')
        .map((piece) => piece.text)
        .join(''),
    ).toBe(a);
  });
});

describe('entries', () => {
  const entry = (id: string | null, text: string, kind: 'prose' | 'statements' = 'prose') => ({ id, text, kind });
  it('that only moved are no difference, with ids and without', () => {
    expect(compareEntries([entry('1', 'a'), entry('2', 'b')], [entry('2', 'b'), entry('1', 'a')])).toEqual([]);
    expect(compareEntries([entry(null, 'a'), entry(null, 'b')], [entry(null, 'b'), entry(null, 'a')])).toEqual([]);
  });

  it('are told apart: added, removed, changed', () => {
    const left = [entry(null, 'The star law holds on all sizes.'), entry(null, 'Gone entirely'), entry(null, 'stays')];
    const right = [
      entry(null, 'The star law fails on all sizes.'),
      entry(null, 'stays'),
      entry(null, 'A further remark'),
    ];
    const found = compareEntries(left, right);
    expect(found.map(({ what, left: l, right: r }) => [what, l, r])).toEqual([
      ['changed', 1, 1],
      ['removed', 2, null],
      ['added', null, 3],
    ]);
    expect(found[0]?.pieces.filter((piece) => piece.in !== 'same')).toEqual([
      { in: 'left', text: 'holds' },
      { in: 'right', text: 'fails' },
    ]);
  });
});

describe('reports', () => {
  it('of reordered and respelled sources do not differ', () => {
    const respelled = `# other words
lattice square torus 4 x 4
spins g on links
spins s on vertices
couplings h = 3/5, K, J = 2/2
law flat(q: plaquettes) = g^z[q.4] g^z[q.2] g^z[q.3] g^z[q.1]
law G(w: vertices) = prod(k: star(w)) g^x[k]
model gauge =
  - h sum(e: links) g^x[e]
  - 1/2 J sum(p: plaquettes) prod(l: rim(p)) g^z[l] - J/2 sum(q: plaquettes) prod(m: rim(q)) g^z[m]
model ising = - h sum(w: vertices) s^x[w] - sum(l: links) J s^z[l.b] * s^z[l.a]
map bonds from s to g
  s^x[w] => prod(k: star(w)) g^x[k] for w: vertices
  s^z[l.b] s^z[l.a] => g^z[l] for l: links
audit commute gauge with G
audit map bonds
`;
    expect(compare(source, respelled)).toEqual(same);
  });

  it('differ by a sign, and by the claim that it breaks', () => {
    const other = source.replace('- h sum(v: vertices)', '+ h sum(v: vertices)');
    const [model] = compare(source, other).models;
    expect(model?.left).toBe('ising');
    expect(model?.terms.map(({ what, left, right }) => [what, left?.coefficient, right?.coefficient])).toEqual([
      ['sign', '-h', 'h'],
    ]);
  });

  it('differ by a coefficient, a support, terms that came and went, and a grade', () => {
    const terms = (right: string) =>
      compare(source, right).models.flatMap(({ terms: own }) => own.map(({ what }) => what));
    expect(terms(source.replace('- h sum(v: vertices) s^x[v]', '- 2 h sum(v: vertices) s^x[v]'))).toEqual([
      'coefficient',
    ]);
    expect(terms(source.replace('- h sum(v: vertices) s^x[v]', '- h sum(v: vertices) s^y[v]'))).toEqual(['support']);
    expect(terms(source.replace('- h sum(v: vertices) s^x[v]', '- K sum(v: vertices) s^z[v]'))).toEqual([
      'removed',
      'added',
    ]);
    const broken = compare(source, source.replace('h sum(l: links) g^x[l]', 'h sum(l: links) g^z[l]'));
    expect(broken.models[0]?.terms.map(({ what }) => what)).toEqual(['support', 'support']);
    expect(broken.claims.map(({ what, left, right }) => [what, left?.grade, right?.grade])).toEqual([
      ['grade', 'proved', 'refuted'],
    ]);
  });

  it('name a model that was only renamed, and what was declared otherwise', () => {
    const renamed = compare(source, source.replaceAll('ising', 'tfim'));
    expect(renamed.models).toEqual([{ left: 'ising', right: 'tfim', terms: [], constant: null }]);
    const law = compare(source, source.replace('prod(l: rim(p)) g^z[l]\nmodel', 'prod(l: rim(p)) g^z[l] is -1\nmodel'));
    expect(law.declarations.map(({ what, kind, name }) => [what, kind, name])).toEqual([['changed', 'law', 'flat']]);
    const size = compare(source, source.replace('4 x 4', '6 x 4'));
    expect(size.declarations.map(({ what, kind }) => [what, kind])).toEqual([['changed', 'lattice']]);
    const rule = compare(source, source.replace('=> g^z[l]', '=> - g^z[l]'));
    expect(rule.declarations.map(({ what, kind }) => [what, kind])).toEqual([['changed', 'map']]);
  });

  it('are compared both ways alike', () => {
    const other = source
      .replace('- h sum(v: vertices) s^x[v]', '+ K sum(v: vertices) s^z[v]')
      .replace('audit map bonds\n', '');
    const there = compare(source, other);
    const back = compare(other, source);
    expect(new Set(there.claims.map(({ what }) => what))).toEqual(new Set(['removed']));
    expect(new Set(back.claims.map(({ what }) => what))).toEqual(new Set(['added']));
    const count = (all: typeof there) => all.models.flatMap(({ terms }) => terms.map(({ what }) => what)).sort();
    expect(count(there)).toEqual(['added', 'removed']);
    expect(count(back)).toEqual(['added', 'removed']);
  });
});

describe('the negative of a coefficient', () => {
  it.each([
    ['J', '-J'],
    ['1/2*J - h', '-1/2*J + h'],
    ['(J + h)/K', '(-J - h)/K'],
    ['J^2/(16*K^3)', '-J^2/(16*K^3)'],
    ['0', '0'],
  ])('%s', (text, wanted) => {
    expect(negative(text)).toBe(wanted);
    expect(negative(wanted)).toBe(text);
  });
});
