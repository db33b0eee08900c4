import type { TextPiece } from '../contracts/reviews.ts';

/**
 * Most changes that are looked for between two texts before a coarser comparison takes over: the work grows with changes times
 * length, the memory with their square.
 */
const mostChanges = 1_200;

const words = /\s+|[\p{L}\p{N}]+|[^\s\p{L}\p{N}]/gu;
const linesWithEnds = /[^\n]*\n|[^\n]+/g;

/**
 * Two texts beside each other: what stands in both and what in one of them, by words, or by lines where the texts differ much.
 * Joining the pieces of `same` and `left` gives the left text, those of `same` and `right` the right one.
 */
export function piecesOf(left: string, right: string): TextPiece[] {
  if (left === right) return left === '' ? [] : [{ in: 'same', text: left }];
  for (const token of [words, linesWithEnds]) {
    const found = align(left.match(token) ?? [], right.match(token) ?? []);
    if (found !== null) return found;
  }
  return gather([
    { in: 'left', text: left },
    { in: 'right', text: right },
  ]);
}

function align(left: readonly string[], right: readonly string[]): TextPiece[] | null {
  let start = 0;
  while (start < left.length && start < right.length && left[start] === right[start]) start += 1;
  let end = 0;
  while (
    end < left.length - start &&
    end < right.length - start &&
    left[left.length - 1 - end] === right[right.length - 1 - end]
  ) {
    end += 1;
  }
  const middle = shortestEdit(left.slice(start, left.length - end), right.slice(start, right.length - end));
  if (middle === null) return null;
  return gather([
    { in: 'same', text: left.slice(0, start).join('') },
    ...middle,
    { in: 'same', text: left.slice(left.length - end).join('') },
  ]);
}

/** Furthest places on the diagonals after each number of changes; diagonal k at index k + offset. */
type Reach = Int32Array;

/**
 * A shortest sequence of deletions and insertions. Source: E. W. Myers, "An O(ND) difference algorithm and its variations",
 * Algorithmica 1, 251 (1986), the greedy algorithm of section 3. Null past `mostChanges`.
 */
function shortestEdit(left: readonly string[], right: readonly string[]): TextPiece[] | null {
  const most = Math.min(left.length + right.length, mostChanges);
  const offset = most + 1;
  const reach: Reach = new Int32Array(2 * most + 3);
  const history: Reach[] = [];
  for (let changes = 0; changes <= most; changes += 1) {
    history.push(reach.slice(offset - changes - 1, offset + changes + 2));
    for (let k = -changes; k <= changes; k += 2) {
      const down = k === -changes || (k !== changes && (reach[offset + k - 1] ?? 0) < (reach[offset + k + 1] ?? 0));
      let x = down ? (reach[offset + k + 1] ?? 0) : (reach[offset + k - 1] ?? 0) + 1;
      while (x < left.length && x - k < right.length && left[x] === right[x - k]) x += 1;
      reach[offset + k] = x;
      if (x >= left.length && x - k >= right.length) return walkBack(left, right, history);
    }
  }
  return null;
}

function walkBack(left: readonly string[], right: readonly string[], history: readonly Reach[]): TextPiece[] {
  const backwards: TextPiece[] = [];
  let x = left.length;
  let y = right.length;
  for (let changes = history.length - 1; changes > 0; changes -= 1) {
    const reach = history[changes];
    const at = (k: number): number => reach?.[k + changes + 1] ?? 0;
    const k = x - y;
    const down = k === -changes || (k !== changes && at(k - 1) < at(k + 1));
    const from = down ? at(k + 1) : at(k - 1);
    const fromY = from - (down ? k + 1 : k - 1);
    while (x > (down ? from : from + 1)) {
      x -= 1;
      y -= 1;
      backwards.push({ in: 'same', text: left[x] ?? '' });
    }
    if (down) backwards.push({ in: 'right', text: right[fromY] ?? '' });
    else backwards.push({ in: 'left', text: left[from] ?? '' });
    x = from;
    y = fromY;
  }
  while (x > 0) {
    x -= 1;
    backwards.push({ in: 'same', text: left[x] ?? '' });
  }
  return backwards.reverse();
}

/** Neighbours of one kind as one piece; within a change what was on the left comes first. */
function gather(pieces: readonly TextPiece[]): TextPiece[] {
  const gathered: TextPiece[] = [];
  let change = { left: '', right: '' };
  const close = (): void => {
    if (change.left !== '') gathered.push({ in: 'left', text: change.left });
    if (change.right !== '') gathered.push({ in: 'right', text: change.right });
    change = { left: '', right: '' };
  };
  for (const piece of pieces) {
    if (piece.text === '') continue;
    if (piece.in !== 'same') {
      change[piece.in] += piece.text;
      continue;
    }
    close();
    const last = gathered.at(-1);
    if (last?.in === 'same') gathered[gathered.length - 1] = { in: 'same', text: last.text + piece.text };
    else gathered.push(piece);
  }
  close();
  return gathered;
}

/** How alike two texts are, from 0 to 1: twice the words they share over the words they have (Dice's coefficient). */
export function likeness(left: string, right: string): number {
  const count = new Map<string, number>();
  const mine = left.match(/[\p{L}\p{N}]+|[^\s\p{L}\p{N}]/gu) ?? [];
  const theirs = right.match(/[\p{L}\p{N}]+|[^\s\p{L}\p{N}]/gu) ?? [];
  if (mine.length + theirs.length === 0) return 1;
  for (const word of mine) count.set(word, (count.get(word) ?? 0) + 1);
  let shared = 0;
  for (const word of theirs) {
    const rest = count.get(word) ?? 0;
    if (rest === 0) continue;
    shared += 1;
    count.set(word, rest - 1);
  }
  return (2 * shared) / (mine.length + theirs.length);
}
