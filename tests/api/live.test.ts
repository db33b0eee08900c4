import { pino } from 'pino';
import { beforeAll, describe, expect, it } from 'vitest';
import { startWeb } from '../../server/index.ts';
import { type LiveEvent, liveEvents } from '../../shared/contracts/notebooks.ts';
import { type Client, person, type Server, server, settingsFor, silent, visitor } from './support/client.ts';

interface Stream {
  /** The next event of a kind, parsed by the contract; fails after ten seconds. */
  readonly next: (event: LiveEvent) => Promise<unknown>;
  /** Resolves when the server ends the stream. */
  readonly ended: Promise<void>;
  readonly stop: () => void;
}

async function listen(client: Client, notebook: string): Promise<Stream> {
  const abort = new AbortController();
  const response = await client.fetch(`/api/notebooks/${notebook}/live`, { signal: abort.signal });
  expect(response.headers.get('content-type')).toMatch(/^text\/event-stream/);
  const waiting: { event: string; resolve: (data: unknown) => void }[] = [];
  const heard: { event: string; data: unknown }[] = [];
  const take = (event: string, data: unknown): void => {
    const at = waiting.findIndex((one) => one.event === event);
    if (at === -1) heard.push({ event, data });
    else waiting.splice(at, 1)[0]?.resolve(data);
  };
  const read = async (): Promise<void> => {
    const decoder = new TextDecoder();
    let rest = '';
    for await (const piece of response.body as unknown as AsyncIterable<Uint8Array>) {
      const parts = (rest + decoder.decode(piece, { stream: true })).split('\n\n');
      rest = parts.pop() ?? '';
      for (const part of parts) {
        const [, event, data] = /^event: (.*)\ndata: (.*)$/.exec(part) ?? [];
        if (event !== undefined) take(event, JSON.parse(data ?? 'null'));
      }
    }
  };
  const ended = read().catch(() => undefined);
  return {
    ended,
    stop: () => abort.abort(),
    next: async (event) => {
      const at = heard.findIndex((one) => one.event === event);
      const late = new Promise<never>((_, reject) => {
        setTimeout(() => reject(new Error(`no ${event} within ten seconds`)), 10_000).unref();
      });
      const data =
        at === -1
          ? await Promise.race([new Promise((resolve) => waiting.push({ event, resolve })), late])
          : heard.splice(at, 1)[0]?.data;
      return liveEvents[event].parse(data);
    },
  };
}

let here: Server;
let owner: Client, coauthor: Client;
beforeAll(async () => {
  here = await server();
  owner = await person(here, 'rokafor');
  coauthor = await person(here, 'lbrandt');
});

async function notebookForTwo(): Promise<{ notebook: string; entry: string }> {
  const entries = [{ kind: 'prose' as const, text: 'a' }];
  const { id, entries: made } = await owner.ask('createNotebook', { body: { title: 'Live', entries } });
  await owner.ask('addMember', { params: { notebook: id }, body: { handle: 'lbrandt', role: 'coauthor' } });
  return { notebook: id, entry: made[0]?.id ?? '' };
}

describe('what happens to a notebook', () => {
  it('when one writes, holds, renames and publishes, then the other hears of each', async () => {
    const at = await notebookForTwo();
    const stream = await listen(coauthor, at.notebook);
    await owner.ask('holdEntry', { params: at });
    expect(await stream.next('hold')).toMatchObject({ entry: at.entry, hold: { by: { handle: 'rokafor' } } });
    await owner.ask('saveEntry', { params: at, version: 1, body: { text: 'b' } });
    expect(await stream.next('entries')).toMatchObject({ entry: at.entry, version: 2 });
    await owner.ask('releaseEntry', { params: at });
    expect(await stream.next('hold')).toEqual({ entry: at.entry, hold: null });
    await owner.ask('changeNotebook', { params: at, body: { title: 'Other' } });
    await stream.next('notebook');
    await owner.ask('publishEdition', { params: at, body: { summary: 'x' } });
    expect(await stream.next('edition')).toEqual({ number: 1, status: 'computing' });
    stream.stop();
  });

  it('when a save is refused, then nobody hears of it', async () => {
    const at = await notebookForTwo();
    const stream = await listen(coauthor, at.notebook);
    await owner.refused('saveEntry', { params: at, version: 7, body: { text: 'b' } });
    await owner.ask('saveEntry', { params: at, version: 1, body: { text: 'c' } });
    expect(await stream.next('entries')).toMatchObject({ version: 2 });
    stream.stop();
  });

  it('when it happens through another server on the same database, then it is heard too', async () => {
    const at = await notebookForTwo();
    const stream = await listen(coauthor, at.notebook);
    const second = await startWeb(settingsFor(here.databaseUrl), silent);
    try {
      const there = await person({ url: `http://127.0.0.1:${String(second.port)}` }, 'rokafor');
      await there.ask('saveEntry', { params: at, version: 1, body: { text: 'b' } });
      expect(await stream.next('entries')).toMatchObject({ entry: at.entry, version: 2 });
    } finally {
      stream.stop();
      await second.stop();
    }
  });

  it('when the connection that listens breaks, then it comes back and says to read again', async () => {
    const at = await notebookForTwo();
    const stream = await listen(coauthor, at.notebook);
    await here.database.pool.query(
      "select pg_terminate_backend(pid) from pg_stat_activity where application_name = 'gaugewright live' and datname = current_database()",
    );
    await stream.next('notebook');
    await owner.ask('saveEntry', { params: at, version: 1, body: { text: 'b' } });
    expect(await stream.next('entries')).toMatchObject({ version: 2 });
    stream.stop();
  });
});

describe('who is there', () => {
  it('when members come and go, then members see it, and visitors of a public notebook do not', async () => {
    const at = await notebookForTwo();
    await owner.ask('setVisibility', { params: at, body: { visibility: 'public' } });
    const one = await listen(owner, at.notebook);
    const names = async () =>
      ((await one.next('present')) as { people: { handle: string }[] }).people.map((p) => p.handle);
    expect(await names()).toEqual(['rokafor']);
    const guest = await listen(visitor(here), at.notebook);
    const two = await listen(coauthor, at.notebook);
    expect(await names()).toEqual(['lbrandt', 'rokafor']);
    two.stop();
    expect(await names()).toEqual(['rokafor']);
    await owner.ask('changeNotebook', { params: at, body: { title: 'x' } });
    await guest.next('notebook');
    await expect(Promise.race([guest.next('present'), Promise.resolve('nothing')])).resolves.toBe('nothing');
    one.stop();
    guest.stop();
  });

  it('when a right to read goes, then the stream ends', async () => {
    const at = await notebookForTwo();
    const stream = await listen(coauthor, at.notebook);
    const { items } = await owner.ask('listMembers', { params: at });
    const gone = items.find((member) => member.role === 'coauthor')?.person.id ?? '';
    await owner.ask('removeMember', { params: { ...at, person: gone } });
    await stream.ended;
  });

  it('when the notebook is deleted, then the stream ends', async () => {
    const at = await notebookForTwo();
    const stream = await listen(coauthor, at.notebook);
    await owner.ask('deleteNotebook', { params: at });
    await stream.ended;
  });
});

describe('stopping', () => {
  it('when the server stops, then streams end, nobody stays present, and nothing is written down as a failure', async () => {
    const lines: string[] = [];
    const log = pino({ level: 'warn' }, { write: (line: string) => void lines.push(line) });
    const second = await startWeb(settingsFor(here.databaseUrl), log);
    const at = await notebookForTwo();
    const there = await person({ url: `http://127.0.0.1:${String(second.port)}` }, 'rokafor');
    const stream = await listen(there, at.notebook);
    await stream.next('present');
    await second.stop();
    await stream.ended;
    const { rows } = await here.database.pool.query('select 1 from presences where notebook = $1', [at.notebook]);
    expect(rows).toEqual([]);
    expect(lines.filter((line) => !line.includes('stand-in'))).toEqual([]);
  });
});
