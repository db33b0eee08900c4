import type { EntryKind } from '../contracts/notebooks.ts';
import type { Variant } from '../contracts/reviews.ts';
import type { PlainEntry } from './text.ts';

/** An entry as the fork began with it: its id in the origin, its own id in the fork. */
export interface BaseEntry {
  readonly origin: string | null;
  readonly own: string;
  readonly kind: EntryKind;
  readonly text: string;
}

export interface StandingEntry {
  readonly id: string;
  readonly kind: EntryKind;
  readonly text: string;
}

export interface Manuscript {
  readonly title: string;
  readonly entries: readonly StandingEntry[];
}

/** A reading of the fork that the origin does not have. `key` names it as long as both texts stand. */
export interface FoundVariant extends Pick<
  Variant,
  'kind' | 'entryKind' | 'entry' | 'after' | 'base' | 'origin' | 'fork' | 'bothChanged'
> {
  readonly key: string;
}

/**
 * The variants of a fork: three readings of each place, what both began with, what the origin reads and what the fork reads. What
 * the origin changed and the fork did not is none, nor is what both changed alike, nor the order of entries.
 */
export function variantsOf(
  base: { readonly title: string; readonly ownTitle: string; readonly entries: readonly BaseEntry[] },
  fork: Manuscript,
  origin: Manuscript,
): FoundVariant[] {
  const inFork = new Map(fork.entries.map((entry) => [entry.id, entry]));
  const inOrigin = new Map(origin.entries.map((entry) => [entry.id, entry]));
  const changed = base.entries.flatMap((began) => {
    const now = inOrigin.get(began.origin ?? '');
    const found = changedEntry(began, inFork.get(began.own), now);
    return found === null ? [] : [found];
  });
  return [...titleVariant(base, fork.title, origin.title), ...changed, ...addedEntries(base.entries, fork, origin)];
}

function titleVariant(
  { title: base, ownTitle }: { readonly title: string; readonly ownTitle: string },
  fork: string,
  origin: string,
): FoundVariant[] {
  // The name that the fork was made with tells it apart from the origin; only a later change is a reading.
  if (fork === ownTitle || fork === origin) return [];
  const place = { entry: null, after: null, entryKind: 'prose' as const };
  return [{ key: 'title', kind: 'title', ...place, base, origin, fork, bothChanged: origin !== base }];
}

function changedEntry(
  began: BaseEntry,
  mine: StandingEntry | undefined,
  theirs: StandingEntry | undefined,
): FoundVariant | null {
  const entry = began.origin;
  if (entry === null) return null;
  const origin = theirs?.text ?? null;
  const bothChanged = origin !== began.text;
  const common = { entry, after: null, base: began.text, origin, bothChanged };
  if (mine === undefined) {
    return theirs === undefined
      ? null
      : { ...common, key: `removed:${entry}`, kind: 'removed', entryKind: began.kind, fork: null };
  }
  const unchanged = mine.text === began.text && mine.kind === began.kind;
  const alike = mine.text === theirs?.text && mine.kind === theirs.kind;
  if (unchanged || alike) return null;
  return { ...common, key: `changed:${entry}`, kind: 'changed', entryKind: mine.kind, fork: mine.text };
}

/** Entries that the fork has of its own, each with the origin's entry that it follows. */
function addedEntries(base: readonly BaseEntry[], fork: Manuscript, origin: Manuscript): FoundVariant[] {
  const began = new Map(base.map((entry) => [entry.own, entry.origin]));
  const old = new Set(base.map((entry) => entry.origin));
  const standing = new Set(origin.entries.map((entry) => entry.id));
  const adopted = new Set(
    origin.entries.filter((entry) => !old.has(entry.id)).map(({ kind, text }) => `${kind} ${text}`),
  );
  const found: FoundVariant[] = [];
  let after: string | null = null;
  for (const { id, kind, text } of fork.entries) {
    const place = began.get(id);
    if (place !== undefined) {
      if (place !== null && standing.has(place)) after = place;
    } else if (!adopted.has(`${kind} ${text}`)) {
      const common = { kind: 'added', entryKind: kind, entry: null, after, base: null, origin: null } as const;
      found.push({ ...common, key: `added:${id}`, fork: text, bothChanged: false });
    }
  }
  return found;
}

type Reading = Pick<FoundVariant, 'kind' | 'entryKind' | 'entry' | 'after' | 'fork'>;

/** The origin's entries as they would stand with one variant adopted; null where its place is gone. */
export function withVariant(entries: readonly StandingEntry[], variant: Reading): PlainEntry[] | null {
  const { kind, entryKind, entry, after, fork } = variant;
  if (kind === 'title') return [...entries];
  if (kind === 'added') {
    const at = after === null ? 0 : entries.findIndex((one) => one.id === after) + 1;
    // Its neighbour is gone: it goes to the end.
    const place = after !== null && at === 0 ? entries.length : at;
    return [...entries.slice(0, place), { kind: entryKind, text: fork ?? '' }, ...entries.slice(place)];
  }
  if (!entries.some((one) => one.id === entry)) return null;
  return entries.flatMap((one) => {
    if (one.id !== entry) return [one];
    return fork === null ? [] : [{ kind: entryKind, text: fork }];
  });
}
