import type { Finding, Means, Progress, Question } from '../audits/audit.ts';
import { claimOf } from '../audits/grades.ts';
import { openFinding } from '../audits/numeric.ts';
import { audits } from '../audits/registry.ts';
import type { Claim, Problem } from '../contracts/report.ts';
import type { AuditStatement, Values } from '../language/values.ts';
import { BudgetSpent } from '../limits.ts';

/** What a question came to: its claims, and the problems that its line turned out to have. */
export interface Answer {
  readonly claims: readonly Claim[];
  readonly problems: readonly Problem[];
}

/** The questions of one audit line, each whole in itself. */
export const questionsOf = (statement: AuditStatement, values: Values): readonly Question[] =>
  audits.get(statement.audit)?.questions(statement, values) ?? [];

/** Why a question stands open here: it would cost more than the means allow. */
function tooDear(question: Question, means: Means): Finding | undefined {
  const cost = audits.get(question.audit)?.cost(question);
  if (!cost || (cost.operations <= means.limit.operations && cost.bytes <= means.limit.bytes)) return undefined;
  const reason = `too large to be answered here and now: ${cost.words}`;
  const { operations, bytes } = cost;
  return { ...openFinding(question.statement.text, reason, { operations, bytes }), tooDear: cost };
}

/** Findings of a question, in slices; what goes wrong in one audit leaves its claim open and touches no other. */
export function* findingsOf(question: Question, means: Means): Generator<Progress, readonly Finding[]> {
  const audit = audits.get(question.audit);
  if (!audit) return [openFinding(question.statement.text, `there is no audit ${question.audit}`)];
  try {
    const dear = tooDear(question, means);
    return dear ? [dear] : yield* audit.decide(question, means);
  } catch (error) {
    if (error instanceof BudgetSpent)
      return [openFinding(question.statement.text, `a limit was reached: ${error.limit}`)];
    throw error;
  }
}

function problemOf(question: Question, finding: Finding): Problem[] {
  if (finding.problem === undefined) return [];
  const { line, column, length } = question.statement.place;
  return [{ code: 'audit', message: finding.problem, line, column, length, hint: '', severity: 'error' }];
}

/** The answer that findings make at the place where the question now stands. */
export const answerOf = (question: Question, findings: readonly Finding[]): Answer => ({
  claims: findings.map((finding) => claimOf(question, finding)),
  problems: findings.flatMap((finding) => problemOf(question, finding)),
});
