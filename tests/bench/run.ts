import { measureTyping } from './typing.ts';

/** The measurements that `npm run bench` prints, each beside its goal. Times in milliseconds. */
const typing = await measureTyping();
const figure = (value: number): string => value.toFixed(0).padStart(5);
process.stdout.write(
  [
    `typing, ${String(typing.lines)} lines, ${String(typing.keys)} keys, key to painted answer`,
    `  median ${figure(typing.median)}   95th percentile ${figure(typing.p95)} (goal 100)   worst ${figure(typing.worst)}`,
    '',
  ].join('\n'),
);
