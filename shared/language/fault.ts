import type { Span } from '../../grammar/syntax.ts';
import type { Problem, RefusalWitness } from '../contracts/report.ts';

/** What is wrong, in words and as data; where it is is added by a `Fault`. */
export interface Saying {
  readonly code: string;
  readonly message: string;
  readonly hint: string;
  /** A replacement for the offending text, where the hint is one. */
  readonly fix?: string;
  readonly severity?: 'error' | 'caution';
  /** What a map's refusal rests on. */
  readonly witness?: RefusalWitness;
}

/** A saying with its place: offsets in the text of its statement. */
export interface Fault extends Saying, Span {}

/** Thrown inside the evaluation of one statement and caught there; carries the fault. */
export class ProblemError extends Error {
  readonly saying: Saying;
  readonly place: Span | undefined;
  constructor(saying: Saying, place: Span | undefined) {
    super(saying.message);
    this.name = 'ProblemError';
    this.saying = saying;
    this.place = place;
  }
}

/** Throws a problem at a place. */
export function fail(saying: Saying, place: Span | undefined): never {
  throw new ProblemError(saying, place);
}

/** Levenshtein distance, given up beyond `most`. */
export function editDistance(a: string, b: string, most = 3): number {
  if (Math.abs(a.length - b.length) > most) return most + 1;
  let row = Array.from({ length: b.length + 1 }, (_, k) => k);
  for (let i = 1; i <= a.length; i++) {
    const next = [i];
    for (let j = 1; j <= b.length; j++) {
      const change = (row[j - 1] ?? 0) + (a[i - 1] === b[j - 1] ? 0 : 1);
      next.push(Math.min(change, (row[j] ?? 0) + 1, (next[j - 1] ?? 0) + 1));
    }
    if (Math.min(...next) > most) return most + 1;
    row = next;
  }
  return row[b.length] ?? most + 1;
}

/** The known name nearest to what was written, if one is near enough to be meant. */
export function nearest(name: string, known: Iterable<string>): string | undefined {
  let best: string | undefined;
  let least = name.length <= 2 ? 1 : name.length <= 5 ? 2 : 3;
  for (const candidate of known) {
    const same = candidate.toLowerCase() === name.toLowerCase();
    const distance = same ? 0.5 : editDistance(name, candidate, 3);
    if (candidate !== name && distance <= least && (best === undefined || distance < least) && distance < name.length) {
      best = candidate;
      least = distance;
    }
  }
  return best;
}

/** A fault in the text of a statement, as a problem in the source. Lines and columns count from 1, in characters. */
export function problemAt(fault: Fault, text: string, line: number): Problem {
  const before = text.slice(0, fault.start);
  const newlines = before.split('\n').length - 1;
  return {
    code: fault.code,
    message: fault.message,
    line: line + newlines,
    column: fault.start - (before.lastIndexOf('\n') + 1) + 1,
    length: Math.max(fault.end - fault.start, 1),
    hint: fault.hint,
    ...(fault.fix === undefined ? {} : { fix: fault.fix }),
    ...(fault.witness === undefined ? {} : { witness: fault.witness }),
    severity: fault.severity ?? 'error',
  };
}
