import type {
  ClaimDifference,
  ModelDifference,
  PhysicsDifference,
  TermDifference,
} from '../../../shared/contracts/reviews.ts';
import { Formula, Sentence } from '../../components/formula.tsx';
import { GradeMark } from '../../components/marks.tsx';
import { printed } from '../../components/typography.ts';

/** What differs as physics, between two readings. */

const termWords: Readonly<Record<TermDifference['what'], string>> = {
  added: 'added',
  removed: 'removed',
  sign: 'sign',
  coefficient: 'coefficient',
  support: 'other spins or letters',
};

export function Physics({ of, left, right }: { of: PhysicsDifference; left: string; right: string }) {
  const { models, declarations, claims } = of;
  if (models.length + declarations.length + claims.length === 0)
    return <p>As physics they are the same: the same terms, declarations and claims.</p>;
  return (
    <div className="collated">
      <div className="collated-row collated-heads label" aria-hidden>
        <span>{left}</span>
        <span>{right}</span>
        <span />
      </div>
      {models.map((model, k) => (
        <Model key={k} of={model} left={left} right={right} />
      ))}
      {declarations.map((one, k) => (
        <section key={k} aria-label={`${one.kind} ${one.name}`}>
          <h3>
            {one.kind} <em>{one.name}</em>
          </h3>
          <div className="collated-row">
            <Side label={left}>{one.left !== null && <Sentence text={`$${one.left}$`} />}</Side>
            <Side label={right}>{one.right !== null && <Sentence text={`$${one.right}$`} />}</Side>
            <span className="label">{one.what}</span>
          </div>
        </section>
      ))}
      {claims.length > 0 && (
        <section aria-label="Claims">
          <h3>Claims</h3>
          <ClaimDifferences of={claims} left={left} right={right} />
        </section>
      )}
    </div>
  );
}

/** One reading's cell; what it is a reading of is said to screen readers, and to everyone where the columns fold. */
function Side({ label, children }: { label: string; children: React.ReactNode }) {
  const empty = children === false || children === null;
  return (
    <div className="collated-side" data-empty={empty || undefined}>
      <span className="label collated-label">{label}: </span>
      {empty ? <span className="label">–</span> : children}
    </div>
  );
}

function Model({ of, left, right }: { of: ModelDifference; left: string; right: string }) {
  const name = of.right ?? of.left ?? '';
  const renamed = of.left !== null && of.right !== null && of.left !== of.right;
  return (
    <section aria-label={`Model ${name}`}>
      <h3>
        model <em>{name}</em>
        {renamed && <span className="label"> (was {of.left})</span>}
        {of.left === null && <span className="label"> added</span>}
        {of.right === null && <span className="label"> removed</span>}
      </h3>
      {of.terms.map((term, k) => (
        <div key={k} className="collated-row" data-difference={term.what}>
          <Side label={left}>{term.left && <Formula tex={term.left.tex} />}</Side>
          <Side label={right}>{term.right && <Formula tex={term.right.tex} />}</Side>
          <span className="label">{termWords[term.what]}</span>
        </div>
      ))}
      {of.constant && (
        <div className="collated-row">
          <Side label={left}>{of.constant.left}</Side>
          <Side label={right}>{of.constant.right}</Side>
          <span className="label">constant</span>
        </div>
      )}
    </section>
  );
}

const claimWords: Readonly<Record<ClaimDifference['what'], string>> = {
  added: 'only here',
  removed: 'no longer asked',
  grade: 'grade',
  figures: 'figures or cautions',
};

interface ClaimsProps {
  readonly of: readonly ClaimDifference[];
  readonly left: string;
  readonly right: string;
}

export function ClaimDifferences({ of, left, right }: ClaimsProps) {
  return of.map((one, k) => (
    <div key={k} className="collated-row" data-difference={one.what}>
      <Side label={left}>{one.left && <SideClaim claim={one.left} />}</Side>
      <Side label={right}>{one.right && <SideClaim claim={one.right} />}</Side>
      <span className="label">{claimWords[one.what]}</span>
    </div>
  ));
}

function SideClaim({ claim }: { claim: NonNullable<ClaimDifference['left']> }) {
  return (
    <p data-grade={claim.grade}>
      <GradeMark grade={claim.grade} label="" />{' '}
      <Sentence text={printed(claim.tex === '' ? claim.statement : claim.tex)} />{' '}
      <span className={`claim-grade ink-${claim.grade}`}>{claim.grade}</span>
    </p>
  );
}

/** What adopting a variant does to the claims, in few lines: from what grade to what grade. */
export function Effects({ of, reason }: { of: readonly ClaimDifference[] | null; reason: string | null }) {
  if (of === null)
    return reason === null ? (
      <p role="status" className="label">
        What it does to the claims is being computed …
      </p>
    ) : (
      <p className="label">What it does to the claims is not known: {reason}</p>
    );
  const told = of.filter((one) => one.what !== 'figures');
  if (told.length === 0) return <p className="label">No claim changes its grade.</p>;
  return (
    <ul className="effects" aria-label="What it does to the claims">
      {told.map((one, k) => (
        <li key={k} data-grade={one.right?.grade}>
          <Sentence text={printed(one.right?.tex ?? one.left?.tex ?? one.subject)} />{' '}
          <span className="label">
            {one.left ? <Grade grade={one.left.grade} /> : 'not asked before'} {'→'}{' '}
            {one.right ? <Grade grade={one.right.grade} /> : 'not asked any more'}
          </span>
        </li>
      ))}
    </ul>
  );
}

function Grade({ grade }: { grade: NonNullable<ClaimDifference['left']>['grade'] }) {
  return (
    <span className={`ink-${grade}`}>
      <GradeMark grade={grade} label="" /> {grade}
    </span>
  );
}
