import { randomBytes } from 'node:crypto';
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import express, { type Request, type RequestHandler, type Router } from 'express';
import { escapeHtml, plainPage } from '../page.ts';
import { type InventedPerson, inventedPeople } from './people.ts';

/**
 * A stand-in for GitHub's sign-in, at the wire: the page that asks who one is, the exchange of a code for a token, and the
 * two calls that describe an account. Anyone can be anyone through it, so it runs only where the setting FAKES names it.
 */
export interface FakeGithub {
  /** The page that a browser is sent to; mounted into the web server, so that it is reached wherever that is. */
  readonly pages: Router;
  /** Where the server itself exchanges codes and asks about accounts: on loopback, whatever the server's own address. */
  readonly url: string;
  readonly close: () => Promise<void>;
}

/** A code is good for one exchange within this time. */
const codeMs = 60_000;

export async function openFakeGithub(
  nonceOf: (response: Parameters<RequestHandler>[1]) => string,
): Promise<FakeGithub> {
  const codes = new Map<string, { readonly person: InventedPerson; readonly until: number }>();
  const tokens = new Map<string, InventedPerson>();

  const pages = express.Router();
  pages.get('/login/oauth/authorize', (request, response) => {
    const { redirect_uri: back, state, as } = request.query;
    if (typeof back !== 'string' || !isOwn(back, request)) {
      response.status(400).type('text/plain').send('redirect_uri must lead back to this server.');
      return;
    }
    const person = inventedPeople.find(({ login }) => login === as);
    if (person === undefined) {
      response
        .set('Cache-Control', 'no-store')
        .type('html')
        .send(choice(request, nonceOf(response)));
      return;
    }
    const code = secret();
    codes.set(code, { person, until: Date.now() + codeMs });
    const to = new URL(back);
    to.searchParams.set('code', code);
    if (typeof state === 'string') to.searchParams.set('state', state);
    response.redirect(to.href);
  });

  const wire = express();
  wire.disable('x-powered-by');
  wire.post('/login/oauth/access_token', express.urlencoded({ extended: false }), (request, response) => {
    const { code } = request.body as { code?: unknown };
    const known = typeof code === 'string' ? codes.get(code) : undefined;
    codes.delete(String(code));
    if (known === undefined || known.until < Date.now()) {
      response.json({ error: 'bad_verification_code', error_description: 'The code is unknown, used or old.' });
      return;
    }
    const token = secret();
    tokens.set(token, known.person);
    response.json({ access_token: token, token_type: 'bearer', scope: 'user:email' });
  });
  const personOf = (request: Request): InventedPerson | undefined =>
    tokens.get(request.get('authorization')?.replace(/^(bearer|token) /i, '') ?? '');
  wire.get('/user', (request, response) => {
    const person = personOf(request);
    if (person === undefined) response.status(401).json({ message: 'Requires authentication' });
    else response.json({ id: person.id, login: person.login, name: person.name });
  });
  wire.get('/user/emails', (request, response) => {
    const person = personOf(request);
    if (person === undefined) response.status(401).json({ message: 'Requires authentication' });
    else response.json([{ email: person.email, primary: true, verified: true }]);
  });

  const server = createServer(wire);
  await new Promise<void>((resolve, reject) => {
    server.once('error', reject);
    server.listen(0, '127.0.0.1', resolve);
  });
  const { port } = server.address() as AddressInfo;
  return {
    pages,
    url: `http://127.0.0.1:${String(port)}`,
    close: () =>
      new Promise((resolve) => {
        server.close(() => resolve());
        server.closeAllConnections();
      }),
  };
}

const secret = (): string => randomBytes(24).toString('base64url');

/** Only back to a page of the server that shows this one, or of loopback: the stand-in is no open door to elsewhere. */
function isOwn(address: string, request: Request): boolean {
  if (!URL.canParse(address)) return false;
  const { host, hostname, protocol } = new URL(address);
  if (protocol !== 'http:' && protocol !== 'https:') return false;
  return host === request.get('host') || ['127.0.0.1', 'localhost', '[::1]'].includes(hostname);
}

function choice(request: Request, nonce: string): string {
  const own = new URLSearchParams(request.originalUrl.split('?')[1]);
  const items = inventedPeople.map(({ login, name, part }) => {
    const query = new URLSearchParams(own);
    query.set('as', login);
    return `<li><a href="?${escapeHtml(query.toString())}">${escapeHtml(name)}</a> <span>${escapeHtml(part)}</span></li>`;
  });
  return plainPage(
    'Who are you today?',
    nonce,
    `<p>This installation has no account with GitHub, so this page stands in for it. The people are invented; choose one to sign in.</p>
<ul>
${items.join('\n')}
</ul>`,
  );
}
