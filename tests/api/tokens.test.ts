import { beforeAll, describe, expect, it } from 'vitest';
import { may, scopesOf, type Standing } from '../../server/rights.ts';
import { endpoints } from '../../shared/contracts/endpoints.ts';
import { actions, roles, type Scope, scopes } from '../../shared/contracts/rights.ts';
import { type Client, person, type Server, server, visitor } from './support/client.ts';

let here: Server, owner: Client, notebook: string;
beforeAll(async () => {
  here = await server();
  owner = await person(here, 'rokafor');
  notebook = (await owner.ask('createNotebook', { body: { title: 'By script' } })).id;
});

const script = async (
  ...granted: Scope[]
): Promise<{ ask: (what: string, body?: object, version?: number) => Promise<Response>; id: string }> => {
  const { secret, id } = await owner.ask('createToken', { body: { name: granted.join(), scopes: granted } });
  return {
    id,
    // Neither cookie nor our own header: a script has none.
    ask: (what, body, version) => {
      const [method = '', path = ''] = what.split(' ');
      return fetch(new URL(path, here.url), {
        method,
        headers: {
          Authorization: `Bearer ${secret}`,
          'Content-Type': 'application/json',
          ...(version === undefined ? {} : { 'If-Match': `"${String(version)}"` }),
        },
        ...(body === undefined ? {} : { body: JSON.stringify(body) }),
      });
    },
  };
};

describe('the table of scopes', () => {
  it('opens no account, no rights of others and no installation, and nothing that its person may not', () => {
    for (const scope of scopes) {
      for (const action of [
        'account',
        'steward',
        'invite',
        'transfer',
        'show',
        'link',
        'delete',
        'leave',
        'follow',
      ] as const) {
        expect(scopesOf(action)).toEqual([]);
        const on = { notebook: 'n', visibility: 'public', role: 'owner', linked: null } as const;
        expect(may({ person: 'p', steward: true, scopes: [scope], on }, action)).toBe(false);
      }
    }
    for (const role of roles) {
      for (const action of actions) {
        const standing: Standing = {
          person: 'p',
          steward: false,
          on: { notebook: 'n', visibility: 'private', role, linked: null },
        };
        if (may({ ...standing, scopes }, action)) expect(may(standing, action)).toBe(true);
      }
    }
  });
});

describe('a personal access token', () => {
  it('when a script has one for all, then it makes, writes, reads and publishes a notebook', async () => {
    const { ask } = await script('write', 'publish');
    const made = (await (
      await ask('POST /api/notebooks', { title: 'Made', entries: [{ kind: 'prose', text: 'One' }] })
    ).json()) as {
      id: string;
      entries: { id: string; version: number }[];
    };
    const [entry] = made.entries;
    const saved = await ask(
      `PUT /api/notebooks/${made.id}/entries/${entry?.id ?? ''}`,
      { text: 'Two' },
      entry?.version,
    );
    expect(saved.status).toBe(200);
    expect((await ask(`POST /api/notebooks/${made.id}/editions`, { summary: 'By script' })).status).toBe(201);
    expect(await (await ask(`GET /api/notebooks/${made.id}/editions/1/source`)).text()).toContain('Two');
  });

  it('when its scope is less, then more is refused, and rights and account always are', async () => {
    const read = await script('read');
    const write = await script('write');
    expect((await read.ask(`GET /api/notebooks/${notebook}`)).status).toBe(200);
    expect((await read.ask('POST /api/notebooks', { title: 'x' })).status).toBe(403);
    expect((await write.ask(`POST /api/notebooks/${notebook}/editions`, { summary: 'x' })).status).toBe(403);
    for (const what of [
      'GET /api/tokens',
      'GET /api/account/export',
      `DELETE /api/notebooks/${notebook}`,
      `GET /api/notebooks/${notebook}/links`,
      'GET /api/steward/people',
    ]) {
      expect([what, (await write.ask(what)).status]).toEqual([what, 403]);
    }
  });

  it('when it is revoked, unknown or its time is over, then it is refused, also where visitors may go', async () => {
    const { ask, id } = await script('read');
    const old = await script('read');
    await owner.ask('revokeToken', { params: { key: id } });
    await here.database.pool.query('update access_tokens set expires_at = now() where id = $1', [old.id]);
    for (const answer of [await ask('GET /api/shelf'), await ask('GET /api/public'), await old.ask('GET /api/shelf')]) {
      expect(answer.status).toBe(401);
    }
    const unknown = await fetch(new URL('/api/shelf', here.url), { headers: { Authorization: 'Bearer gwt_none' } });
    expect(unknown.status).toBe(401);
  });

  it('when it is kept, then only its hash is; the list shows how it begins and when it was used', async () => {
    const { secret, begins, id } = await owner.ask('createToken', {
      body: { name: 'Kept', scopes: ['read', 'read'], days: 7 },
    });
    await fetch(new URL('/api/shelf', here.url), { headers: { Authorization: `Bearer ${secret}` } });
    const { rows } = await here.database.pool.query<{ row: string }>(
      'select access_tokens::text as row from access_tokens',
    );
    expect(rows.some(({ row }) => row.includes(secret.slice(8)))).toBe(false);
    const listed = (await owner.ask('listTokens')).items.find((token) => token.id === id);
    expect(listed).toMatchObject({ name: 'Kept', scopes: ['read'], begins });
    expect(listed?.usedAt).not.toBeNull();
    expect(secret.startsWith(begins)).toBe(true);
    const days = (Date.parse(listed?.expiresAt ?? '') - Date.parse(listed?.createdAt ?? '')) / 86_400_000;
    expect(Math.round(days)).toBe(7);
  });

  it('when someone names the token of another, then there is none; a cookie beside a token does not count', async () => {
    const { id } = await script('read');
    const stranger = await person(here, 'dquell');
    expect(await stranger.refused('revokeToken', { params: { key: id } })).toMatchObject({ status: 404 });
    const { secret } = await stranger.ask('createToken', { body: { name: 'x', scopes: ['read'] } });
    const me = await owner.fetch('/api/me', { headers: { Authorization: `Bearer ${secret}` } });
    expect(((await me.json()) as { person: { handle: string } }).person.handle).toBe('dquell');
  });

  it('when there are as many as allowed, then no further one is made', async () => {
    await here.database.pool.query(`insert into limits values ('accessTokensPerPerson', 1)`);
    const client = await person(here, 'tvasara');
    const body = { name: 'x', scopes: ['read' as const] };
    const { id } = await client.ask('createToken', { body });
    expect(await client.refused('createToken', { body })).toMatchObject({ status: 409 });
    await client.ask('revokeToken', { params: { key: id } });
    await client.ask('createToken', { body });
  });
});

describe('the OpenAPI document', () => {
  interface Operation {
    operationId: string;
    parameters: { name: string; in: string; required: boolean; schema: object }[];
    responses: Record<string, object>;
    requestBody?: object;
  }

  it('when it is read, then it names every row once, with its parameters, and every reference in it leads somewhere', async () => {
    const document = (await visitor(here).ask('getOpenApi')) as {
      openapi: string;
      paths: Record<string, Record<string, Operation>>;
    };
    expect(document.openapi).toBe('3.1.0');
    const operations = Object.entries(document.paths).flatMap(([path, methods]) =>
      Object.entries(methods).map(([method, operation]) => ({ path, method, ...operation })),
    );
    expect(operations.map(({ operationId }) => operationId).sort()).toEqual(Object.keys(endpoints).sort());
    for (const { path, method, operationId, parameters, responses, requestBody } of operations) {
      const row = endpoints[operationId as keyof typeof endpoints];
      expect([method.toUpperCase(), path.replace(/{(\w+)}/g, ':$1')]).toEqual([row.method, row.path]);
      const inPath = [...path.matchAll(/{(\w+)}/g)].map(([, name]) => name);
      expect(
        parameters
          .filter((one) => one.in === 'path')
          .map((one) => one.name)
          .sort(),
      ).toEqual(inPath.sort());
      expect(Object.keys(responses)).toContain(String(row.status));
      if (method === 'get') expect(requestBody).toBeUndefined();
    }
    const text = JSON.stringify(document);
    for (const [, reference = ''] of text.matchAll(/"\$ref":"#\/([^"]+)"/g)) {
      const target = reference.split('/').reduce<unknown>((at, key) => (at as Record<string, unknown>)[key], document);
      expect([reference, typeof target]).toEqual([reference, 'object']);
    }
    const saving = operations.find(({ operationId }) => operationId === 'saveEntry');
    expect(saving?.parameters.find(({ name }) => name === 'If-Match')).toMatchObject({ in: 'header', required: true });
    expect(JSON.stringify(saving?.requestBody)).toContain('"text":{"type":"string"');
  });
});
