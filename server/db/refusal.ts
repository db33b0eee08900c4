import type { ProblemCode } from '../../shared/contracts/common.ts';

/**
 * A request that cannot be granted, as a value to throw through a transaction: it rolls back, and
 * `middleware/problem` makes a problem document of it. `members` are the further members of that document.
 */
export class Refusal extends Error {
  readonly code: ProblemCode;
  readonly members: Readonly<Record<string, unknown>>;
  constructor(code: ProblemCode, detail: string, members: Readonly<Record<string, unknown>> = {}) {
    super(detail);
    this.name = 'Refusal';
    this.code = code;
    this.members = members;
  }
}

/** What whoever may not read a thing is told about it: the same as if it were not there. */
export const notFound = (): Refusal => new Refusal('not-found', 'There is nothing here, or nothing that you may read.');
