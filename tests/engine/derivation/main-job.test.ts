import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { newDerivation } from '../../../shared/derivation/derive.ts';
import { reportSchema, type Claim, type Report } from '../../../shared/contracts/report.ts';

/** The main job on whole sources: what a theorist types and what must come back. */

const example = (name: string): string => readFileSync(new URL(`../../examples/${name}.gw`, import.meta.url), 'utf8');
const report = (text: string): Report => reportSchema.parse(newDerivation().derive(text));
const claims = (of: Report, audit: string): Claim[] => of.claims.filter((claim) => claim.audit === audit);
const errors = (of: Report): unknown[] => of.problems.filter((problem) => problem.severity === 'error');

/** Levels of a free-fermion Ising ring need no engine: E0 of the even sector by Pfeuty, Ann. Phys. 57, 79 (1970). */
const pfeutyEven = (sites: number, J: number, h: number): number => {
  let sum = 0;
  for (let n = 0; n < sites; n++) {
    const k = ((2 * n + 1) * Math.PI) / sites;
    sum -= Math.sqrt(J * J + h * h - 2 * J * h * Math.cos(k));
  }
  return sum;
};

describe('Wegner duality on the square torus', () => {
  const text = example('ising-bonds');
  const whole = report(text);

  it('has no problems', () => {
    expect(errors(whole)).toEqual([]);
  });

  it('gives the dual term against term, with roles', () => {
    const { ising, gauge } = whole.models;
    expect(ising?.terms).toHaveLength(3);
    expect(gauge?.terms).toHaveLength(3);
    expect(ising?.groups).toHaveLength(2);
    expect(gauge?.groups).toHaveLength(2);
    expect(gauge?.image).toMatchObject({
      map: 'bonds',
      of: 'ising',
      pairs: [
        [0, 0],
        [1, 1],
      ],
    });
    expect(gauge?.terms.map((term) => term.kind).sort()).toEqual(['electric', 'electric', 'star']);
    expect(gauge?.terms.map((term) => term.coefficient)).toEqual(['-J', '-J', '-h']);
    const star = gauge?.terms.find((term) => term.kind === 'star');
    expect(star?.orbit).toHaveLength(4);
    expect(star?.orbit.every((factor) => factor.species === 'g' && factor.pauli === 'x')).toBe(true);
  });

  it('proves that the dual commutes with flatness', () => {
    expect(claims(whole, 'commute')).toMatchObject([{ grade: 'proved', figures: { terms: 3, commuting: 3 } }]);
  });

  it('counts the flatness laws', () => {
    expect(claims(whole, 'laws')).toMatchObject([
      {
        grade: 'exact',
        figures: { commute: true, consistent: true, size: '4 x 4', independent: 15, relations: 1, logical: 17 },
      },
    ]);
  });

  it('keeps commutation at all sizes and relations with their signs', () => {
    const map = claims(whole, 'map');
    expect(map.length).toBeGreaterThan(0);
    expect(map.some((claim) => claim.grade === 'proved')).toBe(true);
    expect(map.some((claim) => claim.grade === 'refuted')).toBe(false);
    for (const claim of map) expect(claim.figures).toMatchObject({ commutation: true, signs: true });
    const said = map.map((claim) => `${claim.statement} ${JSON.stringify(claim.figures)}`).join('\n');
    for (const name of ['flip', 'flat', 'w1', 'w2']) expect(said).toContain(name);
  });

  it('matches the spectra in the sector', () => {
    const spectra = claims(whole, 'spectrum');
    expect(spectra.map((claim) => claim.figures['size'])).toEqual(['2 x 2', '3 x 3']);
    for (const claim of spectra) {
      expect(claim.grade).toBe('numerical');
      // Eight levels, and the rest of the multiplet that the eighth belongs to.
      expect((claim.figures['left'] as number[]).length).toBeGreaterThanOrEqual(8);
      expect(claim.figures['right']).toHaveLength((claim.figures['left'] as number[]).length);
      expect(claim.figures['maxDifference']).toBeLessThan(1e-9);
    }
  });

  it('is the same job under other names, couplings and sizes', () => {
    const other = text
      .replaceAll(/\bg\b/g, 'tau')
      .replaceAll(/\bs\b/g, 'mu')
      .replaceAll('bonds', 'wegner')
      .replaceAll('h = 0.6', 'h = 7/5')
      .replaceAll('4 x 4', '5 x 3')
      .replaceAll('on 2 x 2, 3 x 3', 'on 3 x 2');
    const again = report(other);
    expect(errors(again)).toEqual([]);
    expect(again.claims.some((claim) => claim.grade === 'refuted' || claim.grade === 'open')).toBe(false);
    expect(claims(again, 'laws')[0]?.figures).toMatchObject({ independent: 14, relations: 1, logical: 16 });
  });

  it('refutes the full spectra: half of the magnet has no image', () => {
    const full = report(text.replace('ising [flip = +1] ~', 'ising ~'));
    expect(claims(full, 'spectrum').some((claim) => claim.grade === 'refuted')).toBe(true);
  });

  it('refutes a bare field with the overlap as witness', () => {
    const biased = report(`${text}\nmodel biased = gauge - 0.3 sum(l: links) g^x[l]\naudit commute biased with flat\n`);
    const claim = claims(biased, 'commute')[1];
    expect(claim).toMatchObject({ grade: 'refuted', figures: { terms: 5, commuting: 3 } });
    expect(JSON.stringify(claim?.witness)).toContain('"g"');
  });
});

describe('the duality of the Ising ring', () => {
  const whole = report(example('chain-duality'));

  it('has no problems and no refuted claim', () => {
    expect(errors(whole)).toEqual([]);
    expect(whole.claims.filter((claim) => claim.grade === 'refuted')).toEqual([]);
  });

  it('matches the levels, the lowest of them being the free-fermion one', () => {
    const spectra = claims(whole, 'spectrum');
    expect(spectra.map((claim) => claim.figures['size'])).toEqual(['6', '8', '10']);
    spectra.forEach((claim, k) => {
      const left = claim.figures['left'] as number[];
      expect(left[0]).toBeCloseTo(pfeutyEven([6, 8, 10][k] ?? 0, 1, 0.6), 9);
      expect(claim.figures['maxDifference']).toBeLessThan(1e-9);
    });
  });

  it('finds one ground state in the even sector', () => {
    const [claim] = claims(whole, 'degeneracy');
    expect(claim?.figures).toMatchObject({ size: '8', degeneracy: 1 });
    expect(claim?.figures['energy']).toBeCloseTo(pfeutyEven(8, 1, 0.6), 9);
  });
});

describe('the toric code', () => {
  const whole = report(example('toric-code'));

  it('has two independent logical spins on the torus', () => {
    expect(claims(whole, 'laws')).toMatchObject([
      {
        grade: 'exact',
        figures: { commute: true, consistent: true, size: '3 x 3', independent: 16, relations: 2, logical: 2 },
      },
    ]);
  });

  it('commutes with its laws at every size', () => {
    expect(claims(whole, 'commute')).toMatchObject([{ grade: 'proved', figures: { terms: 2, commuting: 2 } }]);
  });

  it('has four ground states and gap 4', () => {
    const found = claims(whole, 'degeneracy');
    expect(found.map((claim) => claim.figures['size'])).toEqual(['2 x 2', '3 x 3']);
    found.forEach((claim, k) => {
      expect(claim.figures).toMatchObject({ degeneracy: 4 });
      expect(claim.figures['energy']).toBeCloseTo(k === 0 ? -8 : -18, 9);
      expect(claim.figures['gap']).toBeCloseTo(4, 9);
    });
  });

  it('loses consistency when a law has the wrong sign an odd number of times', () => {
    const frustrated = report(
      example('toric-code').replace('prod(l: star(v)) g^x[l]\n', 'prod(l: star(v)) g^x[l] is -1\n'),
    );
    expect(claims(frustrated, 'laws')[0]).toMatchObject({ figures: { commute: true, consistent: false } });
  });
});

describe('a dictionary with a wrong sign', () => {
  const text = example('wrong-sign');

  it('keeps commutation at every size and is refuted by the sign of a relation', () => {
    const whole = report(text);
    expect(errors(whole)).toEqual([]);
    const map = claims(whole, 'map');
    const refuted = map.filter((claim) => claim.grade === 'refuted');
    expect(refuted).toHaveLength(1);
    expect(refuted[0]?.figures).toMatchObject({ commutation: true, signs: false });
    expect(String(refuted[0]?.witness['words'])).not.toBe('');
  });

  it('holds once the sign is put right', () => {
    const mended = report(text.replace('=> a^z[v] b^z[v]', '=> - a^z[v] b^z[v]'));
    expect(errors(mended)).toEqual([]);
    const map = claims(mended, 'map');
    expect(map.some((claim) => claim.grade === 'refuted')).toBe(false);
    for (const claim of map) expect(claim.figures).toMatchObject({ commutation: true, signs: true });
  });
});

describe('problems', () => {
  it('reports three errors in three statements and evaluates the rest', () => {
    const text = [
      'lattice chain torus 6',
      'spins s on vertices',
      'couplings J = 1',
      'model good = - J sum(l: links) s^z[l.a] s^z[l.b]',
      'model bad1 = - K sum(v: vertices) s^x[v]',
      'model bad2 = - sum(v: vertices) s^x[v',
      'symmetry flip = prod(v: vertices) s^x[v]',
      'operator bad3(v: vertices) = s^x[v.a]',
      'model more = good - sum(v: vertices) s^x[v]',
      'audit degeneracy more [flip] on 4',
      '',
    ].join('\n');
    const whole = report(text);
    const found = errors(whole) as Report['problems'];
    expect(found.map((problem) => problem.line)).toEqual([5, 6, 8]);
    expect(found[0]).toMatchObject({ line: 5, column: 16, length: 1 });
    expect(found[2]).toMatchObject({ line: 8 });
    expect(Object.keys(whole.models)).toEqual(['good', 'more']);
    expect(claims(whole, 'degeneracy')).toHaveLength(1);
  });
});
