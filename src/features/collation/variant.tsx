import type { ReactNode } from 'react';
import type { Collation, Variant as VariantValue } from '../../../shared/contracts/reviews.ts';
import { ReadingOf } from '../../components/readings.tsx';
import { Effects } from './physics.tsx';

export type AnyVariant = VariantValue | Collation['variants'][number];

const kindWords: Readonly<Record<AnyVariant['kind'], string>> = {
  changed: 'another reading',
  added: 'an entry that the origin has not',
  removed: 'an entry left out',
  title: 'another title',
};

/** One variant as a collation has it: the origin's reading, the fork's reading, and what it does to the claims. */
export function Variant({ of, number, children }: { of: AnyVariant; number: number; children?: ReactNode }) {
  const code = of.entryKind === 'statements' && of.kind !== 'title';
  return (
    <article className="variant" aria-label={`Variant ${String(number)}`} data-variant={number}>
      <div className="variant-head">
        <h2>Variant {number}</h2>
        <span className="label">{kindWords[of.kind]}</span>
        {of.bothChanged && <span className="label">both sides changed it since</span>}
      </div>
      <div className="variant-readings">
        <div>
          <h3>the origin reads</h3>
          {of.origin === null ? (
            <p className="label">nothing here</p>
          ) : (
            <ReadingOf pieces={of.pieces} side="left" code={code} />
          )}
        </div>
        <div>
          <h3>the fork reads</h3>
          {of.fork === null ? (
            <p className="label">nothing here</p>
          ) : (
            <ReadingOf pieces={of.pieces} side="right" code={code} />
          )}
        </div>
      </div>
      {of.bothChanged && of.base !== null && (
        <details className="label">
          <summary>what both began with</summary>
          <div className={code ? 'reading-text code' : 'reading-text'}>{of.base}</div>
        </details>
      )}
      <Effects of={of.claims} reason={of.reason} />
      {children}
    </article>
  );
}
