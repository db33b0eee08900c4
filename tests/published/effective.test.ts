import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { effective } from '../../shared/audits/effective.ts';
import { claimsOf } from '../engine/audits/source.ts';

/** Effective Hamiltonians and energies against published series. */

interface Term {
  readonly coefficient: string;
  readonly order: number;
  readonly string: string;
}
const termsOf = (figures: Record<string, unknown>): Term[] => figures['terms'] as Term[];

describe('strong bonds of the honeycomb model', () => {
  // A. Kitaev, Ann. Phys. 321, 2 (2006), section 5.1
  const source = readFileSync(new URL('../examples/strong-bonds.gw', import.meta.url), 'utf8');

  it('give -Jx^2 Jy^2 / (16 |Jz|^3) times the product of the outward bonds, at fourth order', () => {
    const [claim] = claimsOf(effective, source);
    expect(claim?.grade).toBe('exact');
    const terms = termsOf(claim?.figures ?? {});
    expect(terms).toHaveLength(1);
    expect(terms[0]).toMatchObject({ coefficient: '-Jx^2*Jy^2/(16*Jz^3)', order: 4 });
    // on each corner the Pauli matrix of the bond that leads out of the hexagon
    const paulis = terms[0]?.string.match(/\^[xyz]/g)?.sort();
    expect(paulis).toEqual(['^x', '^x', '^y', '^y', '^z', '^z']);
    expect(terms[0]?.string.startsWith('-')).toBe(false);
  });

  it('for negative Jz with the same modulus', () => {
    const [claim] = claimsOf(effective, source.replace('Jz = 10', 'Jz = -10'));
    // |Jz|^3 = -Jz^3
    expect(termsOf(claim?.figures ?? {})).toMatchObject([{ coefficient: 'Jx^2*Jy^2/(16*Jz^3)', order: 4 }]);
    expect(claim?.cautions.join()).toContain('Jz < 0');
  });
});

describe('toric code in one field, couplings 1/2', () => {
  // J. Vidal, S. Dusuel, K. P. Schmidt, Phys. Rev. B 79, 033109 (2009): energy per spin -1/2 - h^2/2 - 15 h^4/8 - 147 h^6/8 (from memory; two spins a cell)
  const text = (order: number): string => `lattice square torus 3 x 3
spins g on links
couplings h = 0.1
law A(v: vertices) = prod(l: star(v)) g^x[l]
law B(p: plaquettes) = prod(l: rim(p)) g^z[l]
model bare = - 1/2 sum(v: vertices) A(v) - 1/2 sum(p: plaquettes) B(p)
model whole = bare - h sum(l: links) g^x[l]
audit effective whole from bare order ${String(order)}`;

  it('ground energy to sixth order', () => {
    const [claim] = claimsOf(effective, text(6));
    expect(claim?.figures).toMatchObject({ terms: [], constant: '-147/4*h^6 - 15/4*h^4 - h^2 - 1' });
  });
});

describe('transverse field against a strong Ising ring', () => {
  // P. Pfeuty, Ann. Phys. 57, 79 (1970): energy per site -(1/π) ∫ sqrt(1 + h² + 2 h cos k) dk, expanded for small h: -1 - h²/4 - h⁴/64 - h⁶/256
  it('gives the expansion of the elliptic integral', () => {
    const [claim] = claimsOf(
      effective,
      `lattice chain torus 8
spins s on vertices
couplings h = 0.1
model bare = - sum(l: links) s^z[l.a] s^z[l.b]
model whole = bare - h sum(v: vertices) s^x[v]
audit effective whole from bare order 6`,
    );
    expect(claim?.figures).toMatchObject({ terms: [], constant: '-1/256*h^6 - 1/64*h^4 - 1/4*h^2 - 1' });
  });
});

describe('two spins that a strong coupling keeps opposite', () => {
  it('are flipped together by a field at second order', () => {
    // by hand: two orders in which the spins turn, each -g^2/(2 Jz)
    const [claim] = claimsOf(
      effective,
      `lattice chain torus 4
spins p on vertices
spins q on vertices
couplings Jz = 1, g = 0.1
model bare = Jz sum(v: vertices) p^z[v] q^z[v]
model whole = bare - g sum(v: vertices) (p^x[v] + q^x[v])
audit effective whole from bare order 2`,
    );
    expect(termsOf(claim?.figures ?? {})).toMatchObject([{ coefficient: '-g^2/Jz', order: 2 }]);
  });
});
