import type { AllSizes } from '../algebra/f2/all-sizes.ts';
import {
  commuteExtended,
  commuteOrbits,
  commuteWithExtended,
  type Orbit,
  type SizeParity,
  type Verdict,
  type Witness,
} from '../algebra/pauli/commutation.ts';
import type { Cell } from '../lattice/cells.ts';
import type { Extended, Operator } from '../algebra/pauli/types.ts';
import type { Value } from '../language/values.ts';
import type { Budget } from '../limits.ts';

/** A thing that may commute with another: one translation orbit of a string, or one product of unbounded support. */
export type Piece =
  | { readonly kind: 'orbit'; readonly name: string; readonly orbit: Orbit; readonly needs: readonly Cell[] }
  | { readonly kind: 'extended'; readonly name: string; readonly extended: Extended };

/** Pieces of an operator, constants left out, in the order of its terms. */
export function operatorPieces(name: string, operator: Operator): Piece[] {
  const families = operator.families
    .filter((family) => family.string.factors.length > 0)
    .map((family): Piece => ({ kind: 'orbit', name, orbit: family, needs: family.needs }));
  const extended = operator.extended.map((term): Piece => ({ kind: 'extended', name, extended: term.extended }));
  return [...families, ...extended];
}

/** Pieces of a declared model, operator, law or symmetry; undefined for what is none of them. */
export function piecesOf(value: Value | undefined): Piece[] | undefined {
  switch (value?.what) {
    case 'model':
    case 'operator':
      return operatorPieces(value.name, value.operator);
    case 'law':
      return value.families.map((family) => ({ kind: 'orbit', name: value.name, orbit: family, needs: family.needs }));
    case 'symmetry':
      return [{ kind: 'extended', name: value.name, extended: value.extended }];
    default:
      return undefined;
  }
}

const mirrored = (verdict: Verdict): Verdict =>
  verdict.commutes === false
    ? {
        commutes: false,
        witnesses: verdict.witnesses.map((w) => ({ ...w, left: w.right, right: w.left })),
      }
    : verdict;

/** Whether all translates of a commute with all translates of b, on the infinite lattice. */
export function commutePieces(a: Piece, b: Piece, budget: Budget): Verdict {
  if (a.kind === 'orbit')
    return b.kind === 'orbit'
      ? commuteOrbits(a.orbit, b.orbit, budget)
      : commuteWithExtended(a.orbit, b.extended, budget);
  return b.kind === 'orbit'
    ? mirrored(commuteWithExtended(b.orbit, a.extended, budget))
    : commuteExtended(a.extended, b.extended, budget);
}

/** Sizes for which a list of proofs holds together: the largest start, the least common multiple. */
export function togetherFrom(proofs: readonly AllSizes[]): { from: number[]; multiples: number[] } {
  const from: number[] = [];
  const multiples: number[] = [];
  const gcd = (a: number, b: number): number => (b === 0 ? a : gcd(b, a % b));
  for (const proof of proofs) {
    proof.from.forEach((f, d) => (from[d] = Math.max(from[d] ?? 1, f)));
    proof.multiples.forEach((m, d) => (multiples[d] = ((multiples[d] ?? 1) * m) / gcd(multiples[d] ?? 1, m)));
  }
  return { from, multiples };
}

/** "every size", "every size from 2 x 2 on", "every size that is a multiple of 2 x 1". */
export function sizesWords(proofs: readonly AllSizes[]): string {
  const { from, multiples } = togetherFrom(proofs);
  const words = ['every size'];
  if (multiples.some((m) => m > 1)) words.push(`that is a multiple of ${multiples.join(' x ')}`);
  if (from.some((f) => f > 1)) words.push(`from ${from.join(' x ')} on`);
  return words.join(' ');
}

export type { SizeParity, Witness };
