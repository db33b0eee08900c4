import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { isWrapProblem, siteTable, wrapOperator } from '../../../shared/algebra/finite/wrap.ts';
import { togetherFrom } from '../../../shared/audits/pieces.ts';
import { keepsRule } from '../../../shared/audits/keeps-rule.ts';
import { diagonalRules } from '../../../shared/audits/finite-rules.ts';
import { speciesCells } from '../../../shared/audits/sector.ts';
import type { RuleValue, Values } from '../../../shared/language/values.ts';
import { isLatticeProblem } from '../../../shared/lattice/cells.ts';
import { newCluster, straight } from '../../../shared/lattice/cluster.ts';
import { family, lattice, model, operator, rule, spins, values } from './values.ts';

/** Verdicts on moves and rules against all states of rings. */

const ring = lattice('chain', 'torus', 6);
const s = spins('s', 'vertices', [0]);

/** True if no allowed state has an amplitude to a forbidden one. */
function keptOnRing(all: Values, one: RuleValue, length: number): boolean {
  const value = all.find('m');
  const cluster = newCluster(ring, straight(length));
  if (value?.what !== 'model' || isLatticeProblem(cluster)) throw new Error('no model');
  const table = siteTable(cluster, speciesCells(all, new Set(['s'])));
  const finite = wrapOperator(table, cluster, value.operator);
  if (isWrapProblem(finite)) throw new Error(finite.message);
  const rules = diagonalRules(cluster, table, one);
  const allowed = (b: number): boolean =>
    rules.every(({ sites, weights, relation, bound }) => {
      const sum = sites.reduce((total, site, k) => total + (weights[k] ?? 0) * ((b >> site) & 1), 0);
      if (relation === '==') return sum === bound;
      if (relation === '<=') return sum <= bound;
      if (relation === '>=') return sum >= bound;
      return Math.abs(sum % 2) === (relation === 'odd' ? 1 : 0);
    });
  for (let b = 0; b < 2 ** length; b++) {
    if (!allowed(b)) continue;
    const row = new Map<number, { re: number; im: number }>();
    for (const { coefficient, string } of finite.terms) {
      const c = coefficient.toFloat();
      let phase = string.phase;
      for (let both = (string.z[0] ?? 0) & b; both !== 0; both &= both - 1) phase += 2;
      const to = b ^ (string.x[0] ?? 0);
      const old = row.get(to) ?? { re: 0, im: 0 };
      const turned = [c, { re: -c.im, im: c.re }, { re: -c.re, im: -c.im }, { re: c.im, im: -c.re }][phase & 3] ?? c;
      row.set(to, { re: old.re + turned.re, im: old.im + turned.im });
    }
    for (const [to, { re, im }] of row) if (Math.hypot(re, im) > 1e-9 && !allowed(to)) return false;
  }
  return true;
}

const strings = fc
  .array(fc.constantFrom('', 'x', 'y', 'z'), { minLength: 1, maxLength: 3 })
  .map((paulis) => paulis.flatMap((p, k) => (p === '' ? [] : [`s${p}:v0(${String(k)})`])).join(' '))
  .filter((text) => text !== '');
const weights = fc
  .array(fc.integer({ min: -1, max: 2 }), { minLength: 1, maxLength: 3 })
  .filter((w) => w.some((x) => x !== 0));

describe('moves and rules', () => {
  it('agree with all states of rings', () => {
    const seen = { proved: 0, refuted: 0, open: 0 };
    fc.assert(
      fc.property(
        fc.array(fc.tuple(strings, fc.constantFrom(1, -1, 2)), { minLength: 1, maxLength: 4 }),
        weights,
        fc.constantFrom<RuleValue['relation']>('==', '<=', '>=', 'even', 'odd'),
        fc.integer({ min: 0, max: 2 }),
        fc.constantFrom(1, 2),
        (terms, weight, relation, bound, step) => {
          const one = rule('one', relation, bound, [
            { sites: weight.map((w, k) => [`s:v0(${String(k)})`, w] as const), anchor: 'v0(0)', steps: [step] },
          ]);
          const m = model('m', operator(...terms.map(([text, c]) => family(c, text, [1]))));
          const all = values(ring, s, one, m);
          const { evidence, figures } = keepsRule('m', one, all);
          if (evidence.kind === 'all sizes') {
            seen.proved++;
            const { from, multiples } = togetherFrom(evidence.proof);
            for (let length = 1; length <= 9; length++)
              if (length >= (from[0] ?? 1) && length % (multiples[0] ?? 1) === 0)
                expect(keptOnRing(all, one, length)).toBe(true);
          } else if (evidence.kind === 'counterexample') {
            seen.refuted++;
            const size = Number(figures['size']);
            expect(keptOnRing(all, one, size)).toBe(false);
          } else seen.open++;
        },
      ),
      { seed: 20, numRuns: 300 },
    );
    expect(seen.proved).toBeGreaterThan(40);
    expect(seen.refuted).toBeGreaterThan(40);
    // a local configuration that no whole state holds is left open; that is rare
    expect(seen.open).toBeLessThan(30);
  });
});
