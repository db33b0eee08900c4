import { describe, expect, it } from 'vitest';
import { commute } from '../../../shared/audits/commute.ts';
import { structure } from '../../../shared/audits/structure.ts';
import { claimsOf } from './source.ts';

/** What is found is written in the language: read back, each declaration commutes with the model at every size. */

const sources: readonly (readonly [string, string])[] = [
  [
    'matter and gauge field',
    `lattice square torus 4 x 4
spins s on vertices
spins g on links
couplings J, h, K
model m = - J sum(l: links) s^z[l.a] g^z[l] s^z[l.b] - h sum(v: vertices) s^x[v] - K sum(p: plaquettes) prod(l: rim(p)) g^z[l]`,
  ],
  [
    'honeycomb compass model',
    `lattice honeycomb torus 4 x 4
spins s on vertices
model m = - sum(l: links.1) s^x[l.a] s^x[l.b] - sum(l: links.2) s^y[l.a] s^y[l.b] - sum(l: links.3) s^z[l.a] s^z[l.b]`,
  ],
  [
    'a field that is staggered by two',
    `lattice square torus 4 x 4
spins s on vertices
model m = - sum(l: links) s^z[l.a] s^z[l.b] - sum(v: vertices where v.x % 2 == 0) s^x[v]`,
  ],
  [
    'stars of Z with a corner of X',
    `lattice square torus 4 x 4
spins g on links
model m = sum(v: vertices) prod(l: star(v)) g^z[l] + sum(p: plaquettes) g^x[p.1] g^x[p.2]`,
  ],
  [
    'two species in a chain',
    `lattice chain torus 6
spins p on vertices
spins q on vertices
model m = sum(v: vertices) p^x[v] q^x[v] + sum(v: vertices) p^z[v] q^y[v + (1)]`,
  ],
  [
    'triangular plaquettes of the kagome lattice',
    `lattice kagome torus 2 x 2
spins s on vertices
model m = sum(p: plaquettes.triangle) prod(v: corners(p)) s^z[v] + sum(p: plaquettes.hexagon) prod(v: corners(p)) s^x[v]`,
  ],
];

describe('declarations that were found', () => {
  it.each(sources)('%s', (_, source) => {
    const [first] = claimsOf(structure, `${source}\naudit symmetries of m`);
    const found = first?.figures['found'] as string[];
    expect(found.length).toBeGreaterThan(0);
    const names = found.map((text) => /^\w+ (\w+)/.exec(text)?.[1] ?? '');
    const [back] = claimsOf(commute, `${source}\n${found.join('\n')}\naudit commute m with ${names.join(', ')}`);
    expect(back?.grade).toBe('proved');
  });
});

describe('open edges', () => {
  const chain = (model: string): string => `lattice chain open 8
spins s on vertices
model m = ${model}
symmetry flip = prod(v: vertices) s^x[v]
audit commute m with flip`;

  it('a bond stays whole or goes: it commutes at the edge as in the bulk', () => {
    const [claim] = claimsOf(commute, chain('sum(l: links) s^z[l.a] s^z[l.b]'));
    expect(claim?.grade).toBe('proved');
    expect(claim?.statement).toContain('also at the open boundary');
  });

  it('a product that the edge cuts to one factor does not', () => {
    const [claim] = claimsOf(commute, chain('sum(v: vertices) prod(u: neighbours(v)) s^z[u]'));
    expect(claim?.grade).toBe('refuted');
    expect(claim?.witness['words']).toContain('open');
    expect(claim?.figures).toMatchObject({ terms: 1, commuting: 0 });
  });

  it('cut stars and whole plaquettes commute on open squares and cylinders', () => {
    for (const boundary of ['open 4 x 4', 'cylinder 4 x 4']) {
      const [claim] = claimsOf(
        commute,
        `lattice square ${boundary}
spins g on links
law A(v: vertices) = prod(l: star(v)) g^x[l]
model m = sum(p: plaquettes) prod(l: rim(p)) g^z[l]
audit commute m with A`,
      );
      expect(claim?.grade).toBe('proved');
      expect(claim?.statement).toContain('also at the open boundary');
    }
  });
});

describe('small tori', () => {
  it('are named where the overlap wraps onto itself', () => {
    const [claim] = claimsOf(
      commute,
      `lattice chain torus 2
spins s on vertices
model m = sum(v: vertices) s^z[v] s^z[v + (1)]
law G(v: vertices) = s^x[v]
audit commute m with G`,
    );
    expect(claim?.grade).toBe('refuted');
    // on a ring of one Z Z = 1; on a ring of two an X still meets a bond at one end
    expect(claim?.cautions.join()).toContain('on 1 the overlap wraps');
    expect(claim?.cautions.join()).not.toContain('2');
  });
});
