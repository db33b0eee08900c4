import { equalStrings, multiplyStrings, siteKey, toPhase } from './string.ts';
import type { LocalString, Pauli, Phase, Site } from './types.ts';

/** Image of one Pauli matrix: i^phase times letters on the gate's spins, one each ("XZ"; I for none). */
export interface Image {
  readonly phase: Phase;
  readonly letters: string;
}

/** One gate. `matrix` is (2^arity × 2^arity), first spin the highest bit of the index, entries [re, im]; where `half` stands, times 1/sqrt(2). */
export interface Gate {
  /** Name in OpenQASM 3 (stdgates.inc). */
  readonly name: string;
  readonly arity: 1 | 2;
  /** U X_k U† and U Z_k U† for the k-th spin of the gate. */
  readonly x: readonly Image[];
  readonly z: readonly Image[];
  readonly inverse: string;
  readonly matrix: readonly (readonly (readonly [number, number])[])[];
  readonly half?: true;
  readonly help: string;
}

const o = [0, 0] as const;
const e = [1, 0] as const;
const m = [-1, 0] as const;
const i = [0, 1] as const;
const j = [0, -1] as const;
const plus = (letters: string): Image => ({ phase: 0, letters });
const minus = (letters: string): Image => ({ phase: 2, letters });

/** The Clifford gates of the language. */
export const gates: readonly Gate[] = [
  {
    name: 'h',
    arity: 1,
    x: [plus('Z')],
    z: [plus('X')],
    inverse: 'h',
    half: true,
    matrix: [
      [e, e],
      [e, m],
    ],
    help: 'Hadamard: exchanges X and Z',
  },
  {
    name: 's',
    arity: 1,
    x: [plus('Y')],
    z: [plus('Z')],
    inverse: 'sdg',
    matrix: [
      [e, o],
      [o, i],
    ],
    help: 'phase gate: X becomes Y',
  },
  {
    name: 'sdg',
    arity: 1,
    x: [minus('Y')],
    z: [plus('Z')],
    inverse: 's',
    matrix: [
      [e, o],
      [o, j],
    ],
    help: 'inverse phase gate: X becomes −Y',
  },
  {
    name: 'x',
    arity: 1,
    x: [plus('X')],
    z: [minus('Z')],
    inverse: 'x',
    matrix: [
      [o, e],
      [e, o],
    ],
    help: 'flips the spin',
  },
  {
    name: 'y',
    arity: 1,
    x: [minus('X')],
    z: [minus('Z')],
    inverse: 'y',
    matrix: [
      [o, j],
      [i, o],
    ],
    help: 'flips with a phase',
  },
  {
    name: 'z',
    arity: 1,
    x: [minus('X')],
    z: [plus('Z')],
    inverse: 'z',
    matrix: [
      [e, o],
      [o, m],
    ],
    help: 'sign of |1>',
  },
  {
    name: 'cx',
    arity: 2,
    x: [plus('XX'), plus('IX')],
    z: [plus('ZI'), plus('ZZ')],
    inverse: 'cx',
    matrix: [
      [e, o, o, o],
      [o, e, o, o],
      [o, o, o, e],
      [o, o, e, o],
    ],
    help: 'flips the second spin if the first is |1>',
  },
  {
    name: 'cy',
    arity: 2,
    x: [plus('XY'), plus('ZX')],
    z: [plus('ZI'), plus('ZZ')],
    inverse: 'cy',
    matrix: [
      [e, o, o, o],
      [o, e, o, o],
      [o, o, o, j],
      [o, o, i, o],
    ],
    help: 'Y on the second spin if the first is |1>',
  },
  {
    name: 'cz',
    arity: 2,
    x: [plus('XZ'), plus('ZX')],
    z: [plus('ZI'), plus('IZ')],
    inverse: 'cz',
    matrix: [
      [e, o, o, o],
      [o, e, o, o],
      [o, o, e, o],
      [o, o, o, m],
    ],
    help: 'sign of |11>',
  },
  {
    name: 'swap',
    arity: 2,
    x: [plus('IX'), plus('XI')],
    z: [plus('IZ'), plus('ZI')],
    inverse: 'swap',
    matrix: [
      [e, o, o, o],
      [o, o, e, o],
      [o, e, o, o],
      [o, o, o, e],
    ],
    help: 'exchanges two spins',
  },
];

const byName = new Map(gates.map((g) => [g.name, g]));
/** The gate of a name; undefined if there is none. */
export const gateNamed = (name: string): Gate | undefined => byName.get(name);

/** An image as a string on the gate's targets. */
function place({ phase, letters }: Image, targets: readonly Site[]): LocalString {
  return [...letters].reduce<LocalString>(
    (string, letter, k) => {
      const site = targets[k];
      if (letter === 'I' || !site) return string;
      const pauli = letter.toLowerCase() as Pauli;
      return multiplyStrings(string, { phase: 0, factors: [{ species: site.species, cell: site.cell, pauli }] });
    },
    { phase, factors: [] },
  );
}

/**
 * U a U† for one gate U on its targets (distinct spins, as many as its arity). Exact, signs included.
 * Throws RangeError if the number of targets is not the arity or two are one spin.
 */
export function conjugate(gate: Gate, targets: readonly Site[], a: LocalString): LocalString {
  const numbers = new Map(targets.map((t, k) => [siteKey(t), k]));
  if (targets.length !== gate.arity || numbers.size !== gate.arity)
    throw new RangeError(`gate ${gate.name} acts on ${String(gate.arity)} distinct spins, got ${String(numbers.size)}`);
  const away: LocalString = { phase: a.phase, factors: a.factors.filter((f) => !numbers.has(siteKey(f))) };
  return a.factors.reduce<LocalString>((product, f) => {
    const k = numbers.get(siteKey(f));
    if (k === undefined) return product;
    const [x, z] = [gate.x[k], gate.z[k]];
    if (!x || !z) return product;
    const image =
      f.pauli === 'x'
        ? place(x, targets)
        : f.pauli === 'z'
          ? place(z, targets)
          : // Y = i X Z
            turn(multiplyStrings(place(x, targets), place(z, targets)), 1);
    return multiplyStrings(product, image);
  }, away);
}
const turn = (a: LocalString, by: number): LocalString => ({ phase: toPhase(a.phase + by), factors: a.factors });

/** True if two gates on their targets commute up to a phase: in either order they act alike on X and Z of every target. */
export function gatesCommute(
  a: { readonly gate: Gate; readonly targets: readonly Site[] },
  b: { readonly gate: Gate; readonly targets: readonly Site[] },
): boolean {
  return [...a.targets, ...b.targets].every((site) =>
    (['x', 'z'] as const).every((pauli) => {
      const start: LocalString = { phase: 0, factors: [{ species: site.species, cell: site.cell, pauli }] };
      const ab = conjugate(a.gate, a.targets, conjugate(b.gate, b.targets, start));
      const ba = conjugate(b.gate, b.targets, conjugate(a.gate, a.targets, start));
      return equalStrings(ab, ba);
    }),
  );
}
