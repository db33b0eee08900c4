import { newAssistant } from '../../shared/derivation/assist.ts';
import { type Answers, type Derivation, newDerivation, type Step } from '../../shared/derivation/derive.ts';
import kernelAddress from '../../shared/spectra/kernel/kernel.wasm?url';
import { wasmKernel } from '../../shared/spectra/kernel/wasm.ts';
import type { Report } from '../../shared/contracts/report.ts';
import { type Answer, type Ask, type AskHelp, type HelpAnswer, type Learn, protocol } from './messages.ts';

/**
 * The engine's home in the browser. A text is answered in slices: at once with all that is symbolic or known from before;
 * numerical answers follow after a pause in typing, one by one. A newer text ends the run of the older.
 */

/** A browser answers what takes some seconds; the rest stands open with its cost, for the server. */
const limit = { operations: 4e10, bytes: 2 ** 28 };
/** Numbers wait for this pause in typing, so that no key waits for them, in milliseconds. */
const pause = 300;
/** Longest stretch of work before looking whether a newer text has come, in milliseconds. */
const slice = 12;

/** The first report stands by then, with whatever is decided; the rest follows, in milliseconds. */
const firstWithin = 600;

const scope = self as unknown as {
  onmessage: ((event: MessageEvent<Ask | AskHelp | Learn>) => void) | null;
  postMessage: (answer: Answer | HelpAnswer) => void;
};

let newest: Ask | undefined;
let begun = 0;
const hurried = (): boolean => performance.now() - begun > firstWithin;
/** Answers that came from the server since the last text was begun. */
let told: Answers = {};
let working = false;

/** Waits until messages that have arrived are taken in; timers would be held back to 4 ms. */
const channel = new MessageChannel();
const turn = (): Promise<void> =>
  new Promise((resolve) => {
    channel.port1.onmessage = () => resolve();
    channel.port2.postMessage(null);
  });
const rest = (milliseconds: number): Promise<void> => new Promise((resolve) => setTimeout(resolve, milliseconds));

async function engine(): Promise<Derivation> {
  try {
    const answer = await fetch(kernelAddress);
    return newDerivation({ limit, hurried, kernel: await wasmKernel(await answer.arrayBuffer()) });
  } catch {
    // Without WebAssembly the plain kernel does the same, more slowly.
    return newDerivation({ limit, hurried });
  }
}
const ready = engine();

const assistant = newAssistant();

/** What an editor asks comes in between the slices of a run, and needs no kernel. */
function help({ id, text, question }: AskHelp): HelpAnswer {
  try {
    return { kind: 'help', id, answer: assistant.answer(text, question) };
  } catch {
    return { kind: 'help', id, answer: null };
  }
}

scope.onmessage = ({ data }) => {
  if (data.kind === 'help') {
    scope.postMessage(help(data));
    return;
  }
  if (data.kind === 'learn') {
    // The server's engine is of this page's build, or the names of its questions would be others.
    told = { ...told, ...(data.answers as Answers) };
    return;
  }
  newest = data;
  if (!working) void work();
};

/** Answers the newest text until none newer has come. */
async function work(): Promise<void> {
  working = true;
  const derivation = await ready;
  for (let ask = newest; ask; ask = newest) {
    newest = undefined;
    derivation.learn(told);
    told = {};
    try {
      await answer(derivation, ask);
    } catch (error) {
      const message = error instanceof Error ? error.message : 'The engine could not read this text.';
      scope.postMessage({ protocol, version: ask.version, part: Number.MAX_SAFE_INTEGER, kind: 'failed', message });
    }
  }
  working = false;
}

async function answer(derivation: Derivation, { version, text, protocol: theirs }: Ask): Promise<void> {
  let part = 0;
  begun = performance.now();
  const say = (report: Report, waiting: number) => {
    scope.postMessage({ protocol, version, part, kind: 'report', report, waiting });
    part += 1;
  };
  if (theirs !== protocol) throw new Error('The page is older than the engine; load it again.');
  const run: Generator<Step, Report> = derivation.run(text);
  try {
    for (let until = performance.now() + slice; ;) {
      const step = run.next();
      if (step.done) return say(step.value, 0);
      if (step.value.kind === 'report') {
        say(step.value.report, step.value.waiting);
        if (part === 1) await rest(pause);
      }
      if (performance.now() < until) continue;
      await turn();
      if (newest) return;
      until = performance.now() + slice;
    }
  } finally {
    // Ends a run that is left half way; what it has answered is kept by the derivation.
    run.return(undefined as never);
  }
}
