import { Coefficient } from '../../algebra/numbers/coefficient.ts';
import {
  adjointMatrix,
  matrixRank,
  multiplyMatrices,
  pauliExpansion,
  pauliMatrix,
  zeroMatrix,
  type BlockTerm,
  type Matrix,
} from '../../algebra/pauli/block.ts';
import type { MapDeclaration } from '../../language/values.ts';
import { MapRefused } from '../refusals.ts';

export type StatesDeclaration = Extract<MapDeclaration, { kind: 'states' }>;

/** A Pauli string on the target block that is ±1 on all images: `letters` with its sign. */
export interface Stabilizer {
  readonly letters: string;
  readonly sign: 1 | -1;
}

/** Two listed states whose images are not orthonormal, with their inner product. */
export interface Overlap {
  readonly first: string;
  readonly second: string;
  readonly product: Coefficient;
}

/** What the lines of a state map say of one block. Bits and letters are in the order of the listed spins, first spin highest. */
export interface Isometry {
  /** Spins of the source and of the target block. */
  readonly sourceSpins: number;
  readonly targetSpins: number;
  /** V = Σ |image><bits| over the listed states, (2^target × 2^source). */
  readonly matrix: Matrix;
  /** Bits of the listed states, and of the forbidden ones. */
  readonly listed: readonly string[];
  readonly forbidden: readonly string[];
  /** Pairs that break V†V = 1 on the listed states; none for an isometry. */
  readonly overlaps: readonly Overlap[];
  /** Rank of the images. */
  readonly imageDimension: number;
  /** All Pauli strings that are ±1 on the image, without the identity, lightest first. */
  readonly stabilizers: readonly Stabilizer[];
}

const { zero, one } = Coefficient;
const bitsOf = (n: number, spins: number): string => n.toString(2).padStart(spins, '0');
const weightOf = (letters: string): number => [...letters].filter((l) => l !== 'I').length;
/** Most spins of a block on either side. */
const mostSpins = 6;

/** The isometry of a declaration's lines. Throws MapRefused past six spins a block, or where nothing is listed. */
export function isometryOf(declaration: StatesDeclaration): Isometry {
  const [block] = declaration.blocks;
  const sourceSpins = block?.from.length ?? 0;
  const targetSpins = block?.to.length ?? 0;
  if (!block || declaration.rules.length === 0)
    throw new MapRefused('a state map needs blocks and at least one listed state');
  if (sourceSpins > mostSpins || targetSpins > mostSpins)
    throw new MapRefused(
      `a block has at most ${String(mostSpins)} spins on either side, got ${String(Math.max(sourceSpins, targetSpins))}`,
    );
  const matrix = zeroMatrix(2 ** targetSpins, 2 ** sourceSpins).map((row) => [...row]);
  for (const rule of declaration.rules)
    for (const [bits, amplitude] of rule.amplitudes) {
      const row = matrix[parseInt(bits, 2)];
      if (row) row[parseInt(rule.bits, 2)] = (row[parseInt(rule.bits, 2)] ?? zero).add(amplitude);
    }
  const listed = declaration.rules.map((r) => r.bits);
  const forbidden = Array.from({ length: 2 ** sourceSpins }, (_, n) => bitsOf(n, sourceSpins)).filter(
    (b) => !listed.includes(b),
  );
  const gram = multiplyMatrices(adjointMatrix(matrix), matrix);
  const overlaps = listed.flatMap((first, i) =>
    listed.slice(i).flatMap((second): Overlap[] => {
      const product = gram[parseInt(first, 2)]?.[parseInt(second, 2)] ?? zero;
      return product.equals(first === second ? one : zero) ? [] : [{ first, second, product }];
    }),
  );
  return {
    sourceSpins,
    targetSpins,
    matrix,
    listed,
    forbidden,
    overlaps,
    imageDimension: matrixRank(matrix),
    stabilizers: stabilizersOf(matrix, targetSpins, overlaps.length === 0 ? listed.length : 0),
  };
}

/** Strings with S V = ±V: those whose coefficient in V V† is ± rank / 2^m. */
function stabilizersOf(matrix: Matrix, spins: number, rank: number): Stabilizer[] {
  if (rank === 0) return [];
  const projector = pauliExpansion(multiplyMatrices(matrix, adjointMatrix(matrix)));
  const full = Coefficient.rational(rank, 2 ** spins);
  return projector
    .flatMap(({ letters, coefficient }): Stabilizer[] =>
      weightOf(letters) === 0
        ? []
        : coefficient.equals(full)
          ? [{ letters, sign: 1 }]
          : coefficient.equals(full.neg())
            ? [{ letters, sign: -1 }]
            : [],
    )
    .sort((a, b) => weightOf(a.letters) - weightOf(b.letters) || (a.letters < b.letters ? -1 : 1));
}

/** V† as a block matrix from target to source; nothing is forbidden there and nothing reduced. */
export const adjointIsometry = (iso: Isometry): Isometry => ({
  ...iso,
  sourceSpins: iso.targetSpins,
  targetSpins: iso.sourceSpins,
  matrix: adjointMatrix(iso.matrix),
  forbidden: [],
  stabilizers: [],
});

/** Independent generators of the stabilizers, lightest first. */
export function independentStabilizers({ stabilizers }: Isometry): Stabilizer[] {
  const seen = new Set<string>();
  const kept: Stabilizer[] = [];
  for (const s of stabilizers) {
    if (seen.has(s.letters)) continue;
    for (const old of [...seen]) seen.add(timesLetters(old, s.letters).letters);
    seen.add(s.letters);
    kept.push(s);
  }
  return kept;
}

const table: Readonly<Record<string, readonly [letter: string, phase: number]>> = {
  XY: ['Z', 1],
  YX: ['Z', 3],
  YZ: ['X', 1],
  ZY: ['X', 3],
  ZX: ['Y', 1],
  XZ: ['Y', 3],
};

/** Product of two strings of letters: i^phase times letters. */
function timesLetters(a: string, b: string): { readonly letters: string; readonly phase: number } {
  let phase = 0;
  const letters = [...a].map((p, k) => {
    const q = b[k] ?? 'I';
    if (p === 'I') return q;
    if (q === 'I') return p;
    if (p === q) return 'I';
    const [letter, by] = table[`${p}${q}`] ?? ['I', 0];
    phase += by;
    return letter;
  });
  return { letters: letters.join(''), phase: phase & 3 };
}

const phases = [one, Coefficient.i, one.neg(), Coefficient.i.neg()] as const;

/**
 * An operator on the target block in least weight: strings that differ by a stabilizer S act alike on the image, Q S = ± Q there, so each
 * class is written by its lightest member. Strings that anticommute with a stabilizer vanish between images and are dropped.
 */
function lightened(terms: readonly BlockTerm[], stabilizers: readonly Stabilizer[]): BlockTerm[] {
  const sums = new Map<string, Coefficient>();
  for (const { letters, coefficient } of terms) {
    let best = { letters, coefficient };
    let vanishes = false;
    for (const s of stabilizers) {
      const { letters: other, phase } = timesLetters(letters, s.letters);
      if (timesLetters(s.letters, letters).phase !== phase) vanishes = true;
      // Q S = i^phase Q' and S = sign, so Q = sign i^phase Q' on the image
      const turned = coefficient.mul(phases[phase] ?? one).mul(s.sign === 1 ? one : one.neg());
      const lighter = weightOf(other) - weightOf(best.letters);
      if (lighter < 0 || (lighter === 0 && other < best.letters)) best = { letters: other, coefficient: turned };
    }
    if (!vanishes) sums.set(best.letters, (sums.get(best.letters) ?? zero).add(best.coefficient));
  }
  return [...sums]
    .flatMap(([letters, coefficient]) => (coefficient.isZero() ? [] : [{ letters, coefficient }]))
    .sort((a, b) => weightOf(a.letters) - weightOf(b.letters) || (a.letters < b.letters ? -1 : 1));
}

/** V O V† for a sum of Pauli strings on the source block, exact, in Pauli strings of least weight on the target block. */
export function blockImage(source: readonly BlockTerm[], iso: Isometry): BlockTerm[] {
  const size = 2 ** iso.sourceSpins;
  let sum = zeroMatrix(size, size);
  for (const t of source) {
    const m = pauliMatrix(t.letters);
    sum = sum.map((row, r) => row.map((x, c) => x.add((m[r]?.[c] ?? zero).mul(t.coefficient))));
  }
  const image = multiplyMatrices(multiplyMatrices(iso.matrix, sum), adjointMatrix(iso.matrix));
  return lightened(pauliExpansion(image), iso.stabilizers);
}

/** Listed and forbidden states that a sum of Pauli strings over several blocks joins: the first matrix element that leaves, if any does. */
export function leaves(
  terms: readonly { readonly letters: readonly string[]; readonly coefficient: Coefficient }[],
  iso: Isometry,
): { readonly from: string; readonly to: string } | undefined {
  if (iso.forbidden.length === 0) return undefined;
  const [first] = terms;
  const blocks = first?.letters.length ?? 0;
  const allowed = new Set(iso.listed);
  let starts: string[] = [''];
  for (let b = 0; b < blocks; b++) starts = starts.flatMap((s) => iso.listed.map((l) => s + l));
  for (const from of starts) {
    const reached = new Map<string, Coefficient>();
    for (const { letters, coefficient } of terms) {
      const { bits, factor } = actOn(letters.join(''), from);
      reached.set(bits, (reached.get(bits) ?? zero).add(coefficient.mul(factor)));
    }
    for (const [to, amplitude] of reached) {
      const parts = Array.from({ length: blocks }, (_, b) => to.slice(b * iso.sourceSpins, (b + 1) * iso.sourceSpins));
      if (!amplitude.isZero() && parts.some((p) => !allowed.has(p))) return { from, to };
    }
  }
  return undefined;
}

/** A Pauli string on a basis state: X flips; Z is −1 on 1; Y = i X Z. */
function actOn(letters: string, bits: string): { bits: string; factor: Coefficient } {
  let phase = 0;
  const out = [...letters].map((l, k) => {
    const bit = bits[k] === '1' ? 1 : 0;
    if ((l === 'Z' || l === 'Y') && bit === 1) phase += 2;
    if (l === 'Y') phase += 1;
    return String(l === 'X' || l === 'Y' ? 1 - bit : bit);
  });
  return { bits: out.join(''), factor: phases[phase & 3] ?? one };
}

/** The declaration that undoes a state map: it exists where the listed states fill the target block. */
export function inverseStates(declaration: StatesDeclaration): StatesDeclaration {
  const iso = isometryOf(declaration);
  const size = 2 ** iso.targetSpins;
  if (iso.overlaps.length > 0 || iso.listed.length !== size)
    throw new MapRefused(
      `this state map has no inverse: ${iso.overlaps.length > 0 ? 'its images are not orthonormal' : `its ${String(iso.listed.length)} images do not fill the ${String(size)} states of the target block`}`,
    );
  const [place] = declaration.rules.map((r) => r.place);
  return {
    kind: 'states',
    from: declaration.to,
    to: declaration.from,
    blocks: declaration.blocks.map((b) => ({ ...b, from: b.to, to: b.from })),
    rules: iso.matrix.map((row, n) => ({
      bits: bitsOf(n, iso.targetSpins),
      amplitudes: new Map(
        row.flatMap((c, s): [string, Coefficient][] => (c.isZero() ? [] : [[bitsOf(s, iso.sourceSpins), c.conj()]])),
      ),
      place: place ?? { line: 1, column: 1, length: 1 },
    })),
  };
}
