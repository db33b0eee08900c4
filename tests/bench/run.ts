import { measureEngine } from './engine.ts';
import { measureMaps } from './maps.ts';
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
const engine = measureEngine();
process.stdout.write(
  [
    `the engine, ${String(engine.lines)} lines, from text to first report`,
    `  one key later, median ${figure(engine.changed)} (goal 50)   read for the first time, median ${figure(engine.whole)}`,
    '',
  ].join('\n'),
);
const maps = measureMaps();
process.stdout.write(
  [
    'a model of twenty sums through a map, with its proofs',
    ...maps.map(
      ({ lattice, map, families, first, median, worst }) =>
        `  ${`${lattice}, ${map}`.padEnd(22)} ${String(families).padStart(3)} families   median ${figure(median)} (goal 200)   worst ${figure(worst)}   first ${figure(first)}`,
    ),
    '',
  ].join('\n'),
);
