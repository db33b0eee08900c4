import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { claims, clean } from './brute.ts';

/** Gauging, solving and circuits keep the levels of random models, on every lattice and edge. */

const grades = (text: string): string[] => clean(text).claims.map((c) => c.grade);
const weight = fc.integer({ min: -9, max: 9 }).filter((n) => n !== 0);

describe('minimal coupling and the unitary gauge', () => {
  const places = [
    ['chain torus 4', '(1)', '2, 3, 4'],
    ['chain open 4', '(1)', '1, 2, 4'],
    ['square torus 2 x 2', '(1, 0)', '1 x 1, 2 x 1, 2 x 2'],
    ['square open 2 x 2', '(1, 1)', '1 x 2, 2 x 2, 3 x 2'],
    ['square cylinder 2 x 2', '(0, 1)', '1 x 2, 2 x 2'],
    ['triangular torus 2 x 1', '(1, 1)', '1 x 1, 2 x 1'],
    ['honeycomb torus 2 x 1', '(1, 0)', '1 x 1, 2 x 1'],
    ['kagome torus 1 x 1', '(0, 1)', '1 x 1'],
  ] as const;
  const neutral = (shift: string): readonly string[] => [
    'sum(l: links) s^z[l.a] s^z[l.b]',
    'sum(l: links) s^y[l.a] s^y[l.b]',
    'sum(l: links) s^x[l.a] s^x[l.b]',
    'sum(v: vertices) s^x[v]',
    `sum(v: vertices) s^z[v] s^z[v + ${shift}]`,
  ];
  it('keep the Gauss law at every size and the levels in its sector', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...places),
        fc.array(fc.tuple(fc.nat({ max: 4 }), weight), { minLength: 1, maxLength: 3 }),
        weight,
        ([lattice, shift, sizes], terms, electric) => {
          const model = terms.map(([k, w]) => `(${String(w)}/4) ${neutral(shift)[k] ?? ''}`).join(' + ');
          const found = clean(`lattice ${lattice}
spins s on vertices
spins g on links
symmetry flip = prod(v: vertices) s^x[v]
model m = ${model}
map minimal = gauge flip with g on links
model higgs = minimal(m) + (${String(electric)}/7) sum(l: links) g^x[l]
map unitary = solve minimal.gauss for s
model slim = unitary(higgs)
audit commute higgs with minimal.gauss
audit spectrum higgs [minimal.gauss = +1] ~ slim on ${sizes} levels 10
audit spectrum higgs [minimal.gauss = +1] ~ higgs on ${sizes} levels 256
`);
          expect(claims(found, 'commute')[0]?.grade).toBe('proved');
          const count = sizes.split(', ').length;
          const spectra = claims(found, 'spectrum');
          expect(spectra.slice(0, count).map((c) => c.grade)).toEqual(Array(count).fill('numerical'));
          // without its law the gauged model has more states: never said to be the same
          for (const c of spectra.slice(count)) if (c.figures['all'] === true) expect(c.grade).toBe('refuted');
        },
      ),
      { seed: 1979, numRuns: 30 },
    );
  });
});

describe('circuits', () => {
  const gate = (shift: string): fc.Arbitrary<string> =>
    fc.oneof(
      fc
        .tuple(fc.constantFrom('h', 's', 'sdg', 'x', 'y', 'z'), fc.constantFrom('s', 't'))
        .map(([g, on]) => `  ${g} ${on}[v] for v: vertices`),
      fc
        .tuple(fc.constantFrom('cx', 'cy', 'cz', 'swap'), fc.constantFrom(['s', 't'], ['t', 's']), fc.boolean())
        .map(([g, [a, b], far]) => `  ${g} ${a}[v] ${b}[v${far ? ` + ${shift}` : ''}] for v: vertices`),
      fc.constantFrom(`  cz s[v] s[v + ${shift}] for v: vertices`, '  cz s[l.a] s[l.b] for l: links'),
    );
  const terms = (shift: string): readonly string[] => [
    'sum(l: links) s^z[l.a] s^z[l.b]',
    'sum(v: vertices) s^x[v]',
    'sum(v: vertices) t^y[v]',
    'sum(v: vertices) s^x[v] t^z[v]',
    `sum(v: vertices) s^y[v] t^z[v + ${shift}]`,
    'sum(v: vertices) (s^+[v] t^-[v] + hc)',
  ];
  it.each([
    ['chain torus 4', '(1)', '3, 4'],
    ['chain torus 4', '(2)', '3, 5'],
    ['square torus 3 x 2', '(1, 1)', '3 x 2'],
    ['triangular torus 2 x 2', '(-1, 1)', '3 x 2'],
    ['square torus 3 x 2', '(0, 1)', '(2, 1), (1, -2)'],
  ])('keep the levels, and their inverses bring the model back: %s, reach %s', (lattice, shift, sizes) => {
    fc.assert(
      fc.property(
        fc.array(gate(shift), { minLength: 1, maxLength: 4 }),
        fc.array(fc.tuple(fc.nat({ max: 5 }), weight), { minLength: 1, maxLength: 3 }),
        (gates, chosen) => {
          const model = chosen.map(([k, w]) => `(${String(w)}/4) ${terms(shift)[k] ?? ''}`).join(' + ');
          const all = grades(`lattice ${lattice}
spins s on vertices
spins t on vertices
model m = ${model} + 0 sum(v: vertices) (s^z[v] + t^z[v])
map U = circuit
${gates.join('\n')}
map V = inverse U
model n = U(m)
model o = V(n)
audit map U
audit spectrum m ~ n on ${sizes} levels 6
audit spectrum m ~ o on ${sizes} levels 6
`);
          expect(all.filter((g) => g !== 'proved' && g !== 'numerical')).toEqual([]);
          expect(all).toContain('proved');
        },
      ),
      { seed: 9807, numRuns: 12 },
    );
  });
});
