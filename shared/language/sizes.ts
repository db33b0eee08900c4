import { newBudget } from '../limits.ts';
import type { Lattice, Size } from '../lattice/cells.ts';
import { sizesOf } from './declare-lattice.ts';
import { auditForms } from './forms.ts';
import { parseStatement } from './parse.ts';
import { ProblemError } from './problem.ts';
import { layoutOf } from './source.ts';
import type { AuditStatement } from './values.ts';

/** Sizes as they stand behind `on` in an audit (`3 x 3, 4 x 4`, or rows of periods), or in words what is wrong with them. */
export function readSizes(text: string, lattice: Lattice): readonly Size[] | { readonly wrong: string } {
  const [layout] = layoutOf(`audit laws any on ${text.replace(/\s+/gu, ' ')}`).statements;
  const parsed = layout && parseStatement(layout, newBudget());
  if (!parsed || 'fault' in parsed || parsed.node.type !== 'audit') return { wrong: 'this is no list of sizes' };
  const [clause, ...more] = parsed.node.clauses;
  if (clause?.name !== 'on' || more.length > 0) return { wrong: 'this is no list of sizes' };
  try {
    return sizesOf(clause.sizes, lattice);
  } catch (error) {
    if (error instanceof ProblemError) return { wrong: error.message };
    throw error;
  }
}

/** The audit on other sizes; one that knows no sizes stays as it is. */
export function onSizes(audit: AuditStatement, sizes: readonly Size[]): AuditStatement {
  const form = auditForms.find(({ name }) => name === audit.audit);
  return form?.clauses.on === undefined ? audit : { ...audit, sizes };
}
