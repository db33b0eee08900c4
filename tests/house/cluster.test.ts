import { spawn, spawnSync } from 'node:child_process';
import { chmodSync, existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import pg from 'pg';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { findCluster, openCluster, openThrowaway } from '../../server/commands/cluster.mjs';
import { holderOf, takeLock } from '../../server/commands/lock.mjs';
import { ensureDatabase } from '../../server/commands/migrate.mjs';
import { root } from '../../server/commands/root.mjs';

let folder = '';
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'a state folder '));
  // Root's database account has to pass through it.
  chmodSync(folder, 0o711);
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

async function ask(url: string, statement: string): Promise<unknown[]> {
  const client = new pg.Client({ connectionString: url });
  await client.connect();
  try {
    return (await client.query<Record<string, unknown>>(statement)).rows;
  } finally {
    await client.end();
  }
}

describe('the private cluster', () => {
  test('is reused while it runs, keeps its data over a stop, and is found only while it runs', async () => {
    expect(findCluster(folder)).toBeUndefined();
    const first = await openCluster(folder);
    try {
      const url = await ensureDatabase(first.url, 'one');
      await ask(url, 'CREATE TABLE kept AS SELECT 7 AS number');
      expect(await ensureDatabase(first.url, 'one')).toBe(url);
      // As after a killed start: nobody stopped it, and the next start finds it running.
      const second = await openCluster(folder);
      expect(second.url).toBe(first.url);
      expect(findCluster(folder)).toBe(first.url);
    } finally {
      first.stop();
    }
    expect(findCluster(folder)).toBeUndefined();
    const third = await openCluster(folder);
    try {
      expect(await ask(await ensureDatabase(third.url, 'one'), 'SELECT number FROM kept')).toEqual([{ number: 7 }]);
    } finally {
      third.stop();
    }
  });

  test('refuses whoever has no password', async () => {
    const cluster = await openThrowaway();
    try {
      const url = new URL(cluster.url);
      url.password = 'wrong';
      await expect(ask(url.href, 'SELECT 1')).rejects.toThrow(/password/);
    } finally {
      cluster.stop();
    }
    await expect(ask(cluster.url, 'SELECT 1')).rejects.toThrow(/ECONNREFUSED/);
  });
});

describe('a throwaway cluster', () => {
  const program = `
    import { openThrowaway } from ${JSON.stringify(join(root, 'server', 'commands', 'cluster.mjs'))};
    const { url } = await openThrowaway();
    process.stdout.write(url + '\\n');
    if (process.argv[1] === 'stay') setInterval(() => {}, 1000);
    else process.exit(0);`;
  const begin = (...words: string[]) => spawn(process.execPath, ['--input-type=module', '-e', program, ...words]);
  const urlFrom = async (child: ReturnType<typeof begin>): Promise<string> => {
    for await (const piece of child.stdout) return String(piece).trim();
    throw new Error('it printed no address');
  };

  test('goes with its process, whether that stops it or not', async () => {
    const child = begin();
    const url = await urlFrom(child);
    if (child.exitCode === null) await new Promise((resolve) => child.once('exit', resolve));
    await expect(ask(url, 'SELECT 1')).rejects.toThrow(/ECONNREFUSED/);
  });

  test('of a killed process is discarded by the next', async () => {
    const child = begin('stay');
    const url = await urlFrom(child);
    child.kill('SIGKILL');
    await new Promise((resolve) => child.once('exit', resolve));
    expect(await ask(url, 'SELECT 1 AS one')).toEqual([{ one: 1 }]);
    const next = await openThrowaway();
    next.stop();
    await expect(ask(url, 'SELECT 1')).rejects.toThrow(/ECONNREFUSED/);
  });
});

describe('the lock', () => {
  test('is held by one process at a time and says who holds it', () => {
    const file = join(folder, 'lock');
    const lock = takeLock(file);
    expect(lock.holder).toBeUndefined();
    lock.note?.({ address: 'http://127.0.0.1:1' });
    expect(takeLock(file).holder).toMatchObject({ pid: process.pid, address: 'http://127.0.0.1:1' });
    lock.release?.();
    expect(existsSync(file)).toBe(false);
    expect(takeLock(file).holder).toBeUndefined();
  });

  test.each([
    ['a process that is gone', () => JSON.stringify({ pid: spawnSync('true').pid, began: '1' })],
    ['another process that has the same number now', () => JSON.stringify({ pid: process.pid, began: '1' })],
    ['nobody, in a torn file', () => '{"pid":'],
  ])('passes on from %s', (_name, text) => {
    const file = join(folder, 'stale');
    writeFileSync(file, text());
    expect(holderOf(file)).toBeUndefined();
    expect(takeLock(file).holder).toBeUndefined();
    expect(JSON.parse(readFileSync(file, 'utf8'))).toMatchObject({ pid: process.pid });
    rmSync(file);
  });
});
