import type { Database, Transaction } from '../db/connection.ts';
import { Refusal } from '../db/refusal.ts';
import type { Standing } from '../db/standing.ts';
import type { Asked, Limit } from '../evaluation/task.ts';
import type { Road } from '../mail/road.ts';

/** What services work with; made once by the program that starts. */
export interface Context {
  readonly database: Database;
  /** Puts an edition into the queue of those whose claims are to be computed. */
  readonly askForClaims: (tx: Transaction, edition: string) => Promise<void>;
}

/** Numerical questions, for the workers to answer. */
export interface Questions {
  /** A question of a source by its name, with what it would cost; throws EvaluationFailed. */
  readonly find: (source: string, name: string) => Promise<Asked | undefined>;
  /** Puts a question into the queue when the transaction commits. */
  readonly ask: (tx: Transaction, name: string) => Promise<void>;
  /** The largest that workers take. */
  readonly limit: Limit;
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
