import type { Statement } from '../../grammar/syntax.ts';
import type { Problem } from '../contracts/report.ts';
import type { Lattice } from '../lattice/cells.ts';
import { BudgetSpent, newBudget, type Budget } from '../limits.ts';
import { check, type Scope } from './check.ts';
import { auditForms, type AuditForm } from './forms.ts';
import { declaredWords, guessedNames, newValues } from './names.ts';
import { parseStatement, type Parsed } from './parse.ts';
import { problemAt, say, type Fault } from './problem.ts';
import { layoutOf, type Layout } from './source.ts';
import { evaluateStatement, type EvaluationContext, type Outcome } from './statement.ts';
import type { AuditStatement, ModelValue, Place, Value, Values } from './values.ts';

/** Steps of the evaluation of one source; a step of the language is one to three microseconds. */
export const evaluationSteps = 1_000_000;

/** One statement of a program, for the page: where it is, what it declares, whether it was evaluated. */
export interface StatementResult {
  readonly line: number;
  readonly lines: number;
  readonly keyword: string;
  readonly text: string;
  readonly names: readonly string[];
  /** Evaluated without error. */
  readonly ok: boolean;
  /** Names it depends on that were not evaluated; then it was not evaluated either, and has no problem of its own. */
  readonly waits: readonly string[];
}

/** A source, evaluated as far as it goes. */
export interface Program {
  readonly source: string;
  readonly lattice: Lattice | undefined;
  readonly values: Values;
  readonly audits: readonly AuditStatement[];
  readonly problems: readonly Problem[];
  readonly statements: readonly StatementResult[];
  /** What the next evaluation keeps. */
  readonly kept: ReadonlyMap<string, readonly Kept[]>;
}

/** A statement with all that its outcome depended on. */
export interface Kept {
  readonly line: number;
  readonly parsed: Parsed;
  /** Values of the names it used, by identity; undefined: not declared. */
  readonly used: ReadonlyMap<string, Value | undefined>;
  readonly lattice: Lattice | undefined;
  readonly outcome: Outcome | undefined;
}

/** A value that moved to another line is a new object; both stand for the same evaluation. */
const origins = new WeakMap<Value, Value>();
const originOf = (value: Value | undefined): Value | undefined => (value ? (origins.get(value) ?? value) : undefined);

const lower = (place: Place, by: number): Place => ({ ...place, line: place.line + by });

function movedValue(value: Value, by: number): Value {
  const place = lower(value.place, by);
  const pieces = (m: ModelValue): ModelValue['pieces'] => m.pieces.map((p) => ({ ...p, place: lower(p.place, by) }));
  const next: Value = value.what === 'model' ? { ...value, place, pieces: pieces(value) } : { ...value, place };
  origins.set(next, originOf(value) ?? value);
  return next;
}

function movedAudit(audit: AuditStatement, by: number): AuditStatement {
  const subject = (s: AuditStatement['subjects'][number]): AuditStatement['subjects'][number] => ({
    ...s,
    place: lower(s.place, by),
    sector: s.sector.map((l) => ({ ...l, place: lower(l.place, by) })),
  });
  return {
    ...audit,
    place: lower(audit.place, by),
    subjects: audit.subjects.map(subject),
    against: audit.against && subject(audit.against),
  };
}

const movedOutcome = (outcome: Outcome, by: number): Outcome =>
  by === 0
    ? outcome
    : {
        ...outcome,
        values: outcome.values.map((v) => movedValue(v, by)),
        audit: outcome.audit && movedAudit(outcome.audit, by),
      };

class Run {
  private readonly all = new Map<string, Value>();
  private readonly broken = new Set<string>();
  private readonly lines = new Map<string, number>();
  private lattice: Lattice | undefined;
  private latticeLine: number | undefined;
  private latticeBroken = false;
  private readonly faults: Problem[] = [];
  private readonly audits: AuditStatement[] = [];
  private readonly statements: StatementResult[] = [];
  private readonly kept = new Map<string, Kept[]>();
  private readonly later = new Map<string, number[]>();
  private readonly context: EvaluationContext;
  private readonly budget: Budget;
  private readonly previous: Program | undefined;

  private readonly forms: readonly AuditForm[];

  constructor(context: EvaluationContext, budget: Budget, previous: Program | undefined) {
    this.context = context;
    this.forms = context.forms ?? auditForms;
    this.budget = budget;
    this.previous = previous;
  }

  /** The last evaluation of the same text, nearest to this line. */
  private before(layout: Layout): Kept | undefined {
    const all = this.previous?.kept.get(layout.text) ?? [];
    return all.reduce<Kept | undefined>(
      (best, k) => (!best || Math.abs(k.line - layout.line) < Math.abs(best.line - layout.line) ? k : best),
      undefined,
    );
  }

  /** Undefined once the budget of the whole source is spent. */
  private parse(layout: Layout, before: Kept | undefined): Parsed | undefined {
    if (before) return before.parsed;
    if (this.budget.left < 0) return undefined;
    try {
      return parseStatement(layout, this.budget);
    } catch (error) {
      if (!(error instanceof BudgetSpent)) throw error;
      return { fault: { ...say.spent(error.limit), start: 0, end: layout.keyword.length } };
    }
  }

  private scope(line: number): Scope {
    return {
      state: (name) => (this.all.has(name) ? 'value' : this.broken.has(name) ? 'broken' : undefined),
      hasPart: (name, part) => newValues(this.lattice, this.all).find(`${name}.${part}`) !== undefined,
      later: (name) => this.later.get(name)?.find((l) => l > line),
      names: [...this.all.keys(), ...this.broken],
      measured: (audit) => this.forms.find((f) => f.name === audit)?.quantity?.words ?? [],
    };
  }

  private report(fault: Fault, layout: Layout): void {
    this.faults.push(problemAt(fault, layout.text, layout.line));
  }

  private finish(layout: Layout, names: readonly string[], ok: boolean, waits: readonly string[] = []): void {
    const { line, lines, keyword, text } = layout;
    this.statements.push({ line, lines, keyword, text, names, ok, waits });
    if (ok) return;
    for (const name of names) if (!this.all.has(name)) this.broken.add(name);
    if (keyword === 'lattice' && !this.lattice) this.latticeBroken = true;
  }

  private keep(layout: Layout, kept: Kept): void {
    const list = this.kept.get(layout.text);
    if (list) list.push(kept);
    else this.kept.set(layout.text, [kept]);
  }

  /** Declares names twice, or a second lattice. */
  private conflicts(node: Statement): Fault[] {
    if (node.type === 'lattice' || node.type === 'custom lattice')
      return this.latticeLine === undefined
        ? []
        : [{ ...say.secondLattice(this.latticeLine), start: node.start, end: node.end }];
    const seen = new Set<string>();
    return declaredWords(node).flatMap((word) => {
      const line = seen.has(word.text) ? this.currentLine : this.lines.get(word.text);
      seen.add(word.text);
      return line === undefined ? [] : [{ ...say.twice(word.text, line), start: word.start, end: word.end }];
    });
  }
  private currentLine = 0;

  private one(layout: Layout, parsed: Parsed | undefined, before: Kept | undefined): void {
    this.currentLine = layout.line;
    if (!parsed) return this.finish(layout, guessedNames(layout), false, ['limit']);
    if ('fault' in parsed) {
      this.keep(layout, { line: layout.line, parsed, used: new Map(), lattice: undefined, outcome: undefined });
      this.report(parsed.fault, layout);
      return this.finish(layout, guessedNames(layout), false);
    }
    const { node } = parsed;
    const names = declaredWords(node).map((w) => w.text);
    const scope = this.scope(layout.line);
    const { faults, uses } = check(node, scope);
    const mentioned = uses;
    const wrong = [...this.conflicts(node), ...faults];
    wrong.forEach((fault) => this.report(fault, layout));
    const errors = wrong.some((f) => f.severity !== 'caution');
    const isLattice = node.type === 'lattice' || node.type === 'custom lattice';
    const waits = [...mentioned].filter((name) => scope.state(name) === 'broken');
    const waitsForLattice = this.latticeBroken && !this.lattice && !isLattice && node.type !== 'couplings';
    const used = new Map([...mentioned].map((name) => [name, this.all.get(name)]));
    if (errors || waits.length > 0 || waitsForLattice) {
      this.keep(layout, { line: layout.line, parsed, used, lattice: this.lattice, outcome: undefined });
      this.claim(names, layout.line);
      return this.finish(layout, names, false, waitsForLattice ? ['lattice', ...waits] : waits);
    }
    if (this.budget.left < 0 && !before?.outcome) return this.finish(layout, names, false, ['limit']);
    const outcome = this.outcome(node, layout, before, used, isLattice);
    this.keep(layout, { line: layout.line, parsed, used, lattice: this.lattice, outcome });
    this.accept(layout, names, outcome);
  }

  private claim(names: readonly string[], line: number): void {
    for (const name of names) if (!this.lines.has(name)) this.lines.set(name, line);
  }

  private outcome(
    node: Statement,
    layout: Layout,
    before: Kept | undefined,
    used: ReadonlyMap<string, Value | undefined>,
    isLattice: boolean,
  ): Outcome {
    const same =
      before?.outcome !== undefined &&
      (isLattice || before.lattice === this.lattice) &&
      before.used.size === used.size &&
      [...used].every(([name, value]) => before.used.has(name) && originOf(before.used.get(name)) === originOf(value));
    if (same) return movedOutcome(before.outcome, layout.line - before.line);
    const values = newValues(this.lattice, new Map(this.all));
    return evaluateStatement(node, layout.text, layout.line, values, this.context, this.budget);
  }

  private accept(layout: Layout, names: readonly string[], outcome: Outcome): void {
    outcome.faults.forEach((fault) => this.report(fault, layout));
    const ok = !outcome.faults.some((f) => f.severity !== 'caution');
    this.claim(names, layout.line);
    if (outcome.lattice) {
      this.lattice = outcome.lattice;
      this.latticeLine = layout.line;
    }
    for (const value of outcome.values) {
      this.all.set(value.name, value);
      this.broken.delete(value.name);
    }
    if (outcome.audit) this.audits.push(outcome.audit);
    this.finish(layout, names, ok);
  }

  run(source: string): Program {
    const { statements, problems } = layoutOf(source);
    for (const { line, column, length, saying } of problems)
      this.faults.push(problemAt({ ...saying, start: column - 1, end: column - 1 + length }, '', line));
    const parsed = statements.map((layout) => {
      const before = this.before(layout);
      return { layout, before, parsed: this.parse(layout, before) };
    });
    for (const { layout, parsed: p } of parsed)
      for (const name of p && 'node' in p ? declaredWords(p.node).map((w) => w.text) : guessedNames(layout))
        this.later.set(name, [...(this.later.get(name) ?? []), layout.line]);
    for (const { layout, before, parsed: p } of parsed) {
      try {
        this.one(layout, p, before);
      } catch (error) {
        // a chain of thousands of words can be deeper than the stack
        if (!(error instanceof RangeError) || !/call stack/u.test(error.message)) throw error;
        this.report({ ...say.tooLarge(), start: 0, end: layout.keyword.length }, layout);
        this.finish(layout, guessedNames(layout), false);
      }
    }
    const order = (a: Problem, b: Problem): number => a.line - b.line || a.column - b.column;
    return {
      source,
      lattice: this.lattice,
      values: newValues(this.lattice, this.all),
      audits: this.audits,
      problems: this.faults.sort(order),
      statements: this.statements,
      kept: this.kept,
    };
  }
}

/**
 * Evaluates a source statement by statement. A statement with an error leaves its names unevaluated: what depends on
 * them waits, without a second problem, and everything else is evaluated. With `previous`, statements whose text and
 * whose used values did not change keep their values (the same objects while they stay on their line).
 */
export function evaluateSource(
  source: string,
  context: EvaluationContext,
  previous?: Program,
  budget: Budget = newBudget(evaluationSteps, 'steps of one source'),
): Program {
  return new Run(context, budget, previous).run(source);
}
