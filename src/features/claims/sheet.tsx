import './claims.css';
import { useQuery, useQueryClient } from '@tanstack/react-query';
import type { Edition, SealedClaim } from '../../../shared/contracts/editions.ts';
import type { Rerun, Verdict } from '../../../shared/contracts/reviews.ts';
import { call } from '../../api/client.ts';
import { reread, rerunsQuery, verdictsQuery } from '../../api/review-queries.ts';
import { Act, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { Empty, Failed } from '../../components/faces.tsx';
import { Sentence } from '../../components/formula.tsx';
import { Part } from '../../components/parts.tsx';
import { ClaimLine } from './claims.tsx';
import { printed } from '../../components/typography.ts';
import { Vary } from './vary.tsx';
import { Verdicts } from './verdicts.tsx';

interface Props {
  readonly edition: Edition;
  readonly me: string | null;
  readonly may: ReadonlySet<string>;
  /** Leads to the entry that asks for a claim. */
  readonly entry: (number: number) => React.ReactNode;
}

const none: readonly never[] = [];

/** The claims of one edition, one by one, with all that stands behind each, what a referee can do with it, and what was said of it. */
export function ClaimSheet({ edition, me, may, entry }: Props) {
  const notebook = edition.notebook.id;
  const verdicts = useQuery(verdictsQuery(notebook, edition.number));
  const reruns = useQuery(rerunsQuery(notebook, edition.number));
  const said = verdicts.data?.items ?? none;
  const run = reruns.data?.items ?? none;
  const couplings = edition.report?.declarations.filter((one) => one.what === 'couplings').map((one) => one.name) ?? [];
  const judging = { notebook, edition: edition.number, verdicts: said, me, may: may.has('judge') };
  return (
    <>
      {verdicts.isError && (
        <Failed
          what="The verdicts could not be fetched."
          error={verdicts.error}
          retry={() => void verdicts.refetch()}
        />
      )}
      <Part title="Of the edition as a whole">
        <Verdicts {...judging} claim={null} what={`edition ${String(edition.number)}`} />
        {said.every((verdict) => verdict.claim !== null) && !may.has('judge') && (
          <p className="label">No verdict on the whole yet.</p>
        )}
        <WholeAgain edition={edition} reruns={run.filter((one) => one.claim === null)} may={may.has('rerun')} />
      </Part>
      {edition.claims.length === 0 && edition.status === 'sealed' && (
        <Empty title="No claims">
          <p>This edition has no audit line, so nothing is claimed in it.</p>
        </Empty>
      )}
      <ol className="sheet-claims">
        {edition.claims.map((claim, k) => (
          <OnSheet
            key={claim.id}
            claim={claim}
            number={k + 1}
            edition={edition}
            verdicts={said}
            reruns={run.filter((one) => one.claim === claim.id)}
            couplings={couplings}
            me={me}
            may={may}
            entry={entry}
          />
        ))}
      </ol>
    </>
  );
}

interface OnSheetProps extends Props {
  readonly claim: SealedClaim;
  readonly number: number;
  readonly verdicts: readonly Verdict[];
  readonly reruns: readonly Rerun[];
  readonly couplings: readonly string[];
}

function OnSheet({ claim, number, edition, verdicts, reruns, couplings, me, may, entry }: OnSheetProps) {
  const at = edition.entryIds.indexOf(claim.entry ?? '') + 1;
  const what = `claim ${String(number)}`;
  const place = { notebook: edition.notebook.id, edition: edition.number };
  return (
    <li className="sheet-claim" aria-label={`Claim ${String(number)}`} id={`claim-${claim.id}`}>
      <p className="label sheet-place">
        Claim {number} · audit {claim.audit}
        {at > 0 && <> · {entry(at)}</>}
      </p>
      <ul className="claims">
        <ClaimLine claim={claim} unfolded />
      </ul>
      {claim.cautions.length > 0 && (
        <ul className="cautions label" aria-label={`Cautions of claim ${String(number)}`}>
          {claim.cautions.map((caution) => (
            <li key={caution}>
              <Sentence text={printed(caution)} />
            </li>
          ))}
        </ul>
      )}
      <Vary
        {...place}
        claim={claim.id}
        what={what}
        couplings={couplings}
        reruns={reruns}
        may={may.has('rerun') && edition.status === 'sealed'}
      />
      <Verdicts {...place} claim={claim.id} what={what} verdicts={verdicts} me={me} may={may.has('judge')} />
    </li>
  );
}

/** All claims by the engine of today, beside those that are sealed. */
function WholeAgain({ edition, reruns, may }: { edition: Edition; reruns: readonly Rerun[]; may: boolean }) {
  const client = useQueryClient();
  const notebook = edition.notebook.id;
  const again = useAttempt(async () => {
    await call('rerunClaims', { params: { notebook, edition: edition.number }, body: {} });
    await reread(client, notebook, 'reruns');
  });
  return (
    <div className="reruns">
      {reruns.map((rerun) => (
        <div key={rerun.id} className="rerun" data-rerun={rerun.status}>
          <p className="label">
            all claims again by {rerun.by?.name ?? 'someone who has left'}, <Day at={rerun.at} time />, engine{' '}
            {rerun.engine}
            {rerun.status === 'computing' && <span role="status"> · under way</span>}
            {rerun.status === 'failed' && <span className="ink-refuted"> · it failed: {rerun.reason}</span>}
            {rerun.status === 'done' && rerun.differences.length === 0 && ' · the same as what is sealed'}
          </p>
          {rerun.differences.length > 0 && (
            <ul>
              {rerun.differences.map((one, k) => (
                <li key={k}>
                  <Sentence text={printed(one.right?.tex ?? one.left?.tex ?? one.subject)} />:{' '}
                  {one.left?.grade ?? 'not asked'} when sealed, {one.right?.grade ?? 'not asked'} now
                  {one.what === 'figures' && ', with other figures or cautions'}
                </li>
              ))}
            </ul>
          )}
        </div>
      ))}
      {may && edition.status === 'sealed' && (
        <p>
          <Act of={again}>compute all claims again by the engine of today</Act>
        </p>
      )}
    </div>
  );
}
