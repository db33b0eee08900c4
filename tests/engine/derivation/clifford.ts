import fc from 'fast-check';
import type { Place, Word } from './brute.ts';

/** Layers of Clifford gates on the infinite lattice, one class of vertices, written apart from the engine. */

export type Layer =
  | { readonly gate: 'h' | 's'; readonly species: string }
  | { readonly gate: 'cz'; readonly species: readonly [string, string]; readonly offset: readonly number[] };

/** i^phase times X^x Z^z on each site; a site is "species.class@offset". */
interface Infinite {
  readonly phase: number;
  readonly sites: ReadonlyMap<string, readonly [x: number, z: number]>;
}
const key = (at: string, offset: readonly number[]): string => `${at}@${offset.join()}`;

export function times(a: Infinite, b: Infinite): Infinite {
  const sites = new Map(a.sites);
  let phase = a.phase + b.phase;
  for (const [k, [x, z]] of b.sites) {
    const [p, q] = sites.get(k) ?? [0, 0];
    phase += 2 * (q & x);
    const next = [p ^ x, q ^ z] as const;
    if (next[0] || next[1]) sites.set(k, next);
    else sites.delete(k);
  }
  return { phase: phase & 3, sites };
}

const place = ({ at, offset, pauli }: Place): Infinite => ({
  phase: pauli === 'y' ? 1 : 0,
  sites: new Map([[key(at, offset), [pauli === 'z' ? 0 : 1, pauli === 'x' ? 0 : 1]]]),
});
export const infinite = (word: Word): Infinite =>
  word.places.map(place).reduce(times, { phase: word.sign === 1 ? 0 : 2, sites: new Map() });

/** Back to a Hermitian word with its sign. Throws where the product is not Hermitian. */
export function wordOf({ phase, sites }: Infinite): Word {
  let rest = phase;
  const places = [...sites].map(([k, [x, z]]): Place => {
    const [at = '', offset = ''] = k.split('@');
    if (x && z) rest -= 1;
    return { at, offset: offset.split(',').map(Number), pauli: x && z ? 'y' : x ? 'x' : 'z' };
  });
  const turned = ((rest % 4) + 4) % 4;
  if (turned % 2 === 1) throw new Error('not Hermitian');
  return { sign: turned === 0 ? 1 : -1, places };
}

export const shiftWord = (word: Word, by: readonly number[]): Word => ({
  ...word,
  places: word.places.map((p) => ({ ...p, offset: p.offset.map((c, d) => c + by[d]!) })),
});

/** U P U† of one Pauli matrix under one layer. */
function actOn(layer: Layer, { at, offset, pauli }: Place): Word {
  const [species = ''] = at.split('.');
  const same = (p: 'x' | 'y' | 'z', sign: 1 | -1): Word => ({ sign, places: [{ at, offset, pauli: p }] });
  switch (layer.gate) {
    case 'h':
      if (species !== layer.species) return same(pauli, 1);
      return pauli === 'y' ? same('y', -1) : same(pauli === 'x' ? 'z' : 'x', 1);
    case 's':
      if (species !== layer.species || pauli === 'z') return same(pauli, 1);
      return pauli === 'x' ? same('y', 1) : same('x', -1);
    case 'cz': {
      if (pauli === 'z') return same('z', 1);
      const dressed: Place[] = [];
      const [a, b] = layer.species;
      if (species === a)
        dressed.push({ at: at.replace(a, b), offset: offset.map((c, d) => c + layer.offset[d]!), pauli: 'z' });
      if (species === b)
        dressed.push({ at: at.replace(b, a), offset: offset.map((c, d) => c - layer.offset[d]!), pauli: 'z' });
      return { sign: 1, places: [{ at, offset, pauli }, ...dressed] };
    }
  }
}

/** The word carried through the layers, in order. */
export const conjugate = (layers: readonly Layer[], word: Word): Word =>
  layers.reduce(
    (w, layer) =>
      wordOf(
        w.places.map((p) => infinite(actOn(layer, p))).reduce(times, { phase: w.sign === 1 ? 0 : 2, sites: new Map() }),
      ),
    word,
  );

/** Up to three layers on one or two species; a gate of two spins never joins a spin with itself. */
export const layersOn = (species: readonly string[], dimension: number): fc.Arbitrary<Layer[]> =>
  fc.array(
    fc.oneof(
      fc.record({ gate: fc.constantFrom<'h' | 's'>('h', 's'), species: fc.constantFrom(...species) }),
      fc
        .record({
          gate: fc.constant<'cz'>('cz'),
          species: fc.tuple(fc.constantFrom(...species), fc.constantFrom(...species)),
          offset: fc.array(fc.integer({ min: -1, max: 1 }), { minLength: dimension, maxLength: dimension }),
        })
        .filter(({ species: [a, b], offset }) => a !== b || offset.some((c) => c !== 0)),
    ),
    { maxLength: 3 },
  );
