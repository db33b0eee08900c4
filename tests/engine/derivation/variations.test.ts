import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import type { Report } from '../../../shared/contracts/report.ts';
import { claims, clean, derive } from './brute.ts';

/** The four examples in other words, and things that once went wrong. */

const example = (name: string): string => readFileSync(new URL(`../../examples/${name}.gw`, import.meta.url), 'utf8');
const errors = (of: Report): string[] => of.problems.filter((p) => p.severity === 'error').map((p) => p.message);

/** Numbers of a report that do not depend on names: grades and figures of all claims, and what the models hold. */
function numbers(of: Report): unknown {
  const round = (value: unknown): unknown =>
    typeof value === 'number' ? Math.round(value * 1e7) / 1e7 + 0 : Array.isArray(value) ? value.map(round) : value;
  // rounding and the order of terms may differ in the last digits
  const vague = new Set(['maxDifference', 'residual']);
  const plain = (value: unknown): boolean =>
    typeof value === 'number' ||
    typeof value === 'boolean' ||
    value === null ||
    (Array.isArray(value) && value.every((v) => typeof v === 'number'));
  return {
    claims: of.claims.map(({ audit, grade, figures }) => ({
      audit,
      grade,
      figures: Object.fromEntries(
        Object.entries(figures)
          .filter(([name, value]) => !vague.has(name) && (name === 'size' || plain(value)))
          .map(([name, value]) => [name, round(value)]),
      ),
    })),
    models: Object.values(of.models).map((m) => ({
      terms: m.terms.map((t) => `${t.kind} ${String(t.orbit.length)}`).sort(),
      pairs: m.groups.length,
    })),
  };
}

/** Whole words replaced. */
const renamed = (text: string, names: Readonly<Record<string, string>>): string =>
  Object.entries(names).reduce(
    (t, [from, to]) => t.replaceAll(new RegExp(`(?<![\\w.])${from}(?=[\\^\\[\\s(),=\\]]|$)`, 'gmu'), to),
    text,
  );

describe('a report says the same in other words', () => {
  const spellings: readonly (readonly [string, string, Readonly<Record<string, string>>])[] = [
    ['ising-bonds', 'Greek', { s: 'σ', g: 'τ', J: 'λ', ising: 'Ising', gauge: 'μ', flat: 'Φ' }],
    [
      'ising-bonds',
      'words that are keywords elsewhere',
      { ising: 'left', gauge: 'chain', bonds: 'circuit', flat: 'torus', flip: 'open', w1: 'levels', w2: 'spins' },
    ],
    [
      'chain-duality',
      'keywords',
      { ising: 'model', dual: 'gauge', duality: 'solve', walls: 'square', flip: 'law', s: 'right', m: 'to' },
    ],
    ['minimal-gauging', 'keywords', { ising: 'from', higgs: 'audit', slim: 'then', bare: 'inverse', flip: 'with' }],
    ['toric-code', 'keywords', { A: 'star1', B: 'rim1', code: 'laws', g: 'link' }],
    ['wrong-sign', 'single letters', { p: 'x', q: 'y', a: 'z', b: 'n', wrong: 'h' }],
  ];
  it.each(spellings)('%s with %s', (name, _, names) => {
    const text = example(name);
    const other = derive(renamed(text, names));
    expect(errors(other)).toEqual([]);
    expect(numbers(other)).toEqual(numbers(derive(text)));
  });

  it.each(['ising-bonds', 'chain-duality', 'minimal-gauging', 'toric-code'])('%s with pasted signs', (name) => {
    const text = example(name);
    const pasted = text
      .replaceAll(/\^([xyz])\[/gu, '^{$1}[')
      .replaceAll(' - ', ' − ')
      .replaceAll(/(\d) x (\d)/gu, '$1 × $2')
      .replaceAll('= 0.6', '= 3/5');
    expect(numbers(derive(pasted))).toEqual(numbers(derive(text)));
  });

  it('with the terms in another order, and the sums taken apart', () => {
    const text = example('ising-bonds');
    const turned = text
      .replace(
        / {2}- J sum\(l: links\).*\n {2}- h sum.*\n/u,
        '  - h sum(v: vertices) s^x[v]\n  - J sum(l: links.2) s^z[l.b] s^z[l.a]\n  - J sum(l: links.1) s^z[l.a] s^z[l.b]\n',
      )
      .replace('prod(l: rim(p)) g^z[l]', 'g^z[p.3] g^z[p.1] g^z[p.4] g^z[p.2]');
    expect(turned).not.toBe(text);
    const [a, b] = [derive(turned), derive(text)];
    expect(errors(a)).toEqual([]);
    expect((numbers(a) as { claims: unknown }).claims).toEqual((numbers(b) as { claims: unknown }).claims);
  });
});

describe('sizes and edges', () => {
  const bonds = (lattice: string, sector: string, on: string): string =>
    example('ising-bonds')
      .replace('square torus 4 x 4', lattice)
      .replace(/audit spectrum[^\n]*/u, `audit spectrum ising [flip = +1] ~ gauge [${sector}] on ${on} levels 64`);

  it.each([
    ['square torus 3 x 2', 'flat = +1, w1 = +1, w2 = +1', '1 x 1, 1 x 2, 2 x 1, 1 x 3, 2 x 2, 3 x 2'],
    ['square torus (2, 2), (1, -2)', 'flat, w1, w2', '(2, 2), (1, -2), (2, 1), (1, -2), (3, 0), (1, 2)'],
    ['triangular torus 2 x 2', 'flat, w1, w2', '1 x 1, 2 x 1, 2 x 2, 3 x 2'],
    ['honeycomb torus 2 x 1', 'flat, w1, w2', '1 x 1, 2 x 1, 1 x 3'],
    ['kagome torus 1 x 1', 'flat, w1, w2', '1 x 1, 2 x 1'],
  ])('the bond duality holds whole on %s', (lattice, sector, on) => {
    const report = clean(bonds(lattice, sector, on));
    for (const claim of claims(report, 'spectrum'))
      expect(claim).toMatchObject({ grade: 'numerical', figures: { all: true } });
    expect(report.claims.some((claim) => claim.grade === 'refuted' || claim.grade === 'open')).toBe(false);
  });

  it('a tilted torus whose lattice lines do not close around both periods needs one more holonomy, and the map names it', () => {
    const report = clean(bonds('square torus (1, 1), (1, -1)', 'flat, w1, w2', '(1, 1), (1, -1)'));
    expect(claims(report, 'spectrum')[0]).toMatchObject({
      grade: 'refuted',
      figures: { leftDimension: 2, rightDimension: 4 },
    });
    const sectors = claims(report, 'map')[0]?.figures['rightSectors'] as string[];
    expect(sectors).toHaveLength(3);
    expect(sectors.slice(0, 2)).toEqual(['w1 = +1', 'w2 = +1']);
  });

  it('needs no holonomy on a disc, and one on a cylinder', () => {
    const plain = (text: string): string => text.replace(/symmetry w[12][^\n]*\n/gu, '');
    const disc = clean(plain(bonds('square open 3 x 2', 'flat = +1', '1 x 1, 1 x 2, 2 x 2, 3 x 2')));
    expect(claims(disc, 'spectrum').map((c) => c.grade)).toEqual(Array(4).fill('numerical'));
    const tube = clean(plain(bonds('square cylinder 3 x 2', 'flat = +1', '2 x 2, 3 x 2')));
    expect(claims(tube, 'spectrum').map((c) => c.grade)).toEqual(['refuted', 'refuted']);
    const held = clean(
      bonds('square cylinder 3 x 2', 'flat = +1, w1 = +1', '1 x 2, 2 x 2, 3 x 2').replace(/symmetry w2[^\n]*\n/u, ''),
    );
    expect(claims(held, 'spectrum').map((c) => c.grade)).toEqual(Array(3).fill('numerical'));
  });

  it('a symbolic coupling keeps what is symbolic and leaves the numbers open, by name', () => {
    const report = derive(example('ising-bonds').replace('h = 0.6', 'h'));
    expect(claims(report, 'commute')[0]?.grade).toBe('proved');
    for (const claim of claims(report, 'spectrum')) {
      expect(claim.grade).toBe('open');
      expect(claim.cautions.join()).toContain('h');
    }
  });

  it('a changed sign of the image moves the sector on odd rings only', () => {
    const text = example('chain-duality').replace('=> m^x[l] ', '=> - m^x[l] ');
    const on = (sector: string, sizes: string): string[] =>
      claims(
        clean(
          text.replace(/audit [^\n]*\n/gu, '') +
            `audit spectrum ising [flip = +1] ~ dual [walls = ${sector}] on ${sizes} levels 64\n`,
        ),
        'spectrum',
      ).map((c) => c.grade);
    expect(on('+1', '4, 6')).toEqual(['numerical', 'numerical']);
    expect(on('+1', '3, 5')).toEqual(['refuted', 'refuted']);
    expect(on('-1', '3, 5')).toEqual(['numerical', 'numerical']);
  });
});

describe('what once went wrong', () => {
  const ring = `lattice chain torus 4
spins s on vertices
spins m on links
symmetry flip = prod(v: vertices) s^x[v]
symmetry walls = prod(l: links) m^x[l]
map dual from s to m
  s^z[l.a] s^z[l.b] => m^x[l] for l: links
  s^x[v] => prod(l: star(v)) m^z[l] for v: vertices
model ising = - sum(l: links) s^z[l.a] s^z[l.b] - 1/2 sum(v: vertices) s^x[v]
`;
  it('two equal models', () => {
    const report = clean(`${ring}model a = dual(ising)\nmodel b = dual(ising)\nmodel c = a + b\n`);
    expect(report.models['b']?.terms).toEqual(report.models['a']?.terms);
    expect(report.models['c']?.terms).toHaveLength(2);
  });

  it('a seam: kept on clusters, undone by a second one, refused in an image', () => {
    const text = `${ring}model t = twist(ising, flip, 1)\nmodel u = twist(t, flip, 1)\n`;
    const found = claims(
      clean(`${text}audit spectrum t ~ ising levels 16\naudit spectrum u ~ ising levels 16\n`),
      'spectrum',
    );
    expect(found.map((c) => c.grade)).toEqual(['refuted', 'numerical']);
    const image = derive(`${text}model d = dual(t)\naudit degeneracy d\n`);
    expect(errors(image).join()).toContain('has a seam');
    const charged = derive(
      `${ring}symmetry zs = prod(v: vertices) s^z[v]\nmodel t = twist(ising, zs, 1)\naudit degeneracy t\n`,
    );
    expect(errors(charged).join()).toContain('does not commute with its term');
  });

  it('a species whose terms cancel still has its spins', () => {
    const report = clean(
      `${ring}model idle = ising + sum(l: links) m^z[l] - sum(l: links) m^z[l]\naudit degeneracy idle\n`,
    );
    expect(claims(report, 'degeneracy')[0]?.figures).toMatchObject({ dimension: 2 ** 8, degeneracy: 2 ** 4 });
  });

  it('a condition in the head of a state map', () => {
    const text = `lattice chain torus 4
spins s on vertices
spins r on vertices
model pxp = - sum(v: vertices) s^x[v] - 2/7 sum(v: vertices) s^z[v] s^z[v + (2)]
rule block(v: vertices where v.x % 2 == 0) = s^n[v] + s^n[v + (1)] is <= 1
map pair on v: vertices where v.x % 2 == 0 from s[v] s[v + (1)] to r[v] r[v + (1)]
  |00> => (|00> + |11>) / sqrt(2)
  |10> => (|00> - |11>) / sqrt(2)
  |01> => |01>
model dual = pair(pxp)
audit spectrum pxp [block] ~ dual [pair] on 2, 4, 6, 3 levels 64
`;
    const grades = claims(clean(text), 'spectrum').map((c) => c.grade);
    expect(grades).toEqual(['numerical', 'numerical', 'numerical', 'open']);
  });

  it('a declared symmetry whose sign depends on the size is found by its name', () => {
    const text = `lattice chain torus 3
spins s on vertices
spins m on vertices
map n from s to m
  s^z[v] s^z[v + (1)] => m^z[v + (-1)] m^x[v] m^z[v + (1)] for v: vertices
  s^x[v] => m^z[v + (-1)] m^z[v] for v: vertices
symmetry even = prod(v: vertices) s^x[v]
symmetry clusters = prod(v: vertices) m^z[v + (-1)] m^x[v] m^z[v + (1)]
audit map n
`;
    for (const size of ['3', '4', '5'])
      expect(claims(clean(text.replace('torus 3', `torus ${size}`)), 'map')[0]?.figures).toMatchObject({
        leftSectors: ['even = +1'],
        rightSectors: ['clusters = +1'],
      });
  });

  it('a static charge stands instead of the law where it sits', () => {
    const text = `${example('toric-code').replace(/audit [^\n]*\n/gu, '')}operator here(v: vertices) = A(v)
operator there = A(vertices(1, 0))
audit degeneracy code [A, B, here = -1, there = -1] on 2 x 2
audit degeneracy code [here = -1, A] on 2 x 2
`;
    const report = derive(text);
    const [pair, lone] = claims(report, 'degeneracy');
    expect(pair?.figures).toMatchObject({ dimension: 4, degeneracy: 4 });
    expect(pair?.figures['energy']).toBeCloseTo(-4, 9);
    expect(lone?.grade).toBe('open');
    expect(errors(report).join()).toContain('holds no state');
  });
});
