import type { Entry } from '../../../shared/contracts/notebooks.ts';

/**
 * What was typed and is not on the server yet, entry by entry. A value with pure updates: nothing typed is ever lost to a
 * late answer, a missing connection or someone else's save.
 */

export type DraftState =
  /** typed: to be sent; sending: on its way; waiting: no connection; changed: someone else saved meanwhile; refused: see `why`. */
  'typed' | 'sending' | 'waiting' | 'changed' | 'refused';

export interface Draft {
  readonly text: string;
  /** Version of the entry that the text started from. */
  readonly base: number;
  readonly state: DraftState;
  /** The text that is on its way. */
  readonly sent: string | null;
  /** What the other text is, in the state `changed`; null in that state: the entry was deleted. */
  readonly theirs: Entry | null;
  readonly why: string;
}

export type Drafts = ReadonlyMap<string, Draft>;
export const noDrafts: Drafts = new Map();

const put = (drafts: Drafts, id: string, draft: Draft | undefined): Drafts => {
  const next = new Map(drafts);
  if (draft) next.set(id, draft);
  else next.delete(id);
  return next;
};

/** A key was pressed: the entry's text is now `text`. Typing what is saved already leaves no draft. */
export function typed(drafts: Drafts, entry: Pick<Entry, 'id' | 'text' | 'version'>, text: string): Drafts {
  const before = drafts.get(entry.id);
  if (!before) {
    if (text === entry.text) return drafts;
    return put(drafts, entry.id, { text, base: entry.version, state: 'typed', sent: null, theirs: null, why: '' });
  }
  if (before.text === text) return drafts;
  // A text in conflict stays in conflict until the writer chooses; one on its way stays on its way.
  const state = before.state === 'changed' || before.state === 'sending' ? before.state : 'typed';
  return put(drafts, entry.id, { ...before, text, state });
}

/** The entries to send now: typed ones, and waiting ones when `again`. */
export const toSend = (drafts: Drafts, again = false): readonly string[] =>
  [...drafts].flatMap(([id, draft]) => (draft.state === 'typed' || (again && draft.state === 'waiting') ? [id] : []));

export function sending(drafts: Drafts, id: string): Drafts {
  const draft = drafts.get(id);
  return draft ? put(drafts, id, { ...draft, state: 'sending', sent: draft.text }) : drafts;
}

/** The server has saved what was sent; what was typed since is a draft on the new version. */
export function saved(drafts: Drafts, id: string, version: number): Drafts {
  const draft = drafts.get(id);
  if (!draft) return drafts;
  if (draft.text === draft.sent) return put(drafts, id, undefined);
  return put(drafts, id, { ...draft, base: version, state: 'typed', sent: null });
}

/** Sending failed: without a connection the text waits; else it is refused, and says why. */
export function notSaved(drafts: Drafts, id: string, state: 'waiting' | 'refused', why: string): Drafts {
  const draft = drafts.get(id);
  return draft ? put(drafts, id, { ...draft, state, sent: null, why }) : drafts;
}

/** Someone else saved another text meanwhile, or deleted the entry (`theirs` null): both texts stand. */
export function changed(drafts: Drafts, id: string, theirs: Entry | null): Drafts {
  const draft = drafts.get(id);
  if (!draft) return drafts;
  // The same words from both hands are no conflict.
  if (theirs?.text === draft.text) return put(drafts, id, undefined);
  return put(drafts, id, { ...draft, state: 'changed', sent: null, theirs });
}

/** The writer's choice between two texts. `mine` is sent on top of the other's version; `theirs` drops the draft. */
export function choose(drafts: Drafts, id: string, which: 'mine' | 'theirs'): Drafts {
  const draft = drafts.get(id);
  if (!draft) return drafts;
  if (which === 'theirs') return put(drafts, id, undefined);
  return put(drafts, id, { ...draft, state: 'typed', base: draft.theirs?.version ?? draft.base, theirs: null });
}

/** Drafts kept on the device from an earlier visit, against what the server has now. */
export function recovered(kept: ReadonlyMap<string, Kept>, entries: readonly Entry[]): Drafts {
  let drafts = noDrafts;
  for (const entry of entries) {
    const copy = kept.get(entry.id);
    if (!copy || copy.text === entry.text) continue;
    drafts = typed(drafts, { ...entry, version: copy.base }, copy.text);
    if (copy.base !== entry.version) drafts = changed(drafts, entry.id, entry);
  }
  return drafts;
}

export interface Kept {
  readonly text: string;
  readonly base: number;
}

/** The state of saving of the whole notebook, in words. */
export function savingInWords(drafts: Drafts): string {
  const states = new Set([...drafts.values()].map((draft) => draft.state));
  if (states.has('changed')) return 'two texts of one entry';
  if (states.has('refused')) return 'not saved';
  if (states.has('waiting')) return 'no connection; kept on this device';
  if (states.has('sending') || states.has('typed')) return 'saving';
  return 'all saved';
}

/** The text of an entry as this writer sees it. */
export const textOf = (drafts: Drafts, entry: Pick<Entry, 'id' | 'text'>): string =>
  drafts.get(entry.id)?.text ?? entry.text;
