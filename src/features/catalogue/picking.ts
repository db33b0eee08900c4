import type { Worked } from '../../../shared/contracts/catalogue.ts';

/** What a derivation is picked by; an empty word leaves everything in. */
export interface Picked {
  readonly lattice: string;
  readonly symmetry: string;
  readonly hand: string;
}

export const unpicked: Picked = { lattice: '', symmetry: '', hand: '' };

const fits = (wanted: string, own: string): boolean => wanted === '' || wanted === own;

export const picking = (all: readonly Worked[], picked: Picked): readonly Worked[] =>
  all.filter(
    (one) => fits(picked.lattice, one.lattice) && fits(picked.symmetry, one.symmetry) && fits(picked.hand, one.hand),
  );

/** The words of one list that some derivation has, given what the other two lists say: no choice leads nowhere. */
export function offered(all: readonly Worked[], picked: Picked, by: keyof Picked, words: readonly string[]) {
  const others = picking(all, { ...picked, [by]: '' });
  return words.filter((word) => word === picked[by] || others.some((one) => one[by] === word));
}
