import { useState } from 'react';
import { call, RequestFailed } from '../../api/client.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';
import { Field } from '../../components/parts.tsx';

interface Props {
  readonly token: string;
  readonly words: string;
  /** Signed in; the page to go to. */
  readonly done: (to: string) => Promise<void>;
}

/**
 * Signs in with what a mail carries, at the press of a button: programs that look into mails follow links, but press nothing.
 * An address that is new here is asked for the name it goes by.
 */
export function UseLink({ token, words, done }: Props) {
  const [name, setName] = useState<string | null>(null);
  const use = useAttempt(async () => {
    try {
      const { to } = await call('useLink', { body: { token, ...(name === null ? {} : { name }) } });
      await done(to);
    } catch (error) {
      if (error instanceof RequestFailed && error.problem['nameNeeded'] === true) setName('');
      else if (error instanceof RequestFailed && error.status === 404)
        throw new Error('This link was used already, is too old, or was never sent. Ask for another.', {
          cause: error,
        });
      else throw error;
    }
  });
  return (
    <form
      className="mt-4"
      onSubmit={(event) => {
        event.preventDefault();
        use.run();
      }}
    >
      {name !== null && (
        <Field
          label="This address is new here. The name you publish under"
          autoComplete="name"
          autoFocus
          required
          maxLength={120}
          value={name}
          set={setName}
          className="mb-3 max-w-md"
        />
      )}
      <button type="submit" className="act text-lead" disabled={use.busy || name?.trim() === ''}>
        {words}
      </button>
      <Attempt of={use} />
    </form>
  );
}
