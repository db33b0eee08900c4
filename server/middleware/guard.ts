import { randomBytes } from 'node:crypto';
import type { Request, RequestHandler, Response } from 'express';
import { ipKeyGenerator, rateLimit } from 'express-rate-limit';
import helmet from 'helmet';
import { writeHeader } from '../../shared/contracts/endpoints.ts';
import { Refusal } from '../db/refusal.ts';
import type { Settings } from '../settings.ts';
import { askerOf } from './person.ts';

const https = ({ publicUrl }: Settings): boolean => publicUrl?.startsWith('https:') === true;

/** The nonce of one answer, for the style elements of the page. */
export const nonceOf = (response: Response): string => response.locals.nonce as string;

/**
 * Security headers. Style attributes are KaTeX's; style elements need the nonce (the editor's). `wasm-unsafe-eval` lets the
 * engine's kernel be compiled and evaluates no text as code.
 */
export function headers(settings: Settings): RequestHandler[] {
  const nonce: RequestHandler = (_request, response, next) => {
    response.locals.nonce = randomBytes(16).toString('base64');
    next();
  };
  const policy = helmet({
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        defaultSrc: ["'self'"],
        scriptSrc: ["'self'", "'wasm-unsafe-eval'"],
        scriptSrcAttr: ["'none'"],
        styleSrc: ["'self'"],
        styleSrcElem: ["'self'", (_request, response) => `'nonce-${nonceOf(response as Response)}'`],
        styleSrcAttr: ["'unsafe-inline'"],
        fontSrc: ["'self'"],
        imgSrc: ["'self'", 'data:'],
        connectSrc: ["'self'"],
        workerSrc: ["'self'"],
        objectSrc: ["'none'"],
        baseUri: ["'none'"],
        formAction: ["'self'"],
        frameAncestors: ["'none'"],
        upgradeInsecureRequests: https(settings) ? [] : null,
      },
    },
    strictTransportSecurity: https(settings) ? { maxAge: 31_536_000 } : false,
    referrerPolicy: { policy: 'same-origin' },
    xFrameOptions: { action: 'deny' },
  });
  return [nonce, policy];
}

const reading = new Set(['GET', 'HEAD', 'OPTIONS']);

/**
 * Refuses requests that change something unless they come from our own pages: they carry a header of ours, which a foreign page
 * could send only after a preflight that is never granted, and the browser's own word on where they come from agrees.
 */
export function ownPagesOnly({ publicUrl }: Settings): RequestHandler {
  return (request, _response, next) => {
    if (reading.has(request.method)) return next();
    const site = request.get('sec-fetch-site');
    const origin = request.get('origin');
    const own = [
      `${request.protocol}://${request.get('host') ?? ''}`,
      publicUrl === null ? '' : new URL(publicUrl).origin,
    ];
    const foreign = site !== undefined && site !== 'same-origin' && site !== 'none';
    if (foreign || (origin !== undefined && !own.includes(origin)) || request.get(writeHeader) === undefined) {
      throw new Refusal('not-allowed', 'This request did not come from a page of this installation.');
    }
    next();
  };
}

function limit(
  perMinute: number,
  keyOf: (request: Request, response: Response) => string,
  skip?: string[],
): RequestHandler {
  return rateLimit({
    windowMs: 60_000,
    limit: perMinute,
    standardHeaders: 'draft-8',
    legacyHeaders: false,
    keyGenerator: keyOf,
    skip: (request) => skip?.includes(request.method) === true,
    handler: (request, _response, next) => {
      const { resetTime } = (request as Request & { rateLimit: { resetTime: Date } }).rateLimit;
      const retryAfter = Math.max(1, Math.ceil((resetTime.getTime() - Date.now()) / 1000));
      const words = `That was more than ${String(perMinute)} requests in a minute. Try again in ${String(retryAfter)} s.`;
      next(new Refusal('too-many', words, { retryAfter }));
    },
  });
}

/** Addresses of one IPv6 network count as one. */
const address = (request: Request): string => ipKeyGenerator(request.ip ?? 'unknown');

/** Bounds on how often one may ask, counted by each web process for itself. */
export function rates({ rates: { requests, writes, signIns } }: Settings): {
  readonly all: RequestHandler;
  readonly writing: RequestHandler;
  readonly signingIn: RequestHandler;
} {
  return {
    all: limit(requests, address),
    writing: limit(writes, (request, response) => askerOf(response).person ?? address(request), [...reading]),
    signingIn: limit(signIns, address),
  };
}
