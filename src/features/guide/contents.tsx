import type { ReactNode } from 'react';
import { chapters } from './chapters.ts';

/** The chapters as a list; the one that is open is not a link. */
export function GuideContents({ open, link }: { open?: string; link: (name: string, title: string) => ReactNode }) {
  return (
    <nav aria-label="Chapters of the guide">
      <ol className="mt-3 space-y-1">
        {chapters.map(({ name, title, about }) => (
          <li key={name} aria-current={name === open ? 'page' : undefined}>
            {name === open ? <strong>{title}</strong> : link(name, title)} <span className="label">{about}</span>
          </li>
        ))}
      </ol>
    </nav>
  );
}
