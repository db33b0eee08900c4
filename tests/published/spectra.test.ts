import { describe, expect, it } from 'vitest';
import type { FiniteString } from '../../shared/algebra/finite/types.ts';
import { enumerateStates, type DiagonalRule } from '../../shared/spectra/bases/enumerated.ts';
import { plainKernel } from '../../shared/spectra/kernel/plain.ts';
import { solveNow, type SpectrumQuestion } from '../../shared/spectra/solve.ts';
import { ask, chain, model, placed } from '../engine/spectra/models.ts';

function energies(question: SpectrumQuestion) {
  const result = solveNow(question, { kernel: plainKernel });
  if (!result.ok) throw new Error(JSON.stringify(result.fault));
  return result.value;
}

const flip = (n: number): FiniteString => placed(n, Object.fromEntries(Array.from({ length: n }, (_, s) => [s, 'X'])));

describe('P. Pfeuty, Ann. Phys. 57, 79 (1970): the chain in a transverse field', () => {
  // E_even = −Σ_k sqrt(J² + h² − 2 J h cos k), k = (2m + 1) π / N. Tolerance 1e-9: residuals are below it.
  it.each([
    [6, 1, 0.3],
    [8, 1, 1],
    [9, 0.7, 1.4],
    [12, 1, 0.9],
    [13, 1, 1.2],
  ])('even sector of the ring, N = %i, J = %d, h = %d', (n, j, h) => {
    const expected = -Array.from({ length: n }, (_, m) =>
      Math.sqrt(j * j + h * h - 2 * j * h * Math.cos(((2 * m + 1) * Math.PI) / n)),
    ).reduce((a, b) => a + b, 0);
    const got = energies(ask(chain(n, j, h, true), 1, { constraints: [{ string: flip(n), value: 1 }] }));
    expect(got.energies[0]).toBeCloseTo(expected, 9);
  });

  it.each([7, 10, 12])('critical ring of %i: −2/sin(π/2N) even, −2 cot(π/2N) odd', (n) => {
    const sector = (value: 1 | -1) =>
      energies(ask(chain(n, 1, 1, true), 1, { constraints: [{ string: flip(n), value }] })).energies[0];
    expect(sector(1)).toBeCloseTo(-2 / Math.sin(Math.PI / (2 * n)), 9);
    expect(sector(-1)).toBeCloseTo(-2 / Math.tan(Math.PI / (2 * n)), 9);
  });

  it.each([5, 10, 11])('critical open chain of %i: 1 − 1/sin(π/(2(2N+1)))', (n) => {
    expect(energies(ask(chain(n, 1, 1, false), 1)).energies[0]).toBeCloseTo(
      1 - 1 / Math.sin(Math.PI / (2 * (2 * n + 1))),
      9,
    );
  });
});

describe('values of the public data repository varbench (TFIsing)', () => {
  it('ring and open chain of 10 at J = h = 1', () => {
    expect(energies(ask(chain(10, 1, 1, true), 1)).energies[0]).toBeCloseTo(-12.784906442999322, 9);
    expect(energies(ask(chain(10, 1, 1, false), 1)).energies[0]).toBeCloseTo(-12.381489999654734, 9);
  });
});

/** −Σ stars X X X X − Σ plaquettes Z Z Z Z on the links of an L × L torus: link 2v east of v, 2v + 1 north of it. */
function toric(size: number): { n: number; stars: FiniteString[]; plaquettes: FiniteString[] } {
  const n = 2 * size * size;
  const v = (a: number, b: number) => ((a + size) % size) + size * ((b + size) % size);
  const of = (letter: string, links: number[]) => placed(n, Object.fromEntries(links.map((l) => [l, letter])));
  const stars: FiniteString[] = [];
  const plaquettes: FiniteString[] = [];
  for (let b = 0; b < size; b++) {
    for (let a = 0; a < size; a++) {
      stars.push(of('X', [2 * v(a, b), 2 * v(a, b) + 1, 2 * v(a - 1, b), 2 * v(a, b - 1) + 1]));
      plaquettes.push(of('Z', [2 * v(a, b), 2 * v(a, b) + 1, 2 * v(a, b + 1), 2 * v(a + 1, b) + 1]));
    }
  }
  return { n, stars, plaquettes };
}

describe('A. Kitaev, Ann. Phys. 303, 2 (2003): the toric code', () => {
  it('has four ground states and gap 4 for unit couplings', () => {
    const { n, stars, plaquettes } = toric(2);
    const got = energies(
      ask(
        model(
          n,
          [...stars, ...plaquettes].map((s) => [-1, s] as const),
        ),
        5,
      ),
    );
    expect(got.multiplets[0]).toMatchObject({ multiplicity: 4, complete: true });
    expect(got.multiplets[0]?.energy).toBeCloseTo(-8, 10);
    expect((got.multiplets[1]?.energy ?? 0) - (got.multiplets[0]?.energy ?? 0)).toBeCloseTo(4, 10);
  });

  it('keeps four on 18 links, and one when the Gauss laws and both loops are fixed', () => {
    const { n, stars, plaquettes } = toric(3);
    const code = model(
      n,
      [...stars, ...plaquettes].map((s) => [-1, s] as const),
    );
    const got = energies(ask(code, 1, { constraints: stars.slice(0, 8).map((string) => ({ string, value: 1 })) }));
    expect(got.dimension).toBe(2 ** 10);
    expect(got.multiplets[0]).toMatchObject({ multiplicity: 4 });
    expect(got.energies[0]).toBeCloseTo(-18, 9);
    const loops = [0, 2, 4].map((l) => [l, 'Z'] as const);
    const across = [1, 7, 13].map((l) => [l, 'Z'] as const);
    const fixed = energies(
      ask(code, 3, {
        constraints: [
          ...stars.map((string) => ({ string, value: 1 as const })),
          { string: placed(n, Object.fromEntries(loops)), value: -1 },
          { string: placed(n, Object.fromEntries(across)), value: 1 },
        ],
      }),
    );
    expect(fixed.dimension).toBe(2 ** 8);
    expect(fixed.multiplets[0]).toMatchObject({ multiplicity: 1 });
    expect(fixed.energies[0]).toBeCloseTo(-18, 9);
    expect(fixed.energies[1]).toBeCloseTo(-14, 9);
  });

  it('says -1 is in the group when the product of all stars is asked to be −1', () => {
    const { n, stars } = toric(2);
    const constraints = stars.map((string, k) => ({ string, value: k === 0 ? (-1 as const) : (1 as const) }));
    expect(solveNow(ask(model(n, []), 1, { constraints }), { kernel: plainKernel })).toMatchObject({
      ok: false,
      fault: { code: 'no state', constraint: 3 },
    });
  });
});

describe('counts of states', () => {
  const rule = (sites: number[], relation: DiagonalRule['relation'], bound: number): DiagonalRule => ({
    sites,
    weights: sites.map(() => 1),
    relation,
    bound,
  });
  const count = (n: number, rules: DiagonalRule[]) => enumerateStates(n, rules, 1e7)?.count;

  it('blockade: Lucas numbers on a ring, Fibonacci numbers F(N + 2) on an open chain', () => {
    // Textbook count by the recursion itself.
    let [lucas, lucasNext] = [2, 1];
    let [fibonacci, fibonacciNext] = [1, 2];
    for (let n = 1; n <= 24; n++) {
      [lucas, lucasNext] = [lucasNext, lucas + lucasNext];
      [fibonacci, fibonacciNext] = [fibonacciNext, fibonacci + fibonacciNext];
      const bonds = Array.from({ length: n - 1 }, (_, s) => rule([s, s + 1], '<=', 1));
      expect(count(n, bonds)).toBe(fibonacci);
      if (n > 2) expect(count(n, [...bonds, rule([n - 1, 0], '<=', 1)])).toBe(lucas);
    }
  });

  it('P. Kasteleyn, Physica 27, 1209 (1961); H. Temperley, M. Fisher, Phil. Mag. 6, 1061 (1961): dimers on chessboards of 2, 4, 6', () => {
    for (const [size, expected] of [
      [2, 2],
      [4, 36],
      [6, 6728],
    ] as const) {
      const touching: number[][] = Array.from({ length: size * size }, () => []);
      let links = 0;
      for (let y = 0; y < size; y++) {
        for (let x = 0; x < size; x++) {
          for (const [dx, dy] of [
            [1, 0],
            [0, 1],
          ] as const) {
            if (x + dx >= size || y + dy >= size) continue;
            touching[x + size * y]?.push(links);
            touching[x + dx + size * (y + dy)]?.push(links);
            links++;
          }
        }
      }
      expect(
        count(
          links,
          touching.map((t) => rule(t, '==', 1)),
        ),
      ).toBe(expected);
    }
  });

  it('E. Lieb, Phys. Rev. 162, 162 (1967), OEIS A054759: square ice, 18 and 2970 on tori of 2 and 4', () => {
    for (const [size, expected] of [
      [2, 18],
      [4, 2970],
    ] as const) {
      const v = (a: number, b: number) => ((a + size) % size) + size * ((b + size) % size);
      const rules: DiagonalRule[] = [];
      for (let b = 0; b < size; b++) {
        for (let a = 0; a < size; a++)
          rules.push(rule([2 * v(a, b), 2 * v(a, b) + 1, 2 * v(a - 1, b), 2 * v(a, b - 1) + 1], '==', 2));
      }
      expect(count(2 * size * size, rules)).toBe(expected);
    }
  });
});
