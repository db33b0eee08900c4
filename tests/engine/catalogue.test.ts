import { readdirSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { worked } from '../../server/catalogue/index.ts';
import { workedSchema } from '../../shared/contracts/catalogue.ts';
import type { Claim, Grade } from '../../shared/contracts/report.ts';
import { newDerivation } from '../../shared/derivation/derive.ts';
import { joinEntries, notebookFromText, notebookToText } from '../../shared/notebook/text.ts';

const mistake = 'periodic-with-periodic';

const count = (claims: readonly Claim[], grade: Grade): number =>
  claims.filter((claim) => claim.grade === grade).length;

describe('the catalogue', () => {
  it('lists every text that lies in its folder, each once', () => {
    const texts = readdirSync(new URL('../../server/catalogue/', import.meta.url))
      .filter((name) => name.endsWith('.gw'))
      .map((name) => name.slice(0, -3));
    const names = worked().map((one) => one.name);
    expect([...names].sort()).toEqual(texts.sort());
    expect(new Set(names).size).toBeGreaterThanOrEqual(12);
    for (const one of worked()) expect(workedSchema.safeParse(one).success).toBe(true);
  });

  it.each(worked().map((one) => [one.name, one] as const))('%s comes back from its entries unchanged', (_, one) => {
    expect(notebookToText(notebookFromText(one.source))).toBe(one.source);
    const prose = notebookFromText(one.source).entries.filter((entry) => entry.kind === 'prose');
    // The source that the table names stands in the text as well: author, and journal page with its year.
    const said = prose.map((entry) => entry.text.replaceAll('*', '')).join('\n');
    for (const { citation } of one.sources) {
      expect(said).toContain(citation.split(',')[0]);
      expect(said).toContain(/[\d]+ \(\d{4}\)$/u.exec(citation)?.[0]);
    }
  });

  it.each(worked().map((one) => [one.name, one] as const))('the claims of %s hold', (name, one) => {
    const report = newDerivation().derive(joinEntries(notebookFromText(one.source).entries).text);
    expect(report.problems.filter((problem) => problem.severity === 'error')).toEqual([]);
    expect(report.claims.length).toBeGreaterThan(2);
    expect(count(report.claims, 'proved') + count(report.claims, 'exact')).toBeGreaterThan(0);
    expect(report.claims.filter((claim) => claim.grade === 'open')).toEqual([]);
    const refuted = report.claims.filter((claim) => claim.grade === 'refuted');
    if (name !== mistake) expect(refuted).toEqual([]);
    else {
      expect(refuted).toHaveLength(1);
      // The second level of the ordered ring is its other ground state, which the disordered ring has not.
      expect(refuted[0]?.audit).toBe('spectrum');
      expect(refuted[0]?.witness['words']).toContain('level 2');
    }
  });

  it('names the lattice of each entry as its text declares it', () => {
    for (const one of worked()) expect(one.source).toMatch(new RegExp(`^lattice ${one.lattice} `, 'mu'));
  });
});

describe('values that the sources of the catalogue print', () => {
  const claims = (name: string): readonly Claim[] => {
    const source = worked().find((one) => one.name === name)?.source ?? '';
    return newDerivation().derive(source).claims;
  };

  it('gives the toric code 4 ground states on a torus and a gap of 4 (Kitaev 2003)', () => {
    const found = claims('toric-code-field').filter((claim) => claim.audit === 'degeneracy');
    expect(found.map((claim) => claim.figures['degeneracy'])).toEqual([4, 4]);
    for (const claim of found) expect(claim.figures['gap']).toBeCloseTo(4, 9);
  });

  it('gives the plaquette magnet 2^(2L-1) ground states without a field (Xu and Moore 2004)', () => {
    const found = claims('plaquette-ising').filter((claim) => claim.audit === 'degeneracy');
    expect(found.map((claim) => claim.figures['degeneracy'])).toEqual([2 ** 3, 2 ** 5]);
  });

  it('gives the strong bonds of the honeycomb model -Jx^2 Jy^2 / (16 Jz^3) at fourth order (Kitaev 2006)', () => {
    const found = claims('honeycomb-plaquettes').find((claim) => claim.audit === 'effective');
    expect(found?.statement).toContain('-Jx^2*Jy^2/(16*Jz^3)');
  });

  it('gives the ring the energy of free fermions in the even sector (Pfeuty 1970)', () => {
    const found = claims('ising-ring').filter((claim) => claim.statement.includes('ising [flip = +1] and dual [walls'));
    for (const claim of found) {
      const n = Number(claim.figures['size']);
      const modes = Array.from({ length: n }, (_, k) => ((2 * k + 1) * Math.PI) / n);
      const energy = -modes.reduce((sum, k) => sum + Math.sqrt(1 + 0.36 - 1.2 * Math.cos(k)), 0);
      expect((claim.figures['left'] as number[])[0]).toBeCloseTo(energy, 9);
    }
    expect(found).toHaveLength(3);
  });

  it('allows 3^N states of the ladder on N vertices (three states a block)', () => {
    const found = claims('spin-one-pairs').filter((claim) => claim.audit === 'count');
    expect(found.map((claim) => Number(claim.figures['count']))).toEqual([27, 81, 243]);
  });
});
