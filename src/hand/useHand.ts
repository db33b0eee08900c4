import { createContext, useContext, useSyncExternalStore } from 'react';
import { answersHand, emptyHand, type Hand, type Held } from './hand.ts';

/** The hand outside React: a pointer that moves redraws the two rows it concerns and the plate, not the page. */
export interface HandStore {
  readonly get: () => Hand;
  readonly set: (update: (hand: Hand) => Hand) => void;
  readonly subscribe: (listener: () => void) => () => void;
}

export function newHandStore(): HandStore {
  let hand = emptyHand;
  const listeners = new Set<() => void>();
  return {
    get: () => hand,
    set: (update) => {
      const next = update(hand);
      if (next === hand) return;
      hand = next;
      for (const listener of listeners) listener();
    },
    subscribe: (listener) => {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
  };
}

export const HandContext = createContext<HandStore>(newHandStore());

export const useHandStore = (): HandStore => useContext(HandContext);

export function useHand(): Hand {
  const store = useHandStore();
  return useSyncExternalStore(store.subscribe, store.get);
}

/** Whether this row answers the hand: 'pinned', 'held' or false. */
export function useAnswers(row: Held): 'pinned' | 'held' | false {
  const store = useHandStore();
  return useSyncExternalStore(store.subscribe, () => {
    const hand = store.get();
    return answersHand(hand, row) && (hand.pinned ? 'pinned' : 'held');
  });
}
