import { foldAll, unfoldAll } from '@codemirror/language';
import type { EditorState } from '@codemirror/state';
import { EditorView } from '@codemirror/view';
import { type Changes, edited, type Helper } from '../../reading/help.ts';
import { positionOf } from './completing.ts';
import { type Note, spanOf } from './problem-notes.ts';
import type { WordActs } from './word.tsx';

export const spotAt = (state: EditorState, offset: number, entry: string) => ({
  entry,
  text: state.doc.toString(),
  at: positionOf(state, offset),
});

/** The least change that makes one text of another, so that carets, folds and history stay where they are. */
export function difference(from: string, to: string): { from: number; to: number; insert: string } {
  let start = 0;
  while (start < from.length && start < to.length && from[start] === to[start]) start += 1;
  let end = 0;
  const most = Math.min(from.length, to.length) - start;
  while (end < most && from[from.length - 1 - end] === to[to.length - 1 - end]) end += 1;
  return { from: start, to: from.length - end, insert: to.slice(start, to.length - end) };
}

/** Makes a change, tells a screen reader, and gives the caret back to the source. */
function write(view: EditorView, changes: { from: number; to: number; insert: string }, words: string): void {
  view.dispatch({ changes, effects: EditorView.announce.of(words), userEvent: 'input' });
  view.focus();
}

/** What the acts need to know of the open entry. */
interface Open {
  readonly entry: string;
  readonly problems: readonly Note[];
  readonly helper: Helper | undefined;
  readonly onGo: (entry: string, line: number, column: number) => void;
  readonly onElsewhere: (edits: Changes['edits']) => void;
}

/** What can be done with the text at the caret; what comes back late does nothing to a text that changed meanwhile. */
export function actsOf(view: EditorView, open: Open): WordActs {
  const spot = () => spotAt(view.state, view.state.selection.main.head, open.entry);
  const make = (before: string, { edits, refused }: Changes, words: string): string | null => {
    if (refused !== null) return refused;
    if (view.state.doc.toString() !== before) return 'The text changed meanwhile; try again.';
    const own = edits.filter((edit) => edit.entry === open.entry);
    write(view, difference(before, edited(before, own)), words);
    const others = edits.filter((edit) => edit.entry !== open.entry);
    if (others.length > 0) open.onElsewhere(others);
    return null;
  };
  const tell = (words: string) => view.dispatch({ effects: EditorView.announce.of(words) });
  return {
    fix: () => {
      const line = view.state.doc.lineAt(view.state.selection.main.head).number - 1;
      const note = open.problems.find((one) => one.line === line && one.value.fix !== undefined);
      const span = note && spanOf(view.state.doc, note);
      const insert = note?.value.fix;
      if (span && insert !== undefined) write(view, { ...span, insert }, `${insert} is written.`);
    },
    declared: () =>
      void open.helper?.declaration(spot()).then((found) => {
        if (found) open.onGo(found.entry, found.place.line - 1, found.place.column);
        else tell('It is not declared here.');
      }),
    rename: async (to) => {
      const at = spot();
      const changes = await open.helper?.rename(at, to);
      if (!changes) return 'The engine did not answer.';
      const { length } = changes.edits;
      return make(at.text, changes, `Renamed in ${length === 1 ? 'one place' : `${String(length)} places`}.`);
    },
    writeOut: () => {
      const at = spot();
      void open.helper?.writeOut(at).then((changes) => {
        const refused = make(at.text, changes, 'Written out.');
        if (refused !== null) tell(refused);
      });
    },
    layOut: () => {
      const text = view.state.doc.toString();
      void open.helper?.format(text).then((next) => {
        if (next !== undefined && view.state.doc.toString() === text)
          write(view, difference(text, next), next === text ? 'The layout is even already.' : 'Laid out evenly.');
      });
    },
    folds: (way) => {
      (way === 'all' ? foldAll : unfoldAll)(view);
      tell(way === 'all' ? 'Statements are folded.' : 'All is open.');
      view.focus();
    },
  };
}
