import { randomUUID } from 'node:crypto';
import { beforeAll, beforeEach, describe, expect, it } from 'vitest';
import type { Notebook } from '../../shared/contracts/notebooks.ts';
import { type Client, person, type Server, server } from './support/client.ts';

let here: Server;
let owner: Client, coauthor: Client;
let notebook: Notebook;

const first = () => ({ notebook: notebook.id, entry: notebook.entries[0]?.id ?? '' });
const texts = async () =>
  (await owner.ask('getNotebook', { params: { notebook: notebook.id } })).entries.map((e) => e.text);

beforeAll(async () => {
  here = await server();
  owner = await person(here, 'rokafor');
  coauthor = await person(here, 'lbrandt');
});

beforeEach(async () => {
  const entries = ['a', 'b', 'c'].map((text) => ({ kind: 'statements' as const, text }));
  notebook = await owner.ask('createNotebook', { body: { title: 'Bonds', entries } });
  await owner.ask('addMember', { params: { notebook: notebook.id }, body: { handle: '@LBrandt', role: 'coauthor' } });
});

describe('saving an entry', () => {
  it('when the version is current, then the text is saved under the next one', async () => {
    const saved = await owner.ask('saveEntry', { params: first(), version: 1, body: { text: 'a2' } });
    expect(saved).toMatchObject({ text: 'a2', version: 2, changedBy: { handle: 'rokafor' } });
    expect(await texts()).toEqual(['a2', 'b', 'c']);
  });

  it('when two save from one version, then the second is told, with both texts, and nothing is lost', async () => {
    await owner.ask('saveEntry', { params: first(), version: 1, body: { text: 'mine' } });
    const problem = await coauthor.refused('saveEntry', { params: first(), version: 1, body: { text: 'theirs' } });
    expect(problem).toMatchObject({
      status: 412,
      code: 'changed-meanwhile',
      yours: { text: 'theirs', version: 1 },
      theirs: { text: 'mine', version: 2 },
    });
    expect(await texts()).toEqual(['mine', 'b', 'c']);
  });

  it('when many save from one version at once, then exactly one is saved', async () => {
    const tries = Array.from({ length: 8 }, (_, n) =>
      owner.fetch(`/api/notebooks/${notebook.id}/entries/${first().entry}`, {
        method: 'PUT',
        headers: { 'x-gaugewright': '1', 'If-Match': '"1"', 'Content-Type': 'application/json' },
        body: JSON.stringify({ text: `text ${String(n)}` }),
      }),
    );
    const statuses = (await Promise.all(tries)).map((response) => response.status).sort();
    expect(statuses).toEqual([200, ...Array<number>(7).fill(412)]);
  });

  it('when an answer was lost and the same is saved again, then that is no conflict', async () => {
    for (let n = 0; n < 2; n += 1) {
      const saved = await owner.ask('saveEntry', { params: first(), version: 1, body: { text: 'a2' } });
      expect(saved.version).toBe(2);
    }
  });

  it('when no version is named, then it is asked for', async () => {
    const problem = await owner.refused('saveEntry', { params: first(), body: { text: 'x' } });
    expect(problem).toMatchObject({ status: 428, code: 'version-needed' });
  });

  it('when the entry was deleted meanwhile, then the text comes back', async () => {
    await coauthor.ask('deleteEntry', { params: first() });
    const problem = await owner.refused('saveEntry', { params: first(), version: 1, body: { text: 'mine' } });
    expect(problem).toMatchObject({ status: 412, yours: { text: 'mine' }, theirs: null });
  });

  it('when the entry is one of another notebook, then it is not reached', async () => {
    const stranger = await person(here, 'dquell');
    const own = await stranger.ask('createNotebook', { body: { title: 'Other' } });
    const params = { notebook: own.id, entry: first().entry };
    const problem = await stranger.refused('saveEntry', { params, version: 1, body: { text: 'x' } });
    expect(problem).toMatchObject({ status: 412, theirs: null });
    expect(await stranger.refused('deleteEntry', { params })).toMatchObject({ status: 404 });
    expect(await stranger.refused('holdEntry', { params })).toMatchObject({ status: 404 });
    expect(await texts()).toEqual(['a', 'b', 'c']);
  });

  it('when the text is too long for an entry, then it is refused with the bound', async () => {
    const problem = await owner.refused('saveEntry', {
      params: first(),
      version: 1,
      body: { text: 'x'.repeat(200_001) },
    });
    expect(problem).toMatchObject({ status: 400, code: 'bad-input' });
    expect(problem.detail).toContain('200000');
  });

  it('when entries together are too long for a notebook, then the one that is too much is refused', async () => {
    const text = 'x'.repeat(200_000);
    const insert = { params: { notebook: notebook.id }, body: { kind: 'prose' as const, text } };
    for (let n = 0; n < 4; n += 1) await owner.ask('insertEntry', insert);
    expect(await owner.refused('insertEntry', { ...insert, body: { kind: 'prose', text } })).toMatchObject({
      status: 413,
    });
  });
});

describe('order', () => {
  const insert = (text: string, before: string | null, id?: string) =>
    owner.ask('insertEntry', {
      params: { notebook: notebook.id },
      body: { kind: 'prose', text, before, ...(id === undefined ? {} : { id }) },
    });

  it('when entries are inserted before others and at the end, then they stand there', async () => {
    await insert('0', first().entry);
    await insert('z', null);
    await insert('m', notebook.entries[1]?.id ?? '');
    expect(await texts()).toEqual(['0', 'a', 'm', 'b', 'c', 'z']);
  });

  it('when very many are inserted at one place, then the order holds', async () => {
    const expected: string[] = [];
    for (let n = 0; n < 15; n += 1) {
      await insert(String(n), first().entry);
      expected.push(String(n));
    }
    expect(await texts()).toEqual([...expected, 'a', 'b', 'c']);
  });

  it('when one is inserted twice under one id, then it stands once', async () => {
    const id = randomUUID();
    const [one, two] = [await insert('once', null, id), await insert('once', null, id)];
    expect([one.id, two.id]).toEqual([id, id]);
    expect(await texts()).toEqual(['a', 'b', 'c', 'once']);
  });

  it('when entries are moved, then the answer is the new order', async () => {
    const [a, b, c] = notebook.entries.map((entry) => entry.id);
    const move = (entry = '', before: string | null = null) =>
      owner.ask('moveEntry', { params: { notebook: notebook.id, entry }, body: { before } });
    expect(await move(c, a)).toEqual({ order: [c, a, b] });
    expect(await move(c)).toEqual({ order: [a, b, c] });
    expect(await move(b, b)).toEqual({ order: [a, b, c] });
    const gone = await owner.refused('moveEntry', {
      params: { notebook: notebook.id, entry: a ?? '' },
      body: { before: randomUUID() },
    });
    expect(gone).toMatchObject({ status: 409 });
  });

  it('when an entry is deleted and restored, then it stands where it stood, with what it said', async () => {
    const params = { notebook: notebook.id, entry: notebook.entries[1]?.id ?? '' };
    await owner.ask('deleteEntry', { params });
    expect(await texts()).toEqual(['a', 'c']);
    for (let n = 0; n < 12; n += 1) await insert(`i${String(n)}`, notebook.entries[2]?.id ?? '');
    const { entry, order } = await owner.ask('restoreEntry', { params });
    expect([entry.text, order[1]]).toEqual(['b', params.entry]);
    expect((await texts()).slice(0, 3)).toEqual(['a', 'b', 'i0']);
  });
});

describe('holds', () => {
  it('when someone writes in an entry, then others see who, and cannot save or delete it', async () => {
    const hold = await owner.ask('holdEntry', { params: first() });
    expect(hold.by.handle).toBe('rokafor');
    expect(new Date(hold.until).getTime()).toBeGreaterThan(Date.now());
    const seen = await coauthor.ask('getNotebook', { params: { notebook: notebook.id } });
    expect(seen.entries[0]?.hold?.by.handle).toBe('rokafor');
    for (const problem of [
      await coauthor.refused('holdEntry', { params: first() }),
      await coauthor.refused('saveEntry', { params: first(), version: 1, body: { text: 'x' } }),
      await coauthor.refused('deleteEntry', { params: first() }),
    ]) {
      expect(problem).toMatchObject({ status: 423, code: 'held', hold: { by: { handle: 'rokafor' } } });
    }
    await owner.ask('saveEntry', { params: first(), version: 1, body: { text: 'a2' } });
  });

  it('when it is renewed, then it lasts longer; when it is given up or its time is over, then others can have it', async () => {
    const one = await owner.ask('holdEntry', { params: first() });
    const two = await owner.ask('holdEntry', { params: first() });
    expect(new Date(two.until).getTime()).toBeGreaterThanOrEqual(new Date(one.until).getTime());
    await coauthor.ask('releaseEntry', { params: first() });
    expect(await coauthor.refused('holdEntry', { params: first() })).toMatchObject({ status: 423 });
    await owner.ask('releaseEntry', { params: first() });
    expect((await coauthor.ask('holdEntry', { params: first() })).by.handle).toBe('lbrandt');
    await here.database.pool.query("update holds set until = now() - interval '1 second' where entry = $1", [
      first().entry,
    ]);
    expect((await owner.ask('holdEntry', { params: first() })).by.handle).toBe('rokafor');
  });

  it('when two ask at once, then one of them has it', async () => {
    const ask = (client: Client) =>
      client.fetch(`/api/notebooks/${notebook.id}/entries/${first().entry}/hold`, {
        method: 'PUT',
        headers: { 'x-gaugewright': '1' },
      });
    const answers = await Promise.all([ask(owner), ask(coauthor)]);
    expect(answers.map((answer) => answer.status).sort()).toEqual([200, 423]);
  });
});
