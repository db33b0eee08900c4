import fc from 'fast-check';
import { readFileSync, readdirSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import type { Statement } from '../../../grammar/syntax.ts';
import { newBudget } from '../../../shared/limits.ts';
import { countParses, parseStatement } from '../../../shared/language/parse.ts';
import { formatSource, printStatement } from '../../../shared/language/print.ts';
import { layoutOf, type Layout } from '../../../shared/language/source.ts';
import { run } from './support.ts';

/** Syntax without its places. */
const bare = (node: Statement): unknown =>
  JSON.parse(JSON.stringify(node, (key, value: unknown) => (key === 'start' || key === 'end' ? undefined : value)));

function only(text: string): Layout {
  const { statements } = layoutOf(text);
  const [layout] = statements;
  if (!layout || statements.length !== 1) throw new Error(text);
  return layout;
}
function parse(text: string): Statement {
  const parsed = parseStatement(only(text), newBudget());
  if ('fault' in parsed) throw new Error(`${text}\n${parsed.fault.message}`);
  return parsed.node;
}

/** Random text of the language, from its own productions. */
const { statement } = fc.letrec<
  Record<'expression' | 'product' | 'atom' | 'cell' | 'condition' | 'binder' | 'statement', string>
>((tie) => {
  const name = fc.constantFrom('s', 'J', 'v', 'x', 'left', 'σ', 'levels', 'to', 'by', 'even');
  const integer = fc.nat(99).map(String);
  const sign = fc.constantFrom('+', '-');
  const number = fc.oneof(integer, fc.constantFrom('0.5', '1e-3', '1i', '2i'));
  const set = fc.oneof(
    fc.constantFrom('vertices', 'links.1', 'plaquettes.up', 'star(v)', 'loop(1)'),
    tie('cell').map((c) => `rim(${c})`),
  );
  return {
    cell: fc.oneof(
      { maxDepth: 2 },
      fc.constantFrom('v', 'l.a', 't.2', 'vertices(0, 1)', 'vertices.A(1, 0)', 'links.1(0, 0)'),
      fc.tuple(tie('cell'), sign, integer, integer).map(([c, s, a, b]) => `${c} ${s} (${a}, ${b})`),
    ),
    binder: fc
      .tuple(name, set, fc.option(tie('condition'), { nil: undefined }))
      .map(([n, s, w]) => `${n}: ${s}${w ? ` where ${w}` : ''}`),
    condition: fc.oneof(
      { maxDepth: 2 },
      fc
        .tuple(tie('product'), fc.constantFrom('==', '!=', '<', '<=', '>', '>='), tie('product'))
        .map((t) => t.join(' ')),
      tie('cell').map((c) => `${c} in links.3`),
      tie('cell').map((c) => `${c} not in star(v)`),
      tie('condition').map((c) => `not ${c}`),
      tie('condition').map((c) => `(${c})`),
      fc.tuple(tie('condition'), fc.constantFrom('and', 'or'), tie('condition')).map((t) => t.join(' ')),
    ),
    atom: fc.oneof(
      { maxDepth: 3, depthIdentifier: 'e' },
      number,
      name,
      fc.tuple(name, fc.constantFrom('x', 'y', 'z', 'n', '+', '-'), tie('cell')).map(([n, o, c]) => `${n}^${o}[${c}]`),
      tie('expression').map((e) => `(${e})`),
      tie('expression').map((e) => `(${e} + hc)`),
      fc.tuple(name, tie('expression')).map(([n, e]) => `${n}(${e})`),
      fc.tuple(name, tie('expression'), tie('cell')).map(([n, e, c]) => `${n} (${e}, ${c})`),
      fc.tuple(name, integer).map(([n, k]) => `${n}^${k}`),
      fc.tuple(name, sign, integer).map(([n, s, k]) => `${n}^${s}${k}`),
      tie('expression').map((e) => `(2)^(${e})`),
      fc.constantFrom('sqrt(2)', '|01>', 'N.gauss(v)', 'v.x'),
    ),
    product: fc.oneof(
      { maxDepth: 3, depthIdentifier: 'e' },
      tie('atom'),
      fc
        .tuple(tie('product'), fc.constantFrom(' ', ' * ', '/', ' % ', ' * -', ' / +'), tie('atom'))
        .filter(([p]) => !/\b(sum|prod)\(/u.test(p))
        .map((t) => t.join('')),
      fc
        .tuple(fc.constantFrom('sum', 'prod', '2 sum', 'J * prod', '1/2 sum'), tie('binder'), tie('product'))
        .map(([k, b, p]) => `${k}(${b}) ${p}`),
    ),
    expression: fc
      .tuple(fc.constantFrom('', '-', '+ '), tie('product'), fc.array(fc.tuple(sign, tie('product')), { maxLength: 2 }))
      .map(([s, p, rest]) => [`${s}${p}`, ...rest.map((r) => r.join(' '))].join(' ')),
    statement: fc.oneof(
      tie('expression').map((e) => `model M = ${e}`),
      tie('expression').map((e) => `model M = ${e} + hc`),
      fc.tuple(tie('binder'), tie('product')).map(([b, p]) => `law G(${b}) = ${p} is -1`),
      fc
        .tuple(tie('binder'), tie('expression'), fc.constantFrom('1', '<= 2', '>= 1/2', 'even', 'odd'))
        .map(([b, e, r]) => `rule r(${b}) = ${e} is ${r}`),
      fc
        .tuple(tie('product'), tie('product'), tie('binder'))
        .map(([a, b, c]) => `map N from s to g, h\n  ${a} => ${b} for ${c}\n  ${b}\n     => ${a}`),
      fc.tuple(tie('cell'), tie('binder')).map(([c, b]) => `map N = circuit\n  h s[${c}] for ${b}\n  cz s[v] s[${c}]`),
      fc
        .tuple(tie('cell'), tie('product'))
        .map(([c, p]) => `map N on t: links from r[${c}] r[t.a] to g[t]\n  |00> => ${p}`),
      tie('expression').map((e) => `couplings J = ${e}, h, K = 2`),
      fc.constantFrom(
        'map N = A then inverse B then C',
        'map N = inverse (A then B)',
        'map N = gauge P with g on links',
        'audit scan gap of M [a, b = -1, N] over h = 0 .. 2 by 1/2, J = -1 on 2 x 2, (2, 2), (1, -2)',
        'audit expect W in ground of M on 8',
        'audit spectrum A [f = +1] ~ B levels 3 on 6, 8',
        'audit effective M from H order 4',
        'reference R = uniform over [a, b]',
        'reference R = stabilizer state of A, B',
        'spins a, b on links.1',
        'lattice cubic open 2x3x4',
        'lattice square (2, 2), (1, -2)',
      ),
    ),
  };
});

describe('the grammar', () => {
  it('gives random text exactly one parse, and printing gives it back', () => {
    fc.assert(
      fc.property(statement, (text) => {
        expect([text, countParses(only(text))]).toEqual([text, 1]);
        const node = parse(text);
        const printed = printStatement(node);
        expect([printed, bare(parse(printed))]).toEqual([printed, bare(node)]);
        expect(printStatement(parse(printed))).toBe(printed);
      }),
      { seed: 42, numRuns: 600 },
    );
  });
});

describe('the formatter', () => {
  const folder = new URL('../../examples/', import.meta.url);
  it.each(readdirSync(folder).filter((f) => f.endsWith('.gw')))('%s means the same afterwards', (name) => {
    const source = readFileSync(new URL(name, folder), 'utf8');
    const formatted = formatSource(source);
    expect(formatSource(formatted)).toBe(formatted);
    const [a, b] = [run(source), run(formatted)];
    expect(b.problems).toEqual(a.problems);
    const comments = (text: string): string[] => text.split('\n').filter((l) => l.startsWith('#'));
    expect(comments(formatted)).toEqual(comments(source));
    const operators = (p: typeof a): unknown =>
      [...p.values.all.values()].map((v) =>
        v.what === 'model' || v.what === 'operator' ? [v.name, v.operator] : [v.name],
      );
    expect(operators(b)).toEqual(operators(a));
  });
  it.each([
    ['many lines', `model a = 1\n${' +1\n'.repeat(200_000)}`],
    ['many long statements', `model a = ${'+ s^z[v]'.repeat(2_000)}\n`.repeat(50)],
  ])('gives %s back, past its limits as they were', (_, text) => {
    expect(formatSource(text).replace(/\s+/gu, '')).toBe(text.replace(/\s+/gu, ''));
  });
  it('leaves what it cannot read', () => {
    const text = 'model A = = 1\nmodel B = 1 # kept\n\n# alone\nmodel   C=1+ 2';
    expect(formatSource(text)).toBe('model A = = 1\nmodel B = 1 # kept\n\n# alone\nmodel C = 1 + 2');
  });
});
