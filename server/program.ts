import { realpathSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { readSettings, type Settings, WrongSettings } from './settings.ts';

/** Steps that close what was opened, in the order of opening. */
export type Undo = (() => void | Promise<void>)[];

/** True in the file that Node was started with, and not where it is imported; holds behind symbolic links too. */
function isMain(url: string): boolean {
  const [, program] = process.argv;
  return program !== undefined && url.startsWith('file:') && realpathSync(program) === fileURLToPath(url);
}

/**
 * Runs a program of the server in this process if `url` is its main file: reads the settings, starts, and stops in good order on
 * SIGINT, SIGTERM and SIGHUP. Exit status 1 if it cannot start, 2 if the settings are wrong.
 */
export function runProgram(
  url: string,
  start: (settings: Settings) => Promise<{ readonly stop: () => Promise<void> }>,
): void {
  if (!isMain(url)) return;
  let stopping = false;
  const begun = Promise.resolve().then(() => start(readSettings()));
  begun.catch(giveUp);
  const stop = (): void => {
    if (stopping) return;
    stopping = true;
    begun
      .then((running) => running.stop())
      .then(
        () => process.exit(0),
        (error: unknown) => {
          process.stderr.write(`${explain(error)}\n`);
          process.exit(1);
        },
      );
  };
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, stop);
}

/** Runs a command to its end, if `url` is this process's main file. Exit status as of runProgram. */
export function runOnce(url: string, command: (settings: Settings) => Promise<void>): void {
  if (!isMain(url)) return;
  Promise.resolve()
    .then(() => command(readSettings()))
    .then(() => process.exit(0), giveUp);
}

function giveUp(error: unknown): never {
  process.stderr.write(`${error instanceof WrongSettings ? error.message : explain(error)}\n`);
  process.exit(error instanceof WrongSettings ? 2 : 1);
}

function explain(error: unknown): string {
  const { code, port } = error as { code?: unknown; port?: unknown };
  if (code === 'EADDRINUSE') return `Port ${String(port)} is taken. Choose another by PORT.`;
  return error instanceof Error ? (error.stack ?? error.message) : String(error);
}
