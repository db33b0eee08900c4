/** A thread that does what its source says, for the tests of the pool: no engine in it. */
import { parentPort, threadId } from 'node:worker_threads';

const hold = [];
parentPort.on('message', ({ source }) => {
  if (source === 'for ever') for (;;);
  if (source === 'much') for (;;) hold.push(Array.from({ length: 100_000 }, (_, n) => ({ n })));
  if (source === 'throw') throw new Error('thrown on purpose');
  if (source === 'end') process.exit(3);
  if (source === 'failure') parentPort.postMessage({ failure: 'said on purpose' });
  else parentPort.postMessage({ report: { source, thread: threadId } });
});
