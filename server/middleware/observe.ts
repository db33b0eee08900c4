import { randomUUID } from 'node:crypto';
import type { RequestHandler, Response } from 'express';
import { type Logger, pino, stdSerializers } from 'pino';
import { pinoHttp } from 'pino-http';
import type { Database } from '../db/connection.ts';
import type { Settings } from '../settings.ts';

/** A log of one JSON object a line, on standard output. */
export const openLog = ({ logLevel }: Pick<Settings, 'logLevel'>): Logger =>
  pino({ level: logLevel, serializers: { err: (error: Error) => stdSerializers.err(withoutValues(error)) } });

/** A failed query names its values, which are what people wrote: only the reason is kept, and the query without them. */
export function withoutValues(error: Error): Error {
  const { query } = error as { query?: unknown };
  if (!('params' in error)) return error;
  const cause = error.cause instanceof Error ? error.cause : new Error('unknown reason');
  const kept = new Error(`A query failed: ${cause.message}`);
  return Object.assign(kept, { stack: cause.stack, query, code: (cause as NodeJS.ErrnoException).code });
}

/** What opens something must not stand in a log: tokens of share links, codes and states of a sign-in. */
export const withoutSecrets = (url: string): string =>
  url.replace(/(\/linked\/|\/shared\/|\/stop-mail\/)[^/?]+/, '$1…').replace(/([?&](?:code|state|token)=)[^&]*/g, '$1…');

/** Gives each request an id (its answer's X-Request-Id), and writes a line when it is answered. */
export function observe(log: Logger): RequestHandler[] {
  const identify: RequestHandler = (_request, response, next) => {
    const id = randomUUID();
    response.locals.requestId = id;
    response.locals.log = log.child({ request: id });
    response.set('X-Request-Id', id);
    next();
  };
  const write = pinoHttp<Parameters<RequestHandler>[0], Response>({
    logger: log,
    genReqId: (_request, response) => String(response.locals.requestId),
    customLogLevel: (_request, response, error) =>
      error !== undefined || response.statusCode >= 500 ? 'error' : response.statusCode >= 400 ? 'info' : 'debug',
    serializers: {
      req: (request: { method: string; url: string }) => ({ method: request.method, url: withoutSecrets(request.url) }),
      res: (response: { statusCode: number }) => ({ status: response.statusCode }),
    },
  });
  return [identify, write];
}

/** The log of one request: every line carries its id. */
export const logOf = (response: Response): Logger => response.locals.log as Logger;

/** Whether the server can do its work, for whatever watches over it: 200, or 503 while the database does not answer. */
export function health(database: Database): RequestHandler {
  return async (_request, response) => {
    const status = await database.pool.query('select 1').then(
      () => 'ok',
      () => 'database',
    );
    response
      .status(status === 'ok' ? 200 : 503)
      .set('Cache-Control', 'no-store')
      .json(status === 'ok' ? { status } : { status: 'failing', because: 'The database does not answer.' });
  };
}
