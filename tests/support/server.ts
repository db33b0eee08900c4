import { type ChildProcess, spawn } from 'node:child_process';
import { join } from 'node:path';
import { root } from '../../server/commands/root.mjs';
import { freePort } from '../../server/commands/system.mjs';
import { type TestDatabase, freshDatabase } from './database.ts';

export interface ServerOptions {
  /** Further settings, by their names in the environment. */
  readonly settings?: Readonly<Record<string, string>>;
  /** Whether a worker that takes jobs runs beside the web server. */
  readonly worker?: boolean;
  /** The database to run on; a fresh one, dropped at the end, where none is given. */
  readonly database?: TestDatabase;
}

export interface RunningServer {
  /** Address of the web server, without a slash at its end. */
  readonly url: string;
  readonly database: TestDatabase;
  /** All that server and worker printed so far. */
  readonly output: () => string;
  /** Stops the processes (by SIGTERM, or SIGKILL as a crash would) and starts them again on the same port and data. */
  readonly restart: (signal?: 'SIGTERM' | 'SIGKILL') => Promise<void>;
  readonly stop: () => Promise<void>;
}

/** Ends a process and waits for it; a process that does not heed SIGTERM within ten seconds is an error. */
async function end(child: ChildProcess, signal: 'SIGTERM' | 'SIGKILL'): Promise<void> {
  if (child.exitCode !== null || child.signalCode !== null) return;
  const gone = new Promise<void>((resolve) => child.once('exit', () => resolve()));
  child.kill(signal);
  let late = false;
  const timer = setTimeout(() => {
    late = true;
    child.kill('SIGKILL');
  }, 10_000);
  await gone;
  clearTimeout(timer);
  if (late) throw new Error(`${child.spawnargs.join(' ')} did not end within 10 s of ${signal}`);
}

/** Starts the built server (`npm run build` comes first) on a free loopback port, as `npm start` would. */
export async function startServer(options: ServerOptions = {}): Promise<RunningServer> {
  const database = options.database ?? (await freshDatabase());
  const port = await freePort();
  const url = `http://127.0.0.1:${port}`;
  let output = '';
  let children: readonly ChildProcess[] = [];

  const launch = (program: string): ChildProcess => {
    const child = spawn(process.execPath, [join(root, 'dist', 'server', `${program}.js`)], {
      cwd: root,
      env: {
        PATH: process.env.PATH,
        HOME: process.env.HOME,
        DATABASE_URL: database.url,
        HOST: '127.0.0.1',
        PORT: String(port),
        PUBLIC_URL: url,
        SESSION_SECRET: 'a secret for tests, of thirty-two letters or more',
        FAKES: 'github,mail',
        ...options.settings,
      },
      stdio: ['ignore', 'pipe', 'pipe'],
    });
    for (const stream of [child.stdout, child.stderr])
      stream.on('data', (piece: Buffer) => (output += piece.toString()));
    return child;
  };

  const up = async (): Promise<void> => {
    children = ['index', ...(options.worker ? ['worker'] : [])].map(launch);
    const [web] = children;
    for (let attempt = 0; attempt < 300; attempt += 1) {
      if (web?.exitCode !== null) break;
      const answer = await fetch(url).catch(() => undefined);
      if (answer) return;
      await new Promise((resolve) => setTimeout(resolve, 100));
    }
    await down('SIGKILL');
    throw new Error(`The server does not answer at ${url}. It printed:\n${output}`);
  };

  const down = async (signal: 'SIGTERM' | 'SIGKILL'): Promise<void> => {
    await Promise.all(children.map((child) => end(child, signal)));
  };

  await up();
  return {
    url,
    database,
    output: () => output,
    restart: async (signal = 'SIGTERM') => {
      await down(signal);
      await up();
    },
    stop: async () => {
      try {
        await down('SIGTERM');
      } finally {
        if (!options.database) await database.drop();
      }
    },
  };
}
