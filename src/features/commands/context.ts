import { createContext, useContext, useEffect, useRef } from 'react';
import type { Command } from './commands.ts';

/** What a page can do, asked for when the line is opened. */
export type Offer = () => readonly Command[];
export const noOffer: Offer = () => [];

/** Takes the offer of the page that is shown. */
export const CommandsContext = createContext<(offer: Offer) => void>(() => undefined);

/** Offers the page's commands to the line of the frame while the page is shown. */
export function useCommands(make: Offer): void {
  const take = useContext(CommandsContext);
  const latest = useRef(make);
  useEffect(() => {
    latest.current = make;
  });
  useEffect(() => {
    take(() => latest.current());
    return () => take(noOffer);
  }, [take]);
}
