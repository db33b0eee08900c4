import type { FiniteString } from '../../algebra/finite/types.ts';
import {
  flipHamiltonian,
  flipParts,
  isReal,
  type FlipParts,
  type Hamiltonian,
  type NumericTerm,
} from '../hamiltonian.ts';
import type { Kernel } from '../kernel/kernel.ts';
import { diagonalValues } from '../kernel/flips.ts';
import { dropQubits, labelFrame, type SectorFault } from './drop-qubits.ts';
import { cheaperFrame, realFrame, symmetries } from './frames.ts';
import { commute, type Constraint } from './packed.ts';

/**
 * A sector as a sum of blocks that H does not connect. Every level of a block stands for `copies` levels of the sector:
 * symmetries that do not commute with each other make that many equal copies of each block.
 */
export interface Sector {
  readonly kind: 'all states' | 'enumerated';
  /** Spins left by the constraints; for an enumerated basis those of the model. */
  readonly spins: number;
  /** States, copies included. */
  readonly dimension: number;
  readonly copies: number;
  /** Indices of terms that (with their partners of the same flip) lead out of an enumerated basis; H is PHP. */
  readonly leaving: readonly number[];
  readonly blocks: readonly Block[];
}

export interface Block {
  readonly dimension: number;
  /** True if the Hamiltonian's matrix is real in this basis. */
  readonly real: boolean;
  /** Work of one product with H, in multiplications. */
  readonly productCost: number;
  /** Memory of the matrix beside the vectors, in bytes (an estimate from above). */
  readonly matrixBytes: number;
  /** The levels themselves, in the order of the basis, where H is diagonal in it. */
  readonly diagonal: (() => Float64Array) | undefined;
  hamiltonian(kernel: Kernel): Hamiltonian;
  /**
   * Block of P O P for any Hermitian O of the model's spins, averaged over the copies; a string that does not commute with
   * the constraints or symmetries has no part in it. For real vectors only the real part of the matrix counts; `complex`
   * asks for complex vectors.
   */
  operator(terms: readonly NumericTerm[], constant: number, kernel: Kernel, complex: boolean): Hamiltonian;
}

/** Blocks below this dimension are not worth splitting further. */
const smallBlock = 2 ** 9;
/** Blocks that are large are split by so many symmetries: less memory for each, and levels that meet stand apart. */
const splitLarge = 1;

type Outcome =
  | { readonly ok: true; readonly value: Sector }
  | { readonly ok: false; readonly fault: SectorFault | { readonly code: 'too many spins'; readonly spins: number } };

/**
 * The sector of commuting constraints on n spins. Beyond them the symmetries of the model (strings that commute with all
 * terms) are used: one of each anticommuting pair fixes the copies, and some of the others cut the rest into blocks.
 * `all` asks for blocks that are as small as they can be, for when all levels are wanted.
 */
export function qubitSector(
  n: number,
  terms: readonly NumericTerm[],
  constant: number,
  constraints: readonly Constraint[],
  all = false,
): Outcome {
  const strings = terms.map((t) => t.string);
  const dropped = dropQubits(n, strings, constraints);
  if (!dropped.ok) return dropped;
  const { spins, reduce } = dropped.value;
  const reduced = strings.map((s) => reduce(s)).filter((s) => s !== undefined);
  const frame = newFrame(spins, reduced);
  if (frame.states > 30) return { ok: false, fault: { code: 'too many spins', spins: frame.states } };
  const image = (list: readonly NumericTerm[]): NumericTerm[] =>
    list.flatMap((t) => {
      const first = reduce(t.string);
      const string = first && frame.image(first);
      return string ? [{ ...t, string }] : [];
    });
  const own = image(terms);
  const fixed = splitBy(frame, own, all);
  const blocks = Array.from({ length: 2 ** fixed }, (_, values) => {
    const left = frame.states - fixed;
    const inBlock = (list: readonly NumericTerm[]) => list.map((t) => fixLabels(t, left, values));
    return block(left, flipParts(left, inBlock(own), constant), (list) => inBlock(image(list)));
  });
  return {
    ok: true,
    value: {
      kind: 'all states',
      spins,
      dimension: 2 ** spins,
      copies: 2 ** (spins - frame.states),
      leaving: [],
      blocks,
    },
  };
}

interface Frame {
  /** Spins that number the states of one copy: `inner` ones that are flipped, and above them the labels. */
  readonly states: number;
  readonly inner: number;
  readonly image: (string: FiniteString) => FiniteString | undefined;
}

/** Labels of symmetries without a partner on the highest spins; those with one are fixed at +1 and dropped. */
function newFrame(spins: number, reduced: readonly FiniteString[]): Frame {
  const { laws, partners } = symmetries(spins, reduced);
  const paired = laws.filter((_, k) => partners[k]);
  const single = laws.filter((_, k) => !partners[k]);
  const rivals = partners.filter((p) => p !== undefined);
  const copies = dropQubits(
    spins,
    [],
    paired.map((string) => ({ string, value: 1 as const })),
  );
  if (!copies.ok) throw new Error('symmetries of a model must commute');
  const { reduce, spins: states } = copies.value;
  const inner = states - single.length;
  const label = labelFrame(
    states,
    single.map((s) => reduce(s)).filter((s) => s !== undefined),
  );
  const toLabels = (string: FiniteString) => {
    // A string that anticommutes with a partner has opposite means in the two copies.
    if (!rivals.every((r) => commute(r, string))) return undefined;
    const once = reduce(string);
    return once && label(once);
  };
  if (states > 30) return { states, inner, image: toLabels };
  const first = reduced.map(toLabels).filter((s) => s !== undefined);
  const mask = 2 ** inner - 1;
  const cut = (s: FiniteString): FiniteString => ({ ...s, x: s.x.map((w) => w & mask), z: s.z.map((w) => w & mask) });
  const toReal = realFrame(inner, first.map(cut)) ?? ((s: FiniteString) => s);
  const toCheap = cheaperFrame(inner, first.map(toReal));
  return {
    states,
    inner,
    image(string) {
      const labelled = toLabels(string);
      return labelled && toCheap(toReal(labelled));
    },
  };
}

/** Labels whose values are fixed block by block. */
function splitBy(frame: Frame, own: readonly NumericTerm[], all: boolean): number {
  const labels = frame.states - frame.inner;
  const flips = own.some((t) => t.string.x[0] !== 0);
  // A diagonal model is read off as it is.
  if (!flips) return 0;
  const untilSmall = Math.max(0, frame.states - Math.log2(smallBlock));
  return Math.min(labels, all ? untilSmall : Math.min(splitLarge, untilSmall));
}

/** The term where the labels above the first `left` spins have the values of the bits (1 means −1). */
function fixLabels(t: NumericTerm, left: number, values: number): NumericTerm {
  const mask = 2 ** left - 1;
  const z = t.string.z[0] ?? 0;
  let odd = 0;
  for (let both = (z >>> left) & values; both !== 0; both &= both - 1) odd ^= 1;
  const string = { ...t.string, z: Uint32Array.of(z & mask), phase: (t.string.phase + 2 * odd) & 3 };
  return { ...t, string };
}

function block(spins: number, parts: FlipParts, image: (list: readonly NumericTerm[]) => NumericTerm[]): Block {
  const dimension = 2 ** spins;
  const real = isReal(parts);
  const sweeps = [parts.real, parts.imaginary].reduce(
    (sum, f) => sum + 1 + f.flips.reduce((s, g) => s + g.terms.length, 0),
    0,
  );
  const isDiagonal = real && parts.real.flips.length === 0;
  return {
    dimension,
    real,
    productCost: sweeps * dimension,
    matrixBytes: (real ? 2 : 4) * dimension + 2 ** 20,
    diagonal: isDiagonal
      ? () => {
          const { values, index } = diagonalValues(parts.real);
          return index ? Float64Array.from(index, (k) => values[k] ?? 0) : values;
        }
      : undefined,
    hamiltonian: (kernel) => flipHamiltonian(parts, kernel),
    operator(others, shift, kernel, complex) {
      const whole = flipParts(spins, image(others), shift);
      const none = { spins, diagonal: [], flips: [] };
      return flipHamiltonian(complex ? whole : { real: whole.real, imaginary: none }, kernel, complex);
    },
  };
}
