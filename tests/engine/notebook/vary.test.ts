import { describe, expect, it } from 'vitest';
import { newDerivation } from '../../../shared/derivation/derive.ts';
import { varyText } from '../../../shared/notebook/vary.ts';

const source = `# Ising
lattice chain torus 4 # small
spins s on vertices
couplings J = 1, h = 0.6,
  K
model a = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]
model b = a

audit spectrum a ~ b
  on 4, 6 levels 4
audit degeneracy a
symmetry flip = prod(v: vertices) s^x[v]
audit commute a with flat
`;
const text = (line: number, variation: Parameters<typeof varyText>[2]): string => {
  const varied = varyText(source, line, variation);
  return 'text' in varied ? varied.text : `fault: ${varied.fault}`;
};
const lines = (line: number, variation: Parameters<typeof varyText>[2]) => text(line, variation).split('\n');

describe('varying a claim', () => {
  it('keeps its audit alone, and every line number', () => {
    const own = lines(9, {});
    expect(own.length).toBe(source.split('\n').length);
    expect(own.slice(8, 13)).toEqual(['audit spectrum a ~ b', '  on 4, 6 levels 4', '#', source.split('\n')[11], '#']);
  });

  it('sets sizes where the audit names them, and where it does not', () => {
    expect(lines(9, { sizes: ['5', '8'] })[9]).toBe('  on 5, 8 levels 4');
    expect(lines(11, { sizes: ['5'] })[10]).toBe('audit degeneracy a on 5');
    expect(lines(13, { sizes: ['10'] })[1]).toBe('lattice chain torus 10 # small');
    expect(text(13, { sizes: ['10', '12'] })).toMatch(/^fault: .*one size/);
  });

  it('sets couplings, with a value before or not, and refuses others', () => {
    expect(lines(9, { couplings: { h: '1/2', K: '3' } }).slice(3, 5)).toEqual(['couplings J = 1, h = 1/2,', '  K = 3']);
    expect(lines(9, { couplings: { J: '2' } })[3]).toBe('couplings J = 2, h = 0.6,');
    expect(text(9, { couplings: { q: '1' } })).toBe('fault: There is no coupling q.');
    expect(text(2, {})).toMatch(/^fault/);
  });

  it('is answered by the engine as the same audit written by hand', () => {
    const energy = (own: string) =>
      newDerivation()
        .derive(own)
        .claims.map(({ figures }) => figures.energy);
    const byHand = source
      .replace(/audit spectrum[^]*?levels 4\n/, '')
      .replace('audit degeneracy a', 'audit degeneracy a on 6');
    const [wanted] = energy(byHand.replace('h = 0.6', 'h = 2').replace('audit commute a with flat\n', ''));
    expect(energy(text(11, { sizes: ['6'], couplings: { h: '2' } }))).toEqual([wanted]);
    expect(typeof wanted).toBe('number');
  });
});
