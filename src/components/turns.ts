/**
 * Whose turn it is to be set in type. Setting hundreds of formulas at once would hold the page up: each turn sets some, what is
 * on screen or near it comes first, and the rest follows while nothing else is to be done.
 */

/** Milliseconds of setting in one turn. */
const turn = 16;

let spent = 0;
let ends: ReturnType<typeof setTimeout> | undefined;

/** Whether there is room in this turn. Always, where nothing tells what is on screen. */
export const hasRoom = (): boolean => typeof IntersectionObserver === 'undefined' || spent < turn;

/** Runs what sets a formula and counts its time. */
export function counted<T>(set: () => T): T {
  const start = performance.now();
  try {
    return set();
  } finally {
    spent += performance.now() - start;
    ends ??= setTimeout(() => {
      spent = 0;
      ends = undefined;
    });
  }
}

const waiting = new Map<Element, () => void>();
let near: IntersectionObserver | undefined;
let idle = false;

function comes(element: Element): void {
  const set = waiting.get(element);
  waiting.delete(element);
  near?.unobserve(element);
  set?.();
}

/** One after another, so long as nothing else is to be done. */
function goOn(): void {
  idle = false;
  for (let k = 0; k < 8; k += 1) {
    const [first] = waiting.keys();
    if (first) comes(first);
  }
  if (waiting.size > 0) soon();
}

function soon(): void {
  if (idle) return;
  idle = true;
  // Safari has no idle callbacks.
  if ('requestIdleCallback' in window) window.requestIdleCallback(goOn, { timeout: 500 });
  else setTimeout(goOn, 50);
}

/** All that waits is set now: paper shows the whole page. */
export function setAll(): void {
  for (const element of [...waiting.keys()]) comes(element);
}

/** Calls `set` once when the element comes near the screen, or when there is time. Returns what takes it back. */
export function awaitTurn(element: Element, set: () => void): () => void {
  near ??= new IntersectionObserver(
    (seen) => {
      for (const { isIntersecting, target } of seen) if (isIntersecting) comes(target);
    },
    { rootMargin: '50% 0px' },
  );
  waiting.set(element, set);
  near.observe(element);
  soon();
  return () => {
    waiting.delete(element);
    near?.unobserve(element);
  };
}
