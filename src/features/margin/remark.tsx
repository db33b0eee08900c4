import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { Remark as RemarkValue, Reply } from '../../../shared/contracts/reviews.ts';
import { call } from '../../api/client.ts';
import { reread } from '../../api/review-queries.ts';
import { Act, useAttempt } from '../../components/attempt.tsx';
import { Day } from '../../components/dates.tsx';
import { Formula, Sentence } from '../../components/formula.tsx';
import { Prose } from '../../components/prose.tsx';
import type { Held } from '../../hand/hand.ts';
import { leave, take } from '../../hand/hand.ts';
import { useHandStore } from '../../hand/useHand.ts';
import { Write } from './write.tsx';

interface Props {
  readonly notebook: string;
  readonly remark: RemarkValue;
  readonly me: string | null;
  readonly may: boolean;
  /** The term it speaks of, taken in hand while the remark has the pointer or the focus. */
  readonly held: Held | null;
  readonly fate: string;
}

/** One remark with what was answered to it. */
export function Remark({ notebook, remark, me, may, held, fate }: Props) {
  const hand = useHandStore();
  const [answering, setAnswering] = useState(false);
  const [unfolded, setUnfolded] = useState(false);
  const count = remark.replies.length;
  return (
    <article
      className="remark"
      id={`remark-${remark.id}`}
      data-remark={remark.id}
      data-state={remark.state}
      tabIndex={-1}
      aria-label={`Remark by ${remark.by?.name ?? 'someone who has left'}, ${remark.state}`}
      onPointerEnter={() => held && hand.set((now) => take(now, held, 'pointer'))}
      onPointerLeave={() => held && hand.set((now) => leave(now, 'pointer'))}
      onFocus={() => held && hand.set((now) => take(now, held, 'focus'))}
      onBlur={() => held && hand.set((now) => leave(now, 'focus'))}
    >
      <Subject remark={remark} />
      <Said notebook={notebook} said={remark} own={may && remark.by !== null && remark.by.id === me} />
      {(fate !== '' || remark.state === 'settled' || remark.madeOn !== null) && (
        <p className="remark-fate">
          {[
            remark.madeOn === null ? '' : `on edition ${String(remark.madeOn)}`,
            fate,
            remark.state === 'settled' ? `settled by ${remark.settledBy?.name ?? 'someone who has left'}` : '',
          ]
            .filter((words) => words !== '')
            .join(' · ')}
        </p>
      )}
      {count > 0 && (
        <button type="button" className="act" aria-expanded={unfolded} onClick={() => setUnfolded(!unfolded)}>
          {count === 1 ? 'one reply' : `${String(count)} replies`}
        </button>
      )}
      {unfolded && (
        <ul className="replies">
          {remark.replies.map((reply) => (
            <li key={reply.id}>
              <Said notebook={notebook} said={reply} own={may && reply.by !== null && reply.by.id === me} />
            </li>
          ))}
        </ul>
      )}
      {may && !answering && (
        <p className="colophon-line remark-acts">
          <button type="button" className="act" onClick={() => setAnswering(true)}>
            reply<span className="aside-only"> to {remark.by?.name ?? 'the remark'}</span>
          </button>
          <Settle notebook={notebook} remark={remark} />
        </p>
      )}
      {answering && (
        <Reply
          notebook={notebook}
          remark={remark.id}
          done={() => {
            setAnswering(false);
            setUnfolded(true);
          }}
          leave={() => setAnswering(false)}
        />
      )}
    </article>
  );
}

function Subject({ remark: { subject } }: { remark: RemarkValue }) {
  if (subject.what === 'entry')
    return subject.quote === null ? null : <p className="remark-subject">“{subject.quote.exact}”</p>;
  return (
    <p className="remark-subject">
      {subject.what === 'term' ? (
        <Formula tex={subject.tex} />
      ) : (
        <Sentence text={subject.tex === '' ? subject.statement : subject.tex} />
      )}
    </p>
  );
}

/** Who said what and when; its author can say it otherwise, or take it back. */
function Said({ notebook, said, own }: { notebook: string; said: Reply; own: boolean }) {
  const client = useQueryClient();
  const [rewording, setRewording] = useState(false);
  const back = useAttempt(async () => {
    await call('takeRemarkBack', { params: { notebook, remark: said.id } });
    await reread(client, notebook, 'remarks');
  });
  const reword = async (text: string) => {
    await call('rewordRemark', { params: { notebook, remark: said.id }, body: { text } });
    await reread(client, notebook, 'remarks');
    setRewording(false);
  };
  return (
    <>
      <p className="remark-by">
        <span className="remark-name">{said.by?.name ?? 'someone who has left'}</span> <Day at={said.at} />
        {said.editedAt !== null && ', reworded'}
      </p>
      {said.text === null ? (
        <p className="remark-text">taken back</p>
      ) : rewording ? (
        <Write
          notebook={notebook}
          label="In other words"
          words="save it"
          begin={said.text}
          send={reword}
          leave={() => setRewording(false)}
        />
      ) : (
        <div className="remark-text">
          <Prose text={said.text} level={3} />
        </div>
      )}
      {own && said.text !== null && !rewording && (
        <p className="colophon-line remark-acts">
          <button type="button" className="act" onClick={() => setRewording(true)}>
            reword
          </button>
          <Act of={back}>take back</Act>
        </p>
      )}
    </>
  );
}

function Settle({ notebook, remark }: { notebook: string; remark: RemarkValue }) {
  const client = useQueryClient();
  const state = remark.state === 'open' ? 'settled' : 'open';
  const settle = useAttempt(async () => {
    await call('settleRemark', { params: { notebook, remark: remark.id }, body: { state } });
    await reread(client, notebook, 'remarks');
  });
  return <Act of={settle}>{state === 'settled' ? 'settle' : 'open again'}</Act>;
}

function Reply(props: { notebook: string; remark: string; done: () => void; leave: () => void }) {
  const { notebook, remark, done, leave } = props;
  const client = useQueryClient();
  return (
    <Write
      notebook={notebook}
      label="Your reply"
      words="send the reply"
      send={async (text) => {
        await call('replyToRemark', { params: { notebook, remark }, body: { text } });
        await reread(client, notebook, 'remarks');
        done();
      }}
      leave={leave}
    />
  );
}
