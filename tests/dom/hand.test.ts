import { describe, expect, it } from 'vitest';
import { answersHand, emptyHand, leave, letGo, take, togglePin } from '../../src/hand/hand.ts';
import { newHandStore } from '../../src/hand/useHand.ts';

const bond = { left: 'ising/0', right: 'gauge/0' };
const field = { left: 'ising/1', right: 'gauge/1' };

describe('the term in hand', () => {
  it('follows the pointer, and is let go by what took it', () => {
    const held = take(emptyHand, bond, 'pointer');
    expect(answersHand(held, bond)).toBe(true);
    expect(answersHand(held, field)).toBe(false);
    expect(leave(held, 'focus')).toBe(held);
    expect(leave(held, 'pointer').held).toBeNull();
  });

  it('answers from either page: the image answers its source', () => {
    const held = take(emptyHand, bond, 'focus');
    expect(answersHand(held, { left: 'ising/0', right: null })).toBe(true);
    expect(answersHand(held, { left: null, right: 'gauge/0' })).toBe(true);
    expect(answersHand(held, { left: null, right: null })).toBe(false);
  });

  it('stays pinned until it is pinned again, another is pinned, or it is let go', () => {
    const pinned = togglePin(emptyHand, bond);
    expect(take(pinned, field, 'pointer')).toBe(pinned);
    expect(leave(pinned, 'pointer')).toBe(pinned);
    expect(togglePin(pinned, field)).toMatchObject({ held: field, pinned: true });
    expect(togglePin(pinned, bond).pinned).toBe(false);
    expect(letGo(pinned)).toBe(emptyHand);
  });

  it('tells its listeners only of a change', () => {
    const store = newHandStore();
    let told = 0;
    const stop = store.subscribe(() => (told += 1));
    store.set((hand) => take(hand, bond, 'pointer'));
    store.set((hand) => take(hand, bond, 'pointer'));
    stop();
    store.set((hand) => take(hand, field, 'pointer'));
    expect(told).toBe(1);
  });
});
