import { afterEach, describe, expect, it, vi } from 'vitest';
import { awaitTurn, counted, hasRoom, setAll } from '../../src/components/turns.ts';

/** What tells that an element comes near the screen, for each that is watched. */
const watched = new Map<Element, () => void>();
class Observer {
  private readonly tell: IntersectionObserverCallback;
  constructor(tell: IntersectionObserverCallback) {
    this.tell = tell;
  }
  observe(target: Element): void {
    const entry = { isIntersecting: true, target } as IntersectionObserverEntry;
    watched.set(target, () => this.tell([entry], this as unknown as IntersectionObserver));
  }
  unobserve(target: Element): void {
    watched.delete(target);
  }
}

afterEach(() => {
  vi.useRealTimers();
  vi.unstubAllGlobals();
  vi.restoreAllMocks();
});

describe('turns of setting', () => {
  it('are full after some time of setting, and new with the next task', () => {
    vi.stubGlobal('IntersectionObserver', Observer);
    vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] });
    let time = 0;
    vi.spyOn(performance, 'now').mockImplementation(() => time);
    const set = (milliseconds: number) => counted(() => (time += milliseconds));
    expect(hasRoom()).toBe(true);
    set(10);
    expect(hasRoom()).toBe(true);
    set(10);
    expect(hasRoom()).toBe(false);
    vi.advanceTimersByTime(1);
    expect(hasRoom()).toBe(true);
  });

  it('set what comes near the screen first, and the rest in their time', () => {
    vi.stubGlobal('IntersectionObserver', Observer);
    vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] });
    const set: number[] = [];
    const elements = Array.from({ length: 30 }, () => document.createElement('span'));
    const back = elements.map((element, k) => awaitTurn(element, () => set.push(k)));
    watched.get(elements[20] ?? document.body)?.();
    expect(set).toEqual([20]);
    back[3]?.();
    vi.advanceTimersByTime(1000);
    expect([...set].sort((a, b) => a - b)).toEqual(elements.flatMap((_, k) => (k === 3 ? [] : [k])));
  });

  it('leave nothing unset on paper', () => {
    vi.stubGlobal('IntersectionObserver', Observer);
    vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] });
    let set = 0;
    for (let k = 0; k < 20; k += 1) awaitTurn(document.createElement('span'), () => (set += 1));
    setAll();
    expect(set).toBe(20);
  });

  it('are always free where nothing tells what is on screen', () => {
    counted(() => undefined);
    expect(hasRoom()).toBe(true);
  });
});
