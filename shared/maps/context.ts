import type { LawValue, SpeciesValue, Values } from '../language/values.ts';
import type { Lattice, LatticeFamily } from '../lattice/cells.ts';

/** What every map is built on: the lattice and what was declared before it. */
export interface Context {
  readonly values: Values;
  readonly lattice: Lattice;
  readonly family: LatticeFamily;
  /** Whether some direction is open, so that missing cells matter. */
  readonly open: boolean;
  /** Name of the map, for sentences. */
  readonly name: string;
}

export const speciesOf = (context: Context, name: string): SpeciesValue | undefined => {
  const value = context.values.find(name);
  return value?.what === 'spins' ? value : undefined;
};

/** Laws that maps declare (`N.gauss`), then the declared ones. */
export function lawsOf(values: Values): LawValue[] {
  const all = [...values.all.values()];
  return [
    ...all.flatMap((value) => (value.what === 'map' ? [...value.map.laws.values()] : [])),
    ...all.flatMap((value) => (value.what === 'law' ? [value] : [])),
  ];
}
