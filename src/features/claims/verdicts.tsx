import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { type Verdict, verdictWords } from '../../../shared/contracts/reviews.ts';
import { call } from '../../api/client.ts';
import { reread } from '../../api/review-queries.ts';
import { Act, Attempt, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { TextField } from '../../components/parts.tsx';
import { Prose } from '../../components/prose.tsx';

type Word = Verdict['word'];

export interface Judged {
  readonly notebook: string;
  readonly edition: number;
  /** Null: the edition as a whole. */
  readonly claim: string | null;
  /** What it is, for who hears the form and does not see where it stands. */
  readonly what: string;
  readonly verdicts: readonly Verdict[];
  readonly me: string | null;
  readonly may: boolean;
}

/** What referees said of a claim, or of the edition, and saying it oneself. */
export function Verdicts(props: Judged) {
  const { notebook, edition, claim, what, verdicts, me, may } = props;
  const here = verdicts.filter((verdict) => verdict.claim === claim);
  const own = here.find((verdict) => verdict.by !== null && verdict.by.id === me);
  const [writing, setWriting] = useState(false);
  return (
    <div className="verdicts">
      {here.map((verdict) => (
        <One key={verdict.id} notebook={notebook} verdict={verdict} own={may && verdict === own} />
      ))}
      {may && !writing && (
        <button type="button" className="act" onClick={() => setWriting(true)}>
          {own ? 'change your verdict' : 'give a verdict'}
          <span className="aside-only"> on {what}</span>
        </button>
      )}
      {writing && (
        <Judge
          label={what}
          begin={own}
          send={async (word, reason) => {
            const params = { notebook, edition };
            const body = { word, reason };
            if (claim === null) await call('judgeEdition', { params, body });
            else await call('judgeClaim', { params: { ...params, claim }, body });
          }}
          reread={{ notebook }}
          done={() => setWriting(false)}
        />
      )}
    </div>
  );
}

function One({ notebook, verdict, own }: { notebook: string; verdict: Verdict; own: boolean }) {
  const client = useQueryClient();
  const back = useAttempt(async () => {
    const params = { notebook, edition: verdict.edition, verdict: verdict.id };
    await call('takeVerdictBack', { params });
    await reread(client, notebook, 'verdicts');
  });
  return (
    <div className="verdict" data-verdict={verdict.word}>
      <p>
        <strong>{verdict.word}</strong>{' '}
        <span className="label">
          {verdict.by?.name ?? 'a referee who has left'}, <Day at={verdict.changedAt ?? verdict.at} />
        </span>{' '}
        {own && <Act of={back}>take it back</Act>}
      </p>
      <Prose text={verdict.reason} level={3} />
    </div>
  );
}

interface JudgeProps {
  readonly label: string;
  readonly begin: Verdict | undefined;
  readonly send: (word: Word, reason: string) => Promise<void>;
  readonly reread: { readonly notebook: string };
  readonly done: () => void;
}

function Judge({ label, begin, send, reread: which, done }: JudgeProps) {
  const client = useQueryClient();
  const [word, setWord] = useState<Word | null>(begin?.word ?? null);
  const [reason, setReason] = useState(begin?.reason ?? '');
  const give = useAttempt(async () => {
    if (word === null) return;
    await send(word, reason);
    await reread(client, which.notebook, 'verdicts');
    done();
  });
  return (
    <form
      className="verdict-form"
      onSubmit={(event) => {
        event.preventDefault();
        if (word !== null && reason.trim() !== '') give.run();
      }}
    >
      <fieldset className="colophon-line">
        <legend className="label">Verdict on {label}</legend>
        {verdictWords.map((one) => (
          <label key={one} className="tick">
            <input type="radio" name="verdict" checked={word === one} onChange={() => setWord(one)} /> {one}
          </label>
        ))}
      </fieldset>
      <TextField label="Reason" value={reason} set={setReason} />
      <p className="colophon-line">
        <button type="submit" className="act" disabled={give.busy || word === null || reason.trim() === ''}>
          give the verdict
        </button>
        <button type="button" className="act" onClick={done}>
          leave it
        </button>
      </p>
      <Attempt of={give} />
    </form>
  );
}
