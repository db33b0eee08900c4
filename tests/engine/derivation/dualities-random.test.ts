import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Claim } from '../../../shared/contracts/report.ts';
import { newDerivation } from '../../../shared/derivation/derive.ts';

/** Bond variables on many lattices, carried through random circuits, and the same with one thing spoilt. */

const lattices: Readonly<Record<string, { readonly size: string; readonly shifts: readonly string[] }>> = {
  square: { size: '3 x 3', shifts: ['(1, 0)', '(0, 1)', '(1, 1)'] },
  triangular: { size: '3 x 3', shifts: ['(1, 0)', '(0, 1)'] },
  honeycomb: { size: '2 x 2', shifts: ['(1, 0)', '(0, 1)'] },
  kagome: { size: '2 x 2', shifts: ['(1, 0)', '(0, 1)'] },
  cubic: { size: '2 x 2 x 2', shifts: ['(1, 0, 0)', '(0, 0, 1)'] },
};

interface Lines {
  readonly bond: string;
  readonly field: string;
  readonly circuit: readonly string[];
}

const source = (
  name: string,
  { bond, field, circuit }: Lines,
): string => `lattice ${name} torus ${lattices[name]?.size ?? ''}
spins s on vertices
spins g on links
model magnet = sum(l: links) s^z[l.a] s^z[l.b] + 2 sum(v: vertices) s^x[v]
map bonds from s to g
  s^z[l.a] s^z[l.b] => ${bond}  for l: links
  s^x[v]            => ${field}  for v: vertices
map turn = circuit
${circuit.map((line) => `  ${line} for l: links`).join('\n')}
map there = bonds then turn
map back = there then inverse turn
model direct = bonds(magnet)
model round = back(magnet)
audit map bonds
audit map there
`;

const right = { bond: 'g^z[l]', field: 'prod(l: star(v)) g^x[l]' };
const claimsOf = (claims: readonly Claim[], subject: string): readonly Claim[] =>
  claims.filter((claim) => claim.subject === subject);

describe.each(Object.keys(lattices))('bond variables on the %s lattice', (name) => {
  const gate = fc.oneof(
    fc.constantFrom('h g[l]', 's g[l]', 'sdg g[l]', 'x g[l]'),
    fc.constantFrom(...(lattices[name]?.shifts ?? [])).map((by) => `cz g[l] g[l + ${by}]`),
  );
  const circuits = fc.array(gate, { minLength: 1, maxLength: 4 });

  it('stay a duality through any circuit, with the same dimensions, and come back through its inverse', () => {
    fc.assert(
      fc.property(circuits, (circuit) => {
        const report = newDerivation().derive(source(name, { ...right, circuit }));
        expect(report.problems).toEqual([]);
        expect(report.claims.filter((claim) => claim.grade === 'refuted' || claim.grade === 'open')).toEqual([]);
        const [plain, carried] = ['bonds', 'there'].map((subject) => claimsOf(report.claims, subject)[0]?.figures);
        for (const figure of ['leftDimension', 'rightDimension', 'relations', 'leftRank', 'rightRank'])
          expect(carried?.[figure]).toBe(plain?.[figure]);
        expect(carried?.['leftSectors']).toEqual(plain?.['leftSectors']);
        expect(report.models['round']?.terms.map(({ tex }) => tex)).toEqual(
          report.models['direct']?.terms.map(({ tex }) => tex),
        );
      }),
      { seed: 41, numRuns: 6 },
    );
  });

  const wrong = fc.constantFrom(
    { ...right, bond: 'g^y[l]', field: 'prod(l: star(v)) g^y[l]' },
    { ...right, field: 'prod(l: star(v) where not l in links.1) g^x[l]' },
    { ...right, bond: 'g^x[l]' },
  );
  it('are refuted through any circuit where one side is wrong, with a pair that commutes on one side only', () => {
    fc.assert(
      fc.property(circuits, wrong, (circuit, lines) => {
        const label = name === 'kagome' || name === 'honeycomb' ? /where not l in links\.1/u : /$^/u;
        if (label.test(lines.field)) return;
        const report = newDerivation().derive(source(name, { ...lines, circuit }));
        for (const subject of ['bonds', 'there']) {
          const refuted = claimsOf(report.claims, subject).find((claim) => claim.grade === 'refuted');
          const { leftOverlap, rightOverlap } = refuted?.witness ?? {};
          const odd = (overlap: unknown): number => (Array.isArray(overlap) ? overlap.length % 2 : -1);
          expect(odd(leftOverlap) + odd(rightOverlap)).toBe(1);
        }
      }),
      { seed: 43, numRuns: 6 },
    );
  });
});
