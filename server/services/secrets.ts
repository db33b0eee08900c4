import { createHash, randomBytes } from 'node:crypto';

/** A secret of 192 random bits, for a link in a mail or a token. */
export const newSecret = (): string => randomBytes(24).toString('base64url');

/** What is kept of a secret. It has too many random bits to be guessed, so that one fast hash is enough. */
export const secretHash = (secret: string): string => createHash('sha256').update(secret).digest('hex');
