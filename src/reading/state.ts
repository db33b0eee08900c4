import type { Report } from '../../shared/contracts/report.ts';
import type { Helper } from './help.ts';
import type { Answer } from '../worker/messages.ts';
import { protocol } from '../worker/messages.ts';
import { type Placed, type Slice, slicesOf } from './slices.ts';

/** The report in view. A value: each answer makes a new one. */
export interface Reading {
  /** Version of the text last sent to the engine, and of the text that `slices` answer; 0 before the first. */
  readonly asked: number;
  readonly answered: number;
  /** Which report on that version is shown; numerical answers come one after another. −1 before the first. */
  readonly part: number;
  /** Numerical answers still under way. */
  readonly waiting: number;
  readonly slices: readonly Slice[];
  /** The last lattice there was: a broken lattice line leaves the plate as it was. */
  readonly lattice: Report['lattice'];
  readonly engine: string;
  /** Why the engine gave no report for the version answered, in words. */
  readonly failed: string | undefined;
  /** Answers what an editor asks; absent where nothing is written. */
  readonly helper?: Helper;
}

export const unread: Reading = {
  asked: 0,
  answered: 0,
  part: -1,
  waiting: 0,
  slices: [],
  lattice: null,
  engine: '',
  failed: undefined,
};

export const asking = (reading: Reading, version: number): Reading => ({ ...reading, asked: version });

/** Whether an answer is newer than what is shown: of a later version, or a later report on the same one. */
const isNewer = (reading: Reading, answer: Answer): boolean =>
  answer.version > reading.answered || (answer.version === reading.answered && answer.part > reading.part);

/** Takes an answer for the entries it was asked about. Answers older than what is shown are dropped: late answers lose. */
export function answering(reading: Reading, answer: Answer, entries: readonly Placed[]): Reading {
  if (!isNewer(reading, answer)) return reading;
  const { version, part } = answer;
  const answered = { ...reading, answered: version, part, waiting: 0 };
  if (answer.protocol !== protocol) return { ...answered, failed: 'The page is older than the engine; load it again.' };
  if (answer.kind === 'failed') return { ...answered, failed: answer.message };
  const { report } = answer;
  const lattice = report.lattice ?? (report.problems.length > 0 ? reading.lattice : null);
  return {
    ...answered,
    waiting: answer.waiting,
    slices: slicesOf(report, entries, reading.slices),
    lattice: JSON.stringify(lattice) === JSON.stringify(reading.lattice) ? reading.lattice : lattice,
    engine: report.engine,
    failed: undefined,
  };
}

/** A sealed report (an edition), read as it stands. */
export const sealed = (report: Report, entries: readonly Placed[]): Reading =>
  answering(unread, { protocol, version: 1, part: 0, kind: 'report', report, waiting: 0 }, entries);
