import { describe, expect, it } from 'vitest';
import type { Suggestion } from '../../../shared/contracts/report.ts';
import { newDerivation } from '../../../shared/derivation/derive.ts';

/** What models offer, and that each offer can be added to its source as it stands. */

function offers(source: string): readonly Suggestion[] {
  const report = newDerivation().derive(source);
  expect(report.problems.filter((problem) => problem.severity === 'error')).toEqual([]);
  return report.suggestions ?? [];
}

/** The source with one offer added: no problem, and nothing refuted. */
function taken(source: string, { statements }: Suggestion) {
  const report = newDerivation().derive(`${source}\n${statements.join('\n')}\n`);
  expect(report.problems).toEqual([]);
  expect(report.claims.filter((claim) => claim.grade === 'refuted')).toEqual([]);
  return report;
}

const of = (all: readonly Suggestion[], what: Suggestion['what']): readonly Suggestion[] =>
  all.filter((one) => one.what === what);

const ising = (lattice: string, more = ''): string => `lattice ${lattice}
spins s on vertices
couplings J = 1, h = 0.5
model ising = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]
${more}`;

describe.each(['chain torus 6', 'square torus 4 x 4', 'kagome torus 3 x 3', 'cubic torus 3 x 3 x 3'])(
  'a magnet on %s',
  (lattice) => {
    it('offers its gauged form, which obeys the Gauss law', () => {
      const source = ising(lattice, 'symmetry flip = prod(v: vertices) s^x[v]');
      const [gauge, ...more] = of(offers(source), 'gauge');
      expect(more).toEqual([]);
      expect(gauge?.statements[0]).toBe('spins g on links');
      if (!gauge) throw new Error('no offer');
      const report = taken(source, gauge);
      expect(report.claims.map((claim) => claim.grade)).toEqual(['proved']);
      // once taken it is not offered again, and what the gauged model offers is to use up its law
      const next = report.suggestions ?? [];
      expect(of(next, 'gauge')).toEqual([]);
      expect(of(next, 'solve').map((one) => one.model)).toEqual(['isingGauged']);
    });

    it('offers nothing of the kind where a field breaks the symmetry', () => {
      const source = ising(
        lattice,
        'symmetry flip = prod(v: vertices) s^x[v]\nmodel broken = ising + h sum(v: vertices) s^z[v]',
      );
      expect(of(offers(source), 'gauge').map((one) => one.model)).toEqual(['ising']);
    });
  },
);

describe('what an audit of symmetries found', () => {
  it('is offered as a declaration, and as the symmetry to be gauged', () => {
    const source = ising('chain torus 6', 'audit symmetries of ising');
    const all = offers(source);
    expect(of(all, 'declare').map((one) => one.statements)).toEqual([['symmetry found1 = prod(v: vertices) s^x[v]']]);
    const [gauge] = of(all, 'gauge');
    if (!gauge) throw new Error('no offer');
    taken(source, gauge);
  });

  it('is not offered where it is declared under another name', () => {
    const source = ising('chain torus 6', 'symmetry flip = prod(v: vertices) s^x[v]\naudit symmetries of ising');
    expect(of(offers(source), 'declare')).toEqual([]);
  });

  it('bears a free name, and a found law that holds its own spin is offered to be solved', () => {
    const source = `lattice square torus 3 x 3
spins s on vertices
spins g on links
operator found1 = s^x[vertices(0, 0)]
model higgs = - sum(l: links) s^z[l.a] g^z[l] s^z[l.b] - sum(v: vertices) s^x[v]
  - sum(p: plaquettes) prod(l: rim(p)) g^z[l] - sum(l: links) g^x[l]
audit symmetries of higgs`;
    const all = offers(source);
    const [law] = of(all, 'declare');
    expect(law?.statements[0]).toContain('law found12(v: vertices)');
    const [solve] = of(all, 'solve');
    if (!solve) throw new Error('no offer');
    const report = taken(source, solve);
    expect(report.models['higgsSolved']?.species).toEqual(['g']);
  });
});
