import type { Database } from '../../../server/db/connection.ts';
import { listWaiting } from '../../../server/db/queries/evaluations.ts';
import { evaluateTextJob } from '../../../server/services/evaluations.ts';
import { derivation } from './engine.ts';

/** Does what a worker would with the texts that wait. */
export async function takeText(database: Database): Promise<void> {
  for (const id of await listWaiting(database)) await evaluateTextJob(database, derivation, id);
}
