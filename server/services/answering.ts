import { announce, tell } from '../db/announce.ts';
import type { Database } from '../db/connection.ts';
import * as queries from '../db/queries/jobs.ts';
import { EvaluationFailed, type Pool } from '../evaluation/pool.ts';
import { whileLocked } from '../evaluation/queue.ts';
import type { Answer, ThreadProgress } from '../evaluation/task.ts';
import { notify } from './notices.ts';

/** Attempts without progress that lasts, after which a question is given up. */
const mostAttempts = 3;
/** How often a worker writes how far it is, and sees whether it is to go on. */
const lookMs = 400;
/** Checkpoints may be long, and are written at most this often. */
const checkpointMs = 2_000;
/** Who waited longer than this is told by a notice, not on open pages alone. */
const longSeconds = 60;

/**
 * The job that answers one question. Safe to run twice and at once; throws if it is to be tried again. A question whose process ended goes
 * on from its last checkpoint.
 */
export function answerQuestionJob(database: Database, pool: Pool, name: string): Promise<void> {
  return whileLocked(database, name, async () => {
    const begun = await queries.beginQuestion(database, name);
    if (begun === null) return;
    if (begun.attempts > mostAttempts)
      return end(database, name, { reason: 'The engine ended each time it was tried.' });
    const watch = watching(database, name);
    try {
      const { source, checkpoint: from } = begun;
      // What it costs was held against the limits when it was asked.
      const limit = { operations: begun.operations, bytes: begun.bytes };
      const task = { kind: 'answer', source, question: name, limit, ...(from == null ? {} : { from }) } as const;
      const answer = await pool.do(task, { onProgress: watch.onProgress, signal: watch.signal });
      await watch.close();
      await end(database, name, outcome(answer));
    } catch (error) {
      await watch.close();
      if (!(error instanceof EvaluationFailed)) throw error;
      // Nobody wants it any more.
      if (watch.signal.aborted) return;
      if (error.why !== 'stopped') return end(database, name, { reason: error.message });
      await queries.giveBack(database, name);
      throw error;
    }
  });
}

function outcome({ findings, open }: Answer): { findings: readonly unknown[] } | { reason: string } {
  if (findings === null) return { reason: 'The source does not ask this question.' };
  return open === undefined ? { findings } : { reason: open };
}

interface Watch {
  readonly onProgress: (progress: ThreadProgress) => void;
  /** Aborted when the question is not to be answered any more. */
  readonly signal: AbortSignal;
  readonly close: () => Promise<void>;
}

/** Carries progress into the database, and the word to stop out of it. */
function watching(database: Database, name: string): Watch {
  const stop = new AbortController();
  let latest: ThreadProgress | undefined;
  let checkpoint: unknown;
  let written = Date.now();
  let looking: Promise<void> | undefined;

  const look = async (): Promise<void> => {
    const far = latest;
    latest = undefined;
    const lasting = checkpoint !== undefined && Date.now() - written >= checkpointMs ? { checkpoint } : {};
    if ('checkpoint' in lasting) {
      checkpoint = undefined;
      written = Date.now();
    }
    const goesOn = await queries.sayHowFar(
      database,
      name,
      far ? { done: far.done, doing: far.doing, ...lasting } : null,
    );
    if (!goesOn) stop.abort();
  };
  const timer = setInterval(() => {
    // A database that does not answer is asked again, and its silence ends no work.
    looking ??= look()
      .catch(() => undefined)
      .finally(() => (looking = undefined));
  }, lookMs);

  return {
    onProgress: (progress) => {
      latest = progress;
      checkpoint = progress.checkpoint ?? checkpoint;
    },
    signal: stop.signal,
    close: async () => {
      clearInterval(timer);
      await looking;
    },
  };
}

function end(
  database: Database,
  name: string,
  how: { findings: readonly unknown[] } | { reason: string },
): Promise<void> {
  return database.transaction(async (tx) => {
    const ended = await queries.endQuestion(tx, name, how);
    if (ended === null) return;
    const { waits, text, seconds } = ended;
    for (const notebook of new Set(waits.map((wait) => wait.notebook))) {
      if (notebook !== null) await announce(tx, notebook, 'answer', { question: name });
    }
    for (const { job, person, notebook } of waits) {
      await tell(tx, person, 'job', { job });
      if (seconds < longSeconds) continue;
      const said = 'findings' in how ? 'The answer is there' : 'There is no answer';
      const path = notebook === null ? '/jobs' : `/notebooks/${notebook}`;
      await notify(tx, { to: [person], kind: 'job', text: `${said}: ${text}`, by: null, notebook, path });
    }
  });
}
