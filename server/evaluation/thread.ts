import { parentPort } from 'node:worker_threads';
import { newDerivation } from '../../shared/derivation/derive.ts';
import { loadKernel } from './kernel.ts';
import type { ThreadAnswer } from './pool.ts';

/**
 * The program of one evaluation thread: a source comes, its report goes. Nothing is kept from one source to the next: each has
 * a derivation and a kernel's memory of its own.
 */
async function answer(source: string): Promise<ThreadAnswer> {
  try {
    return { report: newDerivation({ kernel: await loadKernel() }).derive(source) };
  } catch (error) {
    // The engine says limits and problems in its report; whatever it throws is a fault of ours.
    return { failure: `The engine broke down: ${error instanceof Error ? error.message : String(error)}` };
  }
}

parentPort?.on('message', (source: string) => {
  void answer(source).then((said) => parentPort?.postMessage(said));
});
