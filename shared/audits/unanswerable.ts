import { PeriodMismatch } from '../algebra/finite/wrap.ts';
import { sizeText, type Cluster } from '../lattice/cluster.ts';

/** Something that cannot be answered at this size; the sentence says what, and the way out. */
export class Unanswerable extends Error {
  /** True where it is an error of the source (labels that do not commute, a sector without states). */
  readonly isProblem: boolean;
  constructor(message: string, isProblem = false) {
    super(message);
    this.name = 'Unanswerable';
    this.isProblem = isProblem;
  }
}

/** Runs something that wraps `what` onto the cluster; a period that does not fit the size is Unanswerable. */
export function fitting<T>(what: string, cluster: Cluster, run: () => T): T {
  try {
    return run();
  } catch (error) {
    if (error instanceof PeriodMismatch)
      throw new Unanswerable(`${what} does not fit on ${sizeText(cluster.size)}: ${error.message}`);
    throw error;
  }
}
