import { lazy, type ReactNode, Suspense } from 'react';
import { Guard } from '../components/faces.tsx';
import { Sentence } from '../components/formula.tsx';
import { Claims } from '../features/claims/claims.tsx';
import { levelsOf } from '../features/claims/evidence.ts';
import { printed } from '../features/claims/typography.ts';
import { Levels } from '../features/plots/levels.tsx';
import type { ClaimsRow } from '../features/spread/entry.tsx';

/** What is drawn under the claims of an audit line comes when it is needed: a first page without tables does not load them. */
const CommutationTable = lazy(() =>
  import('../features/table/table.tsx').then(({ CommutationTable }) => ({ default: CommutationTable })),
);

const say = (sentence: string): ReactNode => <Sentence text={printed(sentence)} />;

/** The claims of an audit line, with what is drawn of them: the table of a commutation, the levels of a spectrum. */
export function claimsOf(row: ClaimsRow): ReactNode {
  const tables = row.claims.filter((claim) => claim.audit === 'commute' && Array.isArray(claim.figures['table']));
  const drawn = row.claims.flatMap((claim) => {
    const levels = levelsOf(claim);
    return levels ? [{ ...levels, of: claim.statement }] : [];
  });
  const last = drawn.at(-1);
  const list = <Claims claims={row.claims} audit={row.audit} />;
  return (
    <>
      {last ? (
        <div className="audit-with-plot">
          {list}
          <Levels left={last.left} right={last.right} label={`Levels of ${last.of}`} />
        </div>
      ) : (
        list
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
