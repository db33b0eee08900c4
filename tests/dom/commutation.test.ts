import { describe, expect, it } from 'vitest';
import { newDerivation } from '../../shared/derivation/derive.ts';
import type { Claim } from '../../shared/contracts/report.ts';
import { commutationCsv, commutationOf, commutationTex, fails } from '../../src/features/table/commutation.ts';
import { overOf, overRef } from '../../src/hand/hand.ts';
import { slicesOf } from '../../src/reading/slices.ts';
import { placed } from '../../src/reading/useReading.ts';

const source = placed([
  {
    id: 'all',
    kind: 'statements',
    text: [
      'lattice square torus 4 x 4',
      'spins s on vertices',
      'couplings J = 1, h',
      'symmetry flip = prod(v: vertices) s^x[v]',
      'law ring(p: plaquettes) = prod(v: corners(p)) s^x[v]',
      'model ising = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v] - sum(v: vertices) s^z[v]',
      'audit commute ising with flip, ring',
      'audit commute flip with ring',
    ].join('\n'),
  },
]);
const report = newDerivation().derive(source.text);
const slices = slicesOf(report, source.entries, []);
const claims = slices.flatMap((slice) => slice.claims.map((item) => item.value));
const first = claims[0];
if (!first) throw new Error('no claim');
const table = commutationOf(first, slices);
if (!table) throw new Error('no table');

describe('the commutation table', () => {
  it('sets every family of the model against every law', () => {
    expect(table.laws).toEqual(['flip', 'ring']);
    const holds = table.rows.map((row) => [row.tex?.match(/s\^\{\w\}/g)?.join(''), ...row.marks.map((m) => m.holds)]);
    expect(holds).toContainEqual(['s^{x}', true, true]);
    expect(holds).toContainEqual(['s^{z}', false, false]);
    expect(holds.filter(([, flip, ring]) => flip === true && ring === false)).toHaveLength(2);
    expect(table.rows.filter(fails)).toHaveLength(3);
  });

  it('says of every mark that fails which strings anticommute', () => {
    for (const row of table.rows)
      for (const mark of row.marks) {
        if (mark.holds) expect(mark.words).toBe('');
        else expect(mark.words).toMatch(new RegExp(`anticommutes with ${mark.law}`));
      }
  });

  it('is copied as CSV and as LaTeX, one line a term', () => {
    const csv = commutationCsv(table).trimEnd().split('\r\n');
    expect(csv[0]).toBe('term,TeX,flip,ring');
    expect(csv).toHaveLength(1 + table.rows.length);
    expect(csv.filter((line) => line.endsWith(',commutes,fails'))).toHaveLength(2);
    const tex = commutationTex(table);
    expect(tex.match(/\\\\/g)).toHaveLength(1 + table.rows.length);
    expect(tex).toContain('\\begin{tabular}{lcc}');
    expect(tex).not.toMatch(/\\p[xyz]\{/);
  });

  it('stands without a model too, and is nothing for claims without a table', () => {
    const other = claims.find((claim) => claim.subject === 'flip');
    expect(other && commutationOf(other, slices)?.rows).toHaveLength(1);
    const without: Claim = { ...first, figures: {} };
    expect(commutationOf(without, slices)).toBeNull();
  });

  it('names its marks for the hand', () => {
    expect(overOf(overRef('ising', 2, 'flip'))).toEqual({ model: 'ising', term: 2, law: 'flip' });
    expect(overOf('ising/0')).toBeNull();
    expect(overOf(null)).toBeNull();
  });
});
