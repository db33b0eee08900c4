import { beforeAll, describe, expect, it } from 'vitest';
import { type Client, person, type Server, server, visitor } from './support/client.ts';

let here: Server;
let owner: Client, other: Client;
beforeAll(async () => {
  here = await server({ WRITES_PER_MINUTE: '2000' });
  owner = await person(here, 'rokafor');
  other = await person(here, 'lbrandt');
});

const source = '# Bonds of a ring\nlattice chain torus 8\nspins s on vertices\n\nmodel m = sum(v: vertices) s^x[v]\n';

describe('notebooks', () => {
  it('when one is made, then it is its maker’s, private, with their name and all that an owner may do', async () => {
    const made = await owner.ask('createNotebook', { body: { title: '  Bond \n dictionary ' } });
    expect(made).toMatchObject({
      title: 'Bond dictionary',
      authors: ['R. Okafor'],
      visibility: 'private',
      role: 'owner',
    });
    expect(made.may).toEqual(expect.arrayContaining(['read', 'edit', 'publish', 'invite', 'delete']));
    expect(made.may).not.toContain('judge');
    expect(await other.refused('getNotebook', { params: { notebook: made.id } })).toMatchObject({ status: 404 });
    expect(await visitor(here).refused('getNotebook', { params: { notebook: made.id } })).toMatchObject({
      status: 404,
    });
  });

  it('when it is made public, then all may read and export it; visitors and others differ in what more they may', async () => {
    const { id } = await owner.ask('importNotebook', { body: { source } });
    const params = { notebook: id };
    await owner.ask('setVisibility', { params, body: { visibility: 'public' } });
    const seen = await visitor(here).ask('getNotebook', { params });
    expect(seen).toMatchObject({ title: 'Bonds of a ring', role: null, may: ['visit', 'read', 'export'], links: 0 });
    expect((await other.ask('getNotebook', { params })).may).toEqual([
      'visit',
      'keep',
      'make',
      'account',
      'read',
      'export',
      'fork',
    ]);
    expect(await visitor(here).refused('forkNotebook', { params, body: {} })).toMatchObject({ status: 401 });
    expect(await other.refused('deleteNotebook', { params })).toMatchObject({ status: 403 });
    expect((await visitor(here).ask('listPublic')).items.map((item) => item.id)).toContain(id);
    await owner.ask('setVisibility', { params, body: { visibility: 'private' } });
    expect((await visitor(here).ask('listPublic')).items.map((item) => item.id)).not.toContain(id);
    expect(await other.refused('getNotebook', { params })).toMatchObject({ status: 404 });
  });

  it('when one is exported and imported, then the copy says the same', async () => {
    const one = await owner.ask('importNotebook', { body: { source, title: 'Unused where the text has words' } });
    expect(one.entries.map(({ kind, text }) => [kind, text])).toEqual([
      ['prose', 'Bonds of a ring'],
      ['statements', 'lattice chain torus 8\nspins s on vertices'],
      ['statements', 'model m = sum(v: vertices) s^x[v]'],
    ]);
    await owner.ask('changeNotebook', { params: { notebook: one.id }, body: { title: 'Ring', authors: ['A', 'B'] } });
    const text = await owner.ask('exportNotebook', { params: { notebook: one.id } });
    const two = await other.ask('importNotebook', { body: { source: text } });
    expect(two).toMatchObject({ title: 'Ring', authors: ['A', 'B'] });
    expect(two.entries.map(({ kind, text: own }) => [kind, own])).toEqual(
      one.entries.map(({ kind, text: own }) => [kind, own]),
    );
    expect(await other.ask('exportNotebook', { params: { notebook: two.id } })).toBe(text);
  });

  it('when one is forked, then the copy is one’s own and names its origin to those who may read that', async () => {
    const origin = await owner.ask('importNotebook', { body: { source } });
    const params = { notebook: origin.id };
    await owner.ask('addMember', { params, body: { handle: 'lbrandt', role: 'reader' } });
    const fork = await other.ask('forkNotebook', { params, body: {} });
    expect(fork).toMatchObject({
      role: 'owner',
      origin: { notebook: origin.id, title: 'Bonds of a ring', edition: null },
    });
    expect(fork.entries.map((entry) => entry.text)).toEqual(origin.entries.map((entry) => entry.text));
    expect(fork.entries[0]?.id).not.toBe(origin.entries[0]?.id);
    await other.ask('leaveNotebook', { params });
    expect((await other.ask('getNotebook', { params: { notebook: fork.id } })).origin).toBeNull();
    await owner.ask('deleteNotebook', { params });
    expect((await other.ask('getNotebook', { params: { notebook: fork.id } })).entries).toHaveLength(3);
  });
});

describe('people of a notebook', () => {
  it('when a role is given, changed and taken, then it counts at once', async () => {
    const { id } = await owner.ask('createNotebook', { body: { title: 'People' } });
    const params = { notebook: id };
    const member = await owner.ask('addMember', { params, body: { handle: 'lbrandt', role: 'referee' } });
    expect((await other.ask('getNotebook', { params })).may).toEqual(expect.arrayContaining(['remark', 'judge']));
    const write = { params, body: { kind: 'prose' as const, text: 'x' } };
    expect(await other.refused('insertEntry', write)).toMatchObject({ status: 403 });
    const one = { notebook: id, person: member.person.id };
    await owner.ask('changeMember', { params: one, body: { role: 'coauthor' } });
    await other.ask('insertEntry', write);
    expect((await owner.ask('listMembers', { params })).items.map((item) => item.role)).toEqual(['owner', 'coauthor']);
    await owner.ask('removeMember', { params: one });
    expect(await other.refused('insertEntry', write)).toMatchObject({ status: 404 });
  });

  it('when the owner’s own role is to change or go, then it stays', async () => {
    const { id, owner: me } = await owner.ask('createNotebook', { body: { title: 'Mine' } });
    const one = { notebook: id, person: me.id };
    expect(await owner.refused('changeMember', { params: one, body: { role: 'reader' } })).toMatchObject({
      status: 409,
    });
    expect(await owner.refused('removeMember', { params: one })).toMatchObject({ status: 404 });
    expect(await owner.refused('leaveNotebook', { params: { notebook: id } })).toMatchObject({ status: 403 });
    const asOwner = { params: { notebook: id }, body: { handle: 'lbrandt', role: 'owner' as 'reader' } };
    expect(await owner.refused('addMember', asOwner)).toMatchObject({ status: 400 });
  });

  it('when a handle is nobody’s, then the answer says what to do', async () => {
    const { id } = await owner.ask('createNotebook', { body: { title: 'Nobody' } });
    const problem = await owner.refused('addMember', {
      params: { notebook: id },
      body: { handle: 'none', role: 'reader' },
    });
    expect(problem).toMatchObject({ status: 409 });
    expect(problem.detail).toContain('sign in once');
  });
});

describe('the shelf', () => {
  it('when it is long, then pages follow one another without gap or repetition, newest first', async () => {
    const reader = await person(here, 'dquell');
    for (let n = 0; n < 25; n += 1) await reader.ask('createNotebook', { body: { title: `Notebook ${String(n)}` } });
    const titles: string[] = [];
    let after: string | undefined;
    do {
      const page = await reader.ask('listShelf', { query: { limit: 7, ...(after === undefined ? {} : { after }) } });
      titles.push(...page.items.map((item) => item.title));
      after = page.next ?? undefined;
    } while (after !== undefined);
    expect(titles).toEqual(Array.from({ length: 25 }, (_, n) => `Notebook ${String(24 - n)}`));
  });

  it('when it is searched, then every word counts, signs of patterns stand for themselves, and owners divide it', async () => {
    const reader = await person(here, 'mitsuno');
    await reader.ask('createNotebook', { body: { title: 'Gauging 100% of the flips', authors: ['M. Itsuno'] } });
    const shared = await owner.ask('createNotebook', { body: { title: 'Gauging 1000 flips' } });
    await owner.ask('addMember', { params: { notebook: shared.id }, body: { handle: 'mitsuno', role: 'reader' } });
    const find = async (query: { q?: string; whose?: 'own' | 'shared' }) =>
      (await reader.ask('listShelf', { query })).items.map((item) => item.title);
    expect(await find({ q: 'FLIPS gauging' })).toHaveLength(2);
    expect(await find({ q: '100%' })).toEqual(['Gauging 100% of the flips']);
    expect(await find({ q: 'gauging okafor' })).toEqual(['Gauging 1000 flips']);
    expect(await find({ whose: 'own' })).toEqual(['Gauging 100% of the flips']);
    expect(await find({ whose: 'shared' })).toEqual(['Gauging 1000 flips']);
  });
});
