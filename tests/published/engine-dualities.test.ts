import { describe, expect, it } from 'vitest';
import { newDerivation } from '../../shared/derivation/derive.ts';
import type { Claim } from '../../shared/contracts/report.ts';

/** Outside values, reached from sources in the operator language. Residuals are below 1e-9. */

function claims(text: string, audit: string): Claim[] {
  const report = newDerivation().derive(text);
  const errors = report.problems.filter((p) => p.severity === 'error');
  if (errors.length > 0) throw new Error(errors.map((e) => `${String(e.line)}: ${e.message}`).join('\n'));
  return report.claims.filter((claim) => claim.audit === audit);
}
const energies = (text: string): number[] => claims(text, 'degeneracy').map((c) => c.figures['energy'] as number);
const left = (claim: Claim | undefined): number[] => claim?.figures['left'] as number[];
const near = (a: readonly number[], b: readonly number[]): void => {
  expect(a).toHaveLength(b.length);
  a.forEach((x, k) => {
    expect(x).toBeCloseTo(b[k]!, 9);
  });
};

const ring = (J: string, h: string): string => `lattice chain torus 8
spins s on vertices
couplings J = ${J}, h = ${h}
model ising = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]
symmetry flip = prod(v: vertices) s^x[v]
`;

/** All levels of free fermions on a ring: k over (2n + 1) π/N in the even sector, 2nπ/N in the odd one, with the right parity of fermions. */
function freeFermions(n: number, J: number, h: number, even: boolean): number[] {
  const modes = Array.from({ length: n }, (_, m) => ((2 * m + (even ? 1 : 0)) * Math.PI) / n);
  // The modes 0 and π stand alone: their energies carry a sign, h − J and h + J.
  const energy = modes.map((k) => {
    if (Math.abs(k) < 1e-12) return h - J;
    if (Math.abs(k - Math.PI) < 1e-12) return h + J;
    return Math.sqrt(J * J + h * h - 2 * J * h * Math.cos(k));
  });
  const levels: number[] = [];
  for (let filled = 0; filled < 2 ** n; filled++) {
    let [sum, odd] = [0, 0];
    energy.forEach((e, k) => {
      sum += ((filled >> k) & 1 ? 1 : -1) * e;
      odd ^= (filled >> k) & 1;
    });
    if (odd === (even ? 0 : 1)) levels.push(sum);
  }
  return levels.sort((a, b) => a - b);
}

describe('P. Pfeuty, Ann. Phys. 57, 79 (1970): the Ising chain in a transverse field', () => {
  it.each([
    [3, '1', '0.6'],
    [4, '1', '7/5'],
    [5, '2/3', '1/2'],
    [6, '1', '1'],
    [7, '3/2', '0.2'],
    [8, '0.3', '1'],
  ])('whole spectrum of the ring of %i in both sectors, J = %s, h = %s', (n, J, h) => {
    const [a, b] = [J, h].map((t) =>
      t
        .split('/')
        .map(Number)
        .reduce((p, q) => p / q),
    ) as [number, number];
    for (const [sign, even] of [
      ['+1', true],
      ['-1', false],
    ] as const) {
      const [claim] = claims(
        `${ring(J, h)}audit spectrum ising [flip = ${sign}] ~ ising [flip = ${sign}] on ${String(n)} levels 128\n`,
        'spectrum',
      );
      near(left(claim), freeFermions(n, a, b, even));
    }
  });

  it('critical ring: −2/sin(π/2N) even, −2 cot(π/2N) odd', () => {
    const sizes = [2, 3, 4, 7, 10, 12];
    const on = sizes.join(', ');
    const even = energies(`${ring('1', '1')}audit degeneracy ising [flip = +1] on ${on}\n`);
    const odd = energies(`${ring('1', '1')}audit degeneracy ising [flip = -1] on ${on}\n`);
    near(
      even,
      sizes.map((n) => -2 / Math.sin(Math.PI / (2 * n))),
    );
    near(
      odd,
      sizes.map((n) => -2 / Math.tan(Math.PI / (2 * n))),
    );
  });

  it('critical open chain: 1 − 1/sin(π/(2(2N + 1)))', () => {
    const sizes = [1, 2, 5, 9, 12];
    near(
      energies(`${ring('1', '1').replace('torus', 'open')}audit degeneracy ising on ${sizes.join(', ')}\n`),
      sizes.map((n) => 1 - 1 / Math.sin(Math.PI / (2 * (2 * n + 1)))),
    );
  });
});

const square = `lattice square torus 3 x 3
spins s on vertices
spins g on links
couplings J = 1, h = 3/5
model ising = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]
model anti1 = twist(ising, flip, 1)
model anti2 = twist(ising, flip, 2)
model both = twist(anti1, flip, 2)
symmetry w1 = prod(l: loop(1)) g^z[l]
symmetry w2 = prod(l: loop(2)) g^z[l]
law flat(p: plaquettes) = prod(l: rim(p)) g^z[l]
map bonds from s to g
  s^z[l.a] s^z[l.b] => g^z[l] for l: links
  s^x[v] => prod(l: star(v)) g^x[l] for v: vertices
model gauge = bonds(ising)
`.replace('model anti1', 'symmetry flip = prod(v: vertices) s^x[v]\nmodel anti1');

describe('F. Wegner, J. Math. Phys. 12, 2259 (1971); J. Kogut, Rev. Mod. Phys. 51, 659 (1979): the square torus', () => {
  it.each([
    ['ising', '+1', '+1'],
    ['anti1', '-1', '+1'],
    ['anti2', '+1', '-1'],
    ['both', '-1', '-1'],
  ])('even sector of %s = gauge theory with holonomies %s, %s', (model, w1, w2) => {
    for (const size of ['2 x 2', '2 x 3', '3 x 3']) {
      const [claim] = claims(
        `${square}audit spectrum ${model} [flip = +1] ~ gauge [flat = +1, w1 = ${w1}, w2 = ${w2}] on ${size} levels ${size === '3 x 3' ? '256' : '32'}\n`,
        'spectrum',
      );
      expect(claim).toMatchObject({ grade: 'numerical', figures: { all: true } });
    }
  });

  it('the whole gauge-invariant spectrum is the union of the four even sectors', () => {
    const of = (subject: string, levels: number): number[] =>
      left(
        claims(`${square}audit spectrum ${subject} ~ ${subject} on 2 x 3 levels ${String(levels)}\n`, 'spectrum')[0],
      );
    const union = ['ising', 'anti1', 'anti2', 'both'].flatMap((m) => of(`${m} [flip = +1]`, 32));
    near(
      of('gauge [flat = +1]', 128),
      union.sort((a, b) => a - b),
    );
  });

  it('a holonomy against the wrong boundary condition is refuted', () => {
    const [claim] = claims(
      `${square}audit spectrum anti1 [flip = +1] ~ gauge [flat = +1, w1 = +1, w2 = -1] on 2 x 3 levels 12\n`,
      'spectrum',
    );
    expect(claim?.grade).toBe('refuted');
  });
});

describe('H. Kramers, G. Wannier, Phys. Rev. 60, 252 (1941): the ring, sector by sector (textbook statement)', () => {
  const text = `${ring('1', '0.6')}spins m on links
map duality from s to m
  s^z[l.a] s^z[l.b] => m^x[l] for l: links
  s^x[v] => prod(l: star(v)) m^z[l] for v: vertices
model dual = duality(ising)
symmetry walls = prod(l: links) m^x[l]
model turned = twist(ising, flip, 1)
model turnedDual = twist(dual, walls, 1)
`;
  it.each([
    ['ising [flip = +1]', 'dual [walls = +1]'],
    ['ising [flip = -1]', 'turnedDual [walls = +1]'],
    ['turned [flip = +1]', 'dual [walls = -1]'],
    ['turned [flip = -1]', 'turnedDual [walls = -1]'],
  ])('%s has the levels of %s', (a, b) => {
    for (const claim of claims(`${text}audit spectrum ${a} ~ ${b} on 3, 4, 6, 7 levels 64\n`, 'spectrum'))
      expect(claim).toMatchObject({ grade: 'numerical', figures: { all: true } });
  });

  it('the full periodic spectra differ', () => {
    for (const claim of claims(`${text}audit spectrum ising ~ dual on 3, 4, 6 levels 64\n`, 'spectrum'))
      expect(claim.grade).toBe('refuted');
  });

  it('at J = h the ring is its own dual in the even sector alone', () => {
    const [even] = claims(
      `${text.replace('h = 0.6', 'h = 1')}audit spectrum ising [flip] ~ dual [walls] on 8 levels 128\n`,
      'spectrum',
    );
    near(left(even), freeFermions(8, 1, 1, true));
  });
});

describe('T. Kennedy, H. Tasaki, Phys. Rev. B 45, 304 (1992): the cluster chain against two Ising chains', () => {
  const text = `lattice chain torus 4
spins a on vertices
spins b on vertices
spins s on vertices
spins t on vertices
couplings h = 2/5
model cluster = - sum(v: vertices) (a^z[v] b^x[v] a^z[v + (1)] + b^z[v + (-1)] a^x[v] b^z[v]) - h sum(v: vertices) (a^x[v] + b^x[v])
symmetry pa = prod(v: vertices) a^x[v]
symmetry pb = prod(v: vertices) b^x[v]
symmetry ps = prod(v: vertices) s^x[v]
symmetry pt = prod(v: vertices) t^x[v]
map open from a, b to s, t
  a^x[v] => s^x[v] for v: vertices
  b^x[v] => t^x[v] for v: vertices
  a^z[v] b^x[v] a^z[v + (1)]  => s^z[v] s^z[v + (1)]  for v: vertices
  b^z[v + (-1)] a^x[v] b^z[v] => t^z[v + (-1)] t^z[v] for v: vertices
model pair = open(cluster)
`;
  it('equal where both sublattice parities are +1, on either side, and the map says so', () => {
    const found = claims(
      `${text}audit spectrum cluster [pa = +1, pb = +1] ~ pair [ps = +1, pt = +1] on 2, 3, 4 levels 64\n`,
      'spectrum',
    );
    expect(found.map((c) => [c.grade, c.figures['all']])).toEqual([
      ['numerical', true],
      ['numerical', true],
      ['numerical', true],
    ]);
    const map = claims(`${text}audit map open\n`, 'map');
    expect(map.some((c) => c.grade === 'refuted' || c.grade === 'open')).toBe(false);
    expect(map[0]?.figures).toMatchObject({
      leftSectors: ['pa = +1', 'pb = +1'],
      rightSectors: ['ps = +1', 'pt = +1'],
    });
  });

  it.each(['cluster ~ pair', 'cluster [pa = -1, pb = +1] ~ pair [ps = -1, pt = +1]'])('not so: %s', (sides) => {
    for (const claim of claims(`${text}audit spectrum ${sides} on 2, 3 levels 64\n`, 'spectrum'))
      expect(claim.grade).toBe('refuted');
  });
});
