import type { Report } from '../../shared/contracts/report.ts';
import type { Database } from '../db/connection.ts';
import { findAnswers, keepAnswers } from '../db/queries/jobs.ts';
import type { Pool } from '../evaluation/pool.ts';
import type { Answers } from '../evaluation/task.ts';
import { engineVersion } from '../evaluation/version.ts';

/**
 * The report of a source, with the answers that are known already, whoever asked for them; those that are found on the way are kept
 * for others. Throws EvaluationFailed.
 */
export async function deriveWithAnswers(database: Database, pool: Pool, source: string): Promise<Report> {
  const { asked } = await pool.do({ kind: 'list', source });
  const answers = await findAnswers(
    database,
    asked.map(({ question }) => question),
  );
  const known = Object.fromEntries(answers.map(({ question, findings }) => [question, findings])) as Answers;
  const { report, found } = await pool.do({ kind: 'derive', source, known });
  const fresh = asked.flatMap(({ question, audit, text, size, cost }) => {
    const findings = found?.[question];
    const { operations, bytes, words } = cost;
    return findings && known[question] === undefined
      ? [{ name: question, engine: engineVersion, audit, text, size, operations, bytes, cost: words, findings }]
      : [];
  });
  await keepAnswers(database, fresh);
  return report;
}
