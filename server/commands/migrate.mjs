/** Brings a database to the schema of this checkout: the migrations in drizzle/, each once, in order. */
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { isMain, root } from './root.mjs';
import { Trouble, explain } from './system.mjs';

/** Creates `name` on the cluster of `url` unless it is there; returns the URL of that database. */
export async function ensureDatabase(url, name) {
  const { default: pg } = await import('pg');
  const client = new pg.Client({ connectionString: url });
  await client.connect();
  try {
    const { rowCount } = await client.query('SELECT 1 FROM pg_database WHERE datname = $1', [name]);
    if (rowCount === 0) await client.query(`CREATE DATABASE ${client.escapeIdentifier(name)}`);
  } finally {
    await client.end();
  }
  const inside = new URL(url);
  inside.pathname = `/${name}`;
  return inside.href;
}

/** Applies the migrations that `url` lacks. Several processes may call it at once: an advisory lock puts them in a row. */
export async function migrate(url) {
  const folder = join(root, 'drizzle');
  if (!existsSync(join(folder, 'meta', '_journal.json'))) return;
  const [{ default: pg }, { drizzle }, migrator] = await Promise.all([
    import('pg'),
    import('drizzle-orm/node-postgres'),
    import('drizzle-orm/node-postgres/migrator'),
  ]);
  const client = new pg.Client({ connectionString: url });
  try {
    await client.connect();
  } catch (error) {
    throw new Trouble(`The database does not answer: ${error.message || error.code}. Look at DATABASE_URL.`);
  }
  try {
    await client.query("SELECT pg_advisory_lock(hashtext('gaugewright migrations'))");
    await migrator.migrate(drizzle(client), { migrationsFolder: folder });
  } finally {
    await client.end();
  }
}

if (isMain(import.meta.url)) {
  try {
    if (!process.env.DATABASE_URL) throw new Trouble('DATABASE_URL says which database to migrate; it is not set.');
    await migrate(process.env.DATABASE_URL);
  } catch (error) {
    explain(error);
    process.exit(1);
  }
}
