import { describe, expect, it } from 'vitest';
import { expect as expectation } from '../../../shared/audits/expect.ts';
import { scan } from '../../../shared/audits/scan.ts';
import type { Claim } from '../../../shared/contracts/report.ts';
import { claimsOf } from './source.ts';

const numbers = (claim: Claim | undefined, name: string): number[] => (claim?.figures[name] ?? []) as number[];

const ising = `lattice chain torus 8
spins s on vertices
couplings J = 1, h = 0.6
model ising = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]
symmetry flip = prod(v: vertices) s^x[v]
operator field(v: vertices) = s^x[v]
operator bond = sum(l: links) s^z[l.a] s^z[l.b]
`;

/** Even sector of the Ising ring: E(h) by P. Pfeuty, Ann. Phys. 57, 79 (1970). */
const energy = (n: number, h: number): number => {
  let sum = 0;
  for (let m = 0; m < n; m++) sum -= Math.sqrt(1 + h * h - 2 * h * Math.cos(((2 * m + 1) * Math.PI) / n));
  return sum;
};

describe('means in ground spaces', () => {
  it('are derivatives of the energy', () => {
    const claims = claimsOf(
      expectation,
      `${ising}audit expect field in ground of ising [flip = +1] on 6, 8, 10
audit expect bond in ground of ising [flip = +1] on 8
audit expect ising in ground of ising [flip = +1] on 8
audit expect flip in ground of ising on 8`,
    );
    expect(claims.map((claim) => claim.grade)).toEqual(Array(6).fill('numerical'));
    for (const [k, n] of [6, 8, 10].entries()) {
      const slope = (energy(n, 0.6 + 1e-5) - energy(n, 0.6 - 1e-5)) / 2e-5;
      expect(claims[k]?.figures['value']).toBeCloseTo(-slope / n, 7);
    }
    const slope = (energy(8, 0.6 + 1e-5) - energy(8, 0.6 - 1e-5)) / 2e-5;
    expect(claims[3]?.figures['value']).toBeCloseTo(-(energy(8, 0.6) - 0.6 * slope), 6);
    expect(claims[4]?.figures['value']).toBeCloseTo(energy(8, 0.6), 9);
    expect(claims[5]?.figures['value']).toBeCloseTo(1, 9);
  });

  it('do not depend on a choice of basis where the ground space is degenerate', () => {
    const text = (sector: string): string => `lattice square torus 2 x 2
spins g on links
law A(v: vertices) = prod(l: star(v)) g^x[l]
law B(p: plaquettes) = prod(l: rim(p)) g^z[l]
symmetry loop = prod(l: loop(1)) g^z[l]
operator corner(l: links) = g^z[l]
model code = - sum(v: vertices) A(v) - sum(p: plaquettes) B(p)
audit expect A in ground of code ${sector} on 2 x 2, 2 x 3
audit expect loop in ground of code ${sector} on 2 x 2
audit expect corner in ground of code ${sector} on 2 x 2`;
    const free = claimsOf(expectation, text(''));
    expect(free.map((claim) => Number(claim.figures['value']).toFixed(9))).toEqual([
      '1.000000000',
      '1.000000000',
      '0.000000000',
      '0.000000000',
    ]);
    expect(free[0]?.figures['degeneracy']).toBe(4);
    const fixed = claimsOf(expectation, text('[loop = -1]'));
    expect(fixed[2]?.figures['value']).toBeCloseTo(-1, 9);
    expect(fixed[0]?.cautions.join()).toContain('space-time loop');
  });

  it('refuse what cannot be measured', () => {
    const claims = claimsOf(
      expectation,
      `${ising}spins t on vertices
operator other(v: vertices) = t^x[v]
operator turn(v: vertices) = s^+[v]
audit expect other in ground of ising on 4
audit expect turn in ground of ising on 4`,
    );
    expect(claims.map((claim) => claim.grade)).toEqual(['open', 'open']);
    expect(claims[0]?.cautions.join()).toContain('does not have');
    expect(claims[1]?.cautions.join()).toContain('not Hermitian');
  });
});

describe('scans', () => {
  it('of energy and gap follow the closed formula', () => {
    const [energies, gaps] = claimsOf(
      scan,
      `${ising}audit scan energy of ising [flip = +1] over h = 0.2 .. 1.4 by 0.4 on 8
audit scan gap of ising over h = 0.4 .. 2 by 0.2, J = 1 on 6`,
    );
    expect(energies?.figures['points']).toEqual([[0.2], [0.6], [1], [1.4]]);
    for (const [k, h] of [0.2, 0.6, 1, 1.4].entries())
      expect(numbers(energies, 'values')[k]).toBeCloseTo(energy(8, h), 9);
    expect(gaps?.figures['couplings']).toEqual(['h', 'J']);
    expect(numbers(gaps, 'values')).toHaveLength(9);
  });

  it('refine a gap near its minimum', () => {
    // in the even sector the gap above the ground state closes towards h = 1
    const [claim] = claimsOf(scan, `${ising}audit scan gap of ising [flip = +1] over h = 0.2 .. 2 by 0.3 on 8`);
    const values = numbers(claim, 'values');
    const refined = claim?.figures['refined'] as { points: number[][]; values: number[] };
    expect(refined.points.length).toBeGreaterThan(3);
    expect(Math.min(...refined.values)).toBeLessThanOrEqual(Math.min(...values));
  });

  it('of overlaps dip at the transition; with the reference of a field they grow to one', () => {
    const [near, far, model] = claimsOf(
      scan,
      `${ising}law up(v: vertices) = s^x[v]
reference field0 = stabilizer state of up
model field1 = - 2 sum(v: vertices) s^x[v]
audit scan overlap of ising [flip = +1] over h = 0.25 .. 2.25 by 0.25 on 8
audit scan overlap of ising over h = 0 .. 8 by 2 with field0 on 8
audit scan overlap of ising over h = 0 .. 8 by 2 with field1 on 8`,
    );
    const steps = numbers(near, 'values');
    expect(steps[0]).toBeNull();
    const dip = steps.slice(1).indexOf(Math.min(...steps.slice(1)));
    // between 0.75 and 1.25
    expect([1, 2, 3]).toContain(dip);
    const values = numbers(far, 'values');
    for (let k = 1; k < values.length; k++) expect(values[k]).toBeGreaterThan(values[k - 1] ?? 0);
    expect(values.at(-1)).toBeGreaterThan(0.98);
    // the same state as the ground state of a model
    expect(model?.grade).toBe('numerical');
    for (const [k, value] of numbers(model, 'values').entries()) expect(value).toBeCloseTo(values[k] ?? 0, 7);
    // two ground states at h = 0, one of which holds the even half: |<+…+|even cat>|² = 2 / 2^8
    expect(values[0]).toBeCloseTo(Math.sqrt(2 / 2 ** 8), 6);
  });

  it('of a mean', () => {
    const [claim] = claimsOf(scan, `${ising}audit scan field of ising [flip = +1] over h = 0.5 .. 1.5 by 0.5 on 8`);
    const values = numbers(claim, 'values');
    for (const [k, h] of [0.5, 1, 1.5].entries())
      expect(values[k]).toBeCloseTo(-(energy(8, h + 1e-5) - energy(8, h - 1e-5)) / 2e-5 / 8, 6);
  });

  it('with several ranges give their product', () => {
    const [claim] = claimsOf(
      scan,
      `${ising}audit scan energy of ising [flip = +1] over J = 0 .. 1 by 1, h = 1 .. 2 by 1 on 4`,
    );
    expect(claim?.figures['points']).toEqual([
      [0, 1],
      [0, 2],
      [1, 1],
      [1, 2],
    ]);
    expect(numbers(claim, 'values')[1]).toBeCloseTo(-8, 9);
  });

  it('against the equal superposition of dimer coverings: one at the Rokhsar-Kivelson point', () => {
    // D. Rokhsar, S. Kivelson, Phys. Rev. Lett. 61, 2376 (1988)
    const [claim] = claimsOf(
      scan,
      `lattice square open 4 x 4
spins d on links
couplings t = 1, V
rule one(v: vertices) = sum(l: star(v)) d^n[l] is 1
reference even = uniform over [one]
model rk =
  - t sum(p: plaquettes) (d^-[p.1] d^+[p.2] d^-[p.3] d^+[p.4] + hc)
  + V sum(p: plaquettes) (d^n[p.1] d^n[p.3] + d^n[p.2] d^n[p.4])
audit scan overlap of rk [one] over V = 0.5 .. 1.5 by 0.5 with even on 4 x 4`,
    );
    const values = numbers(claim, 'values');
    expect(values[1]).toBeCloseTo(1, 8);
    expect(values[0]).toBeLessThan(0.99);
  });
});
