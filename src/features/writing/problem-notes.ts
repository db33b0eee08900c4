import { type Diagnostic, setDiagnostics } from '@codemirror/lint';
import { type EditorState, StateEffect, StateField, type Text, type TransactionSpec } from '@codemirror/state';
import { Decoration, type DecorationSet, EditorView, WidgetType } from '@codemirror/view';
import type { Problem } from '../../../shared/contracts/report.ts';

/** Problems in the open source: the word is marked, and the sentence stands on a line of its own under it. */

export interface Note {
  /** Line from 0 in the entry; the problem's column counts from 1, in characters. */
  readonly line: number;
  readonly value: Problem;
}

/** Positions of a note in a document, kept inside its line; undefined when the line is gone. */
export function spanOf(doc: Text, note: Note): { readonly from: number; readonly to: number } | undefined {
  if (note.line < 0 || note.line >= doc.lines) return undefined;
  const line = doc.line(note.line + 1);
  const at = (column: number) => line.from + [...line.text].slice(0, column).join('').length;
  const start = Math.min(at(Math.max(0, note.value.column - 1)), line.to);
  const end = Math.min(Math.max(start + 1, at(note.value.column - 1 + note.value.length)), line.to);
  return { from: start, to: Math.max(start, end) };
}

class Sentence extends WidgetType {
  readonly column: number;
  readonly problem: Problem;
  constructor(column: number, problem: Problem) {
    super();
    this.column = column;
    this.problem = problem;
  }
  override eq(other: Sentence): boolean {
    return other.column === this.column && other.problem.message === this.problem.message;
  }
  toDOM(): HTMLElement {
    const box = document.createElement('div');
    box.className = this.problem.severity === 'error' ? 'source-note' : 'source-note source-caution';
    box.style.paddingInlineStart = `min(${String(this.column)}ch, 60%)`;
    const words = document.createElement('span');
    words.textContent = this.problem.message;
    box.append(words);
    if (this.problem.hint !== '') {
      const hint = document.createElement('span');
      hint.className = 'source-hint';
      hint.textContent = ` ${this.problem.hint}`;
      box.append(hint);
    }
    return box;
  }
  override ignoreEvent(): boolean {
    return true;
  }
}

const setNotes = StateEffect.define<readonly Note[]>();

function decorate(doc: Text, notes: readonly Note[]): DecorationSet {
  const widgets = notes.flatMap((note) => {
    const span = spanOf(doc, note);
    if (!span) return [];
    const line = doc.lineAt(span.from);
    const column = [...line.text.slice(0, span.from - line.from)].length;
    return [Decoration.widget({ widget: new Sentence(column, note.value), block: true, side: 1 }).range(line.to)];
  });
  return Decoration.set(widgets, true);
}

/** The sentences move with the text they stand under until the next answer replaces them. */
export const problemNotes = StateField.define<DecorationSet>({
  create: () => Decoration.none,
  update: (notes, transaction) => {
    for (const effect of transaction.effects)
      if (effect.is(setNotes)) return decorate(transaction.state.doc, effect.value);
    return notes.map(transaction.changes);
  },
  provide: (field) => EditorView.decorations.from(field),
});

/** The transaction that shows these problems, with a fix to apply where a problem names one. */
export function showProblems(state: EditorState, notes: readonly Note[]): readonly TransactionSpec[] {
  const diagnostics = notes.flatMap((note): Diagnostic[] => {
    const span = spanOf(state.doc, note);
    if (!span) return [];
    const { message, severity, fix } = note.value;
    const actions =
      fix === undefined
        ? []
        : [
            {
              name: `write ${fix}`,
              apply: (view: EditorView, from: number, to: number) =>
                view.dispatch({ changes: { from, to, insert: fix } }),
            },
          ];
    return [{ ...span, message, severity: severity === 'error' ? 'error' : 'info', actions }];
  });
  return [{ effects: setNotes.of(notes) }, setDiagnostics(state, diagnostics)];
}
