import { describe, expect, it } from 'vitest';
import type { Claim } from '../../../shared/contracts/report.ts';
import { newDerivation } from '../../../shared/derivation/derive.ts';

/** Claims of maps of every kind, as a source asks for them. */

const head = (lattice: string): string => `lattice ${lattice}
spins s on vertices
spins g on links
symmetry flip = prod(v: vertices) s^x[v]
map minimal = gauge flip with g on links
map fix = solve minimal.gauss for s
map whole = minimal then fix
map back = inverse fix
`;

function claimsOf(source: string): readonly Claim[] {
  const report = newDerivation().derive(source);
  expect(report.problems.filter((problem) => problem.severity === 'error')).toEqual([]);
  return report.claims;
}

const figure = (claims: readonly Claim[], name: string): unknown =>
  claims.find((claim) => name in claim.figures)?.figures[name];

describe.each([
  'chain torus 5',
  'square torus 3 x 3',
  'triangular torus 3 x 3',
  'honeycomb torus 2 x 2',
  'kagome torus 2 x 2',
  'cubic torus 2 x 2 x 2',
])('gauging, then solving its law, on %s', (lattice) => {
  const whole = claimsOf(`${head(lattice)}audit map whole\n`);

  it('is one duality, proved for every size, in the even sector without flux', () => {
    expect(whole.some((claim) => claim.grade === 'refuted' || claim.grade === 'open')).toBe(false);
    expect(whole[0]?.grade).toBe('proved');
    expect(figure(whole, 'leftSectors')).toEqual(['flip = +1']);
    expect(figure(whole, 'leftDimension')).toBe(figure(whole, 'rightDimension'));
  });

  it('joins sectors of the same dimension in each of its parts', () => {
    for (const part of ['minimal', 'fix', 'back']) {
      const claims = claimsOf(`${head(lattice)}audit map ${part}\n`);
      expect(claims.every((claim) => claim.grade === 'proved' || claim.grade === 'exact')).toBe(true);
      expect(figure(claims, 'leftDimension')).toBe(figure(claims, 'rightDimension'));
      const sectors = JSON.stringify([figure(claims, 'leftSectors'), figure(claims, 'rightSectors')]);
      expect(sectors).toContain('minimal.gauss = +1');
    }
  });
});

describe('gauging symmetries of other kinds', () => {
  it.each([
    ['on one sublattice, by Z', 'prod(v: vertices where (v.x + v.y) % 2 == 0) s^z[v]'],
    ['by Y', 'prod(v: vertices) s^y[v]'],
    ['of two species at once', 'prod(v: vertices) s^x[v] t^z[v]'],
    ['on every second row', 'prod(v: vertices where v.y % 2 == 0) s^x[v]'],
  ])('%s', (_, symmetry) => {
    const claims = claimsOf(`lattice square torus 4 x 4
spins s on vertices
spins t on vertices
spins g on links
symmetry sign = ${symmetry}
map field = gauge sign with g on links
audit map field
`);
    expect(claims.every((claim) => claim.grade === 'proved' || claim.grade === 'exact')).toBe(true);
    expect(claims[0]?.statement).toContain('commutes with its Gauss law field.gauss');
    expect(figure(claims, 'leftSectors')).toEqual(['sign = +1']);
    expect(JSON.stringify(figure(claims, 'rightSectors'))).toContain('field.gauss = +1"');
  });

  it('two in a row: the duality of both together, with both Gauss laws', () => {
    const claims = claimsOf(`lattice chain torus 4
spins s on vertices
spins t on vertices
spins a on links
spins b on links
symmetry p = prod(v: vertices) s^x[v]
symmetry q = prod(v: vertices) t^x[v]
map first = gauge p with a on links
map second = gauge q with b on links
map both = first then second
model pair = sum(l: links) s^z[l.a] s^z[l.b] + sum(l: links) t^z[l.a] t^z[l.b] + sum(v: vertices) s^x[v] t^x[v]
model gauged = both(pair)
audit map both
audit commute gauged with both.gauss
`);
    expect(claims.every((claim) => claim.grade === 'proved' || claim.grade === 'exact')).toBe(true);
    expect(claims.at(-1)?.figures).toMatchObject({ terms: 3, commuting: 3 });
  });
});

describe('choices of path in minimal coupling', () => {
  const source = (
    lattice: string,
    pairs: number,
  ): string => `${head(lattice)}model far = sum(t: pairs(${String(pairs)})) s^z[t.a] s^z[t.b]
model image = minimal(far)
audit map minimal
`;

  it.each([
    'square torus 3 x 3',
    'triangular torus 3 x 3',
    'honeycomb torus 2 x 2',
    'kagome torus 2 x 2',
    'cubic torus 2 x 2 x 2',
  ])('are equal where the field is flat, proved on %s', (lattice) => {
    const found = claimsOf(source(lattice, 2)).filter((claim) => 'long' in claim.figures);
    expect(found.map((claim) => claim.grade)).toEqual(['proved']);
    expect(found[0]?.statement).toContain('equal where every flux is +1');
    expect(found[0]?.figures['long']).not.toEqual([]);
  });

  it('are none on a chain, and are not said to be equal where a hole has no plaquette', () => {
    expect(claimsOf(source('chain torus 6', 2)).some((claim) => 'long' in claim.figures)).toBe(false);
    const ladder = `lattice custom
  cell (1, 0), (0, 1)
  vertex A at (0, 0)
  vertex B at (1/2, 1/2)
  link A -- B
  link B -- A + (1, 0)
  link B -- A + (0, 1)
  link B -- A + (1, 1)
  plaquette low: A, B, A + (1, 0), B + (0, -1)
  size 3 x 3 torus
`;
    const claims = claimsOf(source('x', 2).replace('lattice x\n', ladder));
    const choice = claims.find((claim) => 'long' in claim.figures);
    expect(choice?.grade).toBe('open');
  });
});

describe('a dictionary on an open lattice', () => {
  it('says which terms the edge cuts', () => {
    const claims = claimsOf(`lattice square open 4 x 4
spins s on vertices
spins g on links
map bonds from s to g
  s^z[l.a] s^z[l.b] => g^z[l]                   for l: links
  s^x[v]            => prod(l: star(v)) g^x[l]  for v: vertices
model round = sum(v: vertices) s^x[v] prod(u: neighbours(v)) s^x[u]
model image = bonds(round)
audit map bonds
`);
    expect(claims.flatMap((claim) => claim.cautions).join(' ')).toContain('is cut where it stands at an open edge');
  });
});

describe('boundaries and sectors that answer one another', () => {
  const ring = (extent: number): string => `lattice chain torus ${String(extent)}
spins s on vertices
spins m on vertices
symmetry flip = prod(v: vertices) s^x[v]
symmetry walls = prod(v: vertices) m^z[v]
map dual from s to m
  s^z[v] s^z[v + (1)] => m^z[v]                for v: vertices
  s^x[v]              => m^x[v - (1)] m^x[v]   for v: vertices
map cluster from s to m
  s^z[v - (1)] s^x[v] s^z[v + (1)] => m^z[v] m^z[v + (1)] for v: vertices
`;

  // the product of all bonds is 1 with periodic and -1 with antiperiodic ends, and it is the image of all walls
  it.each([4, 5, 6])(
    'an antiperiodic magnet of %i spins has an odd number of walls, and the other way round',
    (extent) => {
      const claims = claimsOf(`${ring(extent)}audit map dual\n`);
      expect(figure(claims, 'boundaries')).toEqual([
        { side: 'left', symmetry: 'flip', direction: 1, left: [], right: ['walls = -1'], none: false },
        { side: 'right', symmetry: 'walls', direction: 1, left: ['flip = -1'], right: [], none: false },
      ]);
    },
  );

  it('says which relation of the cluster ring takes which sign on which size', () => {
    const claims = claimsOf(`${ring(6)}audit map cluster\n`);
    expect(figure(claims, 'depends')).toEqual(['flip is +1 on 2, 4, 6 and -1 on 1, 3']);
    expect(claims.flatMap((claim) => claim.cautions).join(' ')).toContain('depends on the size');
  });
});

describe('a composition with a wrong part', () => {
  it('is refuted as a whole, with its witness', () => {
    const claims = claimsOf(`lattice chain torus 4
spins p on vertices
spins q on vertices
spins a on vertices
spins b on vertices
map wrong from p, q to a, b
  p^x[v] q^x[v] => a^z[v]        for v: vertices
  p^y[v] q^y[v] => b^z[v]        for v: vertices
  p^z[v] q^z[v] => a^z[v] b^z[v] for v: vertices
map turn = circuit
  h a[v] for v: vertices
map both = wrong then turn
audit map both
`);
    const refuted = claims.find((claim) => claim.grade === 'refuted');
    expect(refuted?.witness).toMatchObject({ left: '-1', right: '+1' });
    expect(claims.every((claim) => claim.figures['signs'] === false)).toBe(true);
  });
});
