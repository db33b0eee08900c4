import type { Job } from '../../../shared/contracts/jobs.ts';

/** A time in words, in the unit that suits it. */
export function duration(seconds: number): string {
  if (seconds < 1.5) return 'a second';
  if (seconds < 100) return `${String(Math.round(seconds))} seconds`;
  if (seconds < 5_400) return `${String(Math.round(seconds / 60))} minutes`;
  if (seconds < 172_800) return `${String(Math.round(seconds / 3_600))} hours`;
  return `${String(Math.round(seconds / 86_400))} days`;
}

/** How a job stands, in one line. */
export function jobInWords({ state, done, remainingSeconds, reason, estimate }: Job): string {
  switch (state) {
    case 'waiting':
      return `waits for a worker; estimated ${duration(estimate.seconds)}`;
    case 'working': {
      const left =
        remainingSeconds === null ? `estimated ${duration(estimate.seconds)}` : `${duration(remainingSeconds)} left`;
      return `${String(Math.floor(100 * done))} %, ${left}`;
    }
    case 'done':
      return 'answered';
    case 'failed':
      return `not answered: ${reason ?? 'the reason is not known'}`;
    case 'cancelled':
      return 'taken back';
  }
}
