import './claims.css';
import { memo } from 'react';
import type { Claim } from '../../../shared/contracts/report.ts';
import { Sentence } from '../../components/formula.tsx';
import { GradeMark } from '../../components/marks.tsx';
import { figuresOf, witnessSentence } from './evidence.ts';
import { printed } from '../../components/typography.ts';

/** The claims of one audit line: each with its grade, what it says, its figures, and what to be careful about. */
export const Claims = memo(function Claims({ claims, audit }: { claims: readonly Claim[]; audit: string }) {
  // A caution that several claims share is said once, under them.
  const cautions = [...new Set(claims.flatMap((claim) => claim.cautions))];
  return (
    <div role="group" aria-label={`Claims of audit ${audit}`}>
      <ul className="claims">
        {claims.map((claim, k) => (
          <ClaimLine key={k} claim={claim} />
        ))}
      </ul>
      {cautions.length > 0 && (
        <ul className="cautions label" aria-label="Cautions">
          {cautions.map((caution) => (
            <li key={caution}>
              <Sentence text={printed(caution)} />
            </li>
          ))}
        </ul>
      )}
    </div>
  );
});

/** One claim; `unfolded`: with its evidence open. */
export function ClaimLine({ claim, unfolded = false }: { claim: Claim; unfolded?: boolean }) {
  const witness = witnessSentence(claim);
  const figures = figuresOf(claim);
  return (
    <li className={`claim claim-${claim.grade}`} data-grade={claim.grade}>
      <GradeMark grade={claim.grade} label="" />
      <div className="claim-body">
        <p className="claim-statement">
          <Sentence text={printed(claim.tex)} />
          <span className={`claim-grade ink-${claim.grade}`}>{claim.grade}</span>
        </p>
        {witness !== null && (
          <p className="claim-witness">
            <Sentence text={printed(witness)} />
          </p>
        )}
        {(figures.length > 0 || claim.sources.length > 0) && (
          <details className="label" open={unfolded}>
            <summary>evidence</summary>
            <dl className="claim-figures">
              {figures.map(([name, value]) => (
                <div key={name}>
                  <dt>{name}</dt>
                  <dd>
                    <Sentence text={value} />
                  </dd>
                </div>
              ))}
            </dl>
            {claim.sources.map((source) => (
              <p key={source}>{source}</p>
            ))}
          </details>
        )}
      </div>
    </li>
  );
}
