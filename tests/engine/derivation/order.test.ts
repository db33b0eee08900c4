import { describe, expect, it } from 'vitest';
import { newDerivation } from '../../../shared/derivation/derive.ts';

const source = `lattice square torus 4 x 4
spins s on vertices
spins g on links
couplings J = 1, h = 0.6, K
map bonds from s to g
  s^z[l.a] s^z[l.b] => g^z[l] for l: links
  s^x[v] => prod(l: star(v)) g^x[l] for v: vertices
model magnet = - h sum(v: vertices) s^x[v] - J sum(l: links) s^z[l.a] s^z[l.b]
model image = bonds(magnet)
model more = image - K sum(p: plaquettes) prod(l: rim(p)) g^z[l]
model first = - K sum(p: plaquettes) prod(l: rim(p)) g^z[l] + image
`;

describe('the order of sums', () => {
  const { models } = newDerivation().derive(source);
  const factors = (name: string) => models[name]?.groups.map(({ tex }) => /^-?\s*([A-Z]|h)/u.exec(tex)?.[1]);
  it('is that of the source, also through a model that is an image', () => {
    expect(factors('magnet')).toEqual(['h', 'J']);
    expect(factors('image')).toEqual(['h', 'J']);
    expect(factors('more')).toEqual(['h', 'J', 'K']);
    expect(factors('first')).toEqual(['K', 'h', 'J']);
  });
});

describe('a derivation in a hurry', () => {
  it('gives its first report before all is decided, and the same at the end', () => {
    const audited = `${source}law G(p: plaquettes) = prod(l: rim(p)) g^z[l]\naudit commute image with G\naudit map bonds\n`;
    const run = newDerivation({ hurried: () => true }).run(audited);
    const first = run.next().value;
    if (!('kind' in first) || first.kind !== 'report') throw new Error('no first report');
    expect(first.report.models['image']?.groups.length).toBe(2);
    expect(new Set(first.report.claims.map((claim) => claim.grade))).toEqual(new Set(['open']));
    let step = run.next();
    while (!step.done) step = run.next();
    expect(step.value).toEqual(newDerivation().derive(audited));
  });
});
