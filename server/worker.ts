import type { Logger } from 'pino';
import { openDatabase } from './db/connection.ts';
import { openQueue, queueOptions } from './evaluation/queue.ts';
import { openLog } from './middleware/observe.ts';
import { runProgram } from './program.ts';
import { takeWork } from './services/work.ts';
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
  try {
    const queue = await openQueue(database, queueOptions(settings, true), trouble);
    const work = await takeWork(settings, database, queue, trouble);
    log.info('taking jobs');
    return {
      stop: async () => {
        // What runs is given back to the queue first, so that closing it waits for nothing long.
        await work.close();
        await queue.close();
        await database.close();
      },
    };
  } catch (error) {
    await database.close();
    throw error;
  }
}

runProgram(import.meta.url, startWorker);
