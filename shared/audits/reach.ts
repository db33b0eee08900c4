import type { Cell, LatticeFamily, Offset } from '../lattice/cells.ts';
import type { Piece } from './pieces.ts';

/** How far things reach, in unit cells along each direction, counted by the vertices of their cells. */

/** Offsets of the vertices of a cell. */
export function verticesOf(family: LatticeFamily, cell: Cell): Offset[] {
  const from = (cells: readonly Cell[]): Offset[] =>
    cells.flatMap((c) => verticesOf(family, { ...c, offset: c.offset.map((o, d) => o + (cell.offset[d] ?? 0)) }));
  switch (cell.kind) {
    case 'vertices':
      return [cell.offset];
    case 'links': {
      const link = family.links[cell.index];
      return link ? from([link.a, link.b]) : [];
    }
    case 'plaquettes':
      return from(family.plaquettes[cell.index]?.corners ?? []);
    case 'cubes':
      return from(family.cubes[cell.index]?.faces ?? []);
  }
}

/** Lowest and highest coordinates of the vertices of some cells along direction d; undefined without cells. */
export function spanOf(
  family: LatticeFamily,
  cells: readonly Cell[],
  d: number,
): { low: number; high: number } | undefined {
  const along = cells.flatMap((cell) => verticesOf(family, cell)).map((offset) => offset[d] ?? 0);
  if (along.length === 0) return undefined;
  return { low: along.reduce((a, b) => Math.min(a, b)), high: along.reduce((a, b) => Math.max(a, b)) };
}

/** Strings of a piece with the steps by which they move and the cells they need. */
export const stringsOf = (piece: Piece): { cells: Cell[]; steps: readonly number[] }[] =>
  piece.kind === 'orbit'
    ? [{ cells: [...piece.orbit.string.factors.map((f) => f.cell), ...piece.needs], steps: piece.orbit.steps }]
    : piece.extended.parts.map((part) => ({
        cells: [...part.string.factors.map((f) => f.cell), ...part.needs],
        steps: part.steps,
      }));

/** Names of the species that pieces act on. */
export const speciesOfPieces = (pieces: readonly Piece[]): ReadonlySet<string> =>
  new Set(
    pieces.flatMap((piece) =>
      (piece.kind === 'orbit' ? [piece.orbit.string] : piece.extended.parts.map((part) => part.string)).flatMap((s) =>
        s.factors.map((f) => f.species),
      ),
    ),
  );
