import type { Database, Transaction } from '../db/connection.ts';
import { Refusal } from '../db/refusal.ts';
import type { Standing } from '../db/standing.ts';
import type { Road } from '../mail/road.ts';

/** What services work with; made once by the program that starts. */
export interface Context {
  readonly database: Database;
  /** Puts an edition into the queue of those whose claims are to be computed. */
  readonly askForClaims: (tx: Transaction, edition: string) => Promise<void>;
}

/** What the installation is to those who come in: how mail leaves it, and who are its stewards from the start. */
export interface House {
  readonly mail: Road['kind'];
  /** Addresses, and `github:login`, whose people are stewards as soon as they sign in. */
  readonly stewards: readonly string[];
}

/** The id of the person who asks. Actions that reach a service through it are never a visitor's. */
export function personOf(standing: Standing): string {
  if (standing.person === null) throw new Refusal('sign-in-needed', 'Sign in to do this.');
  return standing.person;
}
