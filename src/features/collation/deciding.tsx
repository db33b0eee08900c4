import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { Variant } from '../../../shared/contracts/reviews.ts';
import { call } from '../../api/client.ts';
import { rereadNotebook } from '../../api/queries.ts';
import { sendingQuery } from '../../api/review-queries.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { Field, TextField } from '../../components/parts.tsx';

interface Props {
  readonly notebook: string;
  readonly sending: string;
  readonly variant: Variant;
  readonly number: number;
}

/** Adopts a variant or leaves it, with a reason; where both sides changed the text, a third reading can stand for both. */
export function Deciding({ notebook, sending, variant, number }: Props) {
  const client = useQueryClient();
  const [reason, setReason] = useState('');
  const [joined, setJoined] = useState<string | null>(null);
  const decide = async (what: 'adopted' | 'left') => {
    const params = { notebook, sending, variant: variant.id };
    const body = { what, reason, ...(what === 'adopted' && joined !== null ? { text: joined } : {}) };
    client.setQueryData(sendingQuery(notebook, sending).queryKey, await call('decideVariant', { params, body }));
    await Promise.all([
      rereadNotebook(client, notebook),
      client.invalidateQueries({ queryKey: ['notebook', notebook, 'variants'] }),
    ]);
  };
  const adopt = useAttempt(() => decide('adopted'));
  const leave = useAttempt(() => decide('left'));
  const busy = adopt.busy || leave.busy;
  const which = <span className="aside-only"> variant {number}</span>;
  return (
    <div className="mt-3">
      {variant.fork !== null && variant.kind !== 'removed' && (
        <p>
          <button
            type="button"
            className="act"
            aria-expanded={joined !== null}
            onClick={() => setJoined(joined === null ? variant.fork : null)}
          >
            {joined === null ? 'adopt it in other words' : 'adopt it as the fork reads'}
            {which}
          </button>
        </p>
      )}
      {joined !== null && <TextField label="The reading to adopt" value={joined} set={setJoined} rows={6} />}
      <Field label={`Reason, variant ${String(number)}`} value={reason} set={setReason} maxLength={5000} />
      <p className="colophon-line mt-1">
        <button type="button" className="act" disabled={busy} onClick={adopt.run}>
          adopt{which}
        </button>
        <button type="button" className="act" disabled={busy} onClick={leave.run}>
          leave{which}
        </button>
      </p>
      <Attempt of={adopt} />
      <Attempt of={leave} />
    </div>
  );
}

export function Decided({ variant }: { variant: Variant }) {
  const { decision } = variant;
  if (!decision) return null;
  const otherwise = decision.what === 'adopted' && decision.text !== null && decision.text !== variant.fork;
  return (
    <div className="mt-3">
      <p>
        <strong>{decision.what === 'adopted' ? 'Adopted' : 'Left'}</strong>{' '}
        <span className="label">
          by {decision.by?.name ?? 'someone who has left'}, <Day at={decision.at} />
        </span>
      </p>
      {decision.reason !== '' && <p>{decision.reason}</p>}
      {otherwise && (
        <>
          <p className="label">as</p>
          <div className="reading-text code">{decision.text}</div>
        </>
      )}
    </div>
  );
}
