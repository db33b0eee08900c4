import { sql, type SQL } from 'drizzle-orm';
import PgBoss from 'pg-boss';
import type { Asking, Database, Transaction } from '../db/connection.ts';
import { questions } from '../db/schema/jobs.ts';
import { editions } from '../db/schema/work.ts';
import type { Settings } from '../settings.ts';

/** One kind of work in the queue, by the ids of what is to be worked at. It lives in the database, so it survives whatever stops. */
export interface Line {
  /** Puts something into the queue when the transaction commits. */
  readonly ask: (tx: Transaction, id: string) => Promise<void>;
  /** Takes jobs, `threads` at a time, until the queue is closed. What `handle` throws is tried again. */
  readonly work: (threads: number, handle: (id: string) => Promise<void>) => Promise<void>;
}

/** The queue: editions whose claims are to be computed, and questions that are to be answered. */
export interface Queue extends Line {
  readonly questions: Line;
  readonly close: () => Promise<void>;
}

interface LineKind {
  readonly name: string;
  /** Longest time of one job; a worker that says nothing for longer is given up. */
  readonly seconds: number;
  /** Ids of what waits and that no job in the queue is about and nobody is at. */
  readonly findLost: (database: Asking) => Promise<string[]>;
}

const editionLine = 'seal-edition';
const questionLine = 'answer-question';
/** How often things are looked for whose job was lost with the process that had it. */
const sweepMs = 10_000;

export interface QueueOptions {
  /** Longest time of an edition's evaluation, and of one question. */
  readonly seconds: number;
  readonly questionSeconds?: number;
  readonly supervise: boolean;
}

export const queueOptions = (
  { evaluation, questions }: Pick<Settings, 'evaluation' | 'questions'>,
  supervise: boolean,
): QueueOptions => ({ seconds: evaluation.seconds, questionSeconds: questions.seconds, supervise });

export async function openQueue(
  database: Database,
  { seconds, questionSeconds = seconds, supervise }: QueueOptions,
  onTrouble: (error: unknown) => void,
): Promise<Queue> {
  const boss = new PgBoss({
    connectionString: database.url,
    application_name: 'gaugewright queue',
    max: 2,
    supervise,
    schedule: false,
  });
  boss.on('error', onTrouble);
  await boss.start();
  const sweeps: NodeJS.Timeout[] = [];
  const sweep = (work: () => Promise<void>): void => {
    const timer = setInterval(() => void work().catch(onTrouble), sweepMs);
    timer.unref();
    sweeps.push(timer);
  };
  const line = (kind: LineKind) => openLine(boss, database, kind, sweep);
  const editionsLine = await line({ name: editionLine, seconds, findLost: findLostEditions });
  const questionsLine = await line({ name: questionLine, seconds: questionSeconds, findLost: findLostQuestions });
  return {
    ...editionsLine,
    questions: questionsLine,
    close: async () => {
      for (const timer of sweeps) clearInterval(timer);
      await boss.stop({ graceful: true, wait: true, timeout: 3_000 });
    },
  };
}

async function openLine(
  boss: PgBoss,
  database: Database,
  { name, seconds, findLost }: LineKind,
  sweep: (work: () => Promise<void>) => void,
): Promise<Line> {
  const options = { name, retryLimit: 5, retryDelay: 1, expireInSeconds: seconds + 60 };
  await boss.createQueue(name, options);
  // A queue that is there already keeps the options of the start that made it.
  await boss.updateQueue(name, options);

  const ask = async (tx: Transaction, id: string): Promise<void> => {
    await boss.send(name, { id }, { db: tx });
  };

  /** Asks again for what waits and that no job is about; a job that runs holds a lock. */
  const askForLost = async (): Promise<void> => {
    for (const id of await findLost(database)) await database.transaction((tx) => ask(tx, id));
  };

  return {
    ask,
    work: async (threads, handle) => {
      for (let number = 0; number < threads; number += 1) {
        await boss.work<{ id: string }>(name, { batchSize: 1, pollingIntervalSeconds: 0.5 }, async ([job]) => {
          if (job !== undefined) await handle(job.data.id);
        });
      }
      sweep(askForLost);
      await askForLost();
    },
  };
}

/** What waits in a table, and that neither a job in the queue is about nor anybody at work, who would hold its lock. */
async function findLost({ db }: Asking, line: string, waiting: SQL): Promise<string[]> {
  const lost = await db.execute<{ id: string }>(sql`
    with waiting as (${waiting})
    select waiting.id from waiting
    where not exists (select 1 from pgboss.job where name = ${line} and state in ('created', 'retry')
        and data ->> 'id' = waiting.id)
      -- An advisory lock on a bigint shows as its two halves.
      and not exists (select 1 from pg_locks where locktype = 'advisory' and objsubid = 1
        and database = (select oid from pg_database where datname = current_database())
        and ((classid::bigint << 32) | objid::bigint) = hashtextextended(waiting.id, 0))
    order by waiting.since limit 100`);
  return lost.rows.map((row) => row.id);
}

const findLostEditions = (asking: Asking): Promise<string[]> =>
  findLost(
    asking,
    editionLine,
    sql`select ${editions.id}::text as id, ${editions.publishedAt} as since from ${editions}
      where ${editions.status} = 'computing' and ${editions.publishedAt} < now() - interval '5 seconds'`,
  );

const findLostQuestions = (asking: Asking): Promise<string[]> =>
  findLost(
    asking,
    questionLine,
    sql`select ${questions.name} as id, ${questions.createdAt} as since from ${questions}
      where ${questions.state} in ('waiting', 'working') and ${questions.createdAt} < now() - interval '5 seconds'`,
  );

/**
 * Does `work` while holding the lock of an edition or question, so that two jobs never compute the same; does nothing if another has it.
 * The lock goes with the connection, so a process that dies gives it up.
 */
export async function whileLocked(database: Database, id: string, work: () => Promise<void>): Promise<void> {
  const client = await database.pool.connect();
  try {
    const key = 'hashtextextended($1::text, 0)';
    const { rows } = await client.query<{ taken: boolean }>(`select pg_try_advisory_lock(${key}) as taken`, [id]);
    if (rows[0]?.taken !== true) return;
    try {
      await work();
    } finally {
      await client.query(`select pg_advisory_unlock(${key})`, [id]);
    }
  } finally {
    client.release();
  }
}
