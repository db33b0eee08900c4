import { useEffect } from 'react';
import { call } from '../../api/client.ts';

/** Renewed well within the 45 seconds that a hold lasts. */
const renewal = 20_000;

/** Holds the entry that is open, so that others see who writes there; lets it go when it closes or the page is left. */
export function useHolding(notebook: string, entry: string | null): void {
  useEffect(() => {
    if (entry === null) return;
    const params = { notebook, entry };
    // A hold that fails is no obstacle to writing: saves are version-checked, and a refused save says who writes here.
    const hold = () => void call('holdEntry', { params }).catch(() => undefined);
    hold();
    const timer = setInterval(hold, renewal);
    return () => {
      clearInterval(timer);
      void call('releaseEntry', { params }).catch(() => undefined);
    };
  }, [notebook, entry]);
}
