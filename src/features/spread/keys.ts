/** Arrow keys between the terms of the pages: up and down along a page, left and right across the gutter. */

interface Key {
  readonly key: string;
  readonly target: EventTarget;
  readonly altKey: boolean;
  readonly ctrlKey: boolean;
  readonly metaKey: boolean;
}

/** Moves the focus from one term to the next; false when the key is not for this, or there is none that way. */
export function moveBetweenTerms(pages: HTMLElement, event: Key): boolean {
  if (event.altKey || event.ctrlKey || event.metaKey) return false;
  const at = event.target instanceof HTMLElement ? event.target.closest<HTMLElement>('[data-term]') : null;
  if (!at) return false;
  const next =
    event.key === 'ArrowDown'
      ? along(pages, at, 1)
      : event.key === 'ArrowUp'
        ? along(pages, at, -1)
        : event.key === 'ArrowRight'
          ? beside(at, 'right')
          : event.key === 'ArrowLeft'
            ? beside(at, 'left')
            : undefined;
  if (!next) return false;
  next.focus();
  next.scrollIntoView({ block: 'nearest' });
  return true;
}

const shown = (element: HTMLElement): boolean => element.getClientRects().length > 0;

/** The next line with a term, on the same page where it has one. */
function along(pages: HTMLElement, at: HTMLElement, step: 1 | -1): HTMLElement | undefined {
  const all = [...pages.querySelectorAll<HTMLElement>('[data-term]')].filter(shown);
  const line = (element: HTMLElement) => element.closest('.pair');
  const from = all.indexOf(at);
  const own = line(at);
  for (let k = from + step; k >= 0 && k < all.length; k += step) {
    const found = all[k];
    if (!found || line(found) === own) continue;
    const same = all.find((other) => line(other) === line(found) && other.dataset['term'] === at.dataset['term']);
    return same ?? found;
  }
  return undefined;
}

function beside(at: HTMLElement, side: 'left' | 'right'): HTMLElement | undefined {
  const terms = [...(at.closest('.pair')?.querySelectorAll<HTMLElement>('[data-term]') ?? [])].filter(shown);
  const next = terms[terms.indexOf(at) + (side === 'right' ? 1 : -1)];
  return next;
}
