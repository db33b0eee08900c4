import { describe, expect, it } from 'vitest';
import { newDerivation } from '../../shared/derivation/derive.ts';
import type { Claim } from '../../shared/contracts/report.ts';

/** Numbers of logical spins of published codes, from sources in the operator language. */

function claims(text: string, audit: string): Claim[] {
  const report = newDerivation().derive(text);
  const errors = report.problems.filter((p) => p.severity === 'error');
  if (errors.length > 0) throw new Error(errors.map((e) => `${String(e.line)}: ${e.message}`).join('\n'));
  return report.claims.filter((claim) => claim.audit === audit);
}
const logical = (text: string): number[] =>
  claims(text, 'laws').map((c) => {
    expect(c).toMatchObject({ grade: 'exact', figures: { commute: true, consistent: true } });
    return c.figures['logical'] as number;
  });
const cubes = (extents: readonly number[]): string => extents.map((l) => Array(3).fill(l).join(' x ')).join(', ');

describe('A. Kitaev, Ann. Phys. 303, 2 (2003): the toric code', () => {
  const text = (lattice: string): string => `lattice ${lattice}
spins g on links
law A(v: vertices) = prod(l: star(v)) g^x[l]
law B(p: plaquettes) = prod(l: rim(p)) g^z[l]
model code = - sum(v: vertices) A(v) - sum(p: plaquettes) B(p)
`;
  it.each(['square', 'triangular', 'honeycomb', 'kagome'])('k = 2 on every torus of the %s lattice', (name) => {
    const on = '1 x 1, 2 x 1, 2 x 2, 3 x 2, 3 x 3, 4 x 4, (2, 2), (1, -2)';
    expect(logical(`${text(`${name} torus 3 x 3`)}audit laws A, B on ${on}\n`)).toEqual(Array(7).fill(2));
  });
  it('k = 1 on a cylinder with smooth ends, one loop and one cut, and 0 on a disc', () => {
    expect(logical(`${text('square cylinder 3 x 3')}audit laws A, B on 2 x 2, 3 x 3, 4 x 3\n`)).toEqual([1, 1, 1]);
    expect(logical(`${text('square open 3 x 3')}audit laws A, B on 2 x 2, 3 x 3, 4 x 3\n`)).toEqual([0, 0, 0]);
  });
  it('four ground states and gap 4 for unit couplings; energy −1 for each star and plaquette', () => {
    const found = claims(`${text('square torus 3 x 3')}audit degeneracy code on 2 x 2, 2 x 3, 3 x 3\n`, 'degeneracy');
    expect(found.map((c) => c.figures['degeneracy'])).toEqual([4, 4, 4]);
    [8, 12, 18].forEach((n, k) => {
      expect(found[k]?.figures['energy']).toBeCloseTo(-n, 9);
      expect(found[k]?.figures['gap']).toBeCloseTo(4, 9);
    });
  });
});

describe('S. Vijay, J. Haah, L. Fu, Phys. Rev. B 94, 235157 (2016)', () => {
  it('three-dimensional toric code: k = 3', () => {
    const text = `lattice cubic torus 2 x 2 x 2
spins g on links
law A(v: vertices) = prod(l: star(v)) g^x[l]
law B(p: plaquettes) = prod(l: rim(p)) g^z[l]
audit commute A with B
audit laws A, B on ${cubes([1, 2, 3, 4])}, 2 x 3 x 4
`;
    expect(logical(text)).toEqual([3, 3, 3, 3, 3]);
    expect(claims(text, 'commute')[0]?.grade).toBe('proved');
  });

  it('X-cube: k = 6L − 3 at L = 2 … 6, and 2(Lx + Ly + Lz) − 3', () => {
    const text = `lattice cubic torus 2 x 2 x 2
spins g on links
law C(c: cubes) = prod(l: edges(c)) g^x[l]
law V1(v: vertices) = prod(l: star(v) where not l in links.1) g^z[l]
law V2(v: vertices) = prod(l: star(v) where not l in links.2) g^z[l]
law V3(v: vertices) = prod(l: star(v) where not l in links.3) g^z[l]
audit commute C with V1, V2, V3
audit laws C, V1, V2, V3 on ${cubes([2, 3, 4, 5, 6])}, 2 x 3 x 4
`;
    expect(claims(text, 'commute')[0]?.grade).toBe('proved');
    expect(logical(text)).toEqual([...[2, 3, 4, 5, 6].map((l) => 6 * l - 3), 2 * (2 + 3 + 4) - 3]);
  });
});

describe('J. Haah, Phys. Rev. A 83, 042330 (2011): the cubic code', () => {
  // X on (1 + x + y + z, 1 + xy + yz + zx), Z on the mirror images, two spins a vertex.
  const text = (sizes: string): string => `lattice cubic torus 2 x 2 x 2
spins a on vertices
spins b on vertices
law X(v: vertices) = a^x[v] a^x[v + (1, 0, 0)] a^x[v + (0, 1, 0)] a^x[v + (0, 0, 1)]
  b^x[v] b^x[v + (1, 1, 0)] b^x[v + (0, 1, 1)] b^x[v + (1, 0, 1)]
law Z(v: vertices) = b^z[v] b^z[v - (1, 0, 0)] b^z[v - (0, 1, 0)] b^z[v - (0, 0, 1)]
  a^z[v] a^z[v - (1, 1, 0)] a^z[v - (0, 1, 1)] a^z[v - (1, 0, 1)]
audit commute X with Z
audit laws X, Z on ${sizes}
`;
  /** k = 4 deg gcd(1 + (1+t)^L, 1 + (1+wt)^L, 1 + (1+w²t)^L) − 2 over F4: J. Haah, Commun. Math. Phys. 324, 351 (2013). */
  function k(l: number): number {
    // F4 = {0, 1, w, w²} as 0 … 3: sum is xor, products by table
    const mul = (a: number, b: number): number => (a === 0 || b === 0 ? 0 : ((a - 1 + b - 1) % 3) + 1);
    const power = (c: number): number[] => {
      let p = [1];
      for (let n = 0; n < l; n++) {
        const next = Array<number>(p.length + 1).fill(0);
        p.forEach((x, d) => {
          next[d] = next[d]! ^ x;
          next[d + 1] = next[d + 1]! ^ mul(x, c);
        });
        p = next;
      }
      p[0] = p[0]! ^ 1;
      return trim(p);
    };
    const trim = (p: number[]): number[] => {
      const q = [...p];
      while (q.length > 0 && q.at(-1) === 0) q.pop();
      return q;
    };
    const inverse = [0, 1, 3, 2];
    const gcd = (a: number[], b: number[]): number[] => {
      if (b.length === 0) return a;
      let r = [...a];
      while (r.length >= b.length) {
        const q = mul(r.at(-1), inverse[b.at(-1)]!);
        const shift = r.length - b.length;
        b.forEach((x, d) => {
          r[d + shift] = r[d + shift]! ^ mul(q, x);
        });
        r = trim(r);
      }
      return gcd(b, r);
    };
    const degree = [1, 2, 3].map(power).reduce(gcd).length - 1;
    return 4 * degree - 2;
  }

  it('k = 6, 2, 14 at L = 2, 3, 4 and the formula by a common divisor up to L = 9', () => {
    const extents = [2, 3, 4, 5, 6, 7, 8, 9];
    const found = logical(text(cubes(extents)));
    expect(found.slice(0, 3)).toEqual([6, 2, 14]);
    expect(found).toEqual(extents.map(k));
  });

  it('k = 4L − 2 at L = 2^p and 2 at L = 2^p + 1', () => {
    expect(logical(text(cubes([2, 4, 8])))).toEqual([6, 14, 30]);
    expect(logical(text(cubes([3, 5, 9])))).toEqual([2, 2, 2]);
  });

  it('X and Z commute at every size', () => {
    expect(claims(text('2 x 2 x 2'), 'commute')[0]?.grade).toBe('proved');
  });
});
