import type { SealedClaim } from '../../shared/contracts/editions.ts';
import { grades, type Report } from '../../shared/contracts/report.ts';
import { joinEntries, type Lines, placeOfLine } from '../../shared/notebook/text.ts';
import { announce } from '../db/announce.ts';
import type { Database } from '../db/connection.ts';
import { countAttempt, failEdition, findUnsealed, sealEdition, type Unsealed } from '../db/queries/editions.ts';
import { EvaluationFailed, type Pool } from '../evaluation/pool.ts';
import { whileLocked } from '../evaluation/queue.ts';
import { deriveWithAnswers } from './answers.ts';
import { notifyPublisher } from './notices.ts';

/** An edition whose computation took the whole process down this often is not tried again by itself. */
const mostAttempts = 3;

/**
 * The job that an edition's publishing asks for: computes its claims from its text, here and nowhere else, and seals them.
 * Safe to run twice and at once; throws if it is to be tried again.
 */
export function sealEditionJob(database: Database, pool: Pool, edition: string): Promise<void> {
  return whileLocked(database, edition, async () => {
    const waiting = await findUnsealed(database, edition);
    if (waiting === null) return;
    const attempts = await countAttempt(database, edition, 1);
    if (attempts > mostAttempts) return fail(database, edition, waiting, 'The engine ended each time it was tried.');
    const { text, lines } = joinEntries(waiting.content.entries);
    try {
      await seal(database, edition, waiting, lines, await deriveWithAnswers(database, pool, text));
    } catch (error) {
      if (!(error instanceof EvaluationFailed)) throw error;
      if (error.why !== 'stopped') return fail(database, edition, waiting, error.message);
      // A server that is stopped in good order is no fault of the edition.
      await countAttempt(database, edition, -1);
      throw error;
    }
  });
}

function seal(
  database: Database,
  edition: string,
  { notebook, number, entryIds, content: { title } }: Unsealed,
  lines: readonly Lines[],
  report: Report,
): Promise<void> {
  const claims = report.claims.map((claim): Omit<SealedClaim, 'id'> => {
    const place = placeOfLine(lines, claim.line);
    return { ...claim, entry: place === null ? null : (entryIds[place.entry] ?? null), entryLine: place?.line ?? null };
  });
  return database.transaction(async (tx) => {
    if (!(await sealEdition(tx, edition, report, claims))) return;
    await announce(tx, notebook, 'edition', { number, status: 'sealed' });
    await notifyPublisher(tx, { id: edition, notebook, number, title }, `are sealed: ${counted(report)}.`);
  });
}

/** How many claims have each grade, as words: `5 proved, 1 refuted`. */
function counted({ claims }: Report): string {
  const words = grades.flatMap((grade) => {
    const number = claims.filter((claim) => claim.grade === grade).length;
    return number === 0 ? [] : [`${String(number)} ${grade}`];
  });
  return words.length === 0 ? 'there are none' : words.join(', ');
}

function fail(
  database: Database,
  edition: string,
  { notebook, number, content: { title } }: Unsealed,
  reason: string,
): Promise<void> {
  return database.transaction(async (tx) => {
    if (!(await failEdition(tx, edition, reason))) return;
    await announce(tx, notebook, 'edition', { number, status: 'failed' });
    await notifyPublisher(tx, { id: edition, notebook, number, title }, `could not be computed: ${reason}`);
  });
}
