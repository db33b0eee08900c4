import { useEffect, useMemo, useRef, useState } from 'react';
import { joinEntries } from '../../shared/notebook/text.ts';
import { ask, type Answer, type AskHelp, type HelpAnswer, learn, type Learned, protocol } from '../worker/messages.ts';
import { newHelper, type Helper, type PlacedWith } from './help.ts';
import type { Placed } from './slices.ts';
import { answering, asking, type Reading, unread } from './state.ts';

export interface EntryText {
  readonly id: string;
  readonly kind: 'prose' | 'statements';
  readonly text: string;
}

/** The joined text of entries and where each stands in it. Prose stands in it as comments, which the engine skips. */
export function placed(entries: readonly EntryText[]): { readonly text: string; readonly entries: readonly Placed[] } {
  const { text, lines } = joinEntries(entries);
  return {
    text,
    entries: entries.map((entry, k) => ({
      id: entry.id,
      kind: entry.kind,
      text: entry.text,
      first: lines[k]?.first ?? 0,
      last: lines[k]?.last ?? 0,
    })),
  };
}

/** Questions of an editor on their way to the engine and back. */
function newHelpLine() {
  const open = new Map<number, (answer: HelpAnswer['answer']) => void>();
  let entries: readonly EntryText[] = [];
  let post: ((help: AskHelp) => void) | undefined;
  let last = 0;
  const placedWith: PlacedWith = ({ entry, text }) =>
    placed(entries.map((one) => (one.id === entry ? { ...one, text } : one)));
  const helper: Helper = newHelper(
    placedWith,
    (text, question) =>
      new Promise((resolve) => {
        if (!post) return resolve(null);
        last += 1;
        open.set(last, resolve);
        post({ kind: 'help', protocol, id: last, text, question });
      }),
  );
  return {
    helper,
    reads(now: readonly EntryText[]) {
      entries = now;
    },
    opensTo(to: (help: AskHelp) => void) {
      post = to;
    },
    answered({ id, answer }: HelpAnswer) {
      open.get(id)?.(answer);
      open.delete(id);
    },
    /** The engine is gone: nothing asked of it will be answered. */
    hangUp() {
      post = undefined;
      for (const resolve of open.values()) resolve(null);
      open.clear();
    },
  };
}

export type { Learned };
const nothing: Learned = {};

/**
 * The reading of a text that changes: each new text is asked of the engine in its worker, and the newest answer is shown.
 * `learned`: answers of the server to what stands open, which the engine takes as its own.
 * A worker that dies is told of in `failed`, and the next text starts a new one.
 */
export function useReading(entries: readonly EntryText[], learned: Learned = nothing): Reading {
  const [reading, setReading] = useState<Reading>(unread);
  const engine = useRef<Worker | null>(null);
  const taught = useRef<{ readonly worker: Worker; readonly learned: Learned } | null>(null);
  const version = useRef(0);
  const asked = useRef(new Map<number, readonly Placed[]>());
  const source = useMemo(() => placed(entries), [entries]);
  const [line] = useState(newHelpLine);
  useEffect(() => line.reads(entries), [line, entries]);

  useEffect(() => {
    const worker = engine.current ?? startEngine();
    engine.current = worker;
    version.current += 1;
    const mine = version.current;
    asked.current.set(mine, source.entries);
    const take = (answer: Answer) => {
      const about = asked.current.get(answer.version);
      if (!about) return;
      // A later partial answer for the same version may follow; older versions can be forgotten.
      for (const old of asked.current.keys()) if (old < answer.version) asked.current.delete(old);
      setReading((before) => answering(before, answer, about));
    };
    worker.onmessage = ({ data }: MessageEvent<Answer | HelpAnswer>) => {
      if (data.kind !== 'help') return take(data);
      line.answered(data);
    };
    worker.onerror = (event) => {
      line.hangUp();
      event.preventDefault();
      worker.terminate();
      if (engine.current === worker) engine.current = null;
      const message = 'The engine stopped. It starts again with the next change.';
      take({ protocol, version: version.current, part: Number.MAX_SAFE_INTEGER, kind: 'failed', message });
    };
    line.opensTo((help) => worker.postMessage(help));
    setReading((before) => asking(before, mine));
    // Once to each worker: answers may be long, and a key is not to wait for them.
    if (learned !== nothing && (taught.current?.worker !== worker || taught.current.learned !== learned)) {
      worker.postMessage(learn(learned));
      taught.current = { worker, learned };
    }
    worker.postMessage(ask(mine, source.text));
  }, [source, learned, line]);

  useEffect(
    () => () => {
      engine.current?.terminate();
      engine.current = null;
      line.hangUp();
    },
    [line],
  );
  return useMemo(() => ({ ...reading, helper: line.helper }), [reading, line]);
}

function startEngine(): Worker {
  return new Worker(new URL('../worker/worker.ts', import.meta.url), { type: 'module', name: 'engine' });
}
