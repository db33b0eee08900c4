import { lazy, type ReactNode, Suspense } from 'react';
import type { Claim } from '../../shared/contracts/report.ts';
import { Guard } from '../components/faces.tsx';
import { Sentence } from '../components/formula.tsx';
import { Claims } from '../features/claims/claims.tsx';
import { printed } from '../components/typography.ts';
import { OpenQuestions } from '../features/jobs/open-questions.tsx';
import type { ClaimsRow } from '../features/spread/entry.tsx';

/** What is drawn under the claims of an audit line comes when it is needed: a first page without it does not load it. */
const CommutationTable = lazy(() =>
  import('../features/table/table.tsx').then(({ CommutationTable }) => ({ default: CommutationTable })),
);
const Plots = lazy(() => import('../features/plots/plots.tsx').then(({ Plots }) => ({ default: Plots })));

const say = (sentence: string): ReactNode => <Sentence text={printed(sentence)} />;

/** Whether a claim holds numbers that are drawn. */
const isDrawn = ({ audit, figures }: Claim): boolean =>
  (audit === 'spectrum' && Array.isArray(figures['left'])) ||
  (audit === 'scan' && Array.isArray(figures['values'])) ||
  (audit === 'degeneracy' && typeof figures['degeneracy'] === 'number');

/** The claims of an audit line, with what is drawn of them: the table of a commutation, the plot of what was computed. */
export function claimsOf(row: ClaimsRow): ReactNode {
  const tables = row.claims.filter((claim) => claim.audit === 'commute' && Array.isArray(claim.figures['table']));
  return (
    <>
      <Claims claims={row.claims} audit={row.audit} />
      <OpenQuestions claims={row.claims} />
      {row.claims.some(isDrawn) && (
        <Guard what="The plot could not be drawn." until={row.claims}>
          <Suspense fallback={<div className="plot-to-come" />}>
            <Plots claims={row.claims} say={say} />
          </Suspense>
        </Guard>
      )}
      {tables.map((claim, k) => (
        <Guard key={k} what="The table could not be shown." until={claim}>
          <Suspense fallback={null}>
            <CommutationTable claim={claim} say={say} />
          </Suspense>
        </Guard>
      ))}
    </>
  );
}
