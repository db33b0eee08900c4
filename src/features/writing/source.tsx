import './writing.css';
import { defaultKeymap, history, historyKeymap } from '@codemirror/commands';
import { bracketMatching, indentUnit } from '@codemirror/language';
import { lintKeymap } from '@codemirror/lint';
import { EditorSelection, EditorState, type Extension, Transaction } from '@codemirror/state';
import { EditorView, keymap } from '@codemirror/view';
import { useEffect, useRef, useState } from 'react';
import type { Hover } from '../../../shared/contracts/assist.ts';
import type { Changes, Helper } from '../../reading/help.ts';
import { actsOf, difference, spotAt } from './acts.ts';
import { type Help, helping } from './completing.ts';
import { type Explained, inWords } from './explained.ts';
import { operatorLanguage } from './operator-language.ts';
import { type Note, problemNotes, showProblems } from './problem-notes.ts';
import { Word } from './word.tsx';

export interface SourceProps {
  readonly entry: string;
  readonly label: string;
  readonly kind: 'prose' | 'statements';
  /** The text now; a change from outside (another's save taken over) replaces what is shown. */
  readonly text: string;
  /** Where the caret goes when it opens or a term is chosen: line from 0, column from 1. */
  readonly spot: { readonly line: number; readonly column: number };
  readonly problems: readonly Note[];
  readonly onChange: (text: string) => void;
  /** The caret left: by Escape, or to somewhere else on the page. */
  readonly onLeave: (by: 'escape' | 'away') => void;
  /** Line from 0 and column from 1 of the caret. */
  readonly onCaret: (line: number, column: number) => void;
  /** The caret went over the first or the last line. */
  readonly onBeyond: (way: 'up' | 'down') => void;
  /** What the engine knows of the text; absent for prose and while there is no engine. */
  readonly helper: Helper | undefined;
  readonly explained: (hover: Hover) => Explained;
  /** Opens another place of the notebook: line from 0, column from 1. */
  readonly onGo: (entry: string, line: number, column: number) => void;
  /** Changes of other entries, made together with one of this. */
  readonly onElsewhere: (edits: Changes['edits']) => void;
}

const nonce = (): string => document.querySelector<HTMLMetaElement>('meta[property=csp-nonce]')?.nonce ?? '';

interface Caret {
  readonly offset: number;
  /** From 0. */
  readonly line: number;
}

/** An entry's source, open in its place. One instance for one entry: it keeps its own undo history. */
export function Source(props: SourceProps) {
  const host = useRef<HTMLDivElement>(null);
  const view = useRef<EditorView | null>(null);
  const now = useRef(props);
  const [caret, setCaret] = useState({ offset: 0, line: 0 });
  useEffect(() => {
    now.current = props;
  });

  useEffect(() => {
    if (!host.current) return;
    const first = now.current;
    const made = new EditorView({
      parent: host.current,
      state: EditorState.create({ doc: first.text, extensions: extensions(first, () => now.current, setCaret) }),
    });
    view.current = made;
    return () => {
      view.current = null;
      made.destroy();
    };
  }, []);

  const { label, text, spot, problems } = props;
  useEffect(() => view.current?.dispatch({}), [label]);

  useEffect(() => {
    const shown = view.current;
    if (!shown || shown.state.doc.toString() === text) return;
    shown.dispatch({
      changes: difference(shown.state.doc.toString(), text),
      annotations: [Transaction.addToHistory.of(false), Transaction.remote.of(true)],
    });
  }, [text]);

  useEffect(() => {
    const shown = view.current;
    if (!shown) return;
    const line = shown.state.doc.line(Math.min(shown.state.doc.lines, Math.max(1, spot.line + 1)));
    const at = line.from + [...line.text].slice(0, Math.max(0, spot.column - 1)).join('').length;
    shown.dispatch({ selection: EditorSelection.cursor(Math.min(at, line.to)), scrollIntoView: true });
    shown.focus();
  }, [spot]);

  useEffect(() => {
    const shown = view.current;
    if (shown) for (const change of showProblems(shown.state, problems)) shown.dispatch(change);
  }, [problems]);

  const { helper, explained } = props;
  const [at, setAt] = useState<Explained | undefined>();
  useEffect(() => {
    if (!helper || props.kind === 'prose') return;
    // The caret rests before its word is looked up, so that no key waits for it.
    const timer = setTimeout(() => {
      const shown = view.current;
      if (!shown) return;
      void helper
        .explain(spotAt(shown.state, caret.offset, now.current.entry))
        .then((hover) => setAt(hover && explained(hover)));
    }, 150);
    return () => clearTimeout(timer);
  }, [caret, text, helper, explained, props.kind]);

  const fix = problems.find((note) => note.line === caret.line && note.value.fix !== undefined)?.value.fix;
  return (
    <div
      onBlur={(event) => {
        // Being taken away is no leaving, nor is the window losing focus, nor a step into what belongs to the open entry.
        const frame = event.currentTarget.closest('[data-entry]');
        const to = event.relatedTarget;
        if (!view.current || !document.hasFocus()) return;
        if (to instanceof Node && frame?.contains(to)) return;
        props.onLeave('away');
      }}
    >
      <div ref={host} className={`source source-${props.kind}`} />
      {props.kind === 'statements' && helper && (
        <Word at={at} fix={fix} acts={() => (view.current ? actsOf(view.current, now.current) : undefined)} />
      )}
    </div>
  );
}

function extensions(props: SourceProps, now: () => SourceProps, setCaret: (at: Caret) => void): Extension {
  const edge = (way: 'up' | 'down') => (view: EditorView) => {
    const { main } = view.state.selection;
    if (!main.empty) return false;
    const line = view.state.doc.lineAt(main.head);
    const last = way === 'up' ? line.number === 1 : line.number === view.state.doc.lines;
    if (!last) return false;
    now().onBeyond(way);
    return true;
  };
  const leave = () => {
    now().onLeave('escape');
    return true;
  };
  const help: Help = {
    helper: () => now().helper,
    spot: (state, offset) => spotAt(state, offset, now().entry),
    explain: async (state, offset) => {
      const hover = await now().helper?.explain(spotAt(state, offset, now().entry));
      return hover && now().explained(hover);
    },
  };
  const tell = (view: EditorView) => {
    void help.explain(view.state, view.state.selection.main.head).then((found) => {
      const words = found ? inWords(found) : 'Nothing is known of this word.';
      view.dispatch({ effects: EditorView.announce.of(words) });
    });
    return true;
  };
  return [
    history(),
    keymap.of([
      { key: 'ArrowUp', run: edge('up') },
      { key: 'ArrowDown', run: edge('down') },
      { key: 'Escape', run: leave },
      { key: "Mod-'", run: tell },
      // Tab leaves the source, as everywhere on the page; Mod-[ and Mod-] of the default keys indent.
      ...defaultKeymap,
      ...historyKeymap,
      ...lintKeymap,
    ]),
    indentUnit.of('  '),
    EditorView.lineWrapping,
    // Asked anew at each update: an entry that moves has another number.
    EditorView.contentAttributes.of(() => ({
      'aria-label': now().label,
      spellcheck: props.kind === 'prose' ? 'true' : 'false',
      autocapitalize: 'off',
    })),
    EditorView.cspNonce.of(nonce()),
    props.kind === 'statements' ? [operatorLanguage, bracketMatching(), helping(help)] : [],
    problemNotes,
    EditorView.updateListener.of((update) => {
      const outside = update.transactions.some((one) => one.annotation(Transaction.remote) === true);
      if (update.docChanged && !outside) now().onChange(update.state.doc.toString());
      if (update.selectionSet || update.docChanged) {
        const { head } = update.state.selection.main;
        const line = update.state.doc.lineAt(head);
        setCaret({ offset: head, line: line.number - 1 });
        now().onCaret(line.number - 1, [...line.text.slice(0, head - line.from)].length + 1);
      }
    }),
  ];
}
