import type { Bind } from '../middleware/endpoint.ts';
import type { Context } from '../services/context.ts';
import * as entries from '../services/entries.ts';

export function entryRoutes(bind: Bind, context: Context): void {
  bind('insertEntry', ({ standing, body }) => entries.insertEntry(context, standing, body));
  bind('saveEntry', ({ standing, params, version, body }) =>
    entries.saveEntry(context, standing, params.entry, version, body),
  );
  bind('moveEntry', ({ standing, params, body }) => entries.moveEntry(context, standing, params.entry, body.before));
  bind('deleteEntry', ({ standing, params }) => entries.deleteEntry(context, standing, params.entry));
  bind('restoreEntry', ({ standing, params }) => entries.restoreEntry(context, standing, params.entry));
  bind('holdEntry', ({ standing, params }) => entries.holdEntry(context, standing, params.entry));
  bind('releaseEntry', ({ standing, params }) => entries.releaseEntry(context, standing, params.entry));
}
