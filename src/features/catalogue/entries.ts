import { notebookFromText } from '../../../shared/notebook/text.ts';

/** The entries of a text that belongs to no notebook yet; each is named by its place. */
export const entriesOf = (source: string) =>
  notebookFromText(source).entries.map((entry, k) => ({ ...entry, id: `entry-${String(k)}` }));
