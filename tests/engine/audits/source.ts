import type { Audit } from '../../../shared/audits/audit.ts';
import { claimOf } from '../../../shared/audits/grades.ts';
import type { Claim } from '../../../shared/contracts/report.ts';
import { evaluateSource } from '../../../shared/language/evaluate.ts';
import type { Values } from '../../../shared/language/values.ts';
import { buildMap } from '../../../shared/maps/registry.ts';
import { plainKernel } from '../../../shared/spectra/kernel/plain.ts';

/** A source of the operator language, evaluated; problems of the source fail the test. */
export function evaluated(text: string): ReturnType<typeof evaluateSource> {
  const program = evaluateSource(text, { buildMap });
  const errors = program.problems.filter((problem) => problem.severity === 'error');
  if (errors.length > 0) throw new Error(errors.map((e) => `${String(e.line)}: ${e.message} ${e.hint}`).join('\n'));
  return program;
}

export const valuesOf = (text: string): Values => evaluated(text).values;

/** The claims of one audit on every line of a source that asks it. */
export function claimsOf(audit: Audit, text: string): Claim[] {
  const { audits, values } = evaluated(text);
  const means = { kernel: plainKernel, limit: { operations: 1e12, bytes: 2 ** 31 } };
  return audits
    .filter((statement) => statement.audit === audit.name)
    .flatMap((statement) => audit.questions(statement, values))
    .flatMap((question) => {
      const run = audit.decide(question, means);
      for (;;) {
        const step = run.next();
        if (step.done) return step.value.map((finding) => claimOf(question, finding));
      }
    });
}
