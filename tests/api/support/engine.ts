import { askedIn } from '../../../shared/derivation/asked.ts';
import { onCluster } from '../../../shared/derivation/cluster.ts';
import { newDerivation } from '../../../shared/derivation/derive.ts';
import type { Pool } from '../../../server/evaluation/pool.ts';
import type { Task } from '../../../server/evaluation/task.ts';

const report = (source: string) => structuredClone(newDerivation().derive(source));

function answer(task: Task): unknown {
  switch (task.kind) {
    case 'list':
      return { asked: askedIn(task.source, task.choice) };
    case 'cluster':
      return { cluster: onCluster(task.source, task.asked) };
    case 'derive':
      return { report: report(task.source) };
    default:
      throw new Error(`no answer to ${task.kind} here`);
  }
}

/** The engine itself, in the test's own thread, in place of a pool of threads. */
export const derivation: Pool = {
  derive: (source) => Promise.resolve(report(source)),
  do: (task) => Promise.resolve(answer(task) as never),
  close: () => Promise.resolve(),
};
