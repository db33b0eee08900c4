import type { Cost, Finding, Means, Progress, Question } from '../audits/audit.ts';
import { audits } from '../audits/registry.ts';
import { evaluateSource, type Program } from '../language/evaluate.ts';
import { onSizes, readSizes } from '../language/sizes.ts';
import { sizeText } from '../lattice/cluster.ts';
import { buildMap } from '../maps/registry.ts';
import { sha256 } from './digest.ts';
import { engineVersion } from './engine.ts';
import { findingsOf, questionsOf } from './questions.ts';

/** Questions that others can be asked: named by what they ask, so that the same question has the same name everywhere. */

/** Audits that are put off until the first report stands, because they may take long. */
export const numerical: ReadonlySet<string> = new Set([
  ...['spectrum', 'degeneracy', 'expect', 'scan', 'count', 'effective', 'symmetries'],
]);

/** Names of all audits, in the order of the language's help. */
export const auditNames: readonly string[] = [...audits.keys()];

/** What of a source is asked: all of it, or some audits only; on the sizes that it names, or on others. */
export interface Choice {
  /** Names of audits. */
  readonly only?: readonly string[];
  /** As behind `on`. */
  readonly sizes?: string;
}

/** Thrown where sizes do not fit the lattice of the source. */
export class WrongSizes extends Error {
  constructor(message: string) {
    super(message);
    this.name = 'WrongSizes';
  }
}

/** The questions of a program, as chosen, in the order of its lines. Throws WrongSizes. */
export function chosenQuestions({ audits: lines, values, lattice }: Program, { only, sizes }: Choice): Question[] {
  const wanted = only ? lines.filter(({ audit }) => only.includes(audit)) : lines;
  const others = sizes !== undefined && lattice ? readSizes(sizes, lattice) : undefined;
  if (others && 'wrong' in others) throw new WrongSizes(`The size ${sizes ?? ''} cannot be used: ${others.wrong}`);
  const placed = others ? wanted.map((line) => onSizes(line, others)) : wanted;
  return placed.flatMap((line) => questionsOf(line, values));
}

/** Names that were made; a key is long, and typing asks for the same ones again and again. */
const names = new Map<string, string>();
const keptNames = 500;

/** The name of a question: SHA-256 of the engine's version and all that the answer depends on, 64 hex digits. */
export function nameOf({ key }: Pick<Question, 'key'>): string {
  let name = names.get(key);
  if (name === undefined) {
    name = sha256(`${engineVersion}\n${key}`);
    if (names.size >= keptNames) names.clear();
    names.set(key, name);
  }
  return name;
}

/** A question as others see it: plain data. With the source it stands in, it is whole in itself. */
export interface Asked {
  readonly question: string;
  readonly audit: string;
  readonly line: number;
  /** The audit as it is written. */
  readonly text: string;
  /** The size it is asked on; empty where there is none. */
  readonly size: string;
  readonly cost: Cost;
}

/** The numerical questions of a source, each once, with what each would cost. Throws WrongSizes. */
export function askedIn(source: string, choice: Choice = {}): readonly Asked[] {
  const program = evaluateSource(source, { buildMap }, undefined);
  const asked = new Map<string, Asked>();
  for (const question of chosenQuestions(program, choice)) {
    const audit = audits.get(question.audit);
    if (!audit || !numerical.has(question.audit) || asked.has(nameOf(question))) continue;
    asked.set(nameOf(question), {
      question: nameOf(question),
      audit: question.audit,
      line: question.statement.place.line,
      text: question.statement.text,
      size: question.size ? sizeText(question.size) : '',
      cost: audit.cost(question),
    });
  }
  return [...asked.values()];
}

/**
 * Answers one question of a source, in slices; null if the source does not ask it. `means.from` takes up an earlier run from its
 * last checkpoint. Throws WrongSizes.
 */
export function* answerAsked(
  source: string,
  name: string,
  means: Means,
  choice: Choice = {},
): Generator<Progress, readonly Finding[] | null> {
  const program = evaluateSource(source, { buildMap }, undefined);
  const question = chosenQuestions(program, choice).find((one) => nameOf(one) === name);
  return question ? yield* findingsOf(question, means) : null;
}

/** Why findings leave something open; undefined if they decide all. What stands open here may be decided elsewhere. */
export function openReason(findings: readonly Finding[]): string | undefined {
  if (findings.length === 0) return 'there is nothing to decide';
  return findings.flatMap(({ evidence }) => (evidence.kind === 'reason' ? [evidence.reason] : []))[0];
}

/** Whether findings may be kept as plain data and given to others. */
export const isPortable = (findings: readonly Finding[]): boolean => openReason(findings) === undefined;

export type { Finding };
