import { beforeAll, describe, expect, it } from 'vitest';
import { readSettings, WrongSettings } from '../../server/settings.ts';
import { type Client, person, type Server, server, visitor } from './support/client.ts';

let here: Server;
let client: Client;
beforeAll(async () => {
  here = await server();
  client = await person(here, 'rokafor');
});

const create = (headers: Record<string, string>) =>
  client.fetch('/api/notebooks', {
    method: 'POST',
    headers: { 'Content-Type': 'application/json', ...headers },
    body: JSON.stringify({ title: 'Bonds', entries: [] }),
  });

describe('requests from elsewhere', () => {
  it.each([
    ['lacks the header', {}],
    ['comes from another site', { 'x-gaugewright': '1', 'Sec-Fetch-Site': 'cross-site' }],
    ['comes from a sibling site', { 'x-gaugewright': '1', 'Sec-Fetch-Site': 'same-site' }],
    ['has a foreign origin', { 'x-gaugewright': '1', Origin: 'https://elsewhere.example' }],
    ['has no origin to speak of', { 'x-gaugewright': '1', Origin: 'null' }],
  ])('when a request that changes something %s, then it is refused and changes nothing', async (_, headers) => {
    const before = (await client.ask('listShelf')).items.length;
    const response = await create(headers);
    expect(response.status).toBe(403);
    expect(response.headers.get('content-type')).toMatch(/^application\/problem\+json/);
    expect((await client.ask('listShelf')).items).toHaveLength(before);
  });

  it('when it comes from our own page, then it is done', async () => {
    expect((await create({ 'x-gaugewright': '1', 'Sec-Fetch-Site': 'same-origin', Origin: here.url })).status).toBe(
      201,
    );
  });
});

describe('problem documents', () => {
  it('when a body is no JSON, too large or wrong, then the document says so and where', async () => {
    const headers = { 'x-gaugewright': '1', 'Content-Type': 'application/json' };
    const send = async (body: string): Promise<unknown> =>
      (await client.fetch('/api/notebooks', { method: 'POST', headers, body })).json();
    expect(await send('{')).toMatchObject({ status: 400, code: 'bad-input' });
    expect(await send(`"${'x'.repeat(6_000_000)}"`)).toMatchObject({ status: 413, code: 'too-large' });
    expect(await send('{"title":"  "}')).toMatchObject({ status: 400, places: [{ path: 'body.title' }] });
    expect(await send('{"title":"a\\u0000b"}')).toMatchObject({ status: 400, places: [{ path: 'body.title' }] });
  });

  it('when nothing is at an address, then a problem says so, with the id of the request', async () => {
    const response = await client.fetch('/api/nothing');
    const problem = (await response.json()) as { instance: string };
    expect(problem).toMatchObject({ status: 404, code: 'not-found', type: 'urn:gaugewright:problem:not-found' });
    expect(problem.instance).toContain(response.headers.get('x-request-id'));
  });

  it('when an id is no id, then it is as if nothing were there', async () => {
    expect(await client.refused('getNotebook', { params: { notebook: 'x' } })).toMatchObject({ status: 404 });
  });
});

describe('headers', () => {
  it('when a page is answered, then its policy allows no foreign or inline script', async () => {
    const response = await visitor(here).fetch(
      '/auth/stand-in/github/login/oauth/authorize?redirect_uri=http://127.0.0.1/',
    );
    const policy = response.headers.get('content-security-policy') ?? '';
    const [, nonce = ''] = /'nonce-([^']+)'/.exec(policy) ?? [];
    expect(policy).toContain("script-src 'self' 'wasm-unsafe-eval';");
    expect(policy).toContain("frame-ancestors 'none'");
    expect(nonce.length).toBeGreaterThan(20);
    expect((await response.text()).replaceAll('&#43;', '+').replaceAll('&#61;', '=')).toContain(`nonce="${nonce}"`);
    expect(response.headers.get('x-content-type-options')).toBe('nosniff');
    expect(response.headers.get('x-powered-by')).toBeNull();
  });

  it('when health is asked for, then it says ok', async () => {
    const response = await visitor(here).fetch('/healthz');
    expect([response.status, await response.json()]).toEqual([200, { status: 'ok' }]);
  });
});

describe('rates', () => {
  it('when someone writes too often, then they wait, others do not, and reading goes on', async () => {
    const slow = await server({ WRITES_PER_MINUTE: '3' });
    const [hasty, calm] = [await person(slow, 'rokafor'), await person(slow, 'lbrandt')];
    const body = { title: 'Bonds' };
    for (let n = 0; n < 3; n += 1) await hasty.ask('createNotebook', { body });
    const problem = await hasty.refused('createNotebook', { body });
    expect(problem).toMatchObject({ status: 429, code: 'too-many' });
    expect(Number(problem.retryAfter)).toBeGreaterThan(0);
    expect((await hasty.ask('listShelf')).items).toHaveLength(3);
    await calm.ask('createNotebook', { body });
  });

  it('when sign-ins come too often from one address, then they are refused', async () => {
    const slow = await server({ SIGN_INS_PER_MINUTE: '2' });
    const client = visitor(slow);
    const statuses: number[] = [];
    for (let n = 0; n < 3; n += 1) statuses.push((await client.fetch('/auth/github')).status);
    expect(statuses).toEqual([302, 302, 429]);
  });
});

describe('settings', () => {
  const good = { DATABASE_URL: 'postgres://a:b@127.0.0.1:1/c', SESSION_SECRET: 'x'.repeat(32) };

  it('when all that is needed is there, then the rest has its standard values and no stand-in runs', () => {
    expect(readSettings(good)).toMatchObject({ mode: 'production', port: 3000, fakes: [], github: null });
  });

  it.each([
    ['nothing is set', {}, ['DATABASE_URL is not set', 'SESSION_SECRET is not set']],
    ['the secret is short', { ...good, SESSION_SECRET: 'short' }, ['SESSION_SECRET: must have 32 characters']],
    ['a stand-in is unknown', { ...good, FAKES: 'github,fax' }, ['FAKES: knows github, mail']],
    [
      'half of the credentials is there',
      { ...good, GITHUB_CLIENT_ID: 'x' },
      ['GITHUB_CLIENT_ID and GITHUB_CLIENT_SECRET'],
    ],
    ['the port is no port', { ...good, PORT: '99999' }, ['PORT: ']],
  ])('when %s, then the start fails and says what is wrong', (_, environment, words) => {
    const read = () => readSettings(environment);
    expect(read).toThrow(WrongSettings);
    for (const word of words) expect(read).toThrow(word);
  });

  it('when real credentials are there, then no stand-in takes their place', () => {
    const real = { ...good, FAKES: 'github,mail', GITHUB_CLIENT_ID: 'x', GITHUB_CLIENT_SECRET: 'y' };
    expect(readSettings(real).fakes).toEqual(['mail']);
  });
});
