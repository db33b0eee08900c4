import { createHmac, timingSafeEqual } from 'node:crypto';

/** Whose mail is to stop: about one notebook, or (null) all of it. */
export interface StopsMail {
  readonly person: string;
  readonly notebook: string | null;
}

const uuid = /^[0-9a-f]{8}(?:-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

/** What the link in a mail carries that stops it (RFC 8058): signed, so that nobody stops the mail of others, and good for ever. */
export function stopToken(secret: string, { person, notebook }: StopsMail): string {
  const said = `${person}.${notebook ?? ''}`;
  return `${Buffer.from(said).toString('base64url')}.${sign(secret, said)}`;
}

/** Reads a token that `stopToken` wrote with the same secret; null for any other. */
export function readStopToken(secret: string, token: string): StopsMail | null {
  const [encoded = '', signature = ''] = token.split('.');
  const said = Buffer.from(encoded, 'base64url').toString();
  const [right, given] = [Buffer.from(sign(secret, said)), Buffer.from(signature)];
  if (right.length !== given.length || !timingSafeEqual(right, given)) return null;
  const [person = '', notebook = ''] = said.split('.');
  if (!uuid.test(person) || (notebook !== '' && !uuid.test(notebook))) return null;
  return { person, notebook: notebook === '' ? null : notebook };
}

const sign = (secret: string, said: string): string =>
  createHmac('sha256', secret).update(`stop mail ${said}`).digest('base64url');
