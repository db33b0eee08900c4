/**
 * The term in hand: what pointer, focus or caret is at, on either page. A value with pure updates; what answers it
 * (image, plate, claim) is computed from the reading by whoever shows it.
 */

/** A thing on one page: a gathered sum of a model, or a declaration (with the rule's number, for a map). */
export type Ref = string;
export const groupRef = (model: string, group: number): Ref => `${model}/${String(group)}`;
export const ruleRef = (map: string, rule: number, side: 'left' | 'right'): Ref => `${map}:${String(rule)}:${side}`;
export const nameRef = (name: string): Ref => name;
/** A term of a model laid over a law: one mark of a commutation table. `term` is the number that the table knows it by. */
export const overRef = (model: string, term: number, law: string): Ref => `${model}#${String(term)}#${law}`;

/** The mark of a commutation table that a reference names; null for other references. */
export function overOf(
  ref: Ref | null,
): { readonly model: string; readonly term: number; readonly law: string } | null {
  const [model, term, law] = ref?.split('#') ?? [];
  return model === undefined || term === undefined || law === undefined ? null : { model, term: Number(term), law };
}

/** The two halves of what is in hand; either may be missing. */
export interface Held {
  readonly left: Ref | null;
  readonly right: Ref | null;
}

export interface Hand {
  readonly held: Held | null;
  readonly by: 'pointer' | 'focus' | 'caret';
  /** A pinned term stays in hand whatever the pointer passes. */
  readonly pinned: boolean;
}

export const emptyHand: Hand = { held: null, by: 'pointer', pinned: false };

const sameHeld = (a: Held | null, b: Held | null): boolean =>
  a === b || (a !== null && b !== null && a.left === b.left && a.right === b.right);

/** Takes a term in hand; a pinned one is only replaced by another pin. The same hand comes back when nothing changes. */
export function take(hand: Hand, held: Held, by: Hand['by']): Hand {
  if (hand.pinned || (sameHeld(hand.held, held) && hand.by === by)) return hand;
  return { held, by, pinned: false };
}

/** Lets go, unless pinned or taken since by something else. */
export function leave(hand: Hand, by: Hand['by']): Hand {
  return hand.pinned || hand.held === null || hand.by !== by ? hand : { ...emptyHand, by };
}

/** Pins a term, or unpins it when it was the pinned one. */
export function togglePin(hand: Hand, held: Held): Hand {
  const off = hand.pinned && sameHeld(hand.held, held);
  return { held, by: hand.by, pinned: !off };
}

export const letGo = (hand: Hand): Hand => (hand.held === null && !hand.pinned ? hand : emptyHand);

/** Whether a row answers the hand: it is the one held, or its image or preimage. */
export function answersHand(hand: Hand, row: Held): boolean {
  const { held } = hand;
  if (held === null) return false;
  return (row.left !== null && row.left === held.left) || (row.right !== null && row.right === held.right);
}
