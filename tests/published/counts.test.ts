import { describe, expect, it } from 'vitest';
import { count } from '../../shared/audits/count.ts';
import { claimsOf } from '../engine/audits/source.ts';

/** Numbers of allowed states, against closed formulas and published tables. */

const counts = (text: string): unknown[] => {
  const claims = claimsOf(count, text);
  for (const claim of claims) expect(claim.grade).toBe('exact');
  return claims.map((claim) => claim.figures['count']);
};

describe('dimers', () => {
  it('on the chessboard', () => {
    // P. Kasteleyn, Physica 27, 1209 (1961); H. Temperley, M. Fisher, Phil. Mag. 6, 1061 (1961)
    const board = `lattice square open 8 x 8
spins d on links
rule one(v: vertices) = sum(l: star(v)) d^n[l] is 1
audit count one on 2 x 2, 4 x 4, 6 x 6, 8 x 8, 3 x 3, 2 x 7`;
    // 2 x n boards: Fibonacci numbers; odd boards have none
    expect(counts(board)).toEqual([2, 36, 6728, 12988816, 0, 21]);
  });

  it('past 2^53 as text: 12 x 12 by the product formula of Kasteleyn', () => {
    const product = (m: number): number => {
      let all = 1;
      for (let j = 1; j <= m / 2; j++)
        for (let k = 1; k <= m / 2; k++) {
          all *= 4 * Math.cos((Math.PI * j) / (m + 1)) ** 2 + 4 * Math.cos((Math.PI * k) / (m + 1)) ** 2;
        }
      return all;
    };
    const [found] = counts(`lattice square open 10 x 10
spins d on links
rule one(v: vertices) = sum(l: star(v)) d^n[l] is 1
audit count one on 12 x 12`);
    expect(found).toBe('53060477521960000');
    expect(Math.abs(Number(found) / product(12) - 1)).toBeLessThan(1e-12);
  });

  it('on the 4 x 4 torus', () => {
    expect(
      counts(`lattice square torus 4 x 4
spins d on links
rule one(v: vertices) = sum(l: star(v)) d^n[l] is 1
audit count one`),
    ).toEqual([272]);
  });

  it('on kagome tori: 2^(N/3 + 1) for even N, none for odd N', () => {
    // G. Misguich, D. Serban, V. Pasquier, Phys. Rev. Lett. 89, 137202 (2002)
    expect(
      counts(`lattice kagome torus 2 x 2
spins d on links
rule one(v: vertices) = sum(l: star(v)) d^n[l] is 1
audit count one on 2 x 2, 2 x 3, 3 x 3, 4 x 4`),
    ).toEqual([2 ** 5, 2 ** 7, 0, 2 ** 17]);
  });
});

describe('blockade', () => {
  const text = (boundary: string, sizes: string): string => `lattice chain ${boundary} 6
spins r on vertices
rule apart(l: links) = r^n[l.a] + r^n[l.b] is <= 1
audit count apart on ${sizes}`;

  it('on rings: Lucas numbers', () => {
    expect(counts(text('torus', '3, 4, 5, 6, 10, 40'))).toEqual([4, 7, 11, 18, 123, 228826127]);
  });
  it('on open chains: Fibonacci numbers', () => {
    expect(counts(text('open', '1, 2, 3, 4, 5, 10'))).toEqual([2, 3, 5, 8, 13, 144]);
  });
});

/** Arrows on an L x L torus, row by row: the trace of the L-th power of the (2^L × 2^L) transfer matrix of the six-vertex model. */
function byTransfer(l: number): number {
  const size = 2 ** l;
  const t = Array.from({ length: size }, (_, below) =>
    Array.from({ length: size }, (__, above) => {
      let ways = 0;
      for (const start of [0, 1]) {
        let h = start;
        let fine = true;
        for (let x = 0; x < l; x++) {
          h += ((below >> x) & 1) - ((above >> x) & 1);
          fine &&= h === 0 || h === 1;
        }
        if (fine && h === start) ways++;
      }
      return ways;
    }),
  );
  let power = t;
  for (let k = 1; k < l; k++)
    power = power.map((row) => t.map((_, c) => row.reduce((sum, x, m) => sum + x * (t[m]?.[c] ?? 0), 0)));
  return power.reduce((sum, row, k) => sum + (row[k] ?? 0), 0);
}

describe('square ice on tori', () => {
  it('two in, two out: OEIS A054759', () => {
    // out(v) and into(v) are the links that begin and end there: their sums are equal
    const arrows = (sizes: string): string => `lattice square torus 4 x 4
spins a on links
rule ice(v: vertices) = sum(l: out(v)) a^n[l] - sum(l: into(v)) a^n[l] is 0
audit count ice on ${sizes}`;
    expect(counts(arrows('1 x 1, 2 x 2, 3 x 3, 4 x 4, 6 x 6'))).toEqual([4, 18, 148, 2970, byTransfer(6)]);
  });
  it('two dimers at a vertex agree with it at even sizes', () => {
    expect(
      counts(`lattice square torus 2 x 2
spins d on links
rule two(v: vertices) = sum(l: star(v)) d^n[l] is 2
audit count two on 2 x 2, 4 x 4`),
    ).toEqual([18, 2970]);
  });
});

describe('laws and rules together', () => {
  it('a star of Z counts even patterns; signs are kept', () => {
    const text = (sign: string): string => `lattice square torus 2 x 3
spins d on links
law G(v: vertices) = prod(l: star(v)) d^z[l] is ${sign}
audit count G on 2 x 2, 2 x 3, 3 x 3`;
    // 2 N links, N laws of which N − 1 are independent; all of them odd needs an even number of vertices
    expect(counts(text('+1'))).toEqual([2 ** 5, 2 ** 7, 2 ** 10]);
    expect(counts(text('-1'))).toEqual([2 ** 5, 2 ** 7, 0]);
  });
  it('dimers obey an odd parity besides', () => {
    expect(
      counts(`lattice square torus 4 x 4
spins d on links
rule one(v: vertices) = sum(l: star(v)) d^n[l] is 1
law odd(v: vertices) = prod(l: star(v)) d^z[l] is -1
audit count one, odd`),
    ).toEqual([272]);
  });
  it('a rule of products of bits', () => {
    // no three in a row on a ring of 5: 2^5 less those that have, counted by hand: 21 = tribonacci-like number
    expect(
      counts(`lattice chain torus 5
spins r on vertices
rule few(v: vertices) = r^n[v] r^n[v + (1)] r^n[v + (2)] is 0
audit count few on 5`),
    ).toEqual([21]);
  });
  it('what flips cannot be counted', () => {
    const [claim] = claimsOf(
      count,
      `lattice chain torus 5
spins r on vertices
law G(v: vertices) = r^x[v]
audit count G`,
    );
    expect(claim?.grade).toBe('open');
  });
});
