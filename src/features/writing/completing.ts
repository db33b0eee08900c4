import {
  acceptCompletion,
  autocompletion,
  closeCompletion,
  completionKeymap,
  type CompletionContext,
  type CompletionResult,
  selectedCompletion,
  snippetCompletion,
} from '@codemirror/autocomplete';
import { codeFolding, foldKeymap, foldService } from '@codemirror/language';
import { type EditorState, type Extension, Prec } from '@codemirror/state';
import { EditorView, hoverTooltip, keymap, type Tooltip } from '@codemirror/view';
import type { TextPlace, TextPosition } from '../../../shared/contracts/assist.ts';
import type { Explained } from './explained.ts';
import { renderToString } from '../../components/katex.ts';
import type { Helper, Spotted } from '../../reading/help.ts';

/** What the engine knows, shown in the editor: completions, the meaning of the name under the pointer, folds. */

/** The position of an offset in a document, as the engine counts. */
export function positionOf(state: EditorState, offset: number): TextPosition {
  const line = state.doc.lineAt(offset);
  return { line: line.number, column: offset - line.from + 1 };
}

/** Offsets of a place; undefined when its line is gone. */
export function offsetsOf(state: EditorState, place: TextPlace): { from: number; to: number } | undefined {
  if (place.line < 1 || place.line > state.doc.lines) return undefined;
  const line = state.doc.line(place.line);
  const from = Math.min(line.from + place.column - 1, state.doc.length);
  return { from, to: Math.min(from + place.length, state.doc.length) };
}

export interface Help {
  readonly helper: () => Helper | undefined;
  readonly spot: (state: EditorState, offset: number) => Spotted;
  readonly explain: (state: EditorState, offset: number) => Promise<Explained | undefined>;
}

const completing = ({ helper, spot }: Help): Extension =>
  autocompletion({
    icons: false,
    // The list only offers until an arrow key steps into it: Enter is a new line, and Escape leaves the source, as ever.
    selectOnOpen: false,
    defaultKeymap: false,
    tooltipClass: () => 'offered',
    override: [
      async (context: CompletionContext): Promise<CompletionResult | null> => {
        const before = context.state.doc.lineAt(context.pos);
        const typed = before.text.slice(0, context.pos - before.from);
        // Unasked, only where a word has begun or a bracket, a colon or a caret sign calls for one.
        if (!context.explicit && !/[\w\u0370-\u03ff[(:^.]$/u.test(typed)) return null;
        if (!context.explicit && /(?:^|[^\w])\d+\.?$/u.test(typed)) return null;
        const found = await helper()?.complete(spot(context.state, context.pos));
        const replace = found && offsetsOf(context.state, found.replace);
        if (!found || !replace || context.aborted) return null;
        const written = context.state.doc.sliceString(replace.from, context.pos);
        if (!context.explicit && found.options.every(({ label }) => label === written)) return null;
        const options = found.options.map(({ label, detail, help, template }, k) => {
          const option = { label, detail, info: help === '' ? undefined : help, boost: 99 - Math.min(k, 198) };
          return template === undefined ? option : snippetCompletion(template, option);
        });
        return { from: replace.from, options };
      },
    ],
  });

/** The meaning of a name and its formula, as the page sets it. */
function drawn({ hover, tex }: Explained): HTMLElement {
  const box = document.createElement('div');
  box.className = 'meaning';
  const title = document.createElement('p');
  title.className = 'label';
  title.textContent = hover.title;
  box.append(title);
  if (tex !== undefined) {
    const formula = document.createElement('p');
    formula.innerHTML = renderToString(tex, { throwOnError: false });
    box.append(formula);
  } else {
    const text = document.createElement('pre');
    text.textContent = hover.text;
    box.append(text);
  }
  return box;
}

const underPointer = ({ explain }: Help): Extension =>
  hoverTooltip(
    async (view, offset): Promise<Tooltip | null> => {
      const found = await explain(view.state, offset);
      const place = found && offsetsOf(view.state, found.hover.place);
      return place ? { pos: place.from, end: place.to, above: true, create: () => ({ dom: drawn(found) }) } : null;
    },
    { hideOnChange: true },
  );

/** A statement folds to its first line: its indented lines, with the blank ones between them. */
const statements = foldService.of((state, start) => {
  const first = state.doc.lineAt(start);
  if (!/^\S/u.test(first.text) || first.text.startsWith('#')) return null;
  let last = first;
  for (let k = first.number + 1; k <= state.doc.lines; k += 1) {
    const line = state.doc.line(k);
    if (/^\s+\S/u.test(line.text)) last = line;
    else if (line.text.trim() !== '') break;
  }
  return last === first ? null : { from: first.to, to: last.to };
});

const folding: Extension = [
  statements,
  codeFolding({
    preparePlaceholder: (state, { from, to }) => state.doc.lineAt(to).number - state.doc.lineAt(from).number,
    placeholderDOM: (_, open, lines: number) => {
      const button = document.createElement('button');
      button.type = 'button';
      button.className = 'act folded';
      button.tabIndex = -1;
      button.textContent = lines === 1 ? ' … one line' : ` … ${String(lines)} lines`;
      button.setAttribute('aria-label', `${button.textContent.slice(3)} folded, open`);
      button.onclick = open;
      return button;
    },
  }),
  keymap.of(foldKeymap),
];

const listKeys: Extension = Prec.highest(
  keymap.of([
    ...completionKeymap.filter(({ key }) => key !== 'Escape' && key !== 'Enter'),
    { key: 'Enter', run: (view) => selectedCompletion(view.state) !== null && acceptCompletion(view) },
    { key: 'Escape', run: (view) => selectedCompletion(view.state) !== null && closeCompletion(view) },
  ]),
);

export const helping = (help: Help): Extension => [
  completing(help),
  listKeys,
  underPointer(help),
  folding,
  EditorView.theme({ '.cm-tooltip': { zIndex: '20' } }),
];
