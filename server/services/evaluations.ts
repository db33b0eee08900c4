import { createHash } from 'node:crypto';
import { joinEntries, type PlainEntry } from '../../shared/notebook/text.ts';
import { announce } from '../db/announce.ts';
import type { Asking, Database } from '../db/connection.ts';
import { purgeBin } from '../db/queries/bin.ts';
import * as queries from '../db/queries/evaluations.ts';
import { EvaluationFailed, type Pool } from '../evaluation/pool.ts';
import { whileLocked } from '../evaluation/queue.ts';
import { engineVersion } from '../evaluation/version.ts';
import { deriveWithAnswers } from './answers.ts';

export type { Evaluated } from '../db/queries/evaluations.ts';

/** A text that took its process down this often is given up. */
const mostAttempts = 3;

const keyOf = (text: string): string => createHash('sha256').update(text, 'utf8').digest('hex');

/** What is known of texts, in their order; what is not known is put in line for a worker. */
export async function evaluate(
  asking: Asking,
  notebook: string,
  texts: readonly string[],
): Promise<(queries.Evaluated | undefined)[]> {
  const asked = texts.map((text) => ({ key: keyOf(text), text }));
  const known = await queries.askEvaluations(asking, engineVersion, notebook, asked);
  return asked.map(({ key }) => known.get(key));
}

/** The text that the engine sees of some entries, as for an edition. */
export const sourceOf = (entries: readonly PlainEntry[]): string => joinEntries(entries).text;

/** Evaluates one text that waits. Safe to run twice and at once; throws if the server was stopped meanwhile. */
export function evaluateTextJob(database: Database, pool: Pool, id: string): Promise<void> {
  return whileLocked(database, id, async () => {
    const begun = await queries.beginEvaluation(database, id);
    if (begun === null) return;
    // An older engine's question is not this engine's to answer.
    if (begun.engine !== engineVersion) return end({ reason: 'The engine was replaced meanwhile: ask again.' });
    if (begun.attempts > mostAttempts) return end({ reason: 'The engine ended each time it was tried.' });
    try {
      await end({ report: await deriveWithAnswers(database, pool, begun.text) });
    } catch (error) {
      if (!(error instanceof EvaluationFailed)) throw error;
      if (error.why !== 'stopped') return end({ reason: error.message });
      await queries.forgetAttempt(database, id);
      throw error;
    }
  });

  function end(what: Parameters<typeof queries.endEvaluation>[2]): Promise<void> {
    return database.transaction(async (tx) => {
      const status = 'report' in what ? 'done' : 'failed';
      for (const notebook of await queries.endEvaluation(tx, id, what)) {
        await announce(tx, notebook, 'evaluation', { status });
      }
    });
  }
}

/** How often a worker looks for texts while it has none. */
const pauseMs = 400;
/** Reports that nobody looked at for so long are computed again when someone does. With them goes what lay in the bin for its time. */
const keptDays = 30;
const tidyMs = 3_600_000;

/**
 * Takes texts one after the other until it is closed. What a process was at when it ended is taken by another: a text waits
 * until its report is there, and the lock on it goes with the connection.
 */
export function takeTexts(
  database: Database,
  pool: Pool,
  onTrouble: (error: unknown) => void,
): { readonly close: () => Promise<void> } {
  let closed = false;
  let timer: NodeJS.Timeout | undefined;
  let tidied = 0;
  const round = async (): Promise<void> => {
    if (Date.now() - tidied > tidyMs) {
      tidied = Date.now();
      await queries.forgetEvaluations(database, keptDays);
      await purgeBin(database);
    }
    for (const id of await queries.listWaiting(database)) {
      if (closed) return;
      await evaluateTextJob(database, pool, id);
    }
  };
  let running: Promise<void> = Promise.resolve();
  const next = (): void => {
    if (closed) return;
    running = round().catch((error: unknown) => {
      if (!closed) onTrouble(error);
    });
    void running.then(() => {
      timer = setTimeout(next, pauseMs);
      timer.unref();
    });
  };
  next();
  return {
    close: async () => {
      closed = true;
      clearTimeout(timer);
      await running;
    },
  };
}
