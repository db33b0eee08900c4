import { drizzle, type NodePgDatabase } from 'drizzle-orm/node-postgres';
import pg from 'pg';
import type { Settings } from '../settings.ts';
import * as jobs from './schema/jobs.ts';
import * as notebooks from './schema/notebooks.ts';
import * as notices from './schema/notices.ts';
import * as people from './schema/people.ts';
import * as reviews from './schema/reviews.ts';
import * as work from './schema/work.ts';

const schema = { ...jobs, ...people, ...notebooks, ...notices, ...work, ...reviews };
// Stands here and in drizzle.config.ts: with one alone, queries ask for columns that do not exist.
const casing = 'snake_case';

type Queries = NodePgDatabase<typeof schema>;

/** Something to ask queries of: the database, or one transaction on it. */
export interface Asking {
  readonly db: Queries;
}

export interface Transaction extends Asking {
  /** One statement on the transaction's own connection; the form that pg-boss takes. */
  readonly executeSql: (text: string, values: unknown[]) => Promise<{ rows: unknown[] }>;
}

export interface Database extends Asking {
  readonly pool: pg.Pool;
  readonly url: string;
  /** Runs `work` in one transaction: all of it or nothing. */
  readonly transaction: <T>(work: (tx: Transaction) => Promise<T>) => Promise<T>;
  readonly close: () => Promise<void>;
}

/** Opens a pool of connections; `onTrouble` hears of connections that break while idle (the pool replaces them). */
export function openDatabase(
  settings: Pick<Settings, 'databaseUrl' | 'databaseConnections'>,
  onTrouble: (error: Error) => void,
): Database {
  const pool = new pg.Pool({
    connectionString: settings.databaseUrl,
    max: settings.databaseConnections,
    connectionTimeoutMillis: 10_000,
    application_name: 'gaugewright',
  });
  // Without a listener a stopped database would end the process.
  pool.on('error', onTrouble);
  return {
    pool,
    url: settings.databaseUrl,
    db: drizzle(pool, { schema, casing }),
    transaction: (work) => inTransaction(pool, work),
    close: () => pool.end(),
  };
}

async function inTransaction<T>(pool: pg.Pool, work: (tx: Transaction) => Promise<T>): Promise<T> {
  const client = await pool.connect();
  let broken: Error | undefined;
  try {
    await client.query('BEGIN');
    const result = await work({
      db: drizzle(client, { schema, casing }),
      executeSql: (text, values) => client.query<Record<string, unknown>>(text, values),
    });
    await client.query('COMMIT');
    return result;
  } catch (error) {
    await client.query('ROLLBACK').catch((failure: unknown) => {
      broken = failure instanceof Error ? failure : new Error(String(failure));
    });
    throw error;
  } finally {
    // A connection that could not even roll back is not to be used again.
    client.release(broken);
  }
}
