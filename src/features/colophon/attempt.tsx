import { useState } from 'react';

/** Something that is asked of the server once: whether it is under way, and why it did not succeed. */
export interface Attempted {
  readonly busy: boolean;
  readonly failed: string | null;
  readonly run: () => void;
}

export function useAttempt(make: () => Promise<void>): Attempted {
  const [busy, setBusy] = useState(false);
  const [failed, setFailed] = useState<string | null>(null);
  const run = async () => {
    setBusy(true);
    setFailed(null);
    try {
      await make();
    } catch (error) {
      setFailed(error instanceof Error ? error.message : 'It did not succeed.');
    } finally {
      setBusy(false);
    }
  };
  return { busy, failed, run: () => void run() };
}

export function Attempt({ of }: { of: Attempted }) {
  if (of.failed === null) return null;
  return (
    <p role="alert" className="ink-refuted">
      {of.failed}
    </p>
  );
}
