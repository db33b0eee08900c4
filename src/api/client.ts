import './zod.ts';
import { requestProblemSchema, type RequestProblem } from '../../shared/contracts/common.ts';
import {
  address,
  type Answer,
  type BodyGiven,
  endpoints,
  type EndpointName,
  type ParamsGiven,
  type QueryGiven,
  writeHeader,
} from '../../shared/contracts/endpoints.ts';

/** A request that was answered with a problem document. `code` is for programs, `message` for people. */
export class RequestFailed extends Error {
  readonly problem: RequestProblem;
  constructor(problem: RequestProblem) {
    super(problem.detail ?? problem.title);
    this.name = 'RequestFailed';
    this.problem = problem;
  }
  get code(): string {
    return this.problem.code;
  }
  get status(): number {
    return this.problem.status;
  }
}

/** The server could not be reached at all. */
export class NoConnection extends Error {
  constructor() {
    super('There is no connection to the server.');
    this.name = 'NoConnection';
  }
}

export interface Given<N extends EndpointName> {
  readonly params?: ParamsGiven<N>;
  readonly query?: QueryGiven<N>;
  readonly body?: BodyGiven<N>;
  /** Version that a change started from. */
  readonly ifMatch?: number;
  readonly signal?: AbortSignal;
}

/** Calls a row of the table of endpoints and gives its parsed answer. Throws RequestFailed or NoConnection. */
export async function call<N extends EndpointName>(name: N, given: Given<N> = {}): Promise<Answer<N>> {
  const row = endpoints[name];
  const headers: Record<string, string> = { accept: row.form === 'text' ? 'text/plain' : 'application/json' };
  if (row.method !== 'GET') headers[writeHeader] = '1';
  if (given.body !== undefined) headers['content-type'] = 'application/json';
  if (given.ifMatch !== undefined) headers['if-match'] = `"${String(given.ifMatch)}"`;
  const response = await reach(address(row, given.params, given.query), {
    method: row.method,
    headers,
    credentials: 'same-origin',
    ...(given.body !== undefined ? { body: JSON.stringify(given.body) } : {}),
    ...(given.signal ? { signal: given.signal } : {}),
  });
  if (!response.ok) throw new RequestFailed(await problemOf(response));
  const said: unknown =
    response.status === 204 ? undefined : row.form === 'text' ? await response.text() : await response.json();
  return row.answer.parse(said) as Answer<N>;
}

async function reach(url: string, options: RequestInit): Promise<Response> {
  try {
    return await fetch(url, options);
  } catch (error) {
    if (error instanceof DOMException && error.name === 'AbortError') throw error;
    throw new NoConnection();
  }
}

async function problemOf(response: Response): Promise<RequestProblem> {
  const said: unknown = await response.json().catch(() => null);
  const parsed = requestProblemSchema.safeParse(said);
  if (parsed.success) return parsed.data;
  const title = response.status >= 500 ? 'The server could not answer.' : 'The request was refused.';
  return { type: 'about:blank', title, status: response.status, code: 'failed' };
}
