import { timesPhase, type NumericTerm } from '../hamiltonian.ts';
import { maskOn, type Entry, type Factor } from './image-blocks.ts';

/**
 * Which terms lead out of an image, judged on the sum of all: (1 − V V†) H V is split by the set S of blocks that are left and the set T
 * of other factors on which a traceless part acts. The parts of different (S, T) are independent, so H leaves if and only if an amplitude
 * of one is not 0, and the terms that feed it are those named.
 */

/** Subsets and numbers up to which parts are added up; wider terms count as leaving by themselves. */
const mostFactors = 6;
const mostNumbers = 2 ** 18;

/** One amplitude of a part, and the terms that add to it. */
interface Amplitude {
  re: number;
  im: number;
  readonly terms: number[];
}

/** V† P V − (trace / d): entries, and the trace by d. */
function split(entries: readonly Entry[], d: number): { mean: [number, number]; traceless: readonly Entry[] } {
  const mean: [number, number] = [0, 0];
  for (const e of entries)
    if (e.to === e.from) {
      mean[0] += e.re / d;
      mean[1] += e.im / d;
    }
  const diagonal = Array.from({ length: d }, (_, k): Entry => {
    const own = entries.find((e) => e.to === k && e.from === k);
    return { to: k, from: k, re: (own?.re ?? 0) - mean[0], im: (own?.im ?? 0) - mean[1] };
  });
  const traceless = [...entries.filter((e) => e.to !== e.from), ...diagonal].filter(
    (e) => Math.hypot(e.re, e.im) > 1e-14,
  );
  return { mean, traceless };
}

/** Indices of the terms that lead out of the image of the factors' vectors, ascending. */
export function leavingTerms(factors: readonly Factor[], terms: readonly NumericTerm[]): number[] {
  const amplitudes = new Map<string, Amplitude>();
  const leaving = new Set<number>();
  for (const [index, t] of terms.entries()) {
    const on = factors.flatMap((f, k) => {
      const mask = maskOn(t.string, f);
      if (mask.x === 0 && mask.z === 0) return [];
      const local = f.local(mask);
      return [{ k, outside: local.outside, ...split(local.entries, f.dimension) }];
    });
    if (on.every((o) => o.outside.length === 0)) continue;
    const numbers = on.reduce((p, o) => p * Math.max(1, o.outside.length, o.traceless.length), 1);
    if (on.length > mostFactors || numbers > mostNumbers) {
      leaving.add(index);
      continue;
    }
    const [re, im] = timesPhase(t.re, t.im, t.string.phase);
    const descend = (depth: number, s: string, rest: string, at: string, a: number, b: number): void => {
      const o = on[depth];
      if (!o) {
        if (s === '') return;
        const key = `${s}|${rest}|${at}`;
        const own = amplitudes.get(key) ?? { re: 0, im: 0, terms: [] };
        amplitudes.set(key, own);
        own.re += a;
        own.im += b;
        own.terms.push(index);
        return;
      }
      const times = (e: { re: number; im: number }): [number, number] => [a * e.re - b * e.im, a * e.im + b * e.re];
      const place = (e: Entry): string => `${at}${String(e.to)},${String(e.from)};`;
      for (const e of o.outside) descend(depth + 1, `${s}${String(o.k)},`, rest, place(e), ...times(e));
      for (const e of o.traceless) descend(depth + 1, s, `${rest}${String(o.k)},`, place(e), ...times(e));
      const [mr, mi] = o.mean;
      if (Math.hypot(mr, mi) > 1e-14) descend(depth + 1, s, rest, at, ...times({ re: mr, im: mi }));
    };
    descend(0, '', '', '', re, im);
  }
  const scale = terms.reduce((largest, t) => Math.max(largest, Math.hypot(t.re, t.im)), 0);
  for (const own of amplitudes.values())
    if (Math.hypot(own.re, own.im) > 1e-11 * scale) own.terms.forEach((k) => leaving.add(k));
  return [...leaving].sort((a, b) => a - b);
}
