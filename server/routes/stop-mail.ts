import { type Response, Router, urlencoded } from 'express';
import { plainPage } from '../page.ts';
import type { Context } from '../services/context.ts';
import { readStop, stopMail } from '../services/notices.ts';

/**
 * Where a mail's link stops mail like it. A GET asks, so that what only looks at links changes nothing; a POST does it, also the
 * one that a mail program sends by itself (RFC 8058). What is signed in the address is the whole right, so no session is asked for.
 */
export function stopMailPages(
  context: Pick<Context, 'database'>,
  secret: string,
  nonceOf: (response: Response) => string,
): Router {
  const router = Router();
  const send = (response: Response, status: number, title: string, body: string): void => {
    response
      .status(status)
      .set('Cache-Control', 'no-store')
      .type('html')
      .send(plainPage(title, nonceOf(response), body));
  };
  const unknown = (response: Response): void =>
    send(
      response,
      404,
      'This link stops nothing',
      '<p>It is not whole. Choose how notices come on your account page.</p>',
    );

  router.get('/:token', (request, response) => {
    const stop = readStop(secret, request.params.token);
    if (stop === null) return unknown(response);
    const what = stop.notebook === null ? 'any mail with notices' : 'mail about this notebook';
    const body = `<p>You will get no more ${what}. Notices stay where you read them, on your pages.</p>
<form method="post"><button>Stop this mail</button></form>`;
    send(response, 200, 'Stop this mail?', body);
  });
  router.post('/:token', urlencoded({ extended: false, limit: '1kb' }), async (request, response) => {
    const stop = readStop(secret, request.params.token);
    if (stop === null) return unknown(response);
    await stopMail(context, stop);
    send(
      response,
      200,
      'Stopped',
      '<p>No more of this mail. To have it again, go to your <a href="/account">account page</a>.</p>',
    );
  });
  return router;
}
