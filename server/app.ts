import { existsSync, readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import express, { type Express, type RequestHandler, Router } from 'express';
import passport from 'passport';
import type { Logger } from 'pino';
import type { Database } from './db/connection.ts';
import type { Pool } from './evaluation/pool.ts';
import type { FakeGithub } from './fakes/github.ts';
import type { FakeMail } from './fakes/mail.ts';
import type { Live } from './live.ts';
import { binder } from './middleware/endpoint.ts';
import { headers, nonceOf, ownPagesOnly, rates } from './middleware/guard.ts';
import { health, observe } from './middleware/observe.ts';
import { sessions, tokens, unlessToken, whoAsks } from './middleware/person.ts';
import { nothingHere, problems } from './middleware/problem.ts';
import { catalogueRoutes } from './routes/catalogue.ts';
import { editionRoutes } from './routes/editions.ts';
import { entryRoutes } from './routes/entries.ts';
import { jobRoutes } from './routes/jobs.ts';
import { liveRoutes } from './routes/live.ts';
import { notebookRoutes } from './routes/notebooks.ts';
import { openApiRoutes } from './routes/openapi.ts';
import { peopleRoutes } from './routes/people.ts';
import { reviewRoutes } from './routes/reviews.ts';
import { type GithubAccess, signInRoutes } from './routes/sign-in.ts';
import { stopMailPages } from './routes/stop-mail.ts';
import type { Context, House, Questions } from './services/context.ts';
import { stopPath } from './services/post.ts';
import type { Settings } from './settings.ts';

export interface Parts {
  readonly settings: Settings;
  readonly log: Logger;
  readonly database: Database;
  readonly live: Live;
  readonly askForClaims: Context['askForClaims'];
  readonly questions: Questions;
  /** A thread for what is answered at once. */
  readonly quick: Pool;
  /** The stand-in for GitHub, where the settings name it. */
  readonly fakeGithub: FakeGithub | null;
  /** The same for mail. */
  readonly fakeMail: FakeMail | null;
  readonly house: House;
}

/** Where the stand-in's page is; under /auth, so that whatever stands in front of the server hands it on. */
const standInPath = '/auth/stand-in/github';
const mailboxPath = '/auth/stand-in/mail';
/** What signs in, or has mail sent to whoever is named. */
const guessable = [
  '/auth/github',
  '/api/sign-in/mail',
  '/api/sign-in/link',
  '/api/account/addresses',
  '/api/invitations/look',
  '/api/invitations/accept',
];
/** An imported source in UTF-8, as JSON. */
const bodyLimit = '5mb';

/** The whole of the web server but its port: guard, person, routes, pages. */
export function makeApp(parts: Parts): Express {
  const { settings, log, database, fakeGithub, fakeMail } = parts;
  const app = express();
  app.disable('x-powered-by');
  app.set('trust proxy', settings.trustProxy);
  app.use(observe(log));
  app.get('/healthz', health(database));
  app.use(headers(settings));
  // A mail program that stops mail has neither cookie nor page of ours.
  app.use(stopPath, rates(settings).all, stopMailPages({ database }, settings.sessionSecret, nonceOf));
  app.use(answers(parts));
  if (fakeGithub !== null) app.use(standInPath, fakeGithub.pages);
  if (fakeMail !== null) app.use(mailboxPath, fakeMail.pages);
  app.use(['/api', '/auth', '/healthz'], nothingHere);
  app.use(pages());
  app.use(problems);
  return app;
}

/** Everything that knows who asks: the rows of the table, and the sign-in. */
function answers({
  settings,
  database,
  live,
  askForClaims,
  questions,
  quick,
  fakeGithub,
  house,
}: Parts): RequestHandler {
  const context: Context = { database, askForClaims };
  const auth = new passport.Passport();
  const rate = rates(settings);
  const router = Router();
  const bind = binder(router, database);
  const signIn = signInRoutes(bind, context, house, auth, githubAccess(settings, fakeGithub), settings.publicUrl);
  peopleRoutes(bind, context, house);
  notebookRoutes(bind, context);
  entryRoutes(bind, context);
  editionRoutes(bind, context);
  jobRoutes(bind, { ...context, questions });
  reviewRoutes(bind, { ...context, quick }, settings.publicUrl);
  liveRoutes(bind, live);
  openApiRoutes(bind);
  catalogueRoutes(bind);

  const chain = Router();
  const fromPages = [ownPagesOnly(settings), sessions(database, settings), ...whoAsks(database, auth)];
  chain.use(rate.all, tokens(database), ...fromPages.map(unlessToken), rate.writing);
  chain.use(guessable, rate.signingIn);
  chain.use(express.json({ limit: bodyLimit }), signIn, router);
  // Not mounted: the rows of the table are whole paths.
  return (request, response, next) => {
    if (/^\/(api|auth)(\/|$)/.test(request.path)) chain(request, response, next);
    else next();
  };
}

function githubAccess({ github }: Settings, fake: FakeGithub | null): GithubAccess | null {
  if (github !== null) {
    const { id, secret, web, api } = github;
    const oauth = `${web}/login/oauth`;
    return {
      id,
      secret,
      authorizationUrl: `${oauth}/authorize`,
      tokenUrl: `${oauth}/access_token`,
      apiUrl: api,
      standIn: false,
    };
  }
  if (fake === null) return null;
  return {
    id: 'stand-in',
    secret: 'stand-in',
    authorizationUrl: `${standInPath}/login/oauth/authorize`,
    tokenUrl: `${fake.url}/login/oauth/access_token`,
    apiUrl: fake.url,
    standIn: true,
  };
}

/** dist/client, seen from a bundle in dist/server or from the source in server. */
function clientFolder(): string {
  const here = dirname(fileURLToPath(import.meta.url));
  return import.meta.url.endsWith('.ts') ? join(here, '..', 'dist', 'client') : join(here, '..', 'client');
}

/** The built client: its files, and for every other address its page, with the answer's nonce in it. */
function pages(): Router {
  const folder = clientFolder();
  const page = join(folder, 'index.html');
  const router = Router();
  // Names in assets/ carry a hash of what they hold.
  const assets = { immutable: true, maxAge: '1y', fallthrough: false, index: false } as const;
  router.use('/assets', express.static(join(folder, 'assets'), assets));
  router.use(express.static(folder, { index: false }));
  router.get('/{*path}', (_request, response) => {
    response.set('Cache-Control', 'no-store').type('html');
    if (!existsSync(page)) {
      response.status(503).send('<!doctype html><title>Gaugewright</title><p>The pages were not built: npm run build.');
      return;
    }
    response.send(readFileSync(page, 'utf8').replaceAll('__CSP_NONCE__', nonceOf(response)));
  });
  return router;
}
