import { sql } from 'drizzle-orm';
import PgBoss from 'pg-boss';
import type { Asking, Database, Transaction } from '../db/connection.ts';
import { editions } from '../db/schema/work.ts';

/** The queue of editions whose claims are to be computed. It lives in the database, so it survives whatever stops. */
export interface Queue {
  /** Puts an edition into the queue when the transaction commits. */
  readonly ask: (tx: Transaction, edition: string) => Promise<void>;
  /** Takes jobs, `threads` at a time, until the queue is closed. What `handle` throws is tried again. */
  readonly work: (threads: number, handle: (edition: string) => Promise<void>) => Promise<void>;
  readonly close: () => Promise<void>;
}

const name = 'seal-edition';
/** How often editions are looked for whose job was lost with the process that had it. */
const sweepMs = 15_000;

export async function openQueue(
  database: Database,
  options: { readonly seconds: number; readonly supervise: boolean },
  onTrouble: (error: unknown) => void,
): Promise<Queue> {
  const boss = new PgBoss({
    connectionString: database.url,
    application_name: 'gaugewright queue',
    max: 2,
    supervise: options.supervise,
    schedule: false,
  });
  boss.on('error', onTrouble);
  await boss.start();
  await boss.createQueue(name, { name, retryLimit: 5, retryDelay: 1, expireInSeconds: options.seconds + 60 });
  let sweep: NodeJS.Timeout | undefined;

  const ask = async (db: PgBoss.Db, edition: string): Promise<void> => {
    await boss.send(name, { edition }, { db });
  };

  /** Asks again for editions that wait and that no job is about; a job that runs holds the edition's lock. */
  const askForLost = async (): Promise<void> => {
    const lost = await findLost(database);
    for (const edition of lost) await database.transaction((tx) => ask(tx, edition));
  };

  return {
    ask: (tx, edition) => ask(tx, edition),
    work: async (threads, handle) => {
      for (let number = 0; number < threads; number += 1) {
        await boss.work<{ edition: string }>(name, { batchSize: 1, pollingIntervalSeconds: 0.5 }, async ([job]) => {
          if (job !== undefined) await handle(job.data.edition);
        });
      }
      sweep = setInterval(() => void askForLost().catch(onTrouble), sweepMs);
      sweep.unref();
      await askForLost();
    },
    close: async () => {
      clearInterval(sweep);
      await boss.stop({ graceful: true, wait: true, timeout: 3_000 });
    },
  };
}

const lockOf = (edition: unknown) => sql`hashtextextended(${edition}::text, 0)`;

async function findLost({ db }: Asking): Promise<string[]> {
  const waiting = await db.execute<{ id: string }>(sql`
    select ${editions.id} as id from ${editions}
    where ${editions.status} = 'computing' and ${editions.publishedAt} < now() - interval '5 seconds'
      and not exists (select 1 from pgboss.job where name = ${name} and state in ('created', 'retry')
        and data ->> 'edition' = ${editions.id}::text)
      -- An advisory lock on a bigint shows as its two halves.
      and not exists (select 1 from pg_locks where locktype = 'advisory' and objsubid = 1
        and database = (select oid from pg_database where datname = current_database())
        and ((classid::bigint << 32) | objid::bigint) = ${lockOf(editions.id)})
    order by ${editions.publishedAt} limit 100`);
  return waiting.rows.map((row) => row.id);
}

/**
 * Does `work` while holding the edition's lock, so that two jobs never compute the same claims; does nothing if another has it.
 * The lock goes with the connection, so a process that dies gives it up.
 */
export async function whileLocked(database: Database, edition: string, work: () => Promise<void>): Promise<void> {
  const client = await database.pool.connect();
  try {
    const key = 'hashtextextended($1::text, 0)';
    const { rows } = await client.query<{ taken: boolean }>(`select pg_try_advisory_lock(${key}) as taken`, [edition]);
    if (rows[0]?.taken !== true) return;
    try {
      await work();
    } finally {
      await client.query(`select pg_advisory_unlock(${key})`, [edition]);
    }
  } finally {
    client.release();
  }
}
