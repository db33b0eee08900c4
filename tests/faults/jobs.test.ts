import { afterAll, beforeAll, expect, it } from 'vitest';
import pg from 'pg';
import { askedIn } from '../../shared/derivation/asked.ts';
import { type RunningServer, startServer } from '../support/server.ts';
import { person } from '../api/support/client.ts';

/** Workers that are killed: no job is lost, and what was measured is not measured again. */

const source = `lattice chain torus 6
spins s on vertices
couplings J = 1, h = 0.6
model ising = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]
audit scan gap of ising over h = 0.1 .. 2 by 0.001 on 8
`;

let server: RunningServer;
let database: pg.Client;
beforeAll(async () => {
  server = await startServer({ worker: true });
  database = new pg.Client({ connectionString: server.database.url });
  await database.connect();
});
afterAll(async () => {
  await database?.end();
  await server?.stop();
});

const pause = (milliseconds: number) => new Promise((resolve) => setTimeout(resolve, milliseconds));

it('when everything is killed while a question is worked at, then it goes on from its checkpoint to its answer', async () => {
  const client = await person(server, 'rokafor');
  const question = askedIn(source)[0]?.question ?? '';
  const { id } = await client.ask('askQuestion', { body: { source, question } });
  const look = () => client.ask('getJob', { params: { job: id } });
  const measured = async (): Promise<number> => {
    const { rows } = await database.query<{ points: number | null }>(
      "select json_array_length(checkpoint -> 'grid' -> 'points') as points from questions where name = $1",
      [question],
    );
    return rows[0]?.points ?? 0;
  };
  while ((await measured()) === 0) await pause(50);
  await server.restart('SIGKILL');
  const kept = await measured();
  expect(kept).toBeGreaterThan(0);
  for (let job = await look(); job.state !== 'done'; job = await look()) {
    expect(job.state).not.toBe('failed');
    await pause(50);
  }
  const { rows } = await database.query<{ points: number; begun: number }>(
    `select json_array_length(findings -> 0 -> 'figures' -> 'points') as points, begun_done as begun
      from questions where name = $1`,
    [question],
  );
  expect(rows[0]?.points).toBe(1901);
  // The attempt that ended it began where the checkpoint stood, with the point after it.
  expect((rows[0]?.begun ?? 0) * 1901).toBeGreaterThanOrEqual(kept - 1);
});
