import type { Database } from '../db/connection.ts';
import { openPool, type PoolLimits } from '../evaluation/pool.ts';
import type { Queue } from '../evaluation/queue.ts';
import { answerQuestionJob } from './answering.ts';
import { takeTexts } from './evaluations.ts';
import { sealEditionJob } from './sealing.ts';

/**
 * Takes what waits until it is closed: editions, texts that are compared, and single questions on threads of their own, so that no long question keeps an
 * edition waiting. To be closed before the queue: what runs is given back to it.
 */
export async function takeWork(
  { evaluation, questions }: { readonly evaluation: PoolLimits; readonly questions: PoolLimits },
  database: Database,
  queue: Queue,
  onTrouble: (error: unknown) => void,
): Promise<{ readonly close: () => Promise<void> }> {
  const editions = openPool(evaluation);
  const answers = openPool(questions);
  const texts = takeTexts(database, editions, onTrouble);
  const close = async (): Promise<void> => {
    await Promise.all([editions.close(), answers.close(), texts.close()]);
  };
  try {
    await queue.work(evaluation.threads, (id) => sealEditionJob(database, editions, id));
    await queue.questions.work(questions.threads, (name) => answerQuestionJob(database, answers, name));
  } catch (error) {
    await close();
    throw error;
  }
  return { close };
}
