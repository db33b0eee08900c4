import { pino } from 'pino';
import { afterAll, expect } from 'vitest';
import { startWeb } from '../../../server/index.ts';
import { openDatabase, type Database } from '../../../server/db/connection.ts';
import { readSettings, type Settings } from '../../../server/settings.ts';
import {
  address,
  type Answer,
  type BodyGiven,
  type EndpointName,
  endpoints,
  type ParamsGiven,
  type QueryGiven,
  writeHeader,
} from '../../../shared/contracts/endpoints.ts';
import { type RequestProblem, requestProblemSchema } from '../../../shared/contracts/common.ts';
import { freshDatabase } from '../../support/database.ts';

export const silent = pino({ level: 'silent' });

export function settingsFor(databaseUrl: string, more: Readonly<Record<string, string>> = {}): Settings {
  return readSettings({
    NODE_ENV: 'test',
    DATABASE_URL: databaseUrl,
    PORT: '0',
    SESSION_SECRET: 'a secret for tests, of thirty-two letters or more',
    FAKES: 'github',
    LOG_LEVEL: 'silent',
    ...more,
  });
}

export interface Server {
  readonly url: string;
  readonly databaseUrl: string;
  /** The tests' own connection to the server's database. */
  readonly database: Database;
  /** Stops the web server and starts another on the same database; its address changes. */
  readonly restart: () => Promise<void>;
}

/** A web server on a database of its own, stopped and dropped after the tests of the file. */
export async function server(more: Readonly<Record<string, string>> = {}): Promise<Server> {
  const fresh = await freshDatabase();
  const settings = settingsFor(fresh.url, more);
  let running = await startWeb(settings, silent);
  const database = openDatabase({ databaseUrl: fresh.url, databaseConnections: 4 }, () => undefined);
  afterAll(async () => {
    await running.stop();
    await database.close();
    await fresh.drop();
  });
  return {
    get url() {
      return `http://127.0.0.1:${String(running.port)}`;
    },
    databaseUrl: fresh.url,
    database,
    restart: async () => {
      await running.stop();
      running = await startWeb(settings, silent);
    },
  };
}

export interface Asking<N extends EndpointName> {
  readonly params?: ParamsGiven<N>;
  readonly query?: Partial<QueryGiven<N>>;
  readonly body?: BodyGiven<N>;
  readonly version?: number;
  readonly headers?: Readonly<Record<string, string>>;
}

export interface Client {
  /** Asks a row of the table and reads its answer by the row; fails the test on any other status. */
  readonly ask: <N extends EndpointName>(name: N, asking?: Asking<N>) => Promise<Answer<N>>;
  /** Asks a row that is to be refused: the problem document, checked as one. */
  readonly refused: <N extends EndpointName>(name: N, asking?: Asking<N>) => Promise<RequestProblem>;
  /** Any request, with the cookies of this client. */
  readonly fetch: (path: string, init?: RequestInit) => Promise<Response>;
  readonly cookies: Map<string, string>;
}

/** Someone with cookies of their own, not signed in. */
export function visitor(at: Pick<Server, 'url'>): Client {
  const cookies = new Map<string, string>();
  const send = async (path: string, init: RequestInit = {}): Promise<Response> => {
    const headers = new Headers(init.headers);
    if (cookies.size > 0) headers.set('Cookie', [...cookies].map(([name, value]) => `${name}=${value}`).join('; '));
    const response = await fetch(new URL(path, at.url), { redirect: 'manual', ...init, headers });
    for (const line of response.headers.getSetCookie()) {
      const [pair = ''] = line.split(';');
      const [name = '', value = ''] = pair.split('=');
      if (value === '' || /expires=Thu, 01 Jan 1970/i.test(line)) cookies.delete(name);
      else cookies.set(name, value);
    }
    return response;
  };
  const request = <N extends EndpointName>(name: N, asking: Asking<N> = {}): Promise<Response> => {
    const row = endpoints[name];
    const headers: Record<string, string> = { ...(row.method === 'GET' ? {} : { [writeHeader]: '1' }) };
    if (asking.body !== undefined) headers['Content-Type'] = 'application/json';
    if (asking.version !== undefined) headers['If-Match'] = `"${String(asking.version)}"`;
    return send(address(row, asking.params, asking.query), {
      method: row.method,
      headers: { ...headers, ...asking.headers },
      ...(asking.body === undefined ? {} : { body: JSON.stringify(asking.body) }),
    });
  };
  return {
    cookies,
    fetch: send,
    ask: async <N extends EndpointName>(name: N, asking?: Asking<N>): Promise<Answer<N>> => {
      const row = endpoints[name];
      const response = await request(name, asking);
      const text = await response.text();
      expect(`${String(response.status)} ${response.status === row.status ? '' : text}`).toBe(`${String(row.status)} `);
      if (row.status === 204) return undefined as Answer<N>;
      return row.answer.parse(row.form === 'text' ? text : JSON.parse(text)) as Answer<N>;
    },
    refused: async (name, asking) => {
      const response = await request(name, asking);
      expect(response.headers.get('content-type')).toMatch(/^application\/problem\+json/);
      const problem = requestProblemSchema.parse(await response.json());
      expect(problem.status).toBe(response.status);
      return problem;
    },
  };
}

/** Signs a client in through the pages, as a browser would, as one of the invented people. */
export async function signInAs(client: Client, login: string, to = '/'): Promise<Response> {
  const begin = await client.fetch(`/auth/github?to=${encodeURIComponent(to)}`);
  const page = begin.headers.get('location') ?? '';
  expect(page).toContain('/login/oauth/authorize?');
  const back = await client.fetch(`${page}&as=${login}`);
  const { pathname, search } = new URL(back.headers.get('location') ?? '', 'http://none.invalid');
  return client.fetch(`${pathname}${search}`);
}

export async function person(at: Pick<Server, 'url'>, login: string): Promise<Client> {
  const client = visitor(at);
  await signInAs(client, login);
  return client;
}
