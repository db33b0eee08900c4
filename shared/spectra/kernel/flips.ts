import type { FlipForm, FlipGroup } from './kernel.ts';

/**
 * What both kernels make of a flip form before the first product. The index of a basis state is cut into a low part
 * of `low` bits and the rest: the signs of a group then split into a table over the low part and one pattern for each
 * block, so that the inner loop meets no bit counting.
 */

/** Parity of the number of ones of a 32-bit integer. */
export function parity(bits: number): number {
  let v = bits ^ (bits >>> 16);
  v ^= v >>> 8;
  v ^= v >>> 4;
  v ^= v >>> 2;
  v ^= v >>> 1;
  return v & 1;
}

/** Sign patterns in one group of the inner loop; 2^patterns tables are kept. */
const patterns = 3;

/** Bits of the low part. Blocks of 2^11 float64 (16 KiB) and their tables stay in the first cache. */
export const lowBits = (spins: number): number => Math.min(spins, 11);

export interface BlockGroup {
  /** Bits flipped in the low part and above it. */
  readonly xLow: number;
  readonly xHigh: number;
  /** z masks above the low part, already shifted down by `low`; pattern bit t of a block is parity(zHigh[t] & block). */
  readonly zHigh: readonly number[];
  /** Equal amplitude everywhere: no table. */
  readonly constant: number | undefined;
  /** tables[pattern × 2^low + j]: amplitude of source state j of a block with that pattern. */
  readonly tables: Float64Array;
}

/** Values of the diagonal: an index into few distinct numbers where that saves memory, else the numbers. */
export interface Diagonal {
  readonly values: Float64Array;
  readonly index: Uint8Array | Uint16Array | undefined;
}

/** Cuts groups into at most `patterns` sign terms each and tabulates their amplitudes. */
export function blockGroups(form: FlipForm): BlockGroup[] {
  const low = lowBits(form.spins);
  return form.flips.flatMap((group) => chunks(group).map((part) => blockGroup(part, low)));
}

function chunks(group: FlipGroup): FlipGroup[] {
  const out: FlipGroup[] = [];
  for (let k = 0; k < group.terms.length; k += patterns)
    out.push({ x: group.x, terms: group.terms.slice(k, k + patterns) });
  return out;
}

function blockGroup(group: FlipGroup, low: number): BlockGroup {
  const size = 2 ** low;
  const mask = size - 1;
  const base = { xLow: group.x & mask, xHigh: group.x & ~mask };
  if (group.terms.every((t) => t.z === 0)) {
    return {
      ...base,
      zHigh: [],
      constant: group.terms.reduce((sum, t) => sum + t.amplitude, 0),
      tables: new Float64Array(0),
    };
  }
  const count = group.terms.length;
  const tables = new Float64Array(size << count);
  for (let pattern = 0; pattern < 1 << count; pattern++) {
    group.terms.forEach((term, t) => {
      const high = (pattern >> t) & 1;
      for (let j = 0; j < size; j++) {
        const at = pattern * size + j;
        tables[at] = (tables[at] ?? 0) + (parity(term.z & j) === high ? term.amplitude : -term.amplitude);
      }
    });
  }
  return { ...base, zHigh: group.terms.map((t) => t.z >>> low), constant: undefined, tables };
}

/** Pattern of a block: bit t is the parity of zHigh[t] & block. */
export function blockPattern(group: BlockGroup, block: number): number {
  let pattern = 0;
  for (let t = 0; t < group.zHigh.length; t++) pattern |= parity((group.zHigh[t] ?? 0) & block) << t;
  return pattern;
}

/**
 * Diagonal Σ amplitude (−1)^(z·b) for all 2^spins states b. Built by doubling over the bits (each bit either keeps or
 * flips the sign of a term), block by block, so that the cost is (terms × blocks + states × few) instead of terms × states.
 */
export function diagonalValues(form: FlipForm): Diagonal {
  const low = lowBits(form.spins);
  const size = 2 ** low;
  const blocks = 2 ** (form.spins - low);
  // Terms with the same low part differ in a block by their sign only: sum them first.
  const lowMasks = [...new Set(form.diagonal.map((t) => t.z & (size - 1)))];
  const byLow = lowMasks.map((mask) => form.diagonal.filter((t) => (t.z & (size - 1)) === mask));
  const coder = newCoder(blocks * size);
  const work = new Float64Array(size);
  for (let block = 0; block < blocks; block++) {
    work.fill(0);
    lowMasks.forEach((mask, k) => {
      let sum = 0;
      for (const t of byLow[k] ?? []) sum += parity((t.z >>> low) & block) === 1 ? -t.amplitude : t.amplitude;
      work[mask] = sum;
    });
    walshHadamard(work);
    coder.push(work, block * size);
  }
  return coder.done();
}

/** In place: out[b] = Σ_z in[z] (−1)^(z·b). */
function walshHadamard(data: Float64Array): void {
  for (let half = 1; half < data.length; half *= 2) {
    for (let start = 0; start < data.length; start += 2 * half) {
      for (let k = start; k < start + half; k++) {
        const a = data[k] ?? 0;
        const b = data[k + half] ?? 0;
        data[k] = a + b;
        data[k + half] = a - b;
      }
    }
  }
}

/**
 * Collects diagonal values as indices into a table of at most 2^16 distinct numbers, and goes over to plain numbers
 * when there are more. Numbers that agree to 1e-13 of the largest are one number: they differ by rounding only.
 */
function newCoder(length: number) {
  const known = new Map<number, number>();
  const table: number[] = [];
  let index: Uint16Array | undefined = new Uint16Array(length);
  let values: Float64Array | undefined;
  let largest = 0;
  const key = (value: number) => Math.round(value * scale);
  let scale = 0;
  return {
    push(block: Float64Array, offset: number): void {
      if (scale === 0) {
        for (const v of block) largest = Math.max(largest, Math.abs(v));
        scale = 1e12 / (largest || 1);
      }
      if (index && !this.code(block, offset)) {
        values = new Float64Array(length);
        for (let k = 0; k < offset; k++) values[k] = table[index[k] ?? 0] ?? 0;
        index = undefined;
      }
      if (values) values.set(block, offset);
    },
    code(block: Float64Array, offset: number): boolean {
      for (let k = 0; k < block.length; k++) {
        const value = block[k] ?? 0;
        const name = key(value);
        let at = known.get(name);
        if (at === undefined) {
          at = table.length;
          if (at === 65536) return false;
          known.set(name, at);
          table.push(value);
        }
        if (index) index[offset + k] = at;
      }
      return true;
    },
    done(): Diagonal {
      if (values) return { values, index: undefined };
      return { values: Float64Array.from(table), index: table.length <= 256 && index ? Uint8Array.from(index) : index };
    },
  };
}
