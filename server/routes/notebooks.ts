import type { Bind } from '../middleware/endpoint.ts';
import type { Context } from '../services/context.ts';
import { addMember, changeMember, leave, membersOf, removeMember } from '../services/members.ts';
import * as notebooks from '../services/notebooks.ts';

export function notebookRoutes(bind: Bind, context: Context): void {
  bind('listShelf', ({ standing, query }) => notebooks.shelf(context, standing, query));
  bind('listPublic', ({ standing, query }) => notebooks.publicNotebooks(context, standing, query));
  bind('createNotebook', ({ standing, body }) => notebooks.createNotebook(context, standing, body));
  bind('importNotebook', ({ standing, body }) => notebooks.importNotebook(context, standing, body));
  bind('getNotebook', ({ standing }) => notebooks.readNotebook(context, standing));
  bind('changeNotebook', ({ standing, body }) => notebooks.changeNotebook(context, standing, body));
  bind('setVisibility', ({ standing, body }) => notebooks.changeNotebook(context, standing, body));
  bind('deleteNotebook', ({ standing }) => notebooks.deleteNotebook(context, standing));
  bind('forkNotebook', ({ standing, body }) => notebooks.forkNotebook(context, standing, body));
  bind('exportNotebook', ({ standing }) => notebooks.exportNotebook(context, standing));

  bind('listMembers', ({ standing }) => membersOf(context, standing));
  bind('addMember', ({ standing, body }) => addMember(context, standing, body.handle, body.role));
  bind('changeMember', ({ standing, params, body }) => changeMember(context, standing, params.person, body.role));
  bind('removeMember', ({ standing, params }) => removeMember(context, standing, params.person));
  bind('leaveNotebook', ({ standing }) => leave(context, standing));
}
