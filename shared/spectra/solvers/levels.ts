/** Levels that agree within the tolerance, as one. */
export interface Multiplet {
  /** Mean of its levels. */
  readonly energy: number;
  readonly multiplicity: number;
  /** False when more levels may belong to it than were computed. */
  readonly complete: boolean;
}

/**
 * Groups ascending levels, each of which stands for `copies`: neighbours closer than `tolerance` (in the unit of the
 * energies) belong together. `lastComplete` is what is known about the last one; the others end where the next begins.
 */
export function multiplets(
  energies: ArrayLike<number>,
  tolerance: number,
  lastComplete: boolean,
  copies = 1,
): Multiplet[] {
  const groups: number[][] = [];
  for (let k = 0; k < energies.length; k++) {
    const energy = energies[k] ?? 0;
    const last = groups.at(-1);
    if (last && energy - (last.at(-1) ?? 0) <= tolerance) last.push(energy);
    else groups.push([energy]);
  }
  return groups.map((levels, k) => ({
    energy: levels.reduce((a, b) => a + b, 0) / levels.length,
    multiplicity: levels.length * copies,
    complete: k < groups.length - 1 || lastComplete,
  }));
}

/** How many of the ascending levels to keep so that at least `count` are kept and the last multiplet is whole. */
export function wholeMultiplets(energies: ArrayLike<number>, count: number, tolerance: number): number {
  let k = Math.min(count, energies.length);
  while (k > 0 && k < energies.length && (energies[k] ?? 0) - (energies[k - 1] ?? 0) <= tolerance) k++;
  return k;
}
