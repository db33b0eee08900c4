import type { Logger } from 'pino';
import { openDatabase } from './db/connection.ts';
import { openPool } from './evaluation/pool.ts';
import { openQueue } from './evaluation/queue.ts';
import { openLog } from './middleware/observe.ts';
import { runProgram } from './program.ts';
import { sealEditionJob } from './services/sealing.ts';
import type { Settings } from './settings.ts';

/**
 * Starts a worker: it takes jobs from the database until it is stopped. Any number may run, on any machine that reaches the
 * database; a job whose worker goes is taken by another.
 */
export async function startWorker(
  settings: Settings,
  log: Logger = openLog(settings),
): Promise<{ readonly stop: () => Promise<void> }> {
  const trouble = (error: unknown): void => log.warn({ err: error }, 'trouble in the background');
  const database = openDatabase(settings, trouble);
  const pool = openPool(settings.evaluation);
  try {
    const queue = await openQueue(database, { ...settings.evaluation, supervise: true }, trouble);
    await queue.work(settings.evaluation.threads, (edition) => sealEditionJob(database, pool, edition));
    log.info('taking jobs');
    return {
      stop: async () => {
        // What runs is given back to the queue first, so that closing it waits for nothing long.
        await pool.close();
        await queue.close();
        await database.close();
      },
    };
  } catch (error) {
    await pool.close();
    await database.close();
    throw error;
  }
}

runProgram(import.meta.url, startWorker);
