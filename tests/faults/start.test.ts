import { type ChildProcess, spawn } from 'node:child_process';
import { randomUUID } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { type AddressInfo, type Server, createServer } from 'node:net';
import { join } from 'node:path';
import { afterEach, describe, expect, inject, test } from 'vitest';
import { ensureDatabase } from '../../server/commands/migrate.mjs';
import { root } from '../../server/commands/root.mjs';
import { freePort } from '../../server/commands/system.mjs';

interface Start {
  readonly child: ChildProcess;
  readonly url: string;
  /** All that it printed so far. */
  readonly output: () => string;
  /** Resolves with the exit code, which is null after SIGKILL. */
  readonly ended: Promise<number | null>;
}

const started: Start[] = [];

/** `npm start` without npm, in a process group of its own so that whatever it leaves behind can be seen. */
async function start(settings: Readonly<Record<string, string>> = {}): Promise<Start> {
  const port = settings.PORT ?? String(await freePort());
  const name = `s_${randomUUID().replaceAll('-', '')}`;
  const child = spawn(process.execPath, [join(root, 'server', 'commands', 'start.mjs')], {
    cwd: root,
    detached: true,
    env: {
      PATH: process.env.PATH,
      HOME: process.env.HOME,
      DATABASE_URL: settings.DATABASE_URL ?? (await ensureDatabase(inject('pgUrl'), name)),
      ...settings,
      PORT: port,
    },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let output = '';
  for (const stream of [child.stdout, child.stderr]) stream.on('data', (piece: Buffer) => (output += piece.toString()));
  const ended = new Promise<number | null>((resolve) => child.once('close', (code) => resolve(code)));
  const one = { child, url: `http://127.0.0.1:${port}`, output: () => output, ended };
  started.push(one);
  return one;
}

async function until(what: string, holds: () => boolean, output: () => string): Promise<void> {
  for (let attempt = 0; attempt < 500; attempt += 1) {
    if (holds()) return;
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
  throw new Error(`Not seen: ${what}. It printed:\n${output()}`);
}

async function ready(one: Start): Promise<void> {
  const says = (): boolean => one.output().includes(`is ready: ${one.url}`);
  await until('that it is ready', () => says() || one.child.exitCode !== null, one.output);
  if (!says()) throw new Error(`It ended before it was ready. It printed:\n${one.output()}`);
}

/** Whether any process of its group is left. */
function anyLeft({ child }: Start): boolean {
  try {
    process.kill(-(child.pid ?? Number.NaN), 0);
    return true;
  } catch {
    return false;
  }
}

/** A build that is cut short ends its own helpers a moment later; hence the waiting. */
const nothingLeft = (one: Start): Promise<void> => until('that nothing is left', () => !anyLeft(one), one.output);

/** The process number of the program that it started, such as `dist/server/index.js`. */
function programOf({ child }: Start, program: string): number {
  const children = readFileSync(`/proc/${child.pid}/task/${child.pid}/children`, 'utf8').trim().split(' ').map(Number);
  const found = children.find((pid) => readFileSync(`/proc/${pid}/cmdline`, 'utf8').includes(program));
  if (found === undefined) throw new Error(`${program} does not run`);
  return found;
}

afterEach(async () => {
  for (const one of started.splice(0)) {
    if (!anyLeft(one)) continue;
    process.kill(-(one.child.pid ?? Number.NaN), 'SIGKILL');
    await one.ended;
  }
});

describe('npm start', () => {
  test.each(['SIGINT', 'SIGTERM'] as const)(
    'when it gets %s, then it answered until then, ends with 0 and leaves nothing behind',
    async (signal) => {
      const one = await start();
      await ready(one);
      const page = await fetch(one.url);
      expect(page.status).toBe(200);
      expect(await page.text()).toContain('<title>Gaugewright</title>');
      one.child.kill(signal);
      expect(await one.ended).toBe(0);
      await nothingLeft(one);
      await expect(fetch(one.url)).rejects.toThrow();
    },
  );

  test('when Ctrl-C reaches the whole group at once, then it still ends in good order', async () => {
    const one = await start();
    await ready(one);
    process.kill(-(one.child.pid ?? Number.NaN), 'SIGINT');
    expect(await one.ended).toBe(0);
    await nothingLeft(one);
    expect(one.output()).not.toMatch(/unexpectedly|ended \(exit/);
  });

  test('when it is stopped before it is ready, then nothing is left behind', async () => {
    const one = await start();
    await new Promise((resolve) => setTimeout(resolve, 300));
    one.child.kill('SIGTERM');
    expect(await one.ended).toBe(0);
    await nothingLeft(one);
  });

  test('when it is killed, then what it started ends by itself', async () => {
    const one = await start();
    await ready(one);
    one.child.kill('SIGKILL');
    await nothingLeft(one);
  });

  test('when the server crashes, then it stops the rest and says so with exit code 1', async () => {
    const one = await start();
    await ready(one);
    process.kill(programOf(one, 'dist/server/index.js'), 'SIGKILL');
    expect(await one.ended).toBe(1);
    expect(one.output()).toContain('The server ended unexpectedly');
    await nothingLeft(one);
  });

  test('when the worker crashes, then another takes its place and the server goes on', async () => {
    const one = await start();
    await ready(one);
    const first = programOf(one, 'dist/server/worker.js');
    process.kill(first, 'SIGKILL');
    await until('a new worker', () => one.output().includes('The worker ended'), one.output);
    let second = first;
    await until(
      'another process',
      () => {
        try {
          second = programOf(one, 'dist/server/worker.js');
        } catch {
          // Between two workers there is none.
        }
        return second !== first;
      },
      one.output,
    );
    expect((await fetch(one.url)).status).toBe(200);
  });

  test('when the port that was asked for is taken, then it names it and ends with 1', async () => {
    const other = await new Promise<Server>((resolve) => {
      const server = createServer().listen(0, '127.0.0.1', () => resolve(server));
    });
    const { port } = other.address() as AddressInfo;
    try {
      const one = await start({ PORT: String(port) });
      expect(await one.ended).toBe(1);
      expect(one.output()).toContain(`Port ${port} is taken`);
    } finally {
      other.close();
    }
  });

  test.each([
    ['no port at all', { PORT: 'eighty' }, 'PORT is "eighty"'],
    ['a database that does not answer', { DATABASE_URL: 'postgres://nobody@127.0.0.1:9/none' }, 'DATABASE_URL'],
    ['a secret that is too short', { SESSION_SECRET: 'short' }, 'SESSION_SECRET'],
  ])('when it is given %s, then it says what is wrong and ends with 1', async (_name, settings, words) => {
    const one = await start(settings);
    expect(await one.ended).toBe(1);
    expect(one.output()).toContain(words);
    expect(one.output()).not.toContain('    at ');
    await nothingLeft(one);
  });
});
