/** Pages of a list that is ordered by time, newest first, and by id where times are equal. */

export interface PageAsked {
  readonly after?: string | undefined;
  readonly limit: number;
}

export interface Page<Item> {
  readonly items: Item[];
  readonly next: string | null;
}

export interface Cursor {
  readonly at: Date;
  readonly id: string;
}

/** Reads a cursor that `pageFrom` wrote; null for none and for one that nobody wrote. */
export function readCursor(after: string | undefined): Cursor | null {
  if (after === undefined) return null;
  const [time = '', id = ''] = Buffer.from(after, 'base64url').toString().split(' ');
  const at = new Date(time);
  return Number.isNaN(at.getTime()) || !/^[0-9a-f-]{36}$/.test(id) ? null : { at, id };
}

/** A page from rows that were asked for with one more than the limit. */
export function pageFrom<Row, Item>(
  rows: readonly Row[],
  limit: number,
  cursorOf: (row: Row) => Cursor,
  itemOf: (row: Row) => Item,
): Page<Item> {
  const shown = rows.slice(0, limit);
  const last = shown.at(-1);
  const more = rows.length > limit && last !== undefined;
  return { items: shown.map(itemOf), next: more ? writeCursor(cursorOf(last)) : null };
}

const writeCursor = ({ at, id }: Cursor): string => Buffer.from(`${at.toISOString()} ${id}`).toString('base64url');
