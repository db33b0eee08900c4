import type { Bind } from '../middleware/endpoint.ts';
import type { Context } from '../services/context.ts';
import * as editions from '../services/editions.ts';

export function editionRoutes(bind: Bind, context: Context): void {
  bind('publishEdition', ({ standing, body }) => editions.publish(context, standing, body.summary));
  bind('listEditions', ({ standing, query }) => editions.editionsOf(context, standing, query));
  bind('getEdition', ({ standing, params }) => editions.readEdition(context, standing, params.edition));
  bind('exportEdition', ({ standing, params }) => editions.exportEdition(context, standing, params.edition));
  bind('evaluateEdition', ({ standing, params }) => editions.evaluateAgain(context, standing, params.edition));

  bind('listLinks', ({ standing }) => editions.linksOf(context, standing));
  bind('createLink', ({ standing, body }) => editions.createLink(context, standing, body.edition));
  bind('revokeLink', ({ standing, params }) => editions.revokeLink(context, standing, params.link));
  bind('getLinked', ({ standing }) => editions.readEdition(context, standing, null));
  bind('exportLinked', ({ standing }) => editions.exportEdition(context, standing, null));
}
