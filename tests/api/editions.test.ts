import { createHash } from 'node:crypto';
import { beforeAll, describe, expect, it } from 'vitest';
import { canonical } from '../../shared/contracts/canonical.ts';
import type { Report } from '../../shared/contracts/report.ts';
import { EvaluationFailed, type Pool } from '../../server/evaluation/pool.ts';
import { sealEditionJob } from '../../server/services/sealing.ts';
import { type Client, person, type Server, server, visitor } from './support/client.ts';

let here: Server;
let owner: Client;
beforeAll(async () => {
  here = await server();
  owner = await person(here, 'rokafor');
});

/** A report with one claim, about the line that holds the word audit; what an engine would give, without one. */
const report = (text: string): Report => ({
  format: 'gaugewright-report/1',
  engine: 'test',
  problems: [],
  lattice: null,
  models: {},
  declarations: [],
  claims: [
    {
      line: text.split('\n').findIndex((line) => line.startsWith('audit')) + 1,
      audit: 'commute',
      subject: 'm',
      statement: 'm commutes with G',
      tex: '$m$ commutes with $G$',
      grade: 'proved',
      figures: { terms: 2, commuting: 2 },
      witness: {},
      cautions: ['c'],
      sources: [],
    },
  ],
});

const poolOf = (derive: (text: string) => Promise<Report>): Pool => ({
  derive,
  // The kind of a task decides what is said to it.
  do: async (task) => (task.kind === 'list' ? { asked: [] } : { report: await derive(task.source) }) as never,
  close: () => Promise.resolve(),
});
const answering = poolOf((text) => Promise.resolve(report(text)));

async function notebookOf(texts: readonly string[]): Promise<string> {
  const entries = texts.map((text) => ({
    kind: text.startsWith('audit') ? ('statements' as const) : ('prose' as const),
    text,
  }));
  return (await owner.ask('createNotebook', { body: { title: 'Bonds', entries } })).id;
}

const publish = (notebook: string, summary = 'First') =>
  owner.ask('publishEdition', { params: { notebook }, body: { summary } });

async function idOf(notebook: string, number: number): Promise<string> {
  const { rows } = await here.database.pool.query<{ id: string }>(
    'select id from editions where notebook = $1 and number = $2',
    [notebook, number],
  );
  return rows[0]?.id ?? '';
}

describe('publishing', () => {
  it('when a notebook is published, then the edition is numbered, hashed by its content and waits for its claims', async () => {
    const notebook = await notebookOf(['words\nmore', 'audit commute m with G']);
    expect(await publish(notebook)).toMatchObject({ number: 1, status: 'computing', engine: null, grades: {} });
    const edition = await owner.ask('getEdition', { params: { notebook, edition: 1 } });
    const hash = createHash('sha256').update(canonical(edition.content)).digest('hex');
    expect(edition.hash).toBe(hash);
    expect(edition.content.entries.map((entry) => entry.text)).toEqual(['words\nmore', 'audit commute m with G']);
  });

  it('when the same words are published elsewhere, then the hash is the same; when one sign differs, then not', async () => {
    const hashes = [];
    for (const word of ['words', 'words', 'wordz']) hashes.push((await publish(await notebookOf([word]))).hash);
    expect(hashes[0]).toBe(hashes[1]);
    expect(hashes[2]).not.toBe(hashes[0]);
  });

  it('when nothing changed, then there is no second edition; when something did, then the first stands as it was', async () => {
    const notebook = await notebookOf(['words']);
    const one = await publish(notebook);
    const again = await owner.refused('publishEdition', { params: { notebook }, body: { summary: 'Again' } });
    expect(again).toMatchObject({ status: 409, edition: 1 });
    const { entries } = await owner.ask('getNotebook', { params: { notebook } });
    const params = { notebook, entry: entries[0]?.id ?? '' };
    await owner.ask('saveEntry', { params, version: 1, body: { text: 'other words' } });
    expect(await publish(notebook, 'Second')).toMatchObject({ number: 2 });
    const first = await owner.ask('getEdition', { params: { notebook, edition: 1 } });
    expect([first.hash, first.content.entries[0]?.text]).toEqual([one.hash, 'words']);
    const list = await owner.ask('listEditions', { params: { notebook }, query: { limit: 1 } });
    expect([list.items[0]?.number, list.next]).toEqual([2, '2']);
    const rest = await owner.ask('listEditions', { params: { notebook }, query: { limit: 1, after: '2' } });
    expect([rest.items[0]?.number, rest.next]).toEqual([1, null]);
    expect(await owner.ask('exportEdition', { params: { notebook, edition: 1 } })).toContain('#: words');
  });

  it('when two publish at once, then numbers have no gap and no double', async () => {
    const notebook = await notebookOf(['words']);
    const publishRaw = () =>
      owner.fetch(`/api/notebooks/${notebook}/editions`, {
        method: 'POST',
        headers: { 'x-gaugewright': '1', 'Content-Type': 'application/json' },
        body: '{"summary":"x"}',
      });
    const answers = await Promise.all([publishRaw(), publishRaw(), publishRaw()]);
    expect(answers.map((answer) => answer.status).sort()).toEqual([201, 409, 409]);
  });

  it('when the notebook is empty, then there is nothing to publish', async () => {
    const problem = await owner.refused('publishEdition', {
      params: { notebook: await notebookOf([]) },
      body: { summary: 'x' },
    });
    expect(problem).toMatchObject({ status: 409 });
  });

  it('when the database is told to change a published edition, then it refuses', async () => {
    const notebook = await notebookOf(['audit commute m with G']);
    await publish(notebook);
    const id = await idOf(notebook, 1);
    const run = (set: string) => here.database.pool.query(`update editions set ${set} where id = $1`, [id]);
    await expect(run("hash = 'x'")).rejects.toThrow('immutable');
    await expect(run("content = '{}'")).rejects.toThrow('immutable');
    await sealEditionJob(here.database, answering, id);
    await expect(run("report = '{}'")).rejects.toThrow('sealed');
    await expect(run("status = 'failed'")).rejects.toThrow('sealed');
    const claims = (what: string) => here.database.pool.query(`${what} where edition = $1`, [id]);
    await expect(claims("update claims set grade = 'refuted'")).rejects.toThrow('sealed');
  });
});

describe('sealing', () => {
  it('when the job runs, then claims, engine and report are sealed together, each claim at its entry', async () => {
    const notebook = await notebookOf(['words', 'audit commute m with G']);
    await publish(notebook);
    await sealEditionJob(here.database, answering, await idOf(notebook, 1));
    const edition = await owner.ask('getEdition', { params: { notebook, edition: 1 } });
    expect(edition).toMatchObject({ status: 'sealed', engine: 'test', grades: { proved: 1 } });
    expect(edition.claims).toHaveLength(1);
    expect(edition.claims[0]).toMatchObject({
      entry: edition.entryIds[1],
      entryLine: 1,
      grade: 'proved',
      cautions: ['c'],
    });
    expect(edition.report?.claims).toHaveLength(1);
  });

  it('when the job runs twice, also at once, then the claims are there once', async () => {
    const notebook = await notebookOf(['audit commute m with G']);
    await publish(notebook);
    const id = await idOf(notebook, 1);
    await Promise.all([1, 2, 3].map(() => sealEditionJob(here.database, answering, id)));
    await sealEditionJob(here.database, answering, id);
    expect((await owner.ask('getEdition', { params: { notebook, edition: 1 } })).claims).toHaveLength(1);
  });

  it('when the engine meets its limit, then the edition says why, and can be asked for again', async () => {
    const notebook = await notebookOf(['audit commute m with G']);
    await publish(notebook);
    const id = await idOf(notebook, 1);
    const params = { notebook, edition: 1 };
    expect(await owner.refused('evaluateEdition', { params })).toMatchObject({ status: 409 });
    const limited = poolOf(() => Promise.reject(new EvaluationFailed('limit', 'It took longer than 1 second.')));
    await sealEditionJob(here.database, limited, id);
    expect(await owner.ask('getEdition', { params })).toMatchObject({
      status: 'failed',
      reason: 'It took longer than 1 second.',
    });
    expect(await owner.ask('evaluateEdition', { params })).toMatchObject({ status: 'computing', reason: null });
    await sealEditionJob(here.database, answering, id);
    expect(await owner.ask('getEdition', { params })).toMatchObject({ status: 'sealed', reason: null });
  });

  it('when the server stops meanwhile, then the edition waits; when the process dies each time, then that ends', async () => {
    const notebook = await notebookOf(['audit commute m with G']);
    await publish(notebook);
    const id = await idOf(notebook, 1);
    const params = { notebook, edition: 1 };
    const stopped = poolOf(() => Promise.reject(new EvaluationFailed('stopped', 'stopped')));
    for (let n = 0; n < 5; n += 1) await expect(sealEditionJob(here.database, stopped, id)).rejects.toThrow('stopped');
    expect((await owner.ask('getEdition', { params })).status).toBe('computing');
    const crash = poolOf(() => Promise.reject(new Error('as if the process had ended here')));
    for (let n = 0; n < 3; n += 1) await expect(sealEditionJob(here.database, crash, id)).rejects.toThrow('ended here');
    await sealEditionJob(here.database, answering, id);
    expect((await owner.ask('getEdition', { params })).status).toBe('failed');
  });
});

describe('share links', () => {
  it('when a link is made, then whoever has it reads that edition and nothing else, until it is revoked', async () => {
    const notebook = await notebookOf(['words']);
    const params = { notebook };
    await publish(notebook);
    const link = await owner.ask('createLink', { params, body: { edition: 1 } });
    const guest = visitor(here);
    const linked = { params: { token: link.token } };
    expect((await guest.ask('getLinked', linked)).content.entries[0]?.text).toBe('words');
    expect(await guest.ask('exportLinked', linked)).toContain('#: words');
    expect(await guest.refused('getNotebook', { params })).toMatchObject({ status: 404 });
    expect((await owner.ask('getNotebook', { params })).links).toBe(1);
    expect((await owner.ask('listLinks', { params })).items).toEqual([link]);
    await owner.ask('revokeLink', { params: { notebook, link: link.id } });
    expect(await guest.refused('getLinked', linked)).toMatchObject({ status: 404 });
    expect(await owner.refused('revokeLink', { params: { notebook, link: link.id } })).toMatchObject({ status: 404 });
  });

  it('when a link or an edition is not of this notebook, then it is not reached', async () => {
    const [one, two] = [await notebookOf(['a']), await notebookOf(['b'])];
    await publish(one);
    const link = await owner.ask('createLink', { params: { notebook: one }, body: { edition: 1 } });
    expect(await owner.refused('revokeLink', { params: { notebook: two, link: link.id } })).toMatchObject({
      status: 404,
    });
    expect(await owner.refused('createLink', { params: { notebook: two }, body: { edition: 1 } })).toMatchObject({
      status: 404,
    });
  });
});
