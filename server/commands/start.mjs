/**
 * `npm start`: from a bare checkout to a running Gaugewright, and down again on Ctrl-C. Installs what is missing, opens
 * the private database (or uses DATABASE_URL), migrates it, builds when sources changed, runs the web server and one
 * worker. `--dev` runs both from source, restarting them when a file changes; `--worker` runs a further worker alone.
 */
import { spawn } from 'node:child_process';
import { randomBytes } from 'node:crypto';
import { existsSync, readFileSync, watchFile, writeFileSync } from 'node:fs';
import { get } from 'node:http';
import { join } from 'node:path';
import { ensurePostgres, findCluster, openCluster, stateFolder } from './cluster.mjs';
import { takeLock } from './lock.mjs';
import { root } from './root.mjs';
import { Trouble, checkNode, ensurePackages, explain, freePort, isFree } from './system.mjs';

const dev = process.argv.includes('--dev');
const workerAlone = process.argv.includes('--worker');
const say = (text) => process.stdout.write(`${text}\n`);

/** Undone in reverse order at the end, however the end comes. */
const undo = [];
let stopping;

/** Stops all that was started, once, and ends with `code`. */
function stop(code) {
  stopping ??= (async () => {
    // A hang in shutting down must not keep the terminal.
    setTimeout(() => process.exit(code || 1), 40_000).unref();
    for (const step of undo.reverse()) {
      try {
        await step();
      } catch (error) {
        explain(error);
      }
    }
    process.exit(code);
  })();
  return stopping;
}

/** Runs a process of ours to its end; resolves with its exit code. */
function finished(words) {
  const child = spawn(process.execPath, words, { cwd: root, stdio: ['ignore', 'inherit', 'inherit'] });
  const gone = new Promise((resolve) => child.once('exit', (code) => resolve(code)));
  undo.push(() => {
    child.kill();
    return gone;
  });
  return gone;
}

/** Starts a long-running process that ends with this one; `ended(code)` is called if it ends before it was asked to. */
function keep(words, environment, ended) {
  const tether = ['--import', new URL('./tether.mjs', import.meta.url).href];
  const child = spawn(process.execPath, [...tether, ...words], {
    cwd: root,
    env: { ...process.env, ...environment },
    stdio: ['ignore', 'inherit', 'inherit', 'ipc'],
  });
  const gone = new Promise((resolve) => child.once('exit', (code) => resolve(code ?? 1)));
  void gone.then((code) => stopping ?? ended(code));
  undo.push(async () => {
    child.kill('SIGTERM');
    const late = setTimeout(() => child.kill('SIGKILL'), 8_000);
    await gone;
    clearTimeout(late);
  });
  return child;
}

/** How a program of the server is run: its bundle, or in development its source, watched. */
const program = (name) =>
  dev ? ['--watch', '--watch-preserve-output', '--import', 'tsx', `server/${name}.ts`] : [`dist/server/${name}.js`];

/** PORT if it was given (it must be free), else the first free port from 3000 on. */
async function choosePort(host) {
  const given = process.env.PORT;
  if (given !== undefined && given !== '') {
    const port = Number(given);
    if (!Number.isInteger(port) || port < 1 || port > 65535) {
      throw new Trouble(`PORT is "${given}"; it must be a number from 1 to 65535.`);
    }
    if (!(await isFree(port, host))) {
      throw new Trouble(`Port ${port} is taken or not allowed. Choose another, or leave PORT out for a free one.`);
    }
    return port;
  }
  for (let port = 3000; port < 3100; port += 1) if (await isFree(port, host)) return port;
  throw new Trouble('No port from 3000 to 3099 is free. Give one by PORT.');
}

/** The secret that signs sessions: kept, so that people stay signed in over a restart. */
function sessionSecret(state) {
  const file = join(state, 'session-secret');
  if (!existsSync(file)) writeFileSync(file, randomBytes(32).toString('base64url'), { mode: 0o600 });
  return readFileSync(file, 'utf8');
}

const loopback = (host) => ['127.0.0.1', '::1', 'localhost'].includes(host);

/**
 * The stand-ins for GitHub and for mail that are switched on by themselves: where no real one is set up, and only for an
 * installation that nobody but this machine can reach. Anyone can sign in as anyone through them.
 */
function standIns(host) {
  const local = loopback(host) && !process.env.PUBLIC_URL && process.env.NODE_ENV !== 'production';
  if (process.env.FAKES !== undefined || !local) return process.env.FAKES ?? '';
  const missing = { github: !process.env.GITHUB_CLIENT_ID, mail: !process.env.SMTP_URL };
  return Object.keys(missing)
    .filter((name) => missing[name])
    .join(',');
}

/** How a browser on this machine reaches a server at `host` and `port`. */
function localAddress(host, port) {
  const open = host === '0.0.0.0' || host === '::' ? 'localhost' : host;
  return `http://${open.includes(':') ? `[${open}]` : open}:${port}`;
}

/** Vite in front of the server, for development: it sets up the client from source and hands the rest on. */
function startVite(host, port, backend) {
  const words = [
    join('node_modules', 'vite', 'bin', 'vite.js'),
    '--host',
    host,
    '--port',
    String(port),
    '--strictPort',
  ];
  keep(words, { BACKEND: backend }, (code) => void stop(code || 1));
  watchFile(join(root, 'grammar', 'operator.ne'), { interval: 500 }, () => {
    import('./grammar.mjs').then(({ compileGrammar }) => compileGrammar()).catch(explain);
  });
}

/** Waits until the server answers at `url`; gives up quietly when it ended meanwhile. */
async function answering(url, child) {
  for (;;) {
    if (stopping || child.exitCode !== null) return false;
    const answered = await new Promise((resolve) => {
      const request = get(url, { timeout: 2_000 }, (response) => {
        response.resume();
        resolve(true);
      });
      request.once('error', () => resolve(false));
      request.once('timeout', () => request.destroy());
    });
    if (answered) return true;
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
}

/** The database: the one that DATABASE_URL names, else the private cluster of this checkout, opened under its lock. */
async function database(state) {
  if (process.env.DATABASE_URL) return { url: process.env.DATABASE_URL, lock: undefined };
  const lock = takeLock(join(state, 'lock'));
  if (lock.holder) {
    const { pid, address } = lock.holder;
    throw new Trouble(
      `Gaugewright already runs from this folder${address ? ` at ${address}` : ''} (process ${pid}).\n` +
        'Stop it first, or give DATABASE_URL to run a second one on another database.',
    );
  }
  undo.push(() => lock.release());
  const opening = openCluster(state);
  // Listed before it is open: a stop in the meantime waits and then closes it.
  undo.push(async () => (await opening.catch(() => undefined))?.stop());
  const cluster = await opening;
  const { ensureDatabase } = await import('./migrate.mjs');
  return { url: await ensureDatabase(cluster.url, 'gaugewright'), lock };
}

/** Builds in a process of its own, beside the start of the database. */
async function build() {
  const { isStale } = await import('./build.mjs');
  if (dev) {
    const { compileGrammar } = await import('./grammar.mjs');
    const { compileKernel } = await import('./kernel.mjs');
    compileGrammar();
    await compileKernel();
    return;
  }
  if (!isStale()) return;
  say('Building');
  const code = await finished(['server/commands/build.mjs']);
  if (code !== 0 && !stopping) throw new Trouble('The build failed; its output stands above.');
}

/** A worker beside a server that runs elsewhere or in this folder. */
async function startWorker() {
  const state = stateFolder();
  const found = process.env.DATABASE_URL ?? findCluster(state);
  if (!found) throw new Trouble('No database runs. Start Gaugewright first (`npm start`), or give DATABASE_URL.');
  const url = new URL(found);
  if (!process.env.DATABASE_URL) url.pathname = '/gaugewright';
  await build();
  keep(
    program('worker'),
    { DATABASE_URL: url.href, SESSION_SECRET: process.env.SESSION_SECRET ?? sessionSecret(state) },
    stop,
  );
}

async function startAll() {
  const host = process.env.HOST || '127.0.0.1';
  const port = await choosePort(host);
  const state = stateFolder();
  const built = build();
  // Awaited below; without a handler meanwhile a failed build would end the process before the database is stopped.
  built.catch(() => undefined);
  const { url, lock } = await database(state);
  const { migrate } = await import('./migrate.mjs');
  await migrate(url);
  await built;
  if (stopping) return;
  const where = localAddress(host, port);
  // In development Vite has the port that people use, and the server another.
  const own = dev ? await freePort() : port;
  const environment = {
    DATABASE_URL: url,
    HOST: host,
    PORT: String(own),
    SESSION_SECRET: process.env.SESSION_SECRET ?? sessionSecret(state),
    FAKES: standIns(host),
    // A person at a terminal wants the address in view; a log that is kept wants every request.
    LOG_LEVEL: process.env.LOG_LEVEL ?? (process.stdout.isTTY ? 'warn' : 'info'),
    ...(dev ? { NODE_ENV: 'development', PUBLIC_URL: process.env.PUBLIC_URL || where } : {}),
  };
  const demo = dev ? ['--import', 'tsx', 'server/commands/demo.ts'] : ['dist/server/commands/demo.js'];
  const written = await new Promise((resolve) => keep(demo, environment, resolve));
  if (written !== 0) throw new Trouble('The demonstration could not be written; the reason stands above.');
  const ended = (code) => {
    process.stderr.write(`The server ended unexpectedly (exit code ${code}).\n`);
    void stop(code || 1);
  };
  const server = keep(program('index'), environment, ended);
  startCompanion(environment);
  if (dev) startVite(host, port, localAddress(host, own));
  if (!(await answering(localAddress(host, own), server)) || (dev && !(await answering(where, server)))) return;
  lock?.note({ address: process.env.PUBLIC_URL || where });
  say(`Gaugewright is ready: ${process.env.PUBLIC_URL || where}\nCtrl-C stops it.`);
}

/** The worker that takes heavy audits; started again, a little later each time, if it ends. */
function startCompanion(environment, wait = 1_000) {
  keep(program('worker'), environment, (code) => {
    process.stderr.write(`The worker ended (exit code ${code}); starting it again in ${wait / 1_000} s.\n`);
    setTimeout(() => stopping ?? startCompanion(environment, Math.min(2 * wait, 60_000)), wait);
  });
}

for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) process.on(signal, () => void stop(0));
if (process.env.npm_lifecycle_event) {
  // npm hands on SIGINT and SIGTERM, but not a hang-up and not its own end: then this process has a new parent.
  const parent = process.ppid;
  setInterval(() => process.ppid === parent || void stop(0), 500).unref();
}
try {
  checkNode();
  ensurePackages(say);
  if (!process.env.DATABASE_URL) ensurePostgres(say);
  await (workerAlone ? startWorker() : startAll());
} catch (error) {
  if (!stopping) explain(error);
  await stop(1);
}
