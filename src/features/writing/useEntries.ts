import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { Notebook } from '../../../shared/contracts/notebooks.ts';
import { call } from '../../api/client.ts';
import { keepOrder, rereadNotebook } from '../../api/queries.ts';

export interface EntryChanges {
  readonly insert: (kind: 'prose' | 'statements', before: string | null) => Promise<string | null>;
  readonly move: (entry: string, way: 'up' | 'down') => Promise<void>;
  readonly remove: (entry: string) => Promise<void>;
  /** The deletion that can be undone, with the number that the entry had. */
  readonly removed: { readonly id: string; readonly number: number } | null;
  readonly restore: () => Promise<void>;
  /** What went wrong last, in words. */
  readonly failed: string | null;
}

/** Inserting, moving, deleting and restoring entries. The page shows each at once and takes the server's order when it answers. */
export function useEntries(notebook: Notebook): EntryChanges {
  const client = useQueryClient();
  const [removed, setRemoved] = useState<EntryChanges['removed']>(null);
  const [failed, setFailed] = useState<string | null>(null);
  const { id, entries } = notebook;

  const attempt = async (change: () => Promise<void>): Promise<boolean> => {
    setFailed(null);
    try {
      await change();
      return true;
    } catch (error) {
      setFailed(error instanceof Error ? error.message : 'The change was not made.');
      await rereadNotebook(client, id);
      return false;
    }
  };

  return {
    removed,
    failed,
    insert: async (kind, before) => {
      const entry = newId();
      const done = await attempt(async () => {
        const params = { notebook: id };
        const made = await call('insertEntry', { params, body: { id: entry, kind, text: '', before } });
        const order = entries.map((one) => one.id);
        const at = before === null ? -1 : order.indexOf(before);
        order.splice(at < 0 ? order.length : at, 0, made.id);
        keepOrder(client, id, order, made);
      });
      return done ? entry : null;
    },
    move: async (entry, way) => {
      await attempt(async () => {
        const order = entries.map((one) => one.id);
        const from = order.indexOf(entry);
        const to = way === 'up' ? from - 1 : from + 1;
        if (from < 0 || to < 0 || to >= order.length) return;
        order.splice(from, 1);
        order.splice(to, 0, entry);
        keepOrder(client, id, order);
        const params = { notebook: id, entry };
        const answer = await call('moveEntry', { params, body: { before: order[to + 1] ?? null } });
        keepOrder(client, id, answer.order);
      });
    },
    remove: async (entry) => {
      const at = entries.findIndex((one) => one.id === entry);
      const order = entries.map((one) => one.id).filter((one) => one !== entry);
      await attempt(async () => {
        await call('deleteEntry', { params: { notebook: id, entry } });
        keepOrder(client, id, order);
        setRemoved({ id: entry, number: at + 1 });
      });
    },
    restore: async () => {
      if (!removed) return;
      await attempt(async () => {
        const answer = await call('restoreEntry', { params: { notebook: id, entry: removed.id } });
        keepOrder(client, id, answer.order, answer.entry);
        setRemoved(null);
      });
    },
  };
}

/** A random UUID; `crypto.randomUUID` is missing where the page is served without encryption from another machine. */
function newId(): string {
  const bytes = crypto.getRandomValues(new Uint8Array(16));
  bytes[6] = ((bytes[6] ?? 0) & 0x0f) | 0x40;
  bytes[8] = ((bytes[8] ?? 0) & 0x3f) | 0x80;
  const hex = [...bytes].map((byte) => byte.toString(16).padStart(2, '0')).join('');
  return [hex.slice(0, 8), hex.slice(8, 12), hex.slice(12, 16), hex.slice(16, 20), hex.slice(20)].join('-');
}
