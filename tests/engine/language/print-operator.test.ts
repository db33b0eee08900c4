import fc from 'fast-check';
import { readFileSync, readdirSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { modelText, operatorText } from '../../../shared/language/print-operator.ts';
import { run } from './support.ts';

const folder = new URL('../../examples/', import.meta.url);
const sources = readdirSync(folder)
  .filter((name) => name.endsWith('.gw'))
  .map((name) => [name, readFileSync(new URL(name, folder), 'utf8')] as const);

const plain = (value: unknown): unknown => JSON.parse(JSON.stringify(value));

describe('models written out', () => {
  it.each(sources)('%s: each is the same model again', (_, source) => {
    const program = run(source);
    const lines = source.split('\n');
    for (const value of program.values.all.values()) {
      if (value.what !== 'model' || value.seams.length > 0) continue;
      const text = modelText(value, program.values);
      const own = program.statements.find((s) => s.names.includes(value.name));
      if (text === undefined || !own) throw new Error(value.name);
      const again = [...lines.slice(0, own.line - 1), text, ...lines.slice(own.line - 1 + own.lines)].join('\n');
      const model = run(again).values.find(value.name);
      if (model?.what !== 'model') throw new Error(`${text}\n${JSON.stringify(run(again).problems)}`);
      expect([text, plain(model.operator)]).toEqual([text, plain(value.operator)]);
      expect([...model.species].sort()).toEqual([...value.species].sort());
    }
  });
});

const ladder = `lattice custom
  cell (1, 0)
  vertex L at (0, 0)
  vertex U at (0, 1)
  link L -- L + (1)
  link U -- U + (1)
  link rung: L -- U
  plaquette square: L, L + (1), U + (1), U
  size 12 torus`;
const doubled = `lattice custom
  cell (2, 0, 0), (0, 1, 0), (0, 0, 1)
  vertex P at (0, 0, 0)
  vertex Q at (1, 0, 0)
  link P -- Q
  link Q -- P + (1, 0, 0)
  link P -- P + (0, 1, 0)
  link Q -- Q + (0, 1, 0)
  link P -- P + (0, 0, 1)
  link Q -- Q + (0, 0, 1)
  size 12 x 12 x 12 torus`;
const lattices: readonly (readonly [text: string, dimension: number, plaquettes: boolean])[] = [
  ['lattice chain torus 12', 1, false],
  ['lattice chain open 12', 1, false],
  ['lattice square torus 12 x 12', 2, true],
  ['lattice square open 12 x 12', 2, true],
  ['lattice square cylinder 12 x 12', 2, true],
  ['lattice square torus (12, 12), (12, -12)', 2, true],
  ['lattice triangular torus 12 x 12', 2, true],
  ['lattice honeycomb torus 12 x 12', 2, true],
  ['lattice honeycomb open 12 x 12', 2, true],
  ['lattice kagome torus 12 x 12', 2, true],
  ['lattice kagome open 12 x 12', 2, true],
  ['lattice cubic torus 12 x 12 x 12', 3, true],
  ['lattice cubic open 12 x 12 x 12', 3, true],
  [ladder, 1, true],
  [doubled, 3, false],
];

/** A random operator in text: sums with conditions, named cells, stars and rims, whole products, coefficients. */
function operatorOn(dimension: number, plaquettes: boolean): fc.Arbitrary<string> {
  const axes = ['x', 'y', 'z'].slice(0, dimension);
  const shift = fc.array(fc.integer({ min: -2, max: 2 }), { minLength: dimension, maxLength: dimension });
  const pauli = fc.constantFrom('x', 'y', 'z');
  const coefficient = fc.constantFrom('', '2/3 ', 'J ', 'sqrt(2) K / 2 ', '1i ', '(J + K) ', 'J/(K + 2) ');
  const condition = fc.constantFrom(
    '',
    ...axes.flatMap((a) => [` where v.${a} % 2 == 1`, ` where v.${a} == 0`, ` where v.${a} % 3 == 2`]),
  );
  const at = fc.tuple(pauli, shift).map(([p, by]) => `s^${p}[v + (${by.join(', ')})]`);
  const beside = fc.oneof(
    at,
    pauli.map((p) => `s^${p}[v]`),
    pauli.map((p) => `(prod(l: star(v)) g^${p}[l])`),
    pauli.map((p) => `(prod(u: neighbours(v)) s^${p}[u])`),
    pauli.map((p) => `(sum(l: out(v)) g^${p}[l] s^z[l.b])`),
  );
  const sumOverVertices = fc
    .tuple(condition, fc.array(beside, { minLength: 1, maxLength: 3 }))
    .map(([where, factors]) => `sum(v: vertices${where}) ${factors.join(' ')}`);
  const rims = pauli.map((p) => `sum(p: plaquettes) prod(l: rim(p)) g^${p}[l]`);
  const staggered = fc.constantFrom(...axes).map((a) => `sum(v: vertices) (-1)^(v.${a}) s^x[v]`);
  const whole = fc.constantFrom(
    'prod(v: vertices) s^x[v]',
    'prod(l: links) g^z[l]',
    '1i (prod(v: vertices where v.x % 2 == 1) s^y[v])',
    'prod(v: vertices where v.x == 0) s^z[v]',
  );
  const links = fc.constantFrom('sum(l: links) s^z[l.a] g^z[l] s^z[l.b]', 'sum(l: links.1) s^+[l.a] s^-[l.b]');
  const constant = fc.constantFrom('3', 'sum(v: vertices) J', 'J K');
  const term = fc
    .tuple(
      coefficient,
      fc.oneof(sumOverVertices, sumOverVertices, ...(plaquettes ? [rims] : []), staggered, whole, links, constant),
    )
    .map((t) => t.join(''));
  return fc.array(term, { minLength: 1, maxLength: 3 }).map((terms) => terms.join(' + '));
}

describe('operators written out', () => {
  it.each(lattices)('%s: any is the same operator again', (lattice, dimension, plaquettes) => {
    const prelude = `${lattice}\nspins s on vertices\nspins g on links\ncouplings J, K\n`;
    fc.assert(
      fc.property(operatorOn(dimension, plaquettes), (text) => {
        const program = run(`${prelude}operator O = ${text}\n`);
        const value = program.values.find('O');
        if (value?.what !== 'operator' || !program.lattice) throw new Error(JSON.stringify(program.problems));
        const printed = operatorText(value.operator, program.lattice.family);
        const again = run(`${prelude}operator O = ${printed ?? '?'}\n`);
        const next = again.values.find('O');
        if (next?.what !== 'operator') throw new Error(`${String(printed)}\n${JSON.stringify(again.problems)}`);
        expect([printed, plain(next.operator)]).toEqual([printed, plain(value.operator)]);
      }),
      { seed: 11, numRuns: 30 },
    );
  });
});
