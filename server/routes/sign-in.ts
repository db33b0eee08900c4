import { type Request, type RequestHandler, Router } from 'express';
import { type Profile, Strategy } from 'passport-github2';
import type { Bind } from '../middleware/endpoint.ts';
import { logOf } from '../middleware/observe.ts';
import { askerOf, type Passport } from '../middleware/person.ts';
import { isRefusal } from '../middleware/problem.ts';
import { linkIdentity } from '../services/accounts.ts';
import type { Context, House } from '../services/context.ts';
import { askForLink, signIn, standInProvider, useLink } from '../services/sign-in.ts';

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

/** The sign-in: the rows about it, and the pages of the one with GitHub (OAuth 2.0, RFC 6749, section 4.1). */
export function signInRoutes(
  bind: Bind,
  context: Context,
  house: House,
  passport: Passport,
  access: GithubAccess | null,
  publicUrl: string | null,
): Router {
  bind('getSignIn', () => {
    const github = access === null ? [] : [{ way: 'github' as const, href: start, standIn: access.standIn }];
    const mail = house.mail === 'none' ? [] : [mailWay(house.mail === 'stand-in')];
    return Promise.resolve({ ways: [...github, ...mail] });
  });
  bind('signOut', async ({ request, response }) => {
    await ended(request);
    response.clearCookie('gaugewright', { path: '/' });
    return undefined;
  });
  bind('askForLink', ({ body }) => askForLink(context, house, { ...body, to: ownPath(body.to) }));
  bind('useLink', async ({ body, request }) => {
    const { person, to } = await useLink(context, house, body);
    await begin(request, person);
    return { to };
  });
  const router = Router();
  if (access === null) return router;
  passport.use(strategy(context, house, access, publicUrl));
  router.get(start, keepTarget, passport.authenticate('github') as RequestHandler);
  router.get(callback, arrive(passport));
  return router;
}

const mailWay = (standIn: boolean) => ({ way: 'email' as const, href: '/sign-in', standIn });

function strategy(context: Context, house: House, access: GithubAccess, publicUrl: string | null): Strategy {
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
    // As GitHub lists them, so that it is seen which are verified.
    allRawEmails: true,
    // The types know only a string; `true` has the library make a random state and keep it in the session.
    state: true as unknown as string,
    passReqToCallback: true as const,
  };
  return new Strategy(options, (request: Request, _token: string, _refresh: string, profile: Profile, done: Done) => {
    const identity = {
      provider: access.standIn ? standInProvider : 'github',
      subject: profile.id,
      handle: profile.username ?? `github-${profile.id}`,
      name: profile.displayName || (profile.username ?? `github-${profile.id}`),
      email: verifiedOf(profile),
    };
    const linking = linkingOf(request);
    const person =
      linking === null
        ? signIn(context.database, house, identity)
        : linkIdentity(context.database, linking, identity).then(() => linking);
    person.then(
      (id) => done(null, id),
      (error: unknown) => done(error),
    );
  });
}

type Done = (error: unknown, person?: unknown) => void;

/** The address that GitHub has found to be the person's: their first one, if it is verified. */
function verifiedOf(profile: Profile): string | null {
  const emails = (profile.emails ?? []) as readonly { value: string; primary?: boolean; verified?: boolean }[];
  const own = emails.find(({ primary, verified }) => primary === true && verified === true);
  return own?.value.toLowerCase() ?? null;
}

/** Whose further way in this is to become: of the person who began it, if they are signed in still. */
function linkingOf(request: Request): string | null {
  const asking = request.res === undefined ? null : askerOf(request.res).person;
  return asking !== null && request.session.linking === asking ? asking : null;
}

/** Keeps in the session which page of ours to go to afterwards (`?to=/notebooks/…`), and whose way in it is to become (`?link=1`). */
const keepTarget: RequestHandler = (request, response, next) => {
  const { person } = askerOf(response);
  if (request.query.link === '1' && person !== null) {
    request.session.linking = person;
    request.session.to = '/account';
  } else {
    delete request.session.linking;
    request.session.to = ownPath(request.query.to);
  }
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

/** Back from the sign-in page: a new session for the person, or a page of ours with a word on what went wrong. */
function arrive(passport: Passport): RequestHandler {
  return (request, response, next) => {
    const to = request.session.to ?? '/';
    const linking = linkingOf(request) !== null;
    const back = (failed: string, why: unknown): void => {
      logOf(response).info({ failed, err: why instanceof Error ? why : undefined }, 'a sign-in failed');
      // Saved first: a redirect leaves before the session is written, and the next try would find the state of this one.
      request.session.save(() => response.redirect(`${linking ? '/account' : '/sign-in'}?failed=${failed}`));
    };
    const decide = (error: unknown, person: string | false | null): void => {
      if (isRefusal(error)) back(linking ? 'taken' : 'closed', error);
      else if (error !== null && error !== undefined) back('unreachable', error);
      else if (!person) back('refused', undefined);
      else begin(request, person).then(() => response.redirect(to), next);
    };
    (passport.authenticate('github', decide) as RequestHandler)(request, response, next);
  };
}

/** Begins a session under a new id, so that one known before the sign-in opens nothing. */
async function begin(request: Request, person: string): Promise<void> {
  await new Promise<void>((resolve, reject) => {
    request.login(person, (error: unknown) => settle(error, resolve, reject));
  });
  request.session.since = new Date().toISOString();
  request.session.browser = (request.get('user-agent') ?? '').slice(0, 300);
  await new Promise<void>((resolve, reject) => {
    request.session.save((error: unknown) => settle(error, resolve, reject));
  });
}

const ended = (request: Request): Promise<void> =>
  new Promise((resolve, reject) => {
    request.session.destroy((error: unknown) => settle(error, resolve, reject));
  });

function settle(error: unknown, resolve: () => void, reject: (reason: Error) => void): void {
  if (error === null || error === undefined) resolve();
  else reject(error instanceof Error ? error : new Error(JSON.stringify(error)));
}
