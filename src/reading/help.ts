import type {
  AssistAnswer,
  AssistQuestion,
  Completions,
  Edit,
  Hover,
  TextPlace,
  TextPosition,
} from '../../shared/contracts/assist.ts';
import type { Placed } from './slices.ts';

/** Where an editor asks: an entry as it is typed, and a position in its own text; lines and columns count from 1. */
export interface Spotted {
  readonly entry: string;
  readonly text: string;
  readonly at: TextPosition;
}

/** Changes of several entries, in the lines of each; or why there are none. */
export interface Changes {
  readonly edits: readonly (Edit & { readonly entry: string })[];
  readonly refused: string | null;
}

/** What the engine answers an editor. All speak in the lines of an entry; undefined or empty: nothing is known there. */
export interface Helper {
  readonly complete: (spot: Spotted) => Promise<Completions | undefined>;
  readonly explain: (spot: Spotted) => Promise<Hover | undefined>;
  readonly declaration: (spot: Spotted) => Promise<{ readonly entry: string; readonly place: TextPlace } | undefined>;
  readonly rename: (spot: Spotted, to: string) => Promise<Changes>;
  readonly writeOut: (spot: Spotted) => Promise<Changes>;
  /** The text of an entry in its plain layout. */
  readonly format: (text: string) => Promise<string | undefined>;
}

/** Entries as they stand, with one of them replaced by what is typed in it now. */
export type PlacedWith = (spot: Pick<Spotted, 'entry' | 'text'>) => {
  readonly text: string;
  readonly entries: readonly Placed[];
};

const entryAt = (entries: readonly Placed[], line: number): Placed | undefined =>
  entries.find((entry) => line >= entry.first && line <= entry.last);

const raised = <T extends TextPosition>(place: T, by: number): T => ({ ...place, line: place.line + by });

/** A helper over a channel that answers one question about one text. */
export function newHelper(
  placed: PlacedWith,
  send: (text: string, question: AssistQuestion) => Promise<AssistAnswer | null>,
): Helper {
  const asked = async (spot: Spotted, question: (at: TextPosition) => AssistQuestion) => {
    const { text, entries } = placed(spot);
    const first = entries.find((entry) => entry.id === spot.entry)?.first ?? 1;
    const answer = await send(text, question(raised(spot.at, first - 1)));
    return { answer, entries, own: <T extends TextPosition>(place: T): T => raised(place, 1 - first) };
  };
  const changes = async (spot: Spotted, question: (at: TextPosition) => AssistQuestion): Promise<Changes> => {
    const { answer, entries } = await asked(spot, question);
    if (answer?.ask !== 'rename' && answer?.ask !== 'write out')
      return { edits: [], refused: 'The text could not be read.' };
    const edits = answer.edits.flatMap((edit) => {
      const entry = entryAt(entries, edit.place.line);
      return entry ? [{ ...edit, entry: entry.id, place: raised(edit.place, 1 - entry.first) }] : [];
    });
    return { edits, refused: answer.refused };
  };
  return {
    complete: async (spot) => {
      const { answer, own } = await asked(spot, (at) => ({ ask: 'completions', at }));
      if (answer?.ask !== 'completions') return undefined;
      return { ...answer.completions, replace: own(answer.completions.replace) };
    },
    explain: async (spot) => {
      const { answer, own } = await asked(spot, (at) => ({ ask: 'hover', at }));
      if (answer?.ask !== 'hover' || !answer.hover) return undefined;
      return { ...answer.hover, place: own(answer.hover.place) };
    },
    declaration: async (spot) => {
      const { answer, entries } = await asked(spot, (at) => ({ ask: 'declaration', at }));
      if (answer?.ask !== 'declaration' || !answer.place) return undefined;
      const entry = entryAt(entries, answer.place.line);
      return entry && { entry: entry.id, place: raised(answer.place, 1 - entry.first) };
    },
    rename: (spot, to) => changes(spot, (at) => ({ ask: 'rename', at, to })),
    writeOut: (spot) => changes(spot, (at) => ({ ask: 'write out', at })),
    format: async (text) => {
      const answer = await send(text, { ask: 'format' });
      return answer?.ask === 'format' ? answer.text : undefined;
    },
  };
}

/** A text with edits made in it; their places are those before any of them. */
export function edited(text: string, edits: readonly Edit[]): string {
  const lines = text.split('\n');
  const starts: number[] = [];
  let offset = 0;
  for (const line of lines) {
    starts.push(offset);
    offset += line.length + 1;
  }
  const at = ({ place }: Edit): number => (starts[place.line - 1] ?? text.length) + place.column - 1;
  return [...edits]
    .sort((a, b) => at(b) - at(a))
    .reduce((now, edit) => now.slice(0, at(edit)) + edit.text + now.slice(at(edit) + edit.place.length), text);
}
