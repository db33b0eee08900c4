import type { Request, Response, Router } from 'express';
import type { z } from 'zod';
import {
  type Answer,
  type Body,
  endpoints,
  type EndpointName,
  type Params,
  type Query,
} from '../../shared/contracts/endpoints.ts';
import type { Database } from '../db/connection.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import {
  may,
  type NotebookStanding,
  onInstallation,
  type Standing,
  standingByLink,
  standingOnNotebook,
} from '../db/standing.ts';
import { askerOf } from './person.ts';

export { scopesOf } from '../db/standing.ts';

type StandingOf<N extends EndpointName> = (typeof endpoints)[N]['of'] extends 'installation'
  ? Standing
  : NotebookStanding;

/** What a row's handler gets: everything parsed, and the standing that was found allowed. */
export interface Asked<N extends EndpointName> {
  readonly params: Params<N>;
  readonly query: Query<N>;
  readonly body: Body<N>;
  readonly standing: StandingOf<N>;
  /** The version named by If-Match; 0 in rows that ask for none. */
  readonly version: number;
  readonly request: Request;
  readonly response: Response;
}

type Handler<N extends EndpointName> = (asked: Asked<N>) => Promise<Answer<N>>;

/** Binds a row of the table to what answers it: parse, ask for the standing, act, parse the answer. */
export type Bind = <N extends EndpointName>(name: N, handler: Handler<N>) => void;

export function binder(router: Router, database: Database): Bind {
  return <N extends EndpointName>(name: N, handler: Handler<N>) => {
    const row = endpoints[name];
    const method = row.method.toLowerCase() as 'get' | 'post' | 'put' | 'patch' | 'delete';
    router[method](row.path, async (request, response) => {
      const params = row.params.safeParse(request.params);
      // An address that cannot name a thing names none.
      if (!params.success) throw notFound();
      const standing = await standingFor(database, name, params.data, response);
      const asked = {
        params: params.data,
        query: parse(row.query, request.query, 'query'),
        body: parse(row.body, (request.body as unknown) ?? {}, 'body'),
        standing,
        version: row.ifMatch ? versionOf(request) : 0,
        request,
        response,
      } as Asked<N>;
      send(response, row, await handler(asked));
    });
  };
}

/** Where the asking person stands, if the row's action is allowed there; throws 404, 401 or 403. */
async function standingFor(
  database: Database,
  name: EndpointName,
  params: object,
  response: Response,
): Promise<Standing> {
  const { of, action } = endpoints[name];
  const asker = askerOf(response);
  const standing = await find(database, of, params, response);
  if (standing === null || (of !== 'installation' && !may(standing, 'read'))) throw notFound();
  if (may(standing, action)) return standing;
  if (asker.person === null) throw new Refusal('sign-in-needed', 'Sign in to do this.');
  if (asker.scopes !== undefined)
    throw new Refusal('not-allowed', 'This access token, or your role, does not allow this.');
  throw new Refusal('not-allowed', 'Your role does not allow this.');
}

function find(
  database: Database,
  of: 'installation' | 'notebook' | 'link',
  params: object,
  response: Response,
): Promise<Standing | null> {
  const asker = askerOf(response);
  if (of === 'notebook' && 'notebook' in params) return standingOnNotebook(database, asker, String(params.notebook));
  if (of === 'link' && 'token' in params) return standingByLink(database, asker, String(params.token));
  return Promise.resolve(of === 'installation' ? onInstallation(asker) : null);
}

function parse(schema: z.ZodType, value: unknown, where: string): unknown {
  const parsed = schema.safeParse(value);
  if (parsed.success) return parsed.data;
  const places = parsed.error.issues.map(({ path, message }) => ({ path: [where, ...path].join('.'), message }));
  const [first] = places;
  throw new Refusal(
    'bad-input',
    first === undefined ? 'This request cannot be read.' : `${first.path}: ${first.message}`,
    {
      places,
    },
  );
}

/** The number in If-Match: `"3"` (also weak, also bare). */
function versionOf(request: Request): number {
  const given = request.get('if-match');
  const [, digits] = /^(?:W\/)?"?(\d{1,9})"?$/.exec(given?.trim() ?? '') ?? [];
  if (digits !== undefined) return Number(digits);
  throw new Refusal('version-needed', 'Name the version that this started from, as If-Match: "3".');
}

interface Form {
  readonly answer: z.ZodType;
  readonly status: number;
  readonly form: 'json' | 'text' | 'events';
}

function send(response: Response, { answer, status, form }: Form, value: unknown): void {
  if (form === 'events') return;
  response.status(status).set('Cache-Control', 'private, no-cache');
  // Parsed, so that nothing leaves that the contract does not name.
  const parsed = answer.parse(value);
  if (status === 204) response.end();
  else if (form === 'text') {
    if (response.get('Content-Type') === undefined) response.type('text/plain; charset=utf-8');
    response.send(parsed);
  } else response.json(parsed);
}
