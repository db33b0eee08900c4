import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import type { Logger } from 'pino';
import { makeApp } from './app.ts';
import { openDatabase } from './db/connection.ts';
import { openPool, type Pool } from './evaluation/pool.ts';
import { openQueue, type Queue, queueOptions } from './evaluation/queue.ts';
import { speed } from './evaluation/task.ts';
import { openFakeGithub } from './fakes/github.ts';
import { openFakeMail } from './fakes/mail.ts';
import { openLive } from './live.ts';
import { noRoad, openRoad, type Road } from './mail/road.ts';
import { nonceOf } from './middleware/guard.ts';
import { openLog } from './middleware/observe.ts';
import { runProgram, type Undo } from './program.ts';
import type { Questions } from './services/context.ts';
import { openPost } from './services/post.ts';
import { takeWork } from './services/work.ts';
import type { Settings } from './settings.ts';

export interface Running {
  /** The port that the server listens on. */
  readonly port: number;
  readonly stop: () => Promise<void>;
}

/** Starts the web server. What was opened is closed again, in reverse order, by `stop` or when the start fails. */
export async function startWeb(settings: Settings, log: Logger = openLog(settings)): Promise<Running> {
  const undo: Undo = [];
  const trouble = (error: unknown): void => log.warn({ err: error }, 'trouble in the background');
  try {
    const database = openDatabase(settings, trouble);
    undo.push(database.close);
    const { here } = settings.evaluation;
    const queue = await openQueue(database, queueOptions(settings, here), trouble);
    undo.push(queue.close);
    if (here) undo.push((await takeWork(settings, database, queue, trouble)).close);
    const estimating = openPool(estimatingLimits);
    undo.push(estimating.close);
    const live = openLive(database, trouble);
    const fakeGithub = settings.fakes.includes('github') ? await openFakeGithub(nonceOf) : null;
    if (fakeGithub !== null) {
      undo.push(fakeGithub.close);
      log.warn('a stand-in for GitHub signs people in: anyone can be anyone here');
    }
    const fakeMail = settings.mail === null && settings.fakes.includes('mail') ? await openFakeMail(nonceOf) : null;
    if (fakeMail !== null) undo.push(fakeMail.close);
    const road = mailRoad(settings, fakeMail?.url ?? null);
    const house = { mail: road.kind, stewards: settings.stewards };
    const questions = questionsOf(settings, queue, estimating);
    const parts = {
      settings,
      log,
      database,
      live,
      askForClaims: queue.ask,
      questions,
      quick: estimating,
      fakeGithub,
      fakeMail,
      house,
    };
    const app = makeApp(parts);
    const server = createServer(app);
    await listening(server, settings);
    const base = settings.publicUrl ?? addressOf(settings.host, (server.address() as AddressInfo).port);
    undo.push(openPost(database, road, { base, secret: settings.sessionSecret }, trouble).close);
    undo.push(() => closed(server));
    // Ends the streams first: a server waits for its open answers.
    undo.push(live.close);
    const { port } = server.address() as AddressInfo;
    log.info({ port }, 'listening');
    return { port, stop: () => undoAll(undo) };
  } catch (error) {
    await undoAll(undo);
    throw error;
  }
}

/** What a question would cost is told at once, on a thread of its own that is there when it is asked. */
const estimatingLimits = { threads: 1, seconds: 20, memoryMb: 512 };

function questionsOf({ questions }: Settings, queue: Queue, estimating: Pool): Questions {
  return {
    find: async (source, name) =>
      (await estimating.do({ kind: 'list', source })).asked.find(({ question }) => question === name),
    ask: queue.questions.ask,
    limit: { operations: questions.seconds * speed, bytes: questions.memoryMb * 2 ** 20 },
  };
}

/** Where browsers on this machine find the server; one that listens everywhere is found at localhost too. */
function addressOf(host: string, port: number): string {
  const name = ['0.0.0.0', '::', ''].includes(host) ? 'localhost' : host.includes(':') ? `[${host}]` : host;
  return `http://${name}:${String(port)}`;
}

function mailRoad({ mail, mailFrom }: Settings, standIn: string | null): Road {
  if (mail !== null) return openRoad(mail.url, mailFrom, 'smtp');
  return standIn === null ? noRoad : openRoad(standIn, mailFrom, 'stand-in');
}

async function undoAll(undo: Undo): Promise<void> {
  for (const step of undo.splice(0).reverse()) await step();
}

function listening(server: Server, { host, port }: Settings): Promise<void> {
  return new Promise((resolve, reject) => {
    server.once('error', reject);
    server.listen(port, host, () => resolve());
  });
}

/** How long requests in progress may take to end after the server stopped listening. */
const graceMs = 3_000;

function closed(server: Server): Promise<void> {
  return new Promise((resolve) => {
    const late = setTimeout(() => server.closeAllConnections(), graceMs);
    server.close(() => {
      clearTimeout(late);
      resolve();
    });
    server.closeIdleConnections();
  });
}

runProgram(import.meta.url, startWeb);
