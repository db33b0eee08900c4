import { createHash } from 'node:crypto';
import connectPgSimple from 'connect-pg-simple';
import type { RequestHandler, Response } from 'express';
import session from 'express-session';
import type { PassportStatic } from 'passport';
import type { Database } from '../db/connection.ts';
import { askerByToken } from '../db/queries/tokens.ts';
import { Refusal } from '../db/refusal.ts';
import { askerFor, type Asker, visitor } from '../db/standing.ts';
import type { Settings } from '../settings.ts';

declare module 'express-session' {
  interface SessionData {
    /** When and in which browser the session began. */
    since: string;
    browser: string;
    /** Where to go after a sign-in. */
    to: string;
    /** The person whose further way in the account is to become that is being signed in to. */
    linking: string;
  }
}

/** One per app, not the library's global one. */
export type Passport = InstanceType<PassportStatic['Passport']>;

const days = 30;

/** Who asks, as `whoAsks` found out. */
export const askerOf = (response: Response): Asker => (response.locals.asker as Asker | undefined) ?? visitor;

/** Whether an access token was shown; then no cookie counts. */
export const byToken = (response: Response): boolean => askerOf(response).scopes !== undefined;

/** Who shows a personal access token (`Authorization: Bearer …`, RFC 6750). One that is not in force is refused, not passed over. */
export function tokens(database: Database): RequestHandler {
  return async (request, response, next) => {
    const [, secret] = /^bearer\s+(\S{1,200})$/i.exec(request.get('authorization')?.trim() ?? '') ?? [];
    if (secret !== undefined) {
      const asker = await askerByToken(database, createHash('sha256').update(secret).digest('hex'));
      if (asker === null) throw new Refusal('sign-in-needed', 'This access token is unknown, revoked or too old.');
      response.locals.asker = asker;
    }
    next();
  };
}

/** A step that is left out where an access token was shown. */
export const unlessToken =
  (step: RequestHandler): RequestHandler =>
  (request, response, next) => {
    if (!byToken(response)) return step(request, response, next);
    next();
    return undefined;
  };

/** Sessions in the database. They last thirty days from the sign-in; a visitor gets none, and no cookie. */
export function sessions(database: Database, settings: Settings): RequestHandler {
  const Store = connectPgSimple(session);
  return session({
    // The table is a migration's; expired rows are removed every quarter of an hour.
    store: new Store({ pool: database.pool, tableName: 'sessions', disableTouch: true, pruneSessionInterval: 900 }),
    name: 'gaugewright',
    secret: settings.sessionSecret,
    resave: false,
    saveUninitialized: false,
    proxy: settings.trustProxy > 0,
    cookie: {
      httpOnly: true,
      sameSite: 'lax',
      secure: settings.publicUrl?.startsWith('https:') === true ? true : 'auto',
      maxAge: days * 24 * 60 * 60 * 1000,
    },
  });
}

/** The signed-in person of each request, looked up anew, so that a removed account is out at once. */
export function whoAsks(database: Database, passport: Passport): RequestHandler[] {
  passport.serializeUser((user, done) => done(null, user as unknown as string));
  passport.deserializeUser((id: string, done) => {
    askerFor(database, id).then(
      (asker) => done(null, asker ?? false),
      (error: unknown) => done(error),
    );
  });
  const note: RequestHandler = (request, response, next) => {
    response.locals.asker = (request.user as Asker | undefined) ?? visitor;
    next();
  };
  return [passport.session() as RequestHandler, note];
}
