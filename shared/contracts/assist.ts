/** What an editor asks the engine about a place in a text, and what it answers. Lines and columns count from 1. */

export interface TextPosition {
  readonly line: number;
  readonly column: number;
}
export interface TextPlace extends TextPosition {
  /** Characters from there on; line ends count as one. */
  readonly length: number;
}

export interface Completion {
  readonly label: string;
  /** What it is, in words. */
  readonly detail: string;
  readonly help: string;
  /** The text to write, where it is more than the label: `${…}` marks what is to be filled in, with a first guess. */
  readonly template?: string;
}
export interface Completions {
  /** The word that a completion replaces. */
  readonly replace: TextPlace;
  readonly options: readonly Completion[];
}
export interface Hover {
  readonly place: TextPlace;
  readonly title: string;
  readonly text: string;
  /** The declared name that this is about; the report has its formula. */
  readonly name?: string;
  /** A model that can be written out term by term. */
  readonly expands?: true;
}
export interface Edit {
  readonly place: TextPlace;
  readonly text: string;
}

export type AssistQuestion =
  | { readonly ask: 'completions' | 'hover' | 'declaration' | 'write out'; readonly at: TextPosition }
  | { readonly ask: 'rename'; readonly at: TextPosition; readonly to: string }
  | { readonly ask: 'format' };

/** The answer to each question; null: there is nothing there. */
export type AssistAnswer =
  | { readonly ask: 'completions'; readonly completions: Completions }
  | { readonly ask: 'hover'; readonly hover: Hover | null }
  | { readonly ask: 'declaration'; readonly place: TextPlace | null }
  | { readonly ask: 'rename' | 'write out'; readonly edits: readonly Edit[]; readonly refused: string | null }
  | { readonly ask: 'format'; readonly text: string };
