import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { membersQuery } from '../../api/queries.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';
import { TextField } from '../../components/parts.tsx';
import { Prose } from '../../components/prose.tsx';

interface Props {
  readonly notebook: string;
  readonly label: string;
  readonly words: string;
  readonly begin?: string;
  readonly send: (text: string) => Promise<void>;
  readonly leave: () => void;
}

/** A few lines for the margin: Markdown with $…$, set as it will be read once it holds a formula. What is typed stays when sending fails. */
export function Write({ notebook, label, words, begin = '', send, leave }: Props) {
  const [text, setText] = useState(begin);
  const people = useQuery(membersQuery(notebook));
  const sending = useAttempt(() => send(text));
  const mention = (handle: string) => setText((now) => `${now}${now === '' || /\s$/.test(now) ? '' : ' '}@${handle} `);
  return (
    <form
      className="margin-write"
      onSubmit={(event) => {
        event.preventDefault();
        if (text.trim() !== '') sending.run();
      }}
      onKeyDown={(event) => {
        if (event.key === 'Escape' && text === begin) leave();
      }}
    >
      <TextField label={label} value={text} set={setText} focus />
      {/[$*`]/.test(text) && (
        <div className="remark-text" aria-label="As it will be read" role="group">
          <Prose text={text} level={3} />
        </div>
      )}
      <p className="colophon-line">
        <button type="submit" className="act" disabled={sending.busy || text.trim() === ''}>
          {words}
        </button>
        <button type="button" className="act" onClick={leave}>
          leave it
        </button>
      </p>
      {(people.data?.items.length ?? 0) > 1 && (
        <details>
          <summary>mention someone</summary>
          <ul>
            {people.data?.items.map(({ person }) => (
              <li key={person.id}>
                <button type="button" className="act" onClick={() => mention(person.handle)}>
                  {person.name}
                </button>
              </li>
            ))}
          </ul>
        </details>
      )}
      <Attempt of={sending} />
    </form>
  );
}
