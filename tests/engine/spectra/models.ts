import type { FiniteModel, FiniteString } from '../../../shared/algebra/finite/types.ts';
import type { SpectrumQuestion } from '../../../shared/spectra/solve.ts';

/** Strings and models in text: "XIZY" has X on spin 0. Dense matrices of them, as the other road to each answer. */

export function string(text: string): FiniteString {
  const n = text.length;
  const x = new Uint32Array(Math.max(1, (n + 31) >>> 5));
  const z = new Uint32Array(x.length);
  let phase = 0;
  [...text].forEach((letter, s) => {
    const place = 2 ** (s & 31);
    if (letter === 'X' || letter === 'Y') x[s >>> 5] = (x[s >>> 5] ?? 0) | place;
    if (letter === 'Z' || letter === 'Y') z[s >>> 5] = (z[s >>> 5] ?? 0) | place;
    if (letter === 'Y') phase++;
  });
  return { n, x, z, phase: phase & 3 };
}

/** The string with the given letters on sites; I elsewhere. */
export function placed(n: number, letters: Readonly<Record<number, string>>): FiniteString {
  return string(Array.from({ length: n }, (_, s) => letters[s] ?? 'I').join(''));
}

type Model = SpectrumQuestion['model'];
type Coefficient = FiniteModel['constant'];

/** A coefficient as far as spectra read it. */
const number = (re: number, im = 0): Coefficient => ({ toFloat: () => ({ re, im }) }) as unknown as Coefficient;

export function model(n: number, terms: readonly (readonly [number, string | FiniteString])[], constant = 0): Model {
  return {
    terms: terms.map(([c, s]) => ({ coefficient: number(c), string: typeof s === 'string' ? string(s) : s })),
    constant: number(constant),
    table: {
      sites: Array.from({ length: n }, (_, s) => ({ species: 's', cell: s })),
      number: () => 0,
    } as unknown as Model['table'],
  };
}

/** −J Σ Z Z − h Σ X on a ring or an open chain. */
export function chain(n: number, j: number, h: number, periodic: boolean): Model {
  const terms: [number, FiniteString][] = [];
  for (let s = 0; s < (periodic ? n : n - 1); s++) terms.push([-j, placed(n, { [s]: 'Z', [(s + 1) % n]: 'Z' })]);
  for (let s = 0; s < n; s++) terms.push([-h, placed(n, { [s]: 'X' })]);
  return model(n, terms);
}

/** −J Σ Z Z − h Σ X on a square torus. */
export function torus(width: number, height: number, j: number, h: number): Model {
  const n = width * height;
  const at = (a: number, b: number) => (a % width) + width * (b % height);
  const terms: [number, FiniteString][] = [];
  for (let b = 0; b < height; b++) {
    for (let a = 0; a < width; a++) {
      terms.push(
        [-j, placed(n, { [at(a, b)]: 'Z', [at(a + 1, b)]: 'Z' })],
        [-j, placed(n, { [at(a, b)]: 'Z', [at(a, b + 1)]: 'Z' })],
      );
      terms.push([-h, placed(n, { [at(a, b)]: 'X' })]);
    }
  }
  return model(n, terms);
}

/** Matrix of Σ c × string, with a constant, as row-major [re, im] of 2^n states. */
export function denseMatrix(m: Model): { re: Float64Array; im: Float64Array; size: number } {
  const size = 2 ** m.table.sites.length;
  const re = new Float64Array(size * size);
  const im = new Float64Array(size * size);
  const none = new Map<string, number>();
  for (let b = 0; b < size; b++) {
    re[b * size + b] = (re[b * size + b] ?? 0) + m.constant.toFloat(none).re;
    for (const { coefficient, string: s } of m.terms) {
      const c = coefficient.toFloat(none);
      let ones = (s.z[0] ?? 0) & b;
      let phase = s.phase;
      for (; ones; ones &= ones - 1) phase += 2;
      const [pr, pi] = [
        [1, 0],
        [0, 1],
        [-1, 0],
        [0, -1],
      ][phase & 3] ?? [1, 0];
      const at = (b ^ (s.x[0] ?? 0)) * size + b;
      re[at] = (re[at] ?? 0) + c.re * (pr ?? 0) - c.im * (pi ?? 0);
      im[at] = (im[at] ?? 0) + c.re * (pi ?? 0) + c.im * (pr ?? 0);
    }
  }
  return { re, im, size };
}

export const ask = (m: Model, levels: number, more: Partial<SpectrumQuestion> = {}): SpectrumQuestion => ({
  model: m,
  constraints: [],
  values: new Map(),
  levels,
  ...more,
});
