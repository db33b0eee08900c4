import { useState } from 'react';
import { call } from '../../api/client.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';
import { Field } from '../../components/parts.tsx';

/** Asks for a one-time link by mail. What the page says is the same for every address. */
export function AskForLink({ to }: { to: string }) {
  const [email, setEmail] = useState('');
  const [sent, setSent] = useState<{ email: string; minutes: number } | null>(null);
  const ask = useAttempt(async () => {
    const { minutes } = await call('askForLink', { body: { email, to } });
    setSent({ email, minutes });
  });
  return (
    <form
      onSubmit={(event) => {
        event.preventDefault();
        if (email.trim() !== '') ask.run();
      }}
    >
      <Field
        label="Or by a link that is sent to your e-mail address"
        type="email"
        autoComplete="email"
        required
        value={email}
        set={setEmail}
        className="max-w-md"
      />
      <button type="submit" className="act mt-2" disabled={ask.busy || email.trim() === ''}>
        send the link
      </button>
      <Attempt of={ask} />
      <p role="status" className="measure mt-2">
        {sent && (
          <>
            A link is on its way to {sent.email}. It signs you in once, within the next {sent.minutes} minutes, also
            where there is no account yet.
          </>
        )}
      </p>
    </form>
  );
}
