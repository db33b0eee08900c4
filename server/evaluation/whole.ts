import type { Report } from '../../shared/contracts/report.ts';
import { type Asked, askedIn, type Choice } from '../../shared/derivation/asked.ts';
import { type Derivation, newDerivation, standardLimit } from '../../shared/derivation/derive.ts';
import { loadKernel } from './kernel.ts';
import { openPool } from './pool.ts';

/** How far the whole is: 0 … 1, which of its numerical questions are answered, and what is being done. */
export interface WholeProgress {
  readonly done: number;
  readonly answered: number;
  readonly questions: number;
  readonly doing: string;
}

export interface Manner {
  readonly choice: Choice;
  /** Threads that answer numerical questions side by side; with one, no thread is started. */
  readonly threads: number;
  readonly onProgress: (progress: WholeProgress) => void;
}

/** Nobody who waits at a terminal is told that it took too long: they stop it. (As long as a timer of Node lasts, less a little.) */
const seconds = 20 * 86_400;
const heapMb = 4096;

/** The report of a source, for whoever waits for it. Throws WrongSizes, and EvaluationFailed where a thread breaks down. */
export async function deriveWhole(source: string, { choice, threads, onProgress }: Manner): Promise<Report> {
  const derivation = newDerivation({ kernel: await loadKernel(), choice });
  if (threads > 1) await answerInThreads(derivation, source, { choice, threads, onProgress });
  const run = derivation.run(source);
  let questions = 0;
  let answered = 0;
  for (;;) {
    const step = run.next();
    if (step.done) return step.value;
    if (step.value.kind === 'report') {
      questions = Math.max(questions, step.value.waiting);
      answered = questions - step.value.waiting;
    } else if (questions > 0) {
      const { done, doing } = step.value.progress;
      onProgress({ done: (answered + done) / questions, answered, questions, doing });
    }
  }
}

async function answerInThreads(
  derivation: Derivation,
  source: string,
  { choice, threads, onProgress }: Manner,
): Promise<void> {
  const asked = askedIn(source, choice);
  const done = new Map<string, number>(asked.map(({ question }) => [question, 0]));
  const tell = (doing: string): void => {
    const all = [...done.values()];
    const sum = all.reduce((total, one) => total + one, 0);
    const answered = all.filter((one) => one === 1).length;
    onProgress({ done: sum / all.length, answered, questions: all.length, doing });
  };
  const pool = openPool({ threads: Math.min(threads, Math.max(1, asked.length)), seconds, memoryMb: heapMb });
  const answer = async ({ question, text }: Asked): Promise<void> => {
    const watching = {
      onProgress: (progress: { readonly done: number; readonly doing: string }) => {
        done.set(question, Math.min(progress.done, 0.99));
        tell(progress.doing);
      },
    };
    const task = { kind: 'answer', source, question, limit: standardLimit, choice } as const;
    const { findings } = await pool.do(task, watching);
    if (findings) derivation.learn({ [question]: findings });
    done.set(question, 1);
    tell(text);
  };
  try {
    // The dearest first, so that none is left over for one thread at the end.
    await Promise.all([...asked].sort((a, b) => b.cost.operations - a.cost.operations).map(answer));
  } finally {
    await pool.close();
  }
}
