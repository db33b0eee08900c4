import { parentPort } from 'node:worker_threads';
import { answerAsked, askedIn, openReason } from '../../shared/derivation/asked.ts';
import { newDerivation } from '../../shared/derivation/derive.ts';
import { onCluster } from '../../shared/derivation/cluster.ts';
import { loadKernel } from './kernel.ts';
import { type Said, speed, type Task, type ThreadProgress } from './task.ts';

/** How often a thread says how far it is, in milliseconds. */
const telling = 200;
/** Share of an evaluation's time after which nothing further is begun: what is left stands open, and the rest is kept. */
const share = 0.8;
const standardSeconds = 60;

/**
 * The program of one evaluation thread: a task comes, its result goes. Nothing is kept from one task to the next: each has a
 * derivation and a kernel's memory of its own.
 */
async function answer(task: Task): Promise<Said> {
  switch (task.kind) {
    case 'list':
      return { asked: askedIn(task.source, task.choice) };
    case 'derive': {
      const seconds = share * (task.seconds ?? standardSeconds);
      const end = performance.now() + 1000 * seconds;
      const limit = { operations: speed * seconds, bytes: 2 ** 30 };
      const late = () => performance.now() > end;
      const derivation = newDerivation({ kernel: await loadKernel(), limit, late });
      derivation.learn(task.known ?? {});
      return { report: derivation.derive(task.source), found: derivation.found() };
    }
    case 'cluster':
      return { cluster: onCluster(task.source, task.asked) };
    case 'answer': {
      const means = { kernel: await loadKernel(), limit: task.limit, from: task.from };
      const run = answerAsked(task.source, task.question, means, task.choice);
      let next = 0;
      let checkpoint: unknown;
      for (;;) {
        const step = run.next();
        if (step.done) return { findings: step.value, open: step.value ? openReason(step.value) : undefined };
        checkpoint = step.value.checkpoint ?? checkpoint;
        if (performance.now() < next) continue;
        next = performance.now() + telling;
        const { done, doing } = step.value;
        const progress: ThreadProgress = checkpoint === undefined ? { done, doing } : { done, doing, checkpoint };
        // Posting copies, so a checkpoint may be written on afterwards.
        parentPort?.postMessage({ progress } satisfies Said);
        checkpoint = undefined;
      }
    }
  }
}

parentPort?.on('message', (task: Task) => {
  void answer(task)
    // The engine says limits and problems in its report; whatever it throws is a fault of ours, or of the choice.
    .catch((error: unknown): Said => {
      const words = error instanceof Error ? error.message : String(error);
      return {
        failure: error instanceof Error && error.name === 'WrongSizes' ? words : `The engine broke down: ${words}`,
      };
    })
    .then((said) => parentPort?.postMessage(said));
});
