import type { ErrorRequestHandler, RequestHandler, Response } from 'express';
import type { ProblemCode, RequestProblem } from '../../shared/contracts/common.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import { logOf } from './observe.ts';

/** Status and title of each code (RFC 9457: the title is the same for every occurrence of a type). */
const table: Readonly<Record<ProblemCode, { readonly status: number; readonly title: string }>> = {
  'bad-input': { status: 400, title: 'This request cannot be read' },
  'sign-in-needed': { status: 401, title: 'Sign in first' },
  'not-allowed': { status: 403, title: 'Not allowed' },
  'not-found': { status: 404, title: 'Not found' },
  conflict: { status: 409, title: 'This does not fit what is there' },
  'changed-meanwhile': { status: 412, title: 'Changed meanwhile' },
  'too-large': { status: 413, title: 'Too large' },
  held: { status: 423, title: 'Someone else is writing here' },
  'version-needed': { status: 428, title: 'The version is missing' },
  'too-many': { status: 429, title: 'Too many requests' },
  failed: { status: 500, title: 'The server failed' },
  unavailable: { status: 503, title: 'Not available now' },
};

/** Answers with a problem document (RFC 9457, application/problem+json). */
function sendProblem(response: Response, { code, message, members }: Refusal): void {
  const { status, title } = table[code];
  const problem: RequestProblem = {
    ...members,
    type: `urn:gaugewright:problem:${code}`,
    title,
    status,
    detail: message,
    instance: `urn:gaugewright:request:${String(response.locals.requestId)}`,
    code,
  };
  if (code === 'too-many') response.set('Retry-After', String(members.retryAfter));
  response
    .status(status)
    .set('Cache-Control', 'no-store')
    .type('application/problem+json')
    .send(JSON.stringify(problem));
}

/** Whether this is a request that was understood and not granted, and no failure. */
export const isRefusal = (error: unknown): error is Refusal => error instanceof Refusal;

/** What Express, its body parser and PostgreSQL throw, in our words; null for what nobody expected. */
function known(error: unknown): Refusal | null {
  if (error instanceof Refusal) return error;
  const { type, status, code } = error as { type?: unknown; status?: unknown; code?: unknown };
  if (type === 'entity.too.large') return new Refusal('too-large', 'The body of this request is too large.');
  if (type === 'entity.parse.failed') return new Refusal('bad-input', 'The body of this request is no JSON.');
  if (typeof status === 'number' && status >= 400 && status < 500) {
    return new Refusal('bad-input', 'This request cannot be read.');
  }
  return isOutage(code, error)
    ? new Refusal('unavailable', 'The database does not answer. Try again in a moment.')
    : null;
}

/** Classes 08, 53 and 57P of PostgreSQL's error codes, refused and broken connections, and a pool that waits too long. */
function isOutage(code: unknown, error: unknown): boolean {
  const cause = error instanceof Error ? error.cause : undefined;
  if (cause instanceof Error && isOutage((cause as NodeJS.ErrnoException).code, cause)) return true;
  if (typeof code === 'string' && /^(08|53|57P)|^(ECONNREFUSED|ECONNRESET|EPIPE|ENOTFOUND|ETIMEDOUT)$/.test(code)) {
    return true;
  }
  return error instanceof Error && /timeout exceeded when trying to connect|Connection terminated/.test(error.message);
}

/** The end of every chain that something was thrown in. */
export const problems: ErrorRequestHandler = (error: unknown, _request, response, _next) => {
  const refusal = known(error);
  if (refusal === null || refusal.code === 'unavailable') logOf(response).error({ err: error }, 'a request failed');
  // Where an answer has begun, the connection is closed, so that half an answer is not taken for a whole one.
  if (response.headersSent) response.destroy();
  else sendProblem(response, refusal ?? new Refusal('failed', 'Something went wrong here. It was written down.'));
};

/** The end of every chain that nobody answered. */
export const nothingHere: RequestHandler = () => {
  throw notFound();
};
