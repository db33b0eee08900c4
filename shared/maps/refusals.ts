import type { Extended, LocalString } from '../algebra/pauli/types.ts';
import type { Outcome, Refusal } from '../language/values.ts';

export const allowed = <T>(value: T): Outcome<T> => ({ ok: true, value });

/** A refusal with its sentence, the offending piece and, where one is known, the symmetry under which that is charged. */
export const refused = (
  reason: string,
  term?: LocalString | Extended,
  symmetry?: Refusal['symmetry'],
): { readonly ok: false; readonly refusal: Refusal } => ({ ok: false, refusal: { reason, term, symmetry } });

/** A declaration that cannot stand as a map; `message` says why. The evaluator turns it into a problem at the statement. */
export class MapRefused extends Error {
  constructor(message: string) {
    super(message);
    this.name = 'MapRefused';
  }
}
