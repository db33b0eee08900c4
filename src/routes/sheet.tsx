import { type ReactNode, useEffect } from 'react';

/** The main part of a page, with the page's name in the window's title. */
export function Sheet({ title, narrow, children }: { title: string; narrow?: boolean; children: ReactNode }) {
  useEffect(() => {
    document.title = title === '' ? 'Gaugewright' : `${title} · Gaugewright`;
  }, [title]);
  return (
    <main id="page" tabIndex={-1} className={narrow ? 'sheet sheet-narrow' : 'sheet'}>
      {children}
    </main>
  );
}
