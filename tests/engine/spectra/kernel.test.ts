import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { flipHamiltonian, flipParts } from '../../../shared/spectra/hamiltonian.ts';
import type { Kernel, Vector } from '../../../shared/spectra/kernel/kernel.ts';
import { newArena } from '../../../shared/spectra/kernel/memory.ts';
import { symmetricEigen } from '../../../shared/spectra/solvers/dense.ts';
import { fillSeeded } from '../../../shared/spectra/solvers/window.ts';
import { solveNow } from '../../../shared/spectra/solve.ts';
import { bothKernels } from './kernels.ts';
import { ask, chain, denseMatrix, model, string } from './models.ts';

const kernels = await bothKernels();

function seeded(kernel: Kernel, length: number, seed: number): Vector {
  const v = kernel.vector(length);
  fillSeeded(v, seed);
  return v;
}

function expectClose(got: ArrayLike<number>, expected: ArrayLike<number>, digits = 10): void {
  expect(got.length).toBe(expected.length);
  for (let k = 0; k < got.length; k++) expect(got[k]).toBeCloseTo(expected[k] ?? NaN, digits);
}

describe.each(kernels.map((k) => [k.name, k] as const))('%s kernel', (_, kernel) => {
  it('adds, scales and multiplies vectors of any length', () => {
    for (const length of [1, 2, 3, 7, 8, 9, 2047, 2048, 2049, 4099]) {
      const vectors = [1, 2, 3, 4, 5, 6].map((seed) => seeded(kernel, length, seed));
      const plain = vectors.map((v) => v.view.slice());
      const w = seeded(kernel, length, 9);
      const before = w.view.slice();
      const inner = (a: Float64Array, b: Float64Array) => a.reduce((sum, x, k) => sum + x * (b[k] ?? 0), 0);
      const out = new Float64Array(6);
      kernel.dots(vectors, w, out);
      expectClose(
        out,
        plain.map((v) => inner(v, before)),
      );
      expect(kernel.dot(vectors[0]!, w)).toBeCloseTo(out[0] ?? NaN, 10);
      const c = Float64Array.of(0.5, -1, 2, 0.25, 3, -0.75);
      kernel.combine(vectors, c, w);
      expectClose(
        w.view,
        before.map((x, k) => plain.reduce((sum, v, i) => sum + (c[i] ?? 0) * (v[k] ?? 0), x)),
      );
      kernel.scale(2, w);
      kernel.axpy(-2, vectors[5]!, w);
      const matrix = Float64Array.from({ length: 18 }, (_, k) => Math.sin(k + 1));
      kernel.rotate(vectors, matrix, 3);
      for (let j = 0; j < 3; j++) {
        expectClose(
          vectors[j]!.view,
          before.map((_, k) => plain.reduce((sum, v, i) => sum + (v[k] ?? 0) * (matrix[3 * i + j] ?? 0), 0)),
        );
      }
      expectClose(vectors[4]!.view, plain[4]!);
      [...vectors, w].forEach((v) => kernel.release(v));
    }
  });

  it('applies any Hamiltonian as its dense matrix does, also where the index has a high part', () => {
    const texts = (n: number) =>
      fc.array(fc.constantFrom('I', 'X', 'Y', 'Z'), { minLength: n, maxLength: n }).map((l) => l.join(''));
    const cases = fc
      .integer({ min: 1, max: 7 })
      .chain((n) =>
        fc.tuple(
          fc.constant(n),
          fc.array(fc.tuple(fc.integer({ min: -4, max: 4 }), texts(n)), { minLength: 1, maxLength: 25 }),
        ),
      );
    fc.assert(
      fc.property(cases, ([n, terms]) => {
        const m = model(n, terms, 0.25);
        const { re, im, size } = denseMatrix(m);
        const h = flipHamiltonian(
          flipParts(
            n,
            terms.map(([c, t]) => ({ re: c, im: 0, string: string(t) })),
            0.25,
          ),
          kernel,
          true,
        );
        const input = seeded(kernel, 2 * size, 3);
        const output = kernel.vector(2 * size);
        h.apply(input, output);
        const v = input.view;
        const expected = new Float64Array(2 * size);
        for (let r = 0; r < size; r++) {
          for (let c = 0; c < size; c++) {
            const [a, b] = [re[r * size + c] ?? 0, im[r * size + c] ?? 0];
            expected[r] = (expected[r] ?? 0) + a * (v[c] ?? 0) - b * (v[size + c] ?? 0);
            expected[size + r] = (expected[size + r] ?? 0) + a * (v[size + c] ?? 0) + b * (v[c] ?? 0);
          }
        }
        expectClose(output.view, expected, 9);
        kernel.release(input);
        kernel.release(output);
        h.free();
      }),
      { seed: 31, numRuns: 120 },
    );
  });

  it('reduces a symmetric matrix as the plain loop does', () => {
    for (const n of [1, 2, 3, 8, 33]) {
      const matrix = Float64Array.from({ length: n * n }, (_, k) => Math.cos((Math.floor(k / n) + 1) * ((k % n) + 1)));
      const expected = symmetricEigen(matrix.slice(), n, false).values;
      const space = kernel.sweep?.(n);
      const got = symmetricEigen(matrix.slice(), n, true, space);
      expectClose(got.values, expected, 9);
      space?.free();
    }
  });
});

describe('two kernels', () => {
  it('agree on products whose index has a high part: 14 spins, flips and signs across the border', () => {
    const texts = [
      'XIIIIIIIIIIIII',
      'IIIIIIIIIIIIIX',
      'IYIIIIIIIIIIYI',
      'ZZIIIIIIIIIIZI',
      'XXIIIIIIIIIIII',
      'IZXIIIIIIIIZIX',
      'IIIIXIIIIIIIII',
      'IIIIIIXIIIIIII',
      'IIIIIIIIXIIIII',
      'IXXIIIIIIIIIXX',
      'YYIIIIIIIIIIII',
      'IIIIIIIIIIYZYI',
      'XIIIIIIIIIIIZX',
    ];
    const terms = texts.map((t, k) => ({ re: k % 4 === 0 ? -1 : 0.3 * k, im: 0, string: string(t) }));
    const outputs = kernels.map((kernel) => {
      const h = flipHamiltonian(flipParts(14, terms), kernel);
      const input = seeded(kernel, 2 ** 14, 5);
      const output = kernel.vector(2 ** 14);
      h.apply(input, output);
      const copy = output.view.slice();
      // One entry by hand: ⟨r|H|v⟩ for a state with ones on both sides of the border.
      const r = 0b10000000000011;
      let byHand = 0;
      for (const t of terms) {
        const from = r ^ (t.string.x[0] ?? 0);
        let phase = t.string.phase;
        for (let ones = (t.string.z[0] ?? 0) & from; ones; ones &= ones - 1) phase += 2;
        expect(phase % 2).toBe(0);
        byHand += (phase % 4 === 0 ? t.re : -t.re) * (input.view[from] ?? 0);
      }
      expect(copy[r]).toBeCloseTo(byHand, 10);
      [input, output].forEach((v) => kernel.release(v));
      h.free();
      return copy;
    });
    expectClose(outputs[0] ?? [], outputs[1] ?? [], 10);
  });

  it('agree on levels, by flips and by rows', () => {
    const ring = chain(12, 1, 0.9, true);
    const rules = Array.from({ length: 12 }, (_, s) => ({
      sites: [s, (s + 1) % 12],
      weights: [1, 1],
      relation: '<=' as const,
      bound: 1,
    }));
    for (const question of [ask(ring, 5), ask(ring, 5, { rules }), ask(chain(9, 1, 1, true), 600)]) {
      const [plain, wasm] = kernels.map((kernel) => solveNow(question, { kernel }));
      if (!plain?.ok || !wasm?.ok) throw new Error('refused');
      expectClose(wasm.value.energies, plain.value.energies, 8);
    }
  });
});

describe('memory', () => {
  it('joins what is given back and uses it again', () => {
    const memory = new WebAssembly.Memory({ initial: 1, maximum: 16 });
    const arena = newArena(memory);
    const places = [100, 2000, 50, 70000, 8].map((size) => arena.take(size));
    expect(new Set(places).size).toBe(5);
    expect(places.every((p) => p % 64 === 0)).toBe(true);
    arena.give(places[1]!);
    arena.give(places[2]!);
    expect(arena.take(2040)).toBe(places[1]);
    expect(() => arena.take(2 ** 21)).toThrow(RangeError);
    expect(() => arena.give(12)).toThrow(RangeError);
  });
});
