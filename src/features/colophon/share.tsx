import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useId, useState } from 'react';
import type { Notebook } from '../../../shared/contracts/notebooks.ts';
import { call } from '../../api/client.ts';
import { editionsQuery, linksQuery } from '../../api/queries.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';

/** Links that open one edition to whoever has them, until they are withdrawn. */
export function Share({ notebook, shared }: { notebook: Notebook; shared: (token: string) => string }) {
  const client = useQueryClient();
  const links = useQuery(linksQuery(notebook.id));
  const editions = useQuery(editionsQuery(notebook.id));
  const [edition, setEdition] = useState(notebook.edition ?? 0);
  const [withdrawing, setWithdrawing] = useState<string | null>(null);
  const field = useId();
  const reread = () => client.invalidateQueries({ queryKey: linksQuery(notebook.id).queryKey });
  const make = useAttempt(async () => {
    await call('createLink', { params: { notebook: notebook.id }, body: { edition } });
    await reread();
  });
  const withdraw = useAttempt(async () => {
    if (withdrawing === null) return;
    await call('revokeLink', { params: { notebook: notebook.id, link: withdrawing } });
    setWithdrawing(null);
    await reread();
  });
  if (notebook.edition === null)
    return (
      <section className="colophon-part" aria-label="Share">
        <p>A link opens one edition. Publish one first.</p>
      </section>
    );
  return (
    <section className="colophon-part" aria-label="Share">
      <form
        className="colophon-line"
        onSubmit={(event) => {
          event.preventDefault();
          make.run();
        }}
      >
        <label className="label" htmlFor={field}>
          Make a link to
        </label>
        <select
          id={field}
          className="field w-auto"
          value={edition}
          onChange={(event) => setEdition(Number(event.target.value))}
        >
          {editions.data?.items.map((one) => (
            <option key={one.number} value={one.number}>
              edition {one.number}
            </option>
          ))}
        </select>
        <button type="submit" className="act" disabled={make.busy}>
          make it
        </button>
      </form>
      <Attempt of={make} />
      <ul className="mt-3 space-y-2">
        {links.data?.items.map((link) => {
          const href = new URL(shared(link.token), location.href).href;
          return (
            <li key={link.id}>
              <a href={href} className="code">
                {href}
              </a>{' '}
              <span className="label">edition {link.edition}</span>{' '}
              {withdrawing === link.id ? (
                <button type="button" className="act ink-refuted" disabled={withdraw.busy} onClick={withdraw.run}>
                  withdraw it for everyone
                </button>
              ) : (
                <button type="button" className="act" onClick={() => setWithdrawing(link.id)}>
                  withdraw
                </button>
              )}
            </li>
          );
        })}
      </ul>
      <Attempt of={withdraw} />
    </section>
  );
}
