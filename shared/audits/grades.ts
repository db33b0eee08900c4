import type { Claim, Grade } from '../contracts/report.ts';
import type { Evidence, Finding, Question } from './audit.ts';

/** The grade that each kind of evidence carries (DESIGN.md section 4). The only place where a grade is written. */
const gradeOfKind: Readonly<Record<Evidence['kind'], Grade>> = {
  'all sizes': 'proved',
  'exact on': 'exact',
  residuals: 'numerical',
  counterexample: 'refuted',
  reason: 'open',
};

export const gradeOf = (evidence: Evidence): Grade => gradeOfKind[evidence.kind];

/** Sentences that belong to every claim of a kind, so that a figure is never read for more than it says. */
export const standing = {
  levels: 'That the lowest levels agree is not equality of the spectra.',
  cluster: 'A cluster this small shows no phase.',
  loops: 'An equal-time loop measured in real space is not the space-time loop that decides confinement.',
} as const;

/** The claim that a finding makes, in the form of the report. */
export function claimOf(question: Question, finding: Finding): Claim {
  const { evidence } = finding;
  const reason = evidence.kind === 'reason' ? [evidence.reason] : [];
  return {
    line: question.statement.place.line,
    audit: question.audit,
    subject: question.statement.subjects.map((subject) => subject.name).join(', '),
    statement: finding.statement,
    tex: finding.tex ?? finding.statement,
    grade: gradeOf(evidence),
    figures: { ...finding.figures },
    witness: { ...(finding.witness ?? {}) },
    cautions: [...reason, ...(finding.cautions ?? [])],
    sources: [...(finding.sources ?? [])],
  };
}
