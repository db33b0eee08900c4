import { beforeAll, describe, expect, it } from 'vitest';
import { type Client, person, type Server, server, visitor } from './support/client.ts';

let here: Server;
let owner: Client;
beforeAll(async () => {
  here = await server({ WRITES_PER_MINUTE: '5000', REQUESTS_PER_MINUTE: '50000' });
  owner = await person(here, 'rokafor');
});

const source = `lattice chain torus 4
spins s on vertices
model ring = - sum(l: links) s^z[l.a] s^z[l.b]
map turn = circuit
  h s[v] for v: vertices`;
const make = (title: string, text = source) =>
  owner.ask('createNotebook', { body: { title, entries: [{ kind: 'statements', text }] } });

describe('files', () => {
  it('when an edition is asked for in a format, then it comes as a file of that kind', async () => {
    const { id: notebook } = await make('Ring, turned');
    await owner.ask('publishEdition', { params: { notebook }, body: { summary: 'First' } });
    const get = (format: string, query = '') =>
      owner.fetch(`/api/notebooks/${notebook}/editions/1/exports/${format}${query}`);
    const csv = await get('pauli-csv', '?of=ring&size=3');
    expect(csv.headers.get('content-type')).toBe('text/csv; charset=utf-8');
    expect(csv.headers.get('content-disposition')).toBe('attachment; filename="ring-turned-edition-1.csv"');
    expect((await csv.text()).split('\r\n').filter((line) => /^-?1,/.test(line))).toHaveLength(3);
    expect(await (await get('openqasm')).text()).toContain('h q[3];');
    expect(await (await get('matrix-market')).text()).toMatch(/^%%MatrixMarket matrix coordinate real symmetric\n/);
    expect(await (await get('bibtex')).text()).toContain(`/notebooks/${notebook}/editions/1}`);
    expect(await (await get('cff')).text()).toMatch(/^cff-version: 1\.2\.0\n/);
    expect((await get('pauli-csv', '?of=none')).status).toBe(400);
    expect((await get('article')).status).toBe(409);
    expect((await get('poem')).status).toBe(404);
    const { token } = await owner.ask('createLink', { params: { notebook }, body: { edition: 1 } });
    const linked = (format: string) => visitor(here).fetch(`/api/linked/${token}/exports/${format}`);
    expect(await (await linked('gw')).text()).toContain('model ring');
    expect((await linked('annotations')).status).toBe(403);
  });

  it('when a file is looked at, then its faults and problems are told by line, and nothing is stored', async () => {
    const seen = await owner.ask('previewImport', {
      body: { source: '# Title\n\nlattice square torus 3 x 3\nmodel m = q' },
    });
    expect(seen).toMatchObject({ form: 'gw', title: 'Title', faults: [] });
    expect(seen.problems[0]).toMatchObject({ entry: 1, line: 2 });
    const wrong = { body: { source: '{\n "format": 3 }' } };
    expect((await owner.ask('previewImport', wrong)).faults[0]).toMatchObject({ line: 2 });
    expect(await owner.refused('importNotebook', wrong)).toMatchObject({ status: 400, places: [{ line: 2 }, {}, {}] });
    expect((await owner.ask('listShelf', { query: { q: 'Title' } })).items).toEqual([]);
    const made = await owner.ask('importNotebook', { body: { source: '1,X0 X1\n-0.5,Z0', title: 'From strings' } });
    expect([made.title, made.entries.length]).toEqual(['From strings', 2]);
    expect(await visitor(here).ask('getNotebookSchema')).toMatchObject({ type: 'object' });
  });
});

describe('finding', () => {
  const titles = async (client: Client, query: object) =>
    (await client.ask('listShelf', { query })).items.map(({ title }) => title);

  it('when words stand in title, prose, names or operators, then the notebook is found; by lattice and map too', async () => {
    const finder = await person(here, 'lbrandt');
    const add = (title: string, kind: 'prose' | 'statements', text: string) =>
      finder.ask('createNotebook', { body: { title, authors: ['Ines Valdek'], entries: [{ kind, text }] } });
    await add('Alpha', 'prose', 'Where the monopoles are.');
    await add('Beta', 'statements', source);
    await add('Gamma', 'statements', 'lattice kagome torus 2 x 2\nspins τ on links\nmap d from τ to τ');
    expect(await titles(finder, { q: 'monopol' })).toEqual(['Alpha']);
    expect(await titles(finder, { q: 's^z[l.a]' })).toEqual(['Beta']);
    expect(await titles(finder, { q: 's^z[l.b] valdek' })).toEqual(['Beta']);
    expect(await titles(finder, { q: 's^y[l.b]' })).toEqual([]);
    expect(await titles(finder, { q: '=>' })).toEqual([]);
    expect(await titles(finder, { lattice: 'kagome' })).toEqual(['Gamma']);
    expect(await titles(finder, { map: 'circuit' })).toEqual(['Beta']);
    expect(await titles(finder, { map: 'dictionary' })).toEqual(['Gamma']);
    expect(await titles(finder, { map: 'gauging' })).toEqual([]);
    expect(await titles(finder, { grade: 'proved' })).toEqual([]);
    // Quotes and backslashes are words like any others.
    for (const q of ["it's", '\\', "a':*|b", '%', '_']) expect(await titles(finder, { q })).toEqual([]);
  });

  it('when a notebook is put off the shelf or into the bin, then it is there and comes back; others find it nowhere', async () => {
    const keeper = await person(here, 'mitsuno');
    const { id: notebook } = await keeper.ask('createNotebook', { body: { title: 'Kept' } });
    const params = { notebook };
    await keeper.ask('archiveNotebook', { params, body: { archived: true } });
    expect([await titles(keeper, {}), await titles(keeper, { state: 'archived' })]).toEqual([[], ['Kept']]);
    await keeper.ask('archiveNotebook', { params, body: { archived: false } });
    await keeper.ask('publishEdition', { params, body: { summary: 'x' } }).catch(() => undefined);
    await keeper.ask('deleteNotebook', { params });
    expect(await keeper.refused('getNotebook', { params })).toMatchObject({ status: 404 });
    expect((await keeper.ask('listBin')).items.map(({ id }) => id)).toEqual([notebook]);
    expect((await owner.ask('listBin')).items).toEqual([]);
    expect(await owner.refused('restoreNotebook', { params: { binned: notebook } })).toMatchObject({ status: 404 });
    expect((await keeper.ask('restoreNotebook', { params: { binned: notebook } })).title).toBe('Kept');
    await keeper.ask('deleteNotebook', { params });
    await keeper.ask('emptyBin', { params: { binned: notebook } });
    expect((await keeper.ask('listBin')).items).toEqual([]);
  });
});
