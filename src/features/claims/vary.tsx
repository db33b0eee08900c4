import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { newRerunSchema, type Rerun } from '../../../shared/contracts/reviews.ts';
import { call } from '../../api/client.ts';
import { reread } from '../../api/review-queries.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { Field } from '../../components/parts.tsx';
import { ClaimLine } from './claims.tsx';

interface Props {
  readonly notebook: string;
  readonly edition: number;
  readonly claim: string;
  readonly what: string;
  /** Names of couplings that trial values can be given for. */
  readonly couplings: readonly string[];
  readonly reruns: readonly Rerun[];
  readonly may: boolean;
}

/** Sizes typed in a line, "2 x 2, 3 x 3"; commas within brackets belong to a size. */
export function sizesOf(typed: string): readonly string[] {
  return typed
    .split(/,(?![^(]*\))/)
    .map((size) => size.trim())
    .filter((size) => size !== '');
}

/** Has the server compute a claim again, as it stands or at other sizes and couplings; neither notebook nor edition changes. */
export function Vary({ notebook, edition, claim, what, couplings, reruns, may }: Props) {
  const client = useQueryClient();
  const [open, setOpen] = useState(false);
  const [sizes, setSizes] = useState('');
  const [values, setValues] = useState<Readonly<Record<string, string>>>({});
  const given = Object.fromEntries(Object.entries(values).filter(([, value]) => value.trim() !== ''));
  const wanted = sizesOf(sizes);
  const body = {
    claim,
    ...(wanted.length > 0 ? { sizes: [...wanted] } : {}),
    ...(Object.keys(given).length > 0 ? { couplings: given } : {}),
  };
  const parsed = newRerunSchema.safeParse(body);
  const run = useAttempt(async () => {
    await call('rerunClaims', { params: { notebook, edition }, body });
    await reread(client, notebook, 'reruns');
    setOpen(false);
  });
  const asWritten = useAttempt(async () => {
    await call('rerunClaims', { params: { notebook, edition }, body: { claim } });
    await reread(client, notebook, 'reruns');
  });
  return (
    <div className="reruns">
      {reruns.map((rerun) => (
        <One key={rerun.id} rerun={rerun} />
      ))}
      {may && (
        <p className="colophon-line">
          <button type="button" className="act" disabled={asWritten.busy} onClick={asWritten.run}>
            run again<span className="aside-only">: {what}</span>
          </button>
          <button type="button" className="act" aria-expanded={open} onClick={() => setOpen(!open)}>
            vary sizes or couplings<span className="aside-only"> of {what}</span>
          </button>
        </p>
      )}
      <Attempt of={asWritten} />
      {open && (
        <form
          className="vary"
          onSubmit={(event) => {
            event.preventDefault();
            if (parsed.success) run.run();
          }}
        >
          <Field label="Sizes" placeholder="2 x 2, 3 x 3" value={sizes} set={setSizes} />
          {couplings.map((name) => (
            <Field
              key={name}
              label={`Coupling ${name}`}
              placeholder="1/2"
              value={values[name] ?? ''}
              set={(value) => setValues((now) => ({ ...now, [name]: value }))}
            />
          ))}
          {!parsed.success && <p className="ink-refuted">{parsed.error.issues[0]?.message}</p>}
          <button type="submit" className="act" disabled={run.busy || !parsed.success}>
            run it so
          </button>
          <Attempt of={run} />
        </form>
      )}
    </div>
  );
}

/** What was varied, in words. */
export function variationInWords({ sizes, couplings }: Rerun['variation']): string {
  const parts = [
    ...(sizes ? [`on ${sizes.join(', ')}`] : []),
    ...Object.entries(couplings ?? {}).map(([name, value]) => `${name} = ${value}`),
  ];
  return parts.length === 0 ? 'as it stands' : parts.join(', ');
}

function One({ rerun }: { rerun: Rerun }) {
  return (
    <div className="rerun" data-rerun={rerun.status}>
      <p className="label">
        run again by {rerun.by?.name ?? 'someone who has left'}, <Day at={rerun.at} time />, engine {rerun.engine}:{' '}
        {variationInWords(rerun.variation)}
        {rerun.status === 'computing' && <span role="status"> · under way</span>}
        {rerun.status === 'failed' && <span className="ink-refuted"> · it failed: {rerun.reason}</span>}
      </p>
      {rerun.status === 'done' && (
        <>
          <ul className="claims">
            {rerun.claims.map((claim, k) => (
              <ClaimLine key={k} claim={claim} />
            ))}
          </ul>
          {rerun.claims.length === 0 && (
            <p className="ink-refuted">
              {rerun.problems[0]?.message ?? 'So varied, the source does not come to this claim.'}
            </p>
          )}
        </>
      )}
    </div>
  );
}
