import { z } from 'zod';
import { requestProblemSchema } from './common.ts';
import { endpoints } from './endpoints.ts';
import { type Scope, scopes } from './rights.ts';
import type { Endpoint } from './row.ts';
import { writeHeader } from './row.ts';

type Row = Endpoint<z.ZodType, z.ZodType, z.ZodType, z.ZodType>;
type Json = Record<string, unknown>;

/** Only what JSON Schema can say; what is checked further is refused with its reason when it is asked. */
function jsonSchema(schema: z.ZodType, io: 'input' | 'output'): Json {
  const { $schema: _dialect, ...rest } = z.toJSONSchema(schema, { io, unrepresentable: 'any' }) as Json;
  return rest;
}

/** The properties of an object schema, as parameters of a request. */
function parametersOf(schema: z.ZodType, place: 'path' | 'query'): Json[] {
  const { properties = {}, required = [] } = jsonSchema(schema, 'input') as {
    properties?: Record<string, Json>;
    required?: string[];
  };
  return Object.entries(properties).map(([name, property]) => ({
    name,
    in: place,
    required: place === 'path' || required.includes(name),
    schema: property,
  }));
}

const problem = (description: string): Json => ({
  description,
  content: { 'application/problem+json': { schema: { $ref: '#/components/schemas/Problem' } } },
});

const mediaTypes = { json: 'application/json', text: 'text/plain', events: 'text/event-stream' } as const;

function answerOf({ answer, form, status }: Row): Json {
  if (status === 204) return { description: 'Done; the answer is empty.' };
  const media = (mediaTypes as Record<string, string | undefined>)[form] ?? 'application/octet-stream';
  const schema = form === 'json' ? jsonSchema(answer, 'output') : { type: 'string' };
  return { description: form === 'events' ? 'Server-sent events.' : 'As asked.', content: { [media]: { schema } } };
}

/** Sentence of an operation's name: `listShelf` becomes "List shelf". */
const words = (name: string): string =>
  name.replace(/[A-Z]/g, (letter) => ` ${letter.toLowerCase()}`).replace(/^[a-z]/, (letter) => letter.toUpperCase());

/** What one may send to read or write, and whether a token is enough: `scopesOf` says which scopes open an action. */
function operation(name: string, row: Row, scopesOf: (action: Row['action']) => readonly Scope[]): Json {
  const reads = row.method === 'GET';
  const body = jsonSchema(row.body, 'input');
  const hasBody = !reads && Object.keys((body.properties as object | undefined) ?? {}).length > 0;
  const open = scopesOf(row.action);
  const headers: Json[] = [
    ...(row.ifMatch
      ? [
          {
            name: 'If-Match',
            in: 'header',
            required: true,
            description: 'The version that the change starts from, in quotation marks.',
            schema: { type: 'string', pattern: '^"[0-9]{1,9}"$' },
          },
        ]
      : []),
  ];
  return {
    operationId: name,
    summary: words(name),
    tags: [row.path.split('/')[2] ?? 'api'],
    parameters: [...parametersOf(row.params, 'path'), ...parametersOf(row.query, 'query'), ...headers],
    ...(hasBody || body.anyOf !== undefined
      ? { requestBody: { required: true, content: { 'application/json': { schema: body } } } }
      : {}),
    responses: {
      [String(row.status)]: answerOf(row),
      default: problem('The request was not granted; `code` says why.'),
    },
    security: [
      ...(row.action === 'visit' || row.action === 'read' || row.action === 'export' ? [{}] : []),
      ...(open.length > 0 ? [{ token: [] }] : []),
      { session: [] },
    ],
    'x-action': row.action,
    'x-scopes': open,
  };
}

/**
 * The table of endpoints as an OpenAPI 3.1 document (its schemas are JSON Schema 2020-12, made from those that every request
 * and answer is parsed by). `scopesOf`: the scopes of access tokens that open an action.
 */
export function openApi(
  server: string,
  scopesOf: (action: Row['action']) => readonly Scope[],
): Json & { openapi: string } {
  const paths: Record<string, Json> = {};
  for (const [name, row] of Object.entries(endpoints) as unknown as [string, Row][]) {
    const path = row.path.replace(/:(\w+)/g, '{$1}');
    paths[path] = { ...paths[path], [row.method.toLowerCase()]: operation(name, row, scopesOf) };
  }
  return {
    openapi: '3.1.0',
    info: {
      title: 'Gaugewright',
      version: '1',
      description: `Notebooks, editions and claims over HTTP. A script shows a personal access token (Authorization: Bearer …, scopes ${scopes.join(', ')}), which is made on the account page. Pages use the session's cookie, and with it the header ${writeHeader} on every request that changes something.`,
    },
    servers: [{ url: server }],
    paths,
    components: {
      schemas: { Problem: jsonSchema(requestProblemSchema, 'output') },
      securitySchemes: {
        token: { type: 'http', scheme: 'bearer', description: 'A personal access token.' },
        session: { type: 'apiKey', in: 'cookie', name: 'gaugewright' },
      },
    },
  };
}
