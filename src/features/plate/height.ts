/** The height of the plate, in CSS pixels, remembered on this device. */
const key = 'gaugewright:plate';

export const heights = {
  least: 44,
  /** Below this only its name is shown. */
  folded: 110,
  usual: 232,
  most: (): number => Math.round(globalThis.innerHeight * 0.7),
};

export function keptHeight(): number {
  const narrow = globalThis.innerWidth < 760;
  try {
    const kept = Number(localStorage.getItem(key));
    if (kept >= heights.least) return Math.min(kept, heights.most());
  } catch {
    // Nothing is kept on this device.
  }
  return narrow ? heights.least : heights.usual;
}

export function keepHeight(height: number): void {
  try {
    localStorage.setItem(key, String(Math.round(height)));
  } catch {
    // The height lasts as long as the page.
  }
}
