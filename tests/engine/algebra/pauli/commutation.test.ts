import fc from 'fast-check';
import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { commute } from '../../../../shared/algebra/finite/string.ts';
import { wrapExtended, wrapString } from '../../../../shared/algebra/finite/wrap.ts';
import type { FiniteString } from '../../../../shared/algebra/finite/types.ts';
import {
  commuteExtended,
  commuteOrbits,
  commutesAt,
  commuteWithExtended,
  type AllSizes,
  type Orbit,
} from '../../../../shared/algebra/pauli/commutation.ts';
import { overlap, stringFromText, translateString } from '../../../../shared/algebra/pauli/string.ts';
import type { Extended } from '../../../../shared/algebra/pauli/types.ts';
import { clusterOf, extendedOf, stepsOf, stringOn } from '../arbitraries.ts';

const settings = { seed: 5, numRuns: 250 };
const orbitOn = (reach: number): fc.Arbitrary<Orbit> => fc.record({ string: stringOn(reach, 3), steps: stepsOf });
const sizes = [1, 2, 3, 4, 5].flatMap((a) => [1, 2, 3, 4, 5].map((b) => [a, b] as const));
const tori = sizes.map((lengths) => ({ lengths, ...clusterOf('square', lengths) }));
const large = { lengths: [24, 24] as const, ...clusterOf('square', [24, 24]) };
type Torus = (typeof tori)[number] | typeof large;

const covered = (evidence: AllSizes, lengths: readonly number[]): boolean =>
  lengths.every((l, d) => l >= (evidence.from[d] ?? 1) && l % (evidence.multiples[d] ?? 1) === 0);

function translates({ table, cluster }: Torus, orbit: Orbit): FiniteString[] {
  return cluster.orbit(orbit.steps).map((by) => {
    const string = wrapString(table, cluster, translateString(orbit.string, by));
    return string ?? expect.fail('every translate stands on a torus');
  });
}

describe('two families', () => {
  it('that are said to commute do on every torus the evidence covers', () => {
    let proofs = 0;
    fc.assert(
      fc.property(orbitOn(2), orbitOn(2), (a, b) => {
        const verdict = commuteOrbits(a, b);
        if (verdict.commutes !== true) return;
        proofs++;
        for (const torus of tori)
          if (covered(verdict.evidence, torus.lengths)) {
            const right = translates(torus, b);
            for (const left of translates(torus, a)) expect(right.every((r) => commute(left, r))).toBe(true);
          }
      }),
      settings,
    );
    expect(proofs).toBeGreaterThan(20);
  });
  it('that are said not to commute anticommute on a large torus, at each witness', () => {
    let refuted = 0;
    fc.assert(
      fc.property(orbitOn(2), orbitOn(2), (a, b) => {
        const verdict = commuteOrbits(a, b);
        if (verdict.commutes !== false) return;
        refuted++;
        for (const { left, right, overlap: sites } of verdict.witnesses) {
          const [l, r] = [wrapString(large.table, large.cluster, left), wrapString(large.table, large.cluster, right)];
          expect(l && r && commute(l, r)).toBe(false);
          expect(sites.length % 2).toBe(1);
        }
        const counts = verdict.witnesses.map((w) => w.overlap.length);
        expect(counts).toEqual([...counts].sort((p, q) => p - q));
      }),
      settings,
    );
    expect(refuted).toBeGreaterThan(20);
  });
  it.each([
    ['Z0 Z1', 'X0 X1', [1], [1], false],
    ['Z0 Z1', 'X0 X1', [2], [2], true],
    ['X0', 'Z1', [2], [2], true],
    ['X0', 'Z1', [3], [2], false],
    ['X0', 'Z7', [0], [0], true],
    ['Z-1 X0 Z1', 'Z-1 X0 Z1', [1], [1], true],
  ] as const)('%s against %s with steps %j and %j', (a, b, m, n, commutes) => {
    const verdict = commuteOrbits({ string: stringFromText(a), steps: m }, { string: stringFromText(b), steps: n });
    expect(verdict.commutes).toBe(commutes);
  });
  it('pinned far apart commute from the size on at which they cannot meet', () => {
    const verdict = commuteOrbits(
      { string: stringFromText('X0'), steps: [0] },
      { string: stringFromText('Z7'), steps: [0] },
    );
    expect(verdict.commutes === true && verdict.evidence.from).toEqual([8]);
  });
});

describe('a family and an extended product', () => {
  it('agree with brute force', () => {
    const seen = { yes: 0, no: 0 };
    fc.assert(
      fc.property(orbitOn(2), extendedOf(2, 2), (a, b) => {
        const verdict = commuteWithExtended(a, b);
        if (verdict.commutes === true) {
          seen.yes++;
          for (const torus of tori)
            if (covered(verdict.evidence, torus.lengths)) {
              const whole = wrapExtended(torus.table, torus.cluster, b);
              for (const left of translates(torus, a)) expect(commute(left, whole)).toBe(true);
            }
        } else {
          seen.no++;
          const [first] = verdict.commutes === false ? verdict.witnesses : [];
          const left = first && wrapString(large.table, large.cluster, first.left);
          expect(left && commute(left, wrapExtended(large.table, large.cluster, b))).toBe(false);
          expect(first && overlap(first.left, first.right).length % 2).toBe(1);
        }
      }),
      settings,
    );
    expect(Math.min(seen.yes, seen.no)).toBeGreaterThan(10);
  });
});

describe('two extended products', () => {
  it('agree with brute force, also where the size decides', () => {
    const seen = { yes: 0, no: 0, depends: 0 };
    fc.assert(
      fc.property(extendedOf(2, 2), extendedOf(2, 2), (a, b) => {
        const verdict = commuteExtended(a, b);
        seen[verdict.commutes === true ? 'yes' : verdict.commutes === false ? 'no' : 'depends']++;
        for (const torus of [...tori, large]) {
          const { lengths } = torus;
          const fits = [...a.parts, ...b.parts].every((p) => torus.cluster.admits(p.steps));
          if (!fits || (verdict.commutes === true && !covered(verdict.evidence, lengths))) continue;
          if (verdict.commutes !== true && lengths.some((l) => l < 5)) continue;
          const found = commute(
            wrapExtended(torus.table, torus.cluster, a),
            wrapExtended(torus.table, torus.cluster, b),
          );
          expect(found).toBe(verdict.commutes === 'depends' ? commutesAt(verdict.on, lengths) : verdict.commutes);
        }
      }),
      settings,
    );
    expect(Math.min(seen.yes, seen.no, seen.depends)).toBeGreaterThan(5);
  });
  it('X and Z along the whole ring commute at even length only', () => {
    const all = (text: string): Extended => ({
      phase: 0,
      parts: [{ string: stringFromText(text), steps: [1], needs: [] }],
    });
    const verdict = commuteExtended(all('X0'), all('Z0'));
    expect(verdict).toEqual({ commutes: 'depends', on: [{ directions: [{ direction: 0, unit: 1 }] }] });
  });
});

it('evidence for all sizes is sealed in three modules only', () => {
  const makers: string[] = [];
  const walk = (folder: string): void => {
    for (const entry of readdirSync(folder, { withFileTypes: true })) {
      const path = `${folder}/${entry.name}`;
      if (entry.isDirectory()) walk(path);
      else if (/\.ts$/.test(path) && readFileSync(path, 'utf8').includes('shownForAllSizes')) makers.push(path);
    }
  };
  walk('shared');
  const allowed = [
    'shared/algebra/f2/all-sizes.ts',
    'shared/algebra/f2/module.ts',
    'shared/algebra/pauli/commutation.ts',
    'shared/algebra/pauli/keeping.ts',
  ];
  expect(makers.filter((path) => !allowed.includes(path))).toEqual([]);
  expect(makers).toContain('shared/algebra/pauli/commutation.ts');
});
