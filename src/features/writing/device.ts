import type { Drafts, Kept } from './drafts.ts';

/** The copy on this device of what is typed and not saved: one item of local storage for a notebook. */
const key = (notebook: string): string => `gaugewright:drafts:${notebook}`;

/** Keeps the drafts; false when the device keeps nothing (storage closed or full). */
export function keepOnDevice(notebook: string, drafts: Drafts): boolean {
  try {
    if (drafts.size === 0) localStorage.removeItem(key(notebook));
    else {
      const kept = [...drafts].map(([id, draft]) => [id, { text: draft.text, base: draft.base }]);
      localStorage.setItem(key(notebook), JSON.stringify(Object.fromEntries(kept)));
    }
    return true;
  } catch {
    return false;
  }
}

export function keptOnDevice(notebook: string): ReadonlyMap<string, Kept> {
  try {
    const said: unknown = JSON.parse(localStorage.getItem(key(notebook)) ?? '{}');
    if (typeof said !== 'object' || said === null) return new Map();
    return new Map(Object.entries(said).filter((pair): pair is [string, Kept] => isKept(pair[1])));
  } catch {
    return new Map();
  }
}

const isKept = (value: unknown): value is Kept =>
  typeof value === 'object' &&
  value !== null &&
  'text' in value &&
  typeof value.text === 'string' &&
  'base' in value &&
  typeof value.base === 'number';
