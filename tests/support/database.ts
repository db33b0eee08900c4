import { randomUUID } from 'node:crypto';
import pg from 'pg';
import { inject } from 'vitest';

/** The migrated, empty database of the throwaway cluster. Nobody stays connected to it, or it could not be copied. */
export const template = 'tmpl';

export interface TestDatabase {
  readonly url: string;
  /** Drops the database, closing whatever is still connected. */
  readonly drop: () => Promise<void>;
}

async function onCluster(statement: string): Promise<void> {
  const client = new pg.Client({ connectionString: inject('pgUrl') });
  await client.connect();
  try {
    await client.query(statement);
  } finally {
    await client.end();
  }
}

/** A database of one's own with the schema of this checkout and no rows; one for each test file, or for each test. */
export async function freshDatabase(): Promise<TestDatabase> {
  const name = `t_${randomUUID().replaceAll('-', '')}`;
  await onCluster(`CREATE DATABASE ${name} TEMPLATE ${template} STRATEGY FILE_COPY`);
  const url = new URL(inject('pgUrl'));
  url.pathname = `/${name}`;
  return { url: url.href, drop: () => onCluster(`DROP DATABASE IF EXISTS ${name} WITH (FORCE)`) };
}
