import type { Response } from 'express';
import type { Listener, Live } from '../live.ts';
import type { Bind } from '../middleware/endpoint.ts';

/** A comment now and then keeps proxies from closing a quiet connection. */
const quietMs = 20_000;
/** How soon a browser connects again when the connection broke. */
const retryMs = 2_000;

/** Server-sent events (WHATWG HTML, section 9.2), until the browser goes or may read no more. */
export function liveRoutes(bind: Bind, live: Live): void {
  bind('live', ({ standing, response }) => stream(response, (listener) => live.listen(standing, listener)));
  bind('liveMine', ({ standing, response }) =>
    stream(response, (listener) => Promise.resolve(live.listenFor(standing.person ?? '', listener))),
  );
}

/** Sends what is heard between `listen` and the end of the connection. */
async function stream(
  response: Response,
  listen: (listener: Listener) => Promise<() => void | Promise<void>>,
): Promise<never> {
  let gone = false;
  let silence: (() => void | Promise<void>) | undefined;
  const end = (): void => {
    if (!response.writableEnded) response.end();
  };
  const closed = new Promise<void>((resolve) => response.once('close', resolve));
  void closed.then(() => (gone = true));
  response.status(200).set({
    'Content-Type': 'text/event-stream',
    'Cache-Control': 'no-store',
    'X-Accel-Buffering': 'no',
  });
  response.flushHeaders();
  response.write(`retry: ${String(retryMs)}\n\n`);
  const send = (event: string, data: unknown): void => {
    if (!gone) response.write(`event: ${event}\ndata: ${JSON.stringify(data)}\n\n`);
  };
  const quiet = setInterval(() => response.write(': here\n\n'), quietMs);
  try {
    silence = await listen({ send, end });
    await closed;
  } finally {
    clearInterval(quiet);
    await silence?.();
  }
  // Nothing to answer any more: all was sent as it happened.
  return undefined as never;
}
