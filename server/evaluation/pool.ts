import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { Worker } from 'node:worker_threads';
import type { Report } from '../../shared/contracts/report.ts';
import type { Results, Said, Task, ThreadProgress } from './task.ts';

/** Thrown where a source could not be evaluated; the message is for people. */
export class EvaluationFailed extends Error {
  /** stopped: the server went down, and it is worth asking again; limit: it never will do. */
  readonly why: 'limit' | 'broken' | 'stopped';
  constructor(why: EvaluationFailed['why'], message: string) {
    super(message);
    this.name = 'EvaluationFailed';
    this.why = why;
  }
}

/** What a pool may use. */
export interface PoolLimits {
  readonly threads: number;
  /** Longest time of one task. */
  readonly seconds: number;
  /** Largest heap of one thread; the kernel's own memory comes to it. */
  readonly memoryMb: number;
}

export interface Watching {
  readonly onProgress?: (progress: ThreadProgress) => void;
  /** Ends the task at once, and the thread with it; it fails as stopped. */
  readonly signal?: AbortSignal;
}

/** Threads that run the engine. A thread that takes too long is killed, whatever it is doing. Tasks wait while all are at work. */
export interface Pool {
  /** The report of one source; throws EvaluationFailed. */
  readonly derive: (source: string) => Promise<Report>;
  /** What a task comes to; throws EvaluationFailed. */
  readonly do: <K extends Task['kind']>(
    task: Extract<Task, { readonly kind: K }>,
    watching?: Watching,
  ) => Promise<Results[K]>;
  /** Kills all threads; what they were at fails, and `why` is stopped. */
  readonly close: () => Promise<void>;
}

interface Waiting {
  readonly task: Task;
  readonly watching: Watching;
  readonly resolve: (said: Said) => void;
  readonly reject: (error: EvaluationFailed) => void;
}

/** The thread's program: beside this file in a checkout (which needs a loader), under evaluation/ beside a bundle. */
function threadFile(): URL {
  if (import.meta.url.endsWith('.ts')) return new URL('./thread-from-source.mjs', import.meta.url);
  const candidates = ['./evaluation/thread.js', '../evaluation/thread.js'].map(
    (path) => new URL(path, import.meta.url),
  );
  const found = candidates.find((url) => existsSync(fileURLToPath(url)));
  if (found === undefined) throw new Error('the program of the evaluation threads was not built');
  return found;
}

export function openPool(limits: PoolLimits, program: URL = threadFile()): Pool {
  const idle: Worker[] = [];
  const stops = new Set<() => void>();
  const queue: Waiting[] = [];
  let busy = 0;
  let closed = false;

  const thread = (): Worker =>
    idle.pop() ?? new Worker(program, { resourceLimits: { maxOldGenerationSizeMb: limits.memoryMb } });

  const next = (): void => {
    while (busy < limits.threads) {
      const waiting = queue.shift();
      if (waiting === undefined) return;
      busy += 1;
      void run(thread(), waiting).then(() => {
        busy -= 1;
        next();
      });
    }
  };

  /** One question to one thread; the thread is kept if it answered, else killed. Never rejects. */
  const run = (worker: Worker, { task, watching, resolve, reject }: Waiting): Promise<void> =>
    new Promise((done) => {
      const finish = (keep: boolean, tell: () => void): void => {
        clearTimeout(timer);
        stops.delete(stop);
        watching.signal?.removeEventListener('abort', stop);
        worker.removeAllListeners();
        if (keep && !closed) {
          // An idle thread does not keep the process alive.
          worker.unref();
          idle.push(worker);
          worker.once('error', () => forget(worker));
          worker.once('exit', () => forget(worker));
        } else {
          worker.on('error', () => undefined);
          void worker.terminate();
        }
        tell();
        done();
      };
      const fail = (why: EvaluationFailed['why'], message: string): void =>
        finish(false, () => reject(new EvaluationFailed(why, message)));
      const stop = (): void => fail('stopped', 'The evaluation was stopped.');
      const timer = setTimeout(
        () => fail('limit', `The evaluation took longer than ${String(limits.seconds)} seconds.`),
        limits.seconds * 1000,
      );
      stops.add(stop);
      if (watching.signal?.aborted === true) return stop();
      watching.signal?.addEventListener('abort', stop);
      worker.ref();
      worker.removeAllListeners();
      worker.on('message', (said: Said) => {
        if ('progress' in said) watching.onProgress?.(said.progress);
        else if ('failure' in said) fail('broken', said.failure);
        else finish(true, () => resolve(said));
      });
      worker.once('error', (error) => {
        const code = (error as NodeJS.ErrnoException).code;
        if (code === 'ERR_WORKER_OUT_OF_MEMORY') {
          fail('limit', `The evaluation needed more than ${String(limits.memoryMb)} MB of memory.`);
        } else fail('broken', `The engine broke down: ${error instanceof Error ? error.message : String(error)}`);
      });
      worker.once('exit', () => fail('broken', 'The engine ended without an answer.'));
      // A report that would take too long is cut short in good order, before its thread is killed.
      worker.postMessage(task.kind === 'derive' ? { ...task, seconds: limits.seconds } : task);
    });

  const forget = (worker: Worker): void => {
    const at = idle.indexOf(worker);
    if (at !== -1) idle.splice(at, 1);
  };

  const ask = (task: Task, watching: Watching): Promise<Said> =>
    new Promise((resolve, reject) => {
      if (closed) reject(new EvaluationFailed('stopped', 'The server was stopped meanwhile.'));
      else {
        queue.push({ task, watching, resolve, reject });
        next();
      }
    });
  // The kind of a task decides what is said to it.
  const perform: Pool['do'] = async (task, watching = {}) => (await ask(task, watching)) as never;

  return {
    do: perform,
    derive: async (source) => (await perform({ kind: 'derive', source })).report,
    close: async () => {
      closed = true;
      for (const { reject } of queue.splice(0)) reject(new EvaluationFailed('stopped', 'The server was stopped.'));
      for (const stop of [...stops]) stop();
      await Promise.all(idle.splice(0).map((worker) => worker.terminate()));
    },
  };
}
