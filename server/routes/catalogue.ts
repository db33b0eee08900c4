import type { Bind } from '../middleware/endpoint.ts';
import { getWorked, listWorked } from '../services/catalogue.ts';

/** The catalogue is the same for everyone and asks no database. */
export function catalogueRoutes(bind: Bind): void {
  bind('listWorked', () => Promise.resolve(listWorked()));
  bind('getWorked', ({ params }) => Promise.resolve().then(() => getWorked(params.worked)));
}
