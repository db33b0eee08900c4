import './collation.css';
import { useQueryClient } from '@tanstack/react-query';
import { type ReactNode, useState } from 'react';
import type { Collation as CollationValue, Sending as SendingValue } from '../../../shared/contracts/reviews.ts';
import { call } from '../../api/client.ts';
import { reread } from '../../api/review-queries.ts';
import { Act, Attempt, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { TextField } from '../../components/parts.tsx';
import { Prose } from '../../components/prose.tsx';
import { Decided, Deciding } from './deciding.tsx';
import { Variant } from './variant.tsx';

/** A fork beside its origin: chooses the variants to send, and writes their letter. */
export function Collation(props: { notebook: string; of: CollationValue; sent: (sending: string) => void }) {
  const { notebook, of, sent } = props;
  const client = useQueryClient();
  const [without, setWithout] = useState<ReadonlySet<string>>(new Set());
  const [letter, setLetter] = useState('');
  const keys = of.variants.map((variant) => variant.key).filter((key) => !without.has(key));
  const send = useAttempt(async () => {
    const made = await call('sendVariants', { params: { notebook }, body: { letter, keys } });
    await reread(client, notebook, 'variants');
    sent(made.id);
  });
  const toggle = (key: string) =>
    setWithout((now) => {
      const next = new Set(now);
      if (!next.delete(key)) next.add(key);
      return next;
    });
  return (
    <>
      {of.variants.map((variant, k) => (
        <Variant key={variant.key} of={variant} number={k + 1}>
          <label className="tick mt-2">
            <input type="checkbox" checked={!without.has(variant.key)} onChange={() => toggle(variant.key)} /> send it
            <span className="aside-only">, variant {k + 1}</span>
          </label>
        </Variant>
      ))}
      <form
        className="part measure"
        onSubmit={(event) => {
          event.preventDefault();
          if (letter.trim() !== '' && keys.length > 0) send.run();
        }}
      >
        <TextField
          label="Letter to the writers of the origin: what the variants are for"
          value={letter}
          set={setLetter}
          rows={5}
        />
        <button type="submit" className="act mt-2" disabled={send.busy || letter.trim() === '' || keys.length === 0}>
          send {keys.length === 1 ? 'one variant' : `${String(keys.length)} variants`}
        </button>
        <Attempt of={send} />
      </form>
    </>
  );
}

const statusWords: Readonly<Record<SendingValue['status'], string>> = {
  waiting: 'waiting for decisions',
  closed: 'all decided',
  withdrawn: 'withdrawn by its senders',
};

interface Props {
  readonly notebook: string;
  readonly of: SendingValue;
  /** Whether this notebook is the origin, whose writers decide; else it is the fork that sent them. */
  readonly deciding: boolean;
  readonly may: boolean;
  readonly link: (notebook: string, title: string) => ReactNode;
}

/** Variants that were sent, with their letter, each with its decision or waiting for one. */
export function Sending({ notebook, of, deciding, may, link }: Props) {
  return (
    <>
      <p className="byline label">
        <span>
          from {of.by?.name ?? 'someone who has left'}, <Day at={of.at} />
        </span>
        {of.fork && <span>fork {link(of.fork.id, of.fork.title)}</span>}
        {of.origin && (
          <span>
            origin {link(of.origin.id, of.origin.title)}
            {of.edition !== null && `, edition ${String(of.edition)}`}
          </span>
        )}
        <span role="status">{statusWords[of.status]}</span>
      </p>
      <div className="letter">
        <Prose text={of.letter} level={3} />
      </div>
      {of.variants.map((variant, k) => (
        <Variant key={variant.id} of={variant} number={k + 1}>
          {variant.decision ? (
            <Decided variant={variant} />
          ) : (
            deciding &&
            may &&
            of.status === 'waiting' && <Deciding notebook={notebook} sending={of.id} variant={variant} number={k + 1} />
          )}
        </Variant>
      ))}
      {!deciding && may && of.status === 'waiting' && <Withdraw notebook={notebook} sending={of.id} />}
    </>
  );
}

function Withdraw({ notebook, sending }: { notebook: string; sending: string }) {
  const client = useQueryClient();
  const withdraw = useAttempt(async () => {
    await call('withdrawVariants', { params: { notebook, sending } });
    await reread(client, notebook, 'variants');
  });
  return (
    <p className="mt-4">
      <Act of={withdraw}>withdraw what is not decided</Act>
    </p>
  );
}
