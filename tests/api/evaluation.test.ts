import { readFileSync } from 'node:fs';
import { afterEach, beforeAll, describe, expect, it } from 'vitest';
import { EvaluationFailed, openPool, type Pool } from '../../server/evaluation/pool.ts';
import { openQueue, whileLocked } from '../../server/evaluation/queue.ts';
import { startWorker } from '../../server/worker.ts';
import { joinEntries } from '../../shared/notebook/text.ts';
import { newDerivation } from '../../shared/derivation/derive.ts';
import type { Edition } from '../../shared/contracts/editions.ts';
import { type Client, person, type Server, server, settingsFor, silent } from './support/client.ts';

const program = new URL('./support/thread.mjs', import.meta.url);
const limits = { here: true, threads: 1, seconds: 1, memoryMb: 64 };
let pool: Pool | undefined;
const open = (more: Partial<typeof limits> = {}): Pool => (pool = openPool({ ...limits, ...more }, program));
afterEach(() => pool?.close());

/** What the test thread answers: which source it had, and which thread it is. */
const answer = async (own: Pool, source: string): Promise<{ source: string; thread: number }> =>
  (await own.derive(source)) as unknown as { source: string; thread: number };

const why = (own: Pool, source: string) =>
  own.derive(source).then(
    () => 'answered',
    (error: unknown) => (error instanceof EvaluationFailed ? [error.why, error.message] : error),
  );

describe('threads', () => {
  it('when questions come one after the other, then one thread answers them', async () => {
    const own = open();
    const [one, two] = [await answer(own, 'a'), await answer(own, 'b')];
    expect([one.source, two.source]).toEqual(['a', 'b']);
    expect(two.thread).toBe(one.thread);
  });

  it('when more questions come than there are threads, then all are answered', async () => {
    const own = open({ threads: 2 });
    const sources = Array.from({ length: 9 }, (_, n) => String(n));
    expect((await Promise.all(sources.map((source) => answer(own, source)))).map((one) => one.source)).toEqual(sources);
  });

  it.each([
    ['for ever', 'limit', /longer than 1 second/],
    ['much', 'limit', /more than 64 MB/],
    ['throw', 'broken', /thrown on purpose/],
    ['end', 'broken', /without an answer/],
    ['failure', 'broken', /said on purpose/],
  ])('when a thread is told %j, then the question fails and the next one is answered', async (source, kind, words) => {
    const own = open({ seconds: source === 'for ever' ? 1 : 30 });
    expect(await why(own, source)).toEqual([kind, expect.stringMatching(words)]);
    expect((await answer(own, 'next')).source).toBe('next');
  });

  it('when the pool is closed, then what runs and what waits fails as stopped, and soon', async () => {
    const own = open({ seconds: 600 });
    const both = [why(own, 'for ever'), why(own, 'waiting')];
    await own.close();
    for (const one of await Promise.all(both)) expect(one).toEqual(['stopped', expect.anything()]);
    expect(await why(own, 'late')).toEqual(['stopped', expect.anything()]);
  });
});

describe('an edition and its worker', () => {
  let here: Server;
  let owner: Client;
  beforeAll(async () => {
    here = await server();
    owner = await person(here, 'rokafor');
  });

  const example = (name: string): string => readFileSync(new URL(`../examples/${name}.gw`, import.meta.url), 'utf8');

  async function publish(name: string): Promise<string> {
    const { id } = await owner.ask('importNotebook', { body: { source: example(name) } });
    await owner.ask('publishEdition', { params: { notebook: id }, body: { summary: 'First' } });
    return id;
  }

  async function settled(notebook: string): Promise<Edition> {
    for (let n = 0; n < 250; n += 1) {
      const edition = await owner.ask('getEdition', { params: { notebook, edition: 1 } });
      if (edition.status !== 'computing') return edition;
      await new Promise((resolve) => setTimeout(resolve, 200));
    }
    throw new Error('the claims were not sealed within fifty seconds');
  }

  it('when nobody worked while it was published, then a worker that starts later seals the engine’s own claims', async () => {
    const notebook = await publish('wrong-sign');
    await here.restart();
    expect((await owner.ask('getEdition', { params: { notebook, edition: 1 } })).status).toBe('computing');
    const worker = await startWorker(settingsFor(here.databaseUrl), silent);
    try {
      const edition = await settled(notebook);
      expect(edition).toMatchObject({ status: 'sealed', reason: null });
      // The example keeps every commutator and breaks a product: the two are graded apart.
      expect(edition.grades).toEqual({ proved: 1, refuted: 1 });
      const own = newDerivation().derive(joinEntries(edition.content.entries).text);
      expect(edition.claims.map(({ id: _id, entry: _entry, entryLine: _line, ...claim }) => claim)).toEqual(own.claims);
      const [claim] = edition.claims;
      const at = edition.entryIds.indexOf(claim?.entry ?? '');
      const line = edition.content.entries[at]?.text.split('\n')[(claim?.entryLine ?? 0) - 1];
      expect(line).toBe('audit map wrong');
    } finally {
      await worker.stop();
    }
  });

  it('when the job was lost with its worker, then another worker finds the edition and seals it', async () => {
    const notebook = await publish('wrong-sign');
    await here.database.pool.query('delete from pgboss.job');
    await here.database.pool.query('alter table editions disable trigger user');
    await here.database.pool.query("update editions set published_at = now() - interval '1 minute'");
    await here.database.pool.query('alter table editions enable trigger user');
    const worker = await startWorker(settingsFor(here.databaseUrl), silent);
    try {
      expect((await settled(notebook)).status).toBe('sealed');
    } finally {
      await worker.stop();
    }
  });

  it('when a job is lost but someone is at the edition, then nobody else is sent; when they let go, then someone is', async () => {
    const notebook = await publish('wrong-sign');
    const { rows } = await here.database.pool.query<{ id: string }>('select id from editions where notebook = $1', [
      notebook,
    ]);
    const id = rows[0]?.id ?? '';
    await here.database.pool.query('delete from pgboss.job');
    await here.database.pool.query('alter table editions disable trigger user');
    await here.database.pool.query("update editions set published_at = now() - interval '1 minute'");
    await here.database.pool.query('alter table editions enable trigger user');
    const sent: string[] = [];
    const look = async (): Promise<void> => {
      const queue = await openQueue(here.database, { seconds: 5, supervise: false }, () => undefined);
      await queue.work(1, (edition) => Promise.resolve(void sent.push(edition)));
      await new Promise((resolve) => setTimeout(resolve, 1_500));
      await queue.close();
    };
    await whileLocked(here.database, id, look);
    expect(sent).toEqual([]);
    await look();
    expect(sent).toEqual([id]);
  });
});
