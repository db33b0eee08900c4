import { Coefficient } from '../../algebra/numbers/coefficient.ts';
import type { Matrix } from '../../algebra/pauli/block.ts';
import type { FiniteString } from '../../algebra/finite/types.ts';
import { parity } from '../kernel/flips.ts';
import type { EnumeratedFault } from './enumerated.ts';
import { bit } from './packed.ts';

/** Pauli strings between the orthonormal vectors of a block of spins, exact until they are handed on. */

/** An isometry and the blocks of spins that carry a copy of it. */
export interface ImageBlocks {
  /** (2^k × d), orthonormal columns; the first spin of a block is the highest bit of a row. Constant entries. */
  readonly columns: Matrix;
  /** Spins of each block, k of them. */
  readonly blocks: readonly (readonly number[])[];
}

/** Why an image together with its labels is no sector; indices are those of the given constraints. */
export type ImageFault =
  | EnumeratedFault
  | { readonly code: 'constraint leaves image'; readonly constraint: number }
  | { readonly code: 'constraint is too wide'; readonly constraint: number; readonly limit: number }
  | { readonly code: 'rule crosses image' }
  | { readonly code: 'blocks share a spin'; readonly spin: number };

/** A factor of the product space: a block, or a spin that no block takes (d = 2, the identity). */
export interface Factor {
  readonly spins: readonly number[];
  readonly dimension: number;
  /** What the X^x Z^z of this factor's spins is between its vectors. */
  readonly local: (mask: Mask) => LocalMatrix;
  /** For each vector the value of a spin's bit where all its rows agree, else undefined. */
  readonly bits: (spin: number) => readonly number[] | undefined;
}

/** X and Z parts on the spins of a factor, its first spin highest. */
export interface Mask {
  readonly x: number;
  readonly z: number;
}

export interface Entry {
  readonly to: number;
  readonly from: number;
  readonly re: number;
  readonly im: number;
}

export interface LocalMatrix {
  /** Nonzero entries of V† P V, (d × d). */
  readonly entries: readonly Entry[];
  /** Nonzero entries of (1 − V V†) P V, (2^k × d): none where P keeps the span of the vectors. Exact. */
  readonly outside: readonly Entry[];
}

const { zero, one } = Coefficient;

/** P V for P = X^x Z^z, as rows. */
const times = (v: Matrix, { x, z }: Mask): Matrix =>
  v.map((_, row) => {
    const from = row ^ x;
    return (v[from] ?? []).map((c) => (parity(from & z) === 1 ? c.neg() : c));
  });

function sandwiched(v: Matrix, moved: Matrix, d: number): Coefficient[][] {
  const out = Array.from({ length: d }, () => Array<Coefficient>(d).fill(zero));
  v.forEach((row, r) => {
    row.forEach((c, a) => {
      if (c.isZero()) return;
      moved[r]?.forEach((m, b) => {
        const line = out[a];
        if (line && !m.isZero()) line[b] = (line[b] ?? zero).add(c.conj().mul(m));
      });
    });
  });
  return out;
}

function entriesOf(matrix: Matrix): Entry[] {
  const none = new Map<string, number>();
  return matrix.flatMap((row, to) => row.flatMap((c, from) => (c.isZero() ? [] : [{ to, from, ...c.toFloat(none) }])));
}

function localMatrix(v: Matrix, mask: Mask, d: number): LocalMatrix {
  const moved = times(v, mask);
  const inside = sandwiched(v, moved, d);
  const outside = moved.map((row, r) =>
    row.map((m, b) =>
      (v[r] ?? []).reduce((sum, c, a) => (c.isZero() ? sum : sum.sub(c.mul(inside[a]?.[b] ?? zero))), m),
    ),
  );
  return { entries: entriesOf(inside), outside: entriesOf(outside) };
}

function newFactor(spins: readonly number[], v: Matrix, known: Map<string, LocalMatrix>): Factor {
  const dimension = v[0]?.length ?? 0;
  return {
    spins,
    dimension,
    local(mask) {
      const key = `${String(mask.x)},${String(mask.z)}`;
      const found = known.get(key) ?? localMatrix(v, mask, dimension);
      known.set(key, found);
      return found;
    },
    bits(spin) {
      const place = 1 << (spins.length - 1 - spins.indexOf(spin));
      const values = Array.from({ length: dimension }, (_, b) => [
        ...new Set(v.flatMap((row, r) => ((row[b] ?? zero).isZero() ? [] : [(r & place) === 0 ? 0 : 1]))),
      ]);
      return values.every((list) => list.length === 1) ? values.map((list) => list[0] ?? 0) : undefined;
    },
  };
}

const wholeSpin: Matrix = [
  [one, zero],
  [zero, one],
];

/** Blocks and single spins of n spins, in the order of their first spins. */
export function factorsOf(n: number, images: readonly ImageBlocks[]): Factor[] {
  const taken = new Set(images.flatMap((image) => image.blocks.flat()));
  const single = new Map<string, LocalMatrix>();
  const factors = images.flatMap(({ columns, blocks }) => {
    const known = new Map<string, LocalMatrix>();
    return blocks.map((spins) => newFactor(spins, columns, known));
  });
  for (let s = 0; s < n; s++) if (!taken.has(s)) factors.push(newFactor([s], wholeSpin, single));
  return factors.sort((a, b) => Math.min(...a.spins) - Math.min(...b.spins));
}

/** Part of a string on a factor's spins; its phase stays with the string. */
export function maskOn(string: Pick<FiniteString, 'x' | 'z'>, { spins }: Factor): Mask {
  let [x, z] = [0, 0];
  for (const spin of spins) {
    x = 2 * x + bit(string.x, spin);
    z = 2 * z + bit(string.z, spin);
  }
  return { x, z };
}
