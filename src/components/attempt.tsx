import { useState } from 'react';

/** Something that is asked of the server once: whether it is under way, and why it did not succeed. */
export interface Attempted<A extends readonly unknown[] = []> {
  readonly busy: boolean;
  readonly failed: string | null;
  /** How often it succeeded so far. */
  readonly done: number;
  readonly run: (...given: A) => void;
}

export function useAttempt<A extends readonly unknown[] = []>(make: (...given: A) => Promise<void>): Attempted<A> {
  const [busy, setBusy] = useState(false);
  const [failed, setFailed] = useState<string | null>(null);
  const [done, setDone] = useState(0);
  const run = async (...given: A) => {
    setBusy(true);
    setFailed(null);
    try {
      await make(...given);
      setDone((count) => count + 1);
    } catch (error) {
      setFailed(error instanceof Error ? error.message : 'It did not succeed.');
    } finally {
      setBusy(false);
    }
  };
  return { busy, failed, done, run: (...given) => void run(...given) };
}

export function Attempt({ of }: { of: Pick<Attempted, 'failed'> }) {
  if (of.failed === null) return null;
  return (
    <p role="alert" className="ink-refuted">
      {of.failed}
    </p>
  );
}

/** Words that do something; disabled while it is under way, and followed by the reason where it did not succeed. */
export function Act(props: { of: Attempted; disabled?: boolean; loud?: boolean; children: React.ReactNode }) {
  return (
    <>
      <button
        type="button"
        className={props.loud ? 'act ink-refuted' : 'act'}
        disabled={props.of.busy || props.disabled}
        onClick={() => props.of.run()}
      >
        {props.children}
      </button>
      <Attempt of={props.of} />
    </>
  );
}
