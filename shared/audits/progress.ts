import type { Progress } from './audit.ts';

/** The progress of a part as progress of the whole: the part begins at `from` and makes up `share` of it. Stops the part when stopped. */
export function* asPart<T>(part: Generator<Progress, T>, from: number, share: number): Generator<Progress, T> {
  let ended = false;
  try {
    for (;;) {
      const step = part.next();
      if (step.done) {
        ended = true;
        return step.value;
      }
      yield { ...step.value, done: from + share * Math.min(1, Math.max(0, step.value.done)) };
    }
  } catch (error) {
    ended = true;
    throw error;
  } finally {
    if (!ended) part.return(undefined as never);
  }
}
