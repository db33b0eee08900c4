import { expect } from 'vitest';
import { type Client, type Server, visitor } from './client.ts';

export interface CaughtMail {
  readonly to: readonly string[];
  readonly subject: string;
  readonly text: string;
  readonly headers: Readonly<Record<string, string>>;
}

/** The mails that the stand-in caught for an address, newest first. */
export async function mailbox(here: Pick<Server, 'url'>, to: string): Promise<readonly CaughtMail[]> {
  const answer = await visitor(here).fetch(`/auth/stand-in/mail/messages.json?to=${encodeURIComponent(to)}`);
  expect(answer.status).toBe(200);
  return ((await answer.json()) as { items: CaughtMail[] }).items;
}

/** The newest mail to an address, once there are `count` of them. */
export async function mailTo(here: Pick<Server, 'url'>, to: string, count = 1): Promise<CaughtMail> {
  for (let look = 0; look < 100; look += 1) {
    const mails = await mailbox(here, to);
    if (mails.length >= count && mails[0] !== undefined) return mails[0];
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
  throw new Error(`No ${String(count)} mails came to ${to}`);
}

/** What the link of a mail carries behind its #. */
export function tokenIn({ text }: CaughtMail): string {
  const [, token] = /#([\w-]{20,})/.exec(text) ?? [];
  if (token === undefined) throw new Error(`No link in: ${text}`);
  return token;
}

/** Someone who comes in by a link to an address. */
export async function byMail(here: Server, email: string, name: string): Promise<Client> {
  const client = visitor(here);
  const before = (await mailbox(here, email)).length;
  await client.ask('askForLink', { body: { email } });
  await client.ask('useLink', { body: { token: tokenIn(await mailTo(here, email, before + 1)), name } });
  return client;
}
