import { inGroup } from '../algebra/pauli/overlaps.ts';
import type { Extended, Factor, LocalString } from '../algebra/pauli/types.ts';
import type { RefusalWitness } from '../contracts/report.ts';
import { cellWord, type LatticeFamily } from '../lattice/cells.ts';
import type { Refusal } from './values.ts';

/** What a map's refusal rests on, as the plate draws it. */

const isExtended = (piece: LocalString | Extended): piece is Extended => 'parts' in piece;

const orbit = (factors: readonly Factor[], family: LatticeFamily): RefusalWitness['overlap'] =>
  factors.map(({ species, cell, pauli }) => ({
    species,
    cell: cellWord(family, cell),
    offset: [...cell.offset],
    pauli,
  }));

/** Strings with their steps: a local one stands still. */
const supports = (piece: LocalString | Extended | undefined, family: LatticeFamily): RefusalWitness['term'] =>
  piece === undefined
    ? []
    : isExtended(piece)
      ? piece.parts.map(({ string, steps }) => ({ orbit: orbit(string.factors, family), steps: [...steps] }))
      : [{ orbit: orbit(piece.factors, family), steps: family.vectors.map(() => 0) }];

/** Spins of a local string where a product has another Pauli matrix: an odd number of them if the two anticommute. */
const clashes = (string: LocalString, { parts }: Extended): Factor[] =>
  string.factors.filter(
    (f) =>
      parts
        .flatMap(({ string: own, steps }) => own.factors.map((p) => ({ p, steps })))
        .filter(
          ({ p, steps }) =>
            p.species === f.species &&
            p.cell.kind === f.cell.kind &&
            p.cell.index === f.cell.index &&
            p.pauli !== f.pauli &&
            inGroup(
              f.cell.offset.map((c, d) => c - (p.cell.offset[d] ?? 0)),
              steps,
            ),
        ).length %
        2 ===
      1,
  );

/** A refusal with the supports of the term and of what it is charged under, and the spins where the two anticommute. */
export function witnessOf({ reason, term, symmetry }: Refusal, family: LatticeFamily): RefusalWitness {
  const charged = symmetry?.extended;
  const overlap = term && charged && !isExtended(term) ? clashes(term, charged) : [];
  return {
    reason,
    term: supports(term, family),
    symmetry: symmetry?.text ?? '',
    charged: supports(charged, family),
    overlap: orbit(overlap, family),
  };
}
