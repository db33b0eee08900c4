import { statementKeywords } from '../../grammar/words.ts';
import { limits } from '../limits.ts';
import { say, type Saying } from './problem.ts';

/** One statement as it lies in the source: its text, where it begins, and where the lines of its body do. */
export interface Layout {
  /** From column 1 of its first line to the end of its last, without trailing blank and comment lines. */
  readonly text: string;
  /** Line of the source on which it begins, from 1. */
  readonly line: number;
  /** Lines it spans. */
  readonly lines: number;
  /** Its first word. */
  readonly keyword: string;
  /** Offsets in `text` at which a line of its body begins; empty where line ends mean nothing. */
  readonly rules: readonly number[];
}

export interface SourceProblem {
  readonly line: number;
  readonly column: number;
  readonly length: number;
  readonly saying: Saying;
}

const isBlank = (line: string): boolean => /^\s*(?:#|$)/u.test(line);
/** Prose and borders of a notebook's entries (`notebook/text`): a statement ends with its entry. Other comments end nothing. */
const entryMark = /^#[:~]/u;
const indentOf = (line: string): number => /^\s*/u.exec(line)?.[0].length ?? 0;

/** Maps with a body and `lattice custom`: there each indented line is one rule. Other statements are one run of words. */
function hasBody(header: string): boolean {
  const words = header.replace(/#.*$/u, '').trim();
  if (/^lattice\s+custom$/u.test(words)) return true;
  // `map N = …` has a body only for a circuit; a later sign of equality stands in a condition.
  return /^map\s/u.test(words) && (!/^map\s+[^\s=]+\s*=/u.test(words) || /=\s*circuit$/u.test(words));
}

/** Offsets of the rules of a body: a line no deeper than the first one begins a rule, a deeper one continues it. */
function rulesOf(lines: readonly string[]): number[] {
  const offsets: number[] = [];
  let base: number | undefined;
  let offset = 0;
  for (const [k, line] of lines.entries()) {
    if (k > 0 && !isBlank(line)) {
      base ??= indentOf(line);
      if (indentOf(line) <= base) offsets.push(offset);
    }
    offset += line.length + 1;
  }
  return offsets;
}

/**
 * Cuts a source into statements: a line that starts in column 1 begins one, indented lines continue it, blank and
 * comment lines end nothing. Never throws; a source past the limits gives one problem and no statements.
 */
export function layoutOf(source: string): {
  readonly statements: readonly Layout[];
  readonly problems: readonly SourceProblem[];
} {
  const problems: SourceProblem[] = [];
  if (source.length > limits.sourceCharacters)
    return { statements: [], problems: [{ line: 1, column: 1, length: 1, saying: say.tooLong(source.length) }] };
  const lines = source.replace(/^\ufeff/u, '').split(/\r\n|\n|\r/u);
  const statements: Layout[] = [];
  let open: { from: number; to: number } | undefined;
  const close = (): void => {
    if (!open) return;
    const own = lines.slice(open.from, open.to + 1);
    const header = own[0] ?? '';
    statements.push({
      text: own.join('\n'),
      line: open.from + 1,
      lines: own.length,
      keyword: /^[^\s#]+/u.exec(header)?.[0] ?? '',
      rules: hasBody(header) ? rulesOf(own) : [],
    });
    open = undefined;
  };
  for (const [k, line] of lines.entries()) {
    if (isBlank(line)) {
      if (entryMark.test(line)) close();
      continue;
    }
    if (indentOf(line) === 0) {
      close();
      if (statements.length >= limits.statements) {
        problems.push({ line: k + 1, column: 1, length: line.length, saying: say.tooManyStatements() });
        return { statements, problems };
      }
      open = { from: k, to: k };
    } else if (open) open.to = k;
    else {
      const indent = indentOf(line);
      problems.push({ line: k + 1, column: indent + 1, length: line.trim().length, saying: say.indented() });
    }
  }
  close();
  return { statements, problems };
}

export const isKeyword = (word: string): boolean => (statementKeywords as readonly string[]).includes(word);
