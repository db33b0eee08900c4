import { useState } from 'react';
import { beginnings } from './beginnings.ts';

/** A notebook that begins with a text for what one wants to do. */
export function BeginWith({ take }: { take: (source: string) => Promise<void> }) {
  const [busy, setBusy] = useState(false);
  const [failed, setFailed] = useState<string | null>(null);
  const begin = async (source: string) => {
    setBusy(true);
    setFailed(null);
    try {
      await take(source);
    } catch (error) {
      setFailed(error instanceof Error ? error.message : 'It was not begun.');
    } finally {
      setBusy(false);
    }
  };
  return (
    <section className="mt-6" aria-label="Begin with a text">
      <p className="label">Or begin with a text that runs, and change it. I want to</p>
      <p className="colophon-line mt-1">
        {beginnings.map(({ want, source }) => (
          <button key={want} type="button" className="act" disabled={busy} onClick={() => void begin(source)}>
            {want}
          </button>
        ))}
      </p>
      {failed !== null && (
        <p role="alert" className="ink-refuted mt-2">
          {failed}
        </p>
      )}
    </section>
  );
}
