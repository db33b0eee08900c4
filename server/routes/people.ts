import type { Bind } from '../middleware/endpoint.ts';
import type { Context } from '../services/context.ts';
import { endSessionOf, me, sessionsOf } from '../services/people.ts';

export function peopleRoutes(bind: Bind, context: Context): void {
  bind('getMe', ({ standing }) => me(context, standing));
  bind('listSessions', ({ standing, request }) => sessionsOf(context, standing, request.sessionID));
  bind('endSession', ({ standing, params }) => endSessionOf(context, standing, params.session));
}
