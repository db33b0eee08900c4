import { openApi } from '../../shared/contracts/openapi.ts';
import { type Bind, scopesOf } from '../middleware/endpoint.ts';

/** The description of the HTTP interface; made at the first request and kept. */
export function openApiRoutes(bind: Bind): void {
  let document: ReturnType<typeof openApi> | undefined;
  bind('getOpenApi', () => Promise.resolve((document ??= openApi('/', scopesOf))));
}
