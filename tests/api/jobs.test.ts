import { beforeAll, describe, expect, it } from 'vitest';
import { startWorker } from '../../server/worker.ts';
import { askedIn } from '../../shared/derivation/asked.ts';
import { newDerivation, type Answers } from '../../shared/derivation/derive.ts';
import type { Job } from '../../shared/contracts/jobs.ts';
import { type Client, person, type Server, server, settingsFor, silent, visitor } from './support/client.ts';

const head = (h: string): string => `lattice chain torus 6
spins s on vertices
couplings J = 1, h = ${h}
model ising = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]
symmetry flip = prod(v: vertices) s^x[v]
`;
const short = (h: string): string => `${head(h)}audit degeneracy ising [flip = +1] on 8`;
/** Many points, so that it takes some seconds and makes checkpoints on its way. */
const long = (h: string): string => `${head(h)}audit scan gap of ising over h = 0.1 .. 2 by 0.001 on 8`;
const named = (source: string): string => askedIn(source)[0]?.question ?? '';

let here: Server;
let one: Client, two: Client;
beforeAll(async () => {
  here = await server({ WRITES_PER_MINUTE: '5000' });
  one = await person(here, 'rokafor');
  two = await person(here, 'lbrandt');
});

const hand = (client: Client, source: string, notebook: string | null = null): Promise<Job> =>
  client.ask('askQuestion', { body: { source, question: named(source), notebook } });
const look = (client: Client, { id }: Job): Promise<Job> => client.ask('getJob', { params: { job: id } });
const pause = (milliseconds: number) => new Promise((resolve) => setTimeout(resolve, milliseconds));

async function until(client: Client, job: Job, is: (now: Job) => boolean): Promise<Job> {
  for (let attempt = 0; attempt < 400; attempt += 1) {
    const now = await look(client, job);
    if (is(now)) return now;
    await pause(100);
  }
  throw new Error(`the job did not come so far: ${JSON.stringify(await look(client, job))}`);
}
const ended = (client: Client, job: Job): Promise<Job> =>
  until(client, job, ({ state }) => state !== 'waiting' && state !== 'working');

async function withWorker(work: () => Promise<void>): Promise<void> {
  const worker = await startWorker(settingsFor(here.databaseUrl), silent);
  try {
    await work();
  } finally {
    await worker.stop();
  }
}

describe('a question that is handed over', () => {
  it('when a worker is there, then its answer is the engine’s own, for everyone who asks the same', async () => {
    const source = short('0.6');
    const job = await hand(one, source);
    expect(job).toMatchObject({ state: 'waiting', audit: 'degeneracy', size: '8', reason: null, notebook: null });
    expect(job.estimate.operations).toBeGreaterThan(0);
    const names = { questions: named(source) };
    expect((await visitor(here).ask('getAnswers', { query: names })).items).toEqual([]);
    await withWorker(async () => {
      expect(await ended(one, job)).toMatchObject({ state: 'done', done: 1, reason: null });
    });
    const { items } = await visitor(here).ask('getAnswers', { query: names });
    const told = newDerivation({ limit: { operations: 1, bytes: 1 } });
    told.learn(Object.fromEntries(items.map((item) => [item.question, item.findings])) as unknown as Answers);
    const [claim] = told.derive(source).claims;
    const [own] = newDerivation().derive(source).claims;
    expect(claim?.grade).toBe('numerical');
    expect(claim?.figures['degeneracy']).toBe(own?.figures['degeneracy']);
    expect(claim?.figures['energy']).toBeCloseTo(Number(own?.figures['energy']), 9);
    // Another person asks the same, with other words around it: no worker is needed any more.
    expect(await hand(two, `# the same\n\n${source}`)).toMatchObject({ state: 'done', done: 1 });
  });

  it('when the source does not ask it, then there is no such question', async () => {
    const body = { source: short('0.6'), question: named(short('0.7')) };
    expect((await one.refused('askQuestion', { body })).status).toBe(404);
    const broken = { source: 'lattice nowhere', question: named(short('0.7')) };
    expect((await one.refused('askQuestion', { body: broken })).status).toBe(404);
  });

  it('when it is larger than workers take, then it is refused with what it would need', async () => {
    const source = `${head('0.6')}audit degeneracy ising on 26`;
    const refused = await one.refused('askQuestion', { body: { source, question: named(source) } });
    expect(refused).toMatchObject({ status: 413, code: 'too-large' });
    const { estimate, limit } = refused as unknown as { estimate: Job['estimate']; limit: { bytes: number } };
    expect(estimate.bytes).toBeGreaterThan(limit.bytes);
    expect(estimate.words).toContain('dimension 67108864');
  });

  it('when it names a notebook that the person may not read, then that notebook is not there', async () => {
    const { id } = await two.ask('createNotebook', { body: { title: 'Private' } });
    const body = { source: short('0.6'), question: named(short('0.6')), notebook: id };
    expect((await one.refused('askQuestion', { body })).status).toBe(404);
  });

  it('when it is someone else’s, then it can be neither seen nor taken back', async () => {
    const job = await hand(one, short('0.61'));
    for (const name of ['getJob', 'cancelJob'] as const)
      expect((await two.refused(name, { params: { job: job.id } })).status).toBe(404);
    expect((await two.ask('listJobs')).items.map(({ id }) => id)).not.toContain(job.id);
    expect((await one.ask('listJobs')).items[0]).toMatchObject({ id: job.id });
  });

  it('when one person asks for more than may wait, then the next is refused', async () => {
    const steward = await here.database.pool.query(
      "insert into limits (name, value) values ('jobsPerPerson', 2) on conflict (name) do update set value = 2",
    );
    expect(steward.rowCount).toBe(1);
    const third = await person(here, 'mitsuno');
    const jobs = [await hand(third, short('0.71')), await hand(third, short('0.72'))];
    const body = { source: short('0.73'), question: named(short('0.73')) };
    expect((await third.refused('askQuestion', { body })).status).toBe(429);
    // What was asked already can be asked again, and what is taken back makes room.
    expect((await hand(third, short('0.72'))).id).toBe(jobs[1]?.id);
    await third.ask('cancelJob', { params: { job: jobs[0]?.id ?? '' } });
    expect((await third.ask('askQuestion', { body })).state).toBe('waiting');
    await here.database.pool.query('delete from limits');
  });
});

describe('a long question', () => {
  it('when it is worked at, then it shows how far it is; when it is taken back, then its worker lets go of it', async () => {
    const job = await hand(one, long('0.62'));
    await withWorker(async () => {
      const going = await until(one, job, ({ done, remainingSeconds }) => done > 0.02 && remainingSeconds !== null);
      expect(going).toMatchObject({ state: 'working', doing: expect.stringContaining('point') as string });
      expect(await one.ask('cancelJob', { params: { job: job.id } })).toMatchObject({ state: 'cancelled' });
      const next = await hand(one, short('0.63'));
      // The worker has one thread for questions: that the next one is answered says that it let go of this one, half way.
      await ended(one, next);
      expect((await look(one, job)).state).toBe('cancelled');
      const { rows } = await here.database.pool.query('select done, findings from questions where name = $1', [
        job.question,
      ]);
      expect((rows[0] as { done: number }).done).toBeLessThan(1);
      expect(rows[0]).toMatchObject({ findings: null });
    });
  });

  it('when two wait for it and one takes it back, then it goes on for the other', async () => {
    const source = short('0.64');
    const [mine, theirs] = [await hand(one, source), await hand(two, source)];
    expect(mine.question).toBe(theirs.question);
    expect((await one.ask('cancelJob', { params: { job: mine.id } })).state).toBe('cancelled');
    await withWorker(async () => {
      expect((await ended(two, theirs)).state).toBe('done');
    });
    // It was taken back all the same; asked for again, it is there.
    expect((await look(one, mine)).state).toBe('cancelled');
    expect(await hand(one, source)).toMatchObject({ id: mine.id, state: 'done' });
  });

  it('when its worker stops, then the next one goes on where it stood', async () => {
    const job = await hand(one, long('0.65'));
    const stored = async (): Promise<number> => {
      const { rows } = await here.database.pool.query<{ points: number | null }>(
        "select json_array_length(checkpoint -> 'grid' -> 'points') as points from questions where name = $1",
        [job.question],
      );
      return rows[0]?.points ?? 0;
    };
    await withWorker(async () => {
      while ((await stored()) === 0) await pause(100);
    });
    const before = await stored();
    expect(await look(one, job)).toMatchObject({ state: 'waiting' });
    await withWorker(async () => {
      const going = await until(one, job, ({ state, done }) => state === 'working' && done > 0);
      expect(going.done).toBeGreaterThanOrEqual((before - 1) / 1901);
      expect(before).toBeGreaterThan(0);
      await one.ask('cancelJob', { params: { job: job.id } });
    });
  });
});

describe('answers in the database', () => {
  it('when an edition asks the same, then its claims are sealed from them; and what it finds answers others', async () => {
    const known = short('0.66');
    const job = await hand(one, known);
    await withWorker(async () => {
      await ended(one, job);
      // A figure that no engine gives shows where the claim came from.
      await here.database.pool.query(
        "update questions set findings = jsonb_set(findings::jsonb, '{0,figures,degeneracy}', '77')::json where name = $1",
        [job.question],
      );
      const fresh = `audit degeneracy ising [flip = -1] on 8`;
      const { id } = await one.ask('importNotebook', { body: { title: 'Both', source: `${known}\n${fresh}` } });
      await one.ask('publishEdition', { params: { notebook: id }, body: { summary: 'First' } });
      const edition = () => one.ask('getEdition', { params: { notebook: id, edition: 1 } });
      while ((await edition()).status === 'computing') await pause(100);
      const sealed = await edition();
      expect(sealed.claims.map(({ figures }) => figures['degeneracy'])).toEqual([77, 1]);
      expect(await hand(two, `${head('0.66')}${fresh}`)).toMatchObject({ state: 'done' });
    });
  });

  it('when someone waits for one at a notebook, then those who have it open are told', async () => {
    const { id } = await one.ask('createNotebook', { body: { title: 'Open' } });
    const stream = await one.fetch(`/api/notebooks/${id}/live`);
    const reader = stream.body?.getReader();
    const job = await hand(one, short('0.67'), id);
    expect(job.notebook).toEqual({ id, title: 'Open' });
    await withWorker(async () => {
      let heard = '';
      while (!heard.includes('event: answer')) {
        const piece = await reader?.read();
        if (piece?.done !== false) throw new Error('the stream ended');
        heard += new TextDecoder().decode(piece.value);
      }
      expect(heard).toContain(job.question);
    });
    await reader?.cancel();
  });
});
