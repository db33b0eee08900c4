import { lazy, type ReactNode, Suspense, useCallback, useEffect, useMemo, useRef, useState } from 'react';
import type { Hover } from '../../shared/contracts/assist.ts';
import { explained } from '../features/writing/explained.ts';
import type { EntryRows, Spot } from '../features/spread/row.ts';
import { heldAt } from '../features/spread/rows.ts';
import type { EntryText } from '../features/spread/entry.tsx';
import { letGo, take } from '../hand/hand.ts';
import { newHandStore } from '../hand/useHand.ts';
import { edited } from '../reading/help.ts';
import type { Reading } from '../reading/state.ts';

/** Where the source is open, and how it opens and closes: the caret enters a formula, and it is type again when it leaves. */
export interface Desk {
  readonly hand: ReturnType<typeof newHandStore>;
  readonly writing: string | null;
  readonly open: (spot: Spot) => void;
  readonly close: () => void;
  readonly source: (entry: EntryText) => ReactNode;
}

interface Given {
  readonly entries: readonly EntryText[];
  readonly reading: Reading;
  readonly rows: readonly EntryRows[];
  readonly onType: (entry: string, text: string) => void;
  /** The source of this entry was left. */
  readonly onLeave: (entry: string) => void;
  /** Under the source, while it is open. */
  readonly foot: (entry: EntryText) => ReactNode;
}

const loadSource = () => import('../features/writing/source.tsx').then(({ Source }) => ({ default: Source }));
/** The editor is a good part of the program's size; it comes after the page is there, before anyone has clicked. */
const Source = lazy(loadSource);

const noNotes: Reading['slices'][number]['problems'] = [];

export function useDesk(given: Given): Desk {
  const { entries, reading, rows, onType, onLeave, foot } = given;
  const [hand] = useState(newHandStore);
  const [at, setAt] = useState<Spot | null>(null);
  useEffect(() => void loadSource(), []);
  const latest = useRef(rows);
  useEffect(() => {
    latest.current = rows;
  });

  const { slices } = reading;
  const explain = useCallback((hover: Hover) => explained(hover, slices), [slices]);
  const open = useCallback((spot: Spot) => setAt({ ...spot }), []);
  const close = useCallback(() => {
    setAt(null);
    hand.set(letGo);
  }, [hand]);

  const numbers = useMemo(() => new Map(entries.map((entry, k) => [entry.id, k + 1])), [entries]);
  const leave = (entry: string) => {
    close();
    onLeave(entry);
  };

  return {
    hand,
    writing: at?.entry ?? null,
    open,
    close,
    source: (entry) => {
      if (at?.entry !== entry.id) return null;
      const notes = reading.slices.find((slice) => slice.id === entry.id)?.problems ?? noNotes;
      return (
        <>
          <Suspense fallback={null}>
            <Source
              key={entry.id}
              label={`Source of entry ${String(numbers.get(entry.id) ?? '')}`}
              kind={entry.kind}
              text={entry.text}
              entry={entry.id}
              spot={at}
              helper={reading.helper}
              explained={explain}
              onGo={(id, line, column) => {
                if (id !== entry.id) leave(entry.id);
                open({ entry: id, line, column });
              }}
              onElsewhere={(edits) => {
                for (const other of entries) {
                  const own = edits.filter((edit) => edit.entry === other.id);
                  if (own.length > 0) onType(other.id, edited(other.text, own));
                }
              }}
              problems={notes}
              onChange={(text) => onType(entry.id, text)}
              onCaret={(line, column) => {
                const held = heldAt(latest.current, entry.id, line, column);
                if (held) hand.set((now) => take(now, held, 'caret'));
              }}
              onLeave={(by) => {
                const held = hand.get().held;
                leave(entry.id);
                if (by === 'escape') focusSoon(entry.id, held?.left ?? held?.right ?? null);
              }}
              onBeyond={(way) => {
                const next = entries[entries.indexOf(entry) + (way === 'up' ? -1 : 1)];
                if (!next) return;
                leave(entry.id);
                focusSoon(next.id, null, way);
              }}
            />
          </Suspense>
          {foot(entry)}
        </>
      );
    },
  };
}

/** Puts the focus on a term of an entry once the page is set again: the one named, else the first (the last when coming from below). */
function focusSoon(entry: string, ref: string | null, way: 'up' | 'down' = 'down'): void {
  requestAnimationFrame(() => {
    const frame = document.querySelector<HTMLElement>(`[data-entry="${CSS.escape(entry)}"]`);
    const terms = [...(frame?.querySelectorAll<HTMLElement>('[data-term]') ?? [])];
    const named = ref === null ? undefined : terms.find((term) => term.dataset['ref'] === ref);
    (named ?? (way === 'up' ? terms.at(-1) : terms[0]) ?? frame)?.focus();
  });
}
