import { classKey } from '../../algebra/pauli/string.ts';
import type { Factor, LocalString, Pauli, Steps } from '../../algebra/pauli/types.ts';
import type { Offset } from '../../lattice/cells.ts';
import { contains, inSteps, minus, mod } from '../steps.ts';

/**
 * Pauli strings without their phase, as sets of coordinates: one for the x part and one for the z part of each spin,
 * so that the product of strings is the symmetric difference of sets. Offsets may be taken modulo `quotient` (entry m > 0: modulo m),
 * which is how strings of unbounded support, products along translations, are handled: as elements of a quotient ring's module.
 */
export interface Coordinate {
  /** Species, class and bit, numbered. */
  readonly track: number;
  readonly offset: Offset;
}

/** One generator: all translates of a string by `steps`. */
export interface Generator {
  readonly string: LocalString;
  readonly steps: Steps;
}

/** A translate of a generator. */
export interface Use {
  readonly generator: number;
  readonly by: Offset;
}

const hasX = (p: Pauli): boolean => p !== 'z';
const hasZ = (p: Pauli): boolean => p !== 'x';

/** Numbers for coordinates and their tracks, given as they occur. */
export class Numbering {
  private readonly tracks = new Map<string, number>();
  private readonly ids = new Map<string, number>();
  readonly coordinates: Coordinate[] = [];
  readonly quotient: Steps;

  constructor(quotient: Steps) {
    this.quotient = quotient;
  }

  private reduced(offset: Offset): number[] {
    return offset.map((c, d) => ((this.quotient[d] ?? 0) > 0 ? mod(c, this.quotient[d] ?? 1) : c));
  }

  /** Number of the track of a factor's bit. */
  track(factor: Factor, bit: 'x' | 'z'): number {
    const key = `${classKey(factor)}|${bit}`;
    const known = this.tracks.get(key);
    if (known !== undefined) return known;
    this.tracks.set(key, this.tracks.size);
    return this.tracks.size - 1;
  }

  id(track: number, offset: Offset): number {
    const at = this.reduced(offset);
    const key = `${String(track)}@${at.join(',')}`;
    const known = this.ids.get(key);
    if (known !== undefined) return known;
    this.ids.set(key, this.coordinates.length);
    this.coordinates.push({ track, offset: at });
    return this.coordinates.length - 1;
  }

  /** Tracks and offsets of a string's coordinates. */
  parts(string: LocalString): Coordinate[] {
    return string.factors.flatMap((f) => [
      ...(hasX(f.pauli) ? [{ track: this.track(f, 'x'), offset: f.cell.offset }] : []),
      ...(hasZ(f.pauli) ? [{ track: this.track(f, 'z'), offset: f.cell.offset }] : []),
    ]);
  }

  /** A set of coordinates, translated, as ascending numbers; pairs that the quotient identifies cancel. */
  numbers(parts: readonly Coordinate[], by: Offset): number[] {
    const set = new Set<number>();
    for (const p of parts) {
      const id = this.id(
        p.track,
        p.offset.map((c, d) => c + (by[d] ?? 0)),
      );
      if (!set.delete(id)) set.add(id);
    }
    return [...set].sort((a, b) => a - b);
  }
}

/** Generators that may serve a target that is itself translated by `shift` (they must move along), over a numbering's quotient. */
export function usable(generators: readonly Generator[], shift: Steps, quotient: Steps): number[] {
  return generators.flatMap((g, k) => (contains(g.steps, shift) && contains(g.steps, quotient) ? [k] : []));
}

/** The translations of generator `steps` that carry offset `from` to `to`, modulo the quotient; undefined if there is none. */
export function carrying(from: Offset, to: Offset, steps: Steps, quotient: Steps): number[] | undefined {
  const by = minus(to, from).map((c, d) => {
    const m = quotient[d] ?? 0;
    return m > 0 ? mod(c, m) : c;
  });
  return inSteps(by, steps) ? by : undefined;
}

/** Symmetric difference of two ascending lists. */
export function toggled(a: readonly number[], b: readonly number[]): number[] {
  const out: number[] = [];
  let j = 0;
  for (const n of a) {
    while (j < b.length && (b[j] ?? 0) < n) out.push(b[j++] ?? 0);
    if (j < b.length && b[j] === n) j++;
    else out.push(n);
  }
  while (j < b.length) out.push(b[j++] ?? 0);
  return out;
}
