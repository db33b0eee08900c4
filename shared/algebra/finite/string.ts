import type { FiniteString } from './types.ts';

const words = (n: number): number => (n + 31) >>> 5;

/** Two strings that should live on one cluster do not. */
export class LengthMismatch extends Error {
  constructor(left: number, right: number) {
    super(`strings on ${String(left)} and on ${String(right)} spins do not multiply`);
    this.name = 'LengthMismatch';
  }
}

export function identityOn(n: number): FiniteString {
  return { n, x: new Uint32Array(words(n)), z: new Uint32Array(words(n)), phase: 0 };
}

/** Number of set bits of a word. */
export function countBits(word: number): number {
  let w = word - ((word >>> 1) & 0x55555555);
  w = (w & 0x33333333) + ((w >>> 2) & 0x33333333);
  return Math.imul((w + (w >>> 4)) & 0x0f0f0f0f, 0x01010101) >>> 24;
}

export const bit = (bits: Uint32Array, k: number): number => ((bits[k >>> 5] ?? 0) >>> (k & 31)) & 1;

/** Parity of the bits that two rows share (0 or 1). */
export function sharedParity(a: Uint32Array, b: Uint32Array): number {
  let all = 0;
  for (let w = 0; w < a.length; w++) all ^= (a[w] ?? 0) & (b[w] ?? 0);
  return countBits(all) & 1;
}

/**
 * Product a·b of two strings on the same n spins. A string stands for i^k X^x Z^z; moving Z^z past X^x' costs (−1)^(z·x'), so phases
 * add to k + k' + 2 (z·x'). Throws LengthMismatch. Linear in n.
 */
export function multiply(a: FiniteString, b: FiniteString): FiniteString {
  if (a.n !== b.n) throw new LengthMismatch(a.n, b.n);
  const x = a.x.slice();
  const z = a.z.slice();
  for (let w = 0; w < x.length; w++) {
    x[w] = (x[w] ?? 0) ^ (b.x[w] ?? 0);
    z[w] = (z[w] ?? 0) ^ (b.z[w] ?? 0);
  }
  return { n: a.n, x, z, phase: (a.phase + b.phase + 2 * sharedParity(a.z, b.x)) & 3 };
}

/** True if ab = ba. Throws LengthMismatch. */
export function commute(a: FiniteString, b: FiniteString): boolean {
  if (a.n !== b.n) throw new LengthMismatch(a.n, b.n);
  return sharedParity(a.x, b.z) === sharedParity(a.z, b.x);
}

/** Hermitian conjugate: (i^k X^x Z^z)† = i^(−k + 2 x·z) X^x Z^z. */
export const adjoint = (a: FiniteString): FiniteString => ({
  ...a,
  phase: (-a.phase + 2 * sharedParity(a.x, a.z)) & 3,
});

/** The same string with i^by more. */
export const turned = (a: FiniteString, by: number): FiniteString => ({ ...a, phase: (a.phase + by) & 3 });

/** Number of Y factors. */
function countY(a: FiniteString): number {
  let count = 0;
  for (let w = 0; w < a.x.length; w++) count += countBits((a.x[w] ?? 0) & (a.z[w] ?? 0));
  return count;
}

/** k in i^k times a product of Pauli matrices X, Y, Z: 0 or 2 for a Hermitian string. */
export const pauliPhase = (a: FiniteString): number => (a.phase - countY(a)) & 3;

export const isHermitian = (a: FiniteString): boolean => pauliPhase(a) % 2 === 0;

/** Number of spins it acts on. */
export function weight(a: FiniteString): number {
  let count = 0;
  for (let w = 0; w < a.x.length; w++) count += countBits((a.x[w] ?? 0) | (a.z[w] ?? 0));
  return count;
}

export const isIdentity = (a: FiniteString): boolean => a.x.every((w) => w === 0) && a.z.every((w) => w === 0);

/** Key of x and z, without the phase; short for sparse strings. */
export function bodyKey(a: FiniteString): string {
  let key = '';
  for (let w = 0; w < a.x.length; w++) {
    const [x, z] = [a.x[w] ?? 0, a.z[w] ?? 0];
    if (x !== 0 || z !== 0) key += `${w.toString(36)}:${x.toString(36)}.${z.toString(36)};`;
  }
  return key;
}

export const key = (a: FiniteString): string => `${String(a.phase & 3)}|${bodyKey(a)}`;

/** Spins it acts on with their Pauli matrices, in order; and k of i^k in front of that product. */
export function toPauli(a: FiniteString): {
  readonly phase: number;
  readonly factors: readonly { readonly spin: number; readonly pauli: 'x' | 'y' | 'z' }[];
} {
  const factors: { spin: number; pauli: 'x' | 'y' | 'z' }[] = [];
  for (let w = 0; w < a.x.length; w++)
    for (let rest = (a.x[w] ?? 0) | (a.z[w] ?? 0); rest !== 0; rest &= rest - 1) {
      const spin = w * 32 + 31 - Math.clz32(rest & -rest);
      factors.push({ spin, pauli: bit(a.x, spin) ? (bit(a.z, spin) ? 'y' : 'x') : 'z' });
    }
  return { phase: pauliPhase(a), factors };
}

/** i^phase times a product of Pauli matrices on spins, in the order given (they may repeat). */
export function fromPauli(
  n: number,
  factors: Iterable<{ readonly spin: number; readonly pauli: 'x' | 'y' | 'z' }>,
  phase = 0,
): FiniteString {
  const { x, z } = identityOn(n);
  let k = phase;
  for (const { spin, pauli } of factors) {
    if (spin < 0 || spin >= n) throw new RangeError(`spin ${String(spin)} is not among ${String(n)}`);
    const w = spin >>> 5;
    const mask = 1 << (spin & 31);
    if (pauli !== 'z') {
      // the new X stands to the right of what is there: it passes a Z
      if (((z[w] ?? 0) & mask) !== 0) k += 2;
      x[w] = (x[w] ?? 0) ^ mask;
    }
    if (pauli !== 'x') z[w] = (z[w] ?? 0) ^ mask;
    // Y = i X Z
    if (pauli === 'y') k += 1;
  }
  return { n, x, z, phase: k & 3 };
}

/** Reads "XIZ", "-YY", "+iXZ": one letter a spin, from spin 0. Throws RangeError on other text. */
export function fromText(text: string): FiniteString {
  const m = /^([+-]?)(i?)([IXYZ_]*)$/.exec(text);
  if (!m) throw new RangeError(`"${text}" is not a string like -XIZ`);
  const letters = [...(m[3] ?? '')];
  const factors = letters.flatMap((letter, spin) =>
    letter === 'I' || letter === '_' ? [] : [{ spin, pauli: letter.toLowerCase() as 'x' | 'y' | 'z' }],
  );
  return fromPauli(letters.length, factors, (m[1] === '-' ? 2 : 0) + (m[2] === 'i' ? 1 : 0));
}

/** Text as `fromText` reads it. */
export function toText(a: FiniteString): string {
  const { phase, factors } = toPauli(a);
  const letters = Array<string>(a.n).fill('I');
  for (const { spin, pauli } of factors) letters[spin] = pauli.toUpperCase();
  return `${['+', '+i', '-', '-i'][phase] ?? ''}${letters.join('')}`;
}
