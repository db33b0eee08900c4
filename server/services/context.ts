import type { Database, Transaction } from '../db/connection.ts';
import { Refusal } from '../db/refusal.ts';
import type { Standing } from '../db/standing.ts';

/** What services work with; made once by the program that starts. */
export interface Context {
  readonly database: Database;
  /** Puts an edition into the queue of those whose claims are to be computed. */
  readonly askForClaims: (tx: Transaction, edition: string) => Promise<void>;
}

/** The id of the person who asks. Actions that reach a service through it are never a visitor's. */
export function personOf(standing: Standing): string {
  if (standing.person === null) throw new Refusal('sign-in-needed', 'Sign in to do this.');
  return standing.person;
}
