import type { Answer } from '../../shared/contracts/endpoints.ts';
import { worked } from '../catalogue/index.ts';
import { Refusal } from '../db/refusal.ts';

/** The worked derivations, without their texts. */
export function listWorked(): Answer<'listWorked'> {
  return { items: worked().map(({ source: _, ...listed }) => listed) };
}

/** One of them with its text. Throws `not-found` for a name that is not in the table. */
export function getWorked(name: string): Answer<'getWorked'> {
  const found = worked().find((one) => one.name === name);
  if (found === undefined) throw new Refusal('not-found', 'The catalogue has no derivation of this name.');
  return found;
}
