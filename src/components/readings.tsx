/** Two readings of a text beside each other: what only one of them has is underlined there, and named for who cannot see it. */

export interface Piece {
  readonly in: 'same' | 'left' | 'right';
  readonly text: string;
}

/** One side of the readings. Where a side has nothing of its own, the text stands as it is. */
export function ReadingOf({ pieces, side, code }: { pieces: readonly Piece[]; side: 'left' | 'right'; code: boolean }) {
  const Tag = side === 'left' ? 'del' : 'ins';
  return (
    <div className={code ? 'reading-text code' : 'reading-text'}>
      {pieces
        .filter((piece) => piece.in === 'same' || piece.in === side)
        .map((piece, k) =>
          piece.in === 'same' ? (
            <span key={k}>{piece.text}</span>
          ) : (
            <Tag key={k} className="own-reading">
              {piece.text}
            </Tag>
          ),
        )}
    </div>
  );
}
