import { type Request, type RequestHandler, type Response, Router } from 'express';
import { type Profile, Strategy } from 'passport-github2';
import type { Bind } from '../middleware/endpoint.ts';
import { logOf } from '../middleware/observe.ts';
import type { Passport } from '../middleware/person.ts';
import type { Context } from '../services/context.ts';
import { signIn, standInProvider } from '../services/people.ts';

/** Where accounts are checked: GitHub, an installation of it, or the stand-in. */
export interface GithubAccess {
  readonly id: string;
  readonly secret: string;
  /** Page of the sign-in, absolute or on this server; where codes are exchanged; where accounts are described. */
  readonly authorizationUrl: string;
  readonly tokenUrl: string;
  readonly apiUrl: string;
  readonly standIn: boolean;
}

const start = '/auth/github';
const callback = `${start}/callback`;

/** The pages of the sign-in with GitHub (OAuth 2.0, RFC 6749, section 4.1), and the rows of the table about it. */
export function signInRoutes(
  bind: Bind,
  context: Context,
  passport: Passport,
  access: GithubAccess | null,
  publicUrl: string | null,
): Router {
  bind('getSignIn', () => {
    const ways = access === null ? [] : [{ way: 'github' as const, href: start, standIn: access.standIn }];
    return Promise.resolve({ ways });
  });
  bind('signOut', async ({ request, response }) => {
    await ended(request);
    response.clearCookie('gaugewright', { path: '/' });
    return undefined;
  });
  const router = Router();
  if (access === null) return router;
  passport.use(strategy(context, access, publicUrl));
  router.get(start, keepTarget, passport.authenticate('github') as RequestHandler);
  router.get(callback, arrive(passport));
  return router;
}

function strategy(context: Context, access: GithubAccess, publicUrl: string | null): Strategy {
  const options = {
    clientID: access.id,
    clientSecret: access.secret,
    // Without a public address it is resolved against the request.
    callbackURL: publicUrl === null ? callback : `${publicUrl}${callback}`,
    authorizationURL: access.authorizationUrl,
    tokenURL: access.tokenUrl,
    userProfileURL: `${access.apiUrl}/user`,
    userEmailURL: `${access.apiUrl}/user/emails`,
    scope: ['user:email'],
    // The types know only a string; `true` has the library make a random state and keep it in the session.
    state: true as unknown as string,
  };
  return new Strategy(options, (_token: string, _refresh: string, profile: Profile, done: Done) => {
    signIn(context.database, {
      provider: access.standIn ? standInProvider : 'github',
      subject: profile.id,
      handle: profile.username ?? `github-${profile.id}`,
      name: profile.displayName || (profile.username ?? `github-${profile.id}`),
      email: profile.emails?.[0]?.value ?? null,
    }).then(
      (person) => done(null, person),
      (error: unknown) => done(error),
    );
  });
}

type Done = (error: unknown, person?: unknown) => void;

/** Keeps in the session which page of ours to go to afterwards (`?to=/notebooks/…`). */
const keepTarget: RequestHandler = (request, _response, next) => {
  request.session.to = ownPath(request.query.to);
  next();
};

/** A path on this server; anything that could lead elsewhere becomes the front page. */
export function ownPath(to: unknown): string {
  if (typeof to !== 'string' || !to.startsWith('/')) return '/';
  const here = 'http://here.invalid';
  if (!URL.canParse(to, here)) return '/';
  const url = new URL(to, here);
  return url.origin === here ? `${url.pathname}${url.search}${url.hash}` : '/';
}

/** Back from the sign-in page: a new session for the person, or the sign-in page of ours with a word on what went wrong. */
function arrive(passport: Passport): RequestHandler {
  return (request, response, next) => {
    const to = request.session.to ?? '/';
    const back = (failed: string, why: unknown): void => {
      logOf(response).info({ failed, err: why instanceof Error ? why : undefined }, 'a sign-in failed');
      response.redirect(`/sign-in?failed=${failed}`);
    };
    const decide = (error: unknown, person: string | false | null): void => {
      if (error !== null && error !== undefined) back('unreachable', error);
      else if (!person) back('refused', undefined);
      else enter(request, response, person, to).catch(next);
    };
    (passport.authenticate('github', decide) as RequestHandler)(request, response, next);
  };
}

/** Begins a session under a new id, so that one known before the sign-in opens nothing. */
async function enter(request: Request, response: Response, person: string, to: string): Promise<void> {
  await new Promise<void>((resolve, reject) => {
    request.login(person, (error: unknown) => settle(error, resolve, reject));
  });
  request.session.since = new Date().toISOString();
  request.session.browser = (request.get('user-agent') ?? '').slice(0, 300);
  await new Promise<void>((resolve, reject) => {
    request.session.save((error: unknown) => settle(error, resolve, reject));
  });
  response.redirect(to);
}

const ended = (request: Request): Promise<void> =>
  new Promise((resolve, reject) => {
    request.session.destroy((error: unknown) => settle(error, resolve, reject));
  });

function settle(error: unknown, resolve: () => void, reject: (reason: Error) => void): void {
  if (error === null || error === undefined) resolve();
  else reject(error instanceof Error ? error : new Error(JSON.stringify(error)));
}
