import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Coefficient } from '../../../../shared/algebra/numbers/coefficient.ts';
import {
  adjointMatrix,
  equalMatrices,
  fromExpansion,
  identityMatrix,
  matrixRank,
  multiplyMatrices,
  pauliExpansion,
  pauliMatrix,
  scaleMatrix,
  type Matrix,
} from '../../../../shared/algebra/pauli/block.ts';
import { conjugate, gateNamed, gates, gatesCommute, type Gate } from '../../../../shared/algebra/pauli/clifford.ts';
import { equalStrings, multiplyStrings, stringFromText, stringText } from '../../../../shared/algebra/pauli/string.ts';
import type { LocalString, Site } from '../../../../shared/algebra/pauli/types.ts';

const C = Coefficient;
const settings = { seed: 29, numRuns: 60 };
const site = (at: number): Site => ({ species: 's', cell: { kind: 'vertices', index: 0, offset: [at] } });
const named = (name: string): Gate => gateNamed(name) ?? expect.fail(name);

/** Matrix of a gate, exact. */
function exact(gate: Gate): Matrix {
  const rows = gate.matrix.map((row) => row.map(([re, im]) => C.rational(re).add(C.rational(im).mul(C.i))));
  return gate.half ? scaleMatrix(rows, C.sqrt(C.rational(1, 2)) ?? C.zero) : rows;
}
const lettersOf = (string: LocalString, k: number): string =>
  Array.from(
    { length: k },
    (_, s) => string.factors.find((f) => f.cell.offset[0] === s)?.pauli.toUpperCase() ?? 'I',
  ).join('');
const words = (k: number): string[] =>
  k === 0 ? [''] : words(k - 1).flatMap((w) => ['I', 'X', 'Y', 'Z'].map((l) => w + l));
const fromLetters = (word: string): LocalString =>
  stringFromText([...word].flatMap((l, s) => (l === 'I' ? [] : [`${l}${String(s)}`])).join(' '));

describe.each(gates.map((g) => [g.name, g] as const))('gate %s', (_, gate) => {
  const targets = [site(0), site(1)].slice(0, gate.arity);
  it('is unitary, and its inverse in the table inverts it', () => {
    const u = exact(gate);
    const one = identityMatrix(2 ** gate.arity);
    expect(equalMatrices(multiplyMatrices(u, adjointMatrix(u)), one)).toBe(true);
    expect(equalMatrices(multiplyMatrices(u, exact(named(gate.inverse))), one)).toBe(true);
  });
  it('acts on every string as its matrix does', () => {
    const u = exact(gate);
    for (const word of words(gate.arity)) {
      const image = conjugate(gate, targets, fromLetters(word));
      const dense = multiplyMatrices(multiplyMatrices(u, pauliMatrix(word)), adjointMatrix(u));
      expect(equalMatrices(dense, pauliMatrix(lettersOf(image, gate.arity), image.phase))).toBe(true);
      expect(equalStrings(conjugate(named(gate.inverse), targets, image), fromLetters(word))).toBe(true);
    }
  });
  it('is an automorphism and leaves other spins alone', () => {
    const word = fc
      .array(fc.constantFrom('I', 'X', 'Y', 'Z'), { minLength: 3, maxLength: 3 })
      .map((l) => fromLetters(l.join('')));
    fc.assert(
      fc.property(word, word, (a, b) => {
        const image = (s: LocalString) => conjugate(gate, targets, s);
        expect(equalStrings(image(multiplyStrings(a, b)), multiplyStrings(image(a), image(b)))).toBe(true);
        const away = stringFromText('X5 Y6');
        expect(equalStrings(image(away), away)).toBe(true);
      }),
      settings,
    );
  });
});

describe('circuits', () => {
  it('turn the cluster chain into single X', () => {
    const cz = named('cz');
    const term = stringFromText('Z-1 X0 Z1');
    const image = conjugate(cz, [site(-1), site(0)], conjugate(cz, [site(0), site(1)], term));
    expect(stringText(image)).toBe('sX0');
  });
  it('tell gates that commute', () => {
    const at = (name: string, ...sites: number[]) => ({ gate: named(name), targets: sites.map(site) });
    expect(gatesCommute(at('cz', 0, 1), at('cz', 1, 2))).toBe(true);
    expect(gatesCommute(at('cx', 0, 1), at('cx', 1, 2))).toBe(false);
    expect(gatesCommute(at('cx', 0, 1), at('cx', 2, 1))).toBe(true);
    expect(gatesCommute(at('h', 0), at('s', 0))).toBe(false);
  });
  it('refuse targets that are not distinct', () => {
    expect(() => conjugate(named('cx'), [site(0), site(0)], stringFromText('X0'))).toThrow(RangeError);
    expect(() => conjugate(named('h'), [site(0), site(1)], stringFromText('X0'))).toThrow(RangeError);
  });
});

describe('blocks', () => {
  const entry = fc.constantFrom(C.zero, C.one, C.i, C.symbol('J'), C.rational(-1, 2), C.sqrt(C.rational(2)) ?? C.zero);
  const matrix = (size: number) =>
    fc.array(fc.array(entry, { minLength: size, maxLength: size }), { minLength: size, maxLength: size });
  it('expand in Pauli strings and come back', () => {
    fc.assert(
      fc.property(matrix(4), (m) => {
        const terms = pauliExpansion(m);
        expect(equalMatrices(fromExpansion(terms, 2), m)).toBe(true);
        expect(terms.every((t) => !t.coefficient.isZero())).toBe(true);
      }),
      settings,
    );
  });
  it('expand each string as itself', () => {
    for (const letters of words(2))
      expect(pauliExpansion(pauliMatrix(letters)).map((t) => [t.letters, t.coefficient.toText()])).toEqual([
        [letters, '1'],
      ]);
  });
  it('know their rank', () => {
    expect(matrixRank(identityMatrix(4))).toBe(4);
    expect(
      matrixRank([
        [C.symbol('J'), C.one],
        [C.symbol('J').mul(C.symbol('J')), C.symbol('J')],
      ]),
    ).toBe(1);
    expect(
      matrixRank([
        [C.zero, C.one, C.i],
        [C.one, C.zero, C.zero],
      ]),
    ).toBe(2);
  });
  it('refuse shapes that are not blocks', () => {
    expect(() => pauliExpansion(identityMatrix(3))).toThrow(RangeError);
    expect(() => multiplyMatrices(identityMatrix(2), identityMatrix(4))).toThrow(RangeError);
    expect(() => pauliMatrix('XQ')).toThrow(RangeError);
  });
});
