import { createContext, useContext } from 'react';
import { type Reading, unread } from './state.ts';

/** The reading on the page, for what stands deep in it and is drawn from more than its own entry (tables, plots). */
export const ReadingContext = createContext<Reading>(unread);

export const useReadingInView = (): Reading => useContext(ReadingContext);
