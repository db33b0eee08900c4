import fc from 'fast-check';
import { newDerivation } from '../../../shared/derivation/derive.ts';
import type { Claim, Report } from '../../../shared/contracts/report.ts';

/**
 * Pauli words on finite tori, written apart from the engine: a word is a list of (class, offset, Pauli), laid on a torus by reducing
 * offsets modulo its periods, multiplied factor by factor with its phase. Nothing here imports the engine's algebra.
 */

export interface Place {
  /** Class of spins: "species.kind.class". */
  readonly at: string;
  readonly offset: readonly number[];
  readonly pauli: 'x' | 'y' | 'z';
}

/** Sign ±1 and factors, in order. */
export interface Word {
  readonly sign: 1 | -1;
  readonly places: readonly Place[];
}

function inOrder(a: Place, b: Place): number {
  if (a.at !== b.at) return a.at < b.at ? -1 : 1;
  const d = a.offset.findIndex((c, k) => c !== b.offset[k]);
  return d < 0 ? 0 : a.offset[d]! - b.offset[d]!;
}

/** A finite torus: rows are periods, lower triangular after reduction. */
export class Torus {
  readonly cells: readonly (readonly number[])[];
  private readonly reduced: readonly (readonly number[])[];
  private readonly numbers = new Map<string, number>();
  private readonly classes: readonly string[];
  constructor(periods: readonly (readonly number[])[], classes: readonly string[]) {
    this.classes = classes;
    this.reduced = triangular(periods);
    let cells: number[][] = [[]];
    for (const [d, row] of this.reduced.entries())
      cells = cells.flatMap((c) => Array.from({ length: row[d] ?? 0 }, (_, k) => [...c, k]));
    this.cells = cells;
    for (const name of classes) for (const c of cells) this.numbers.set(`${name}@${c.join()}`, this.numbers.size);
  }
  get spins(): number {
    return this.cells.length * this.classes.length;
  }
  /** Number of the spin of a class at an offset. */
  spin(at: string, offset: readonly number[]): number {
    const o = [...offset];
    for (let d = o.length - 1; d >= 0; d--) {
      const row = this.reduced[d]!;
      const q = Math.floor(o[d]! / row[d]!);
      for (let k = 0; k < o.length; k++) o[k] = o[k]! - q * row[k]!;
    }
    const n = this.numbers.get(`${at}@${o.join()}`);
    if (n === undefined) throw new Error(`no spin ${at} at ${o.join()}`);
    return n;
  }
  /** A word moved to a cell. */
  lay(word: Word, by: readonly number[]): Laid {
    let laid = one();
    // Where factors meet on one spin their order counts: by class, then by offset, first coordinate first, as families are kept.
    for (const { at, offset, pauli } of [...word.places].sort(inOrder))
      laid = multiply(
        laid,
        single(
          this.spin(
            at,
            offset.map((c, d) => c + by[d]!),
          ),
          pauli,
        ),
      );
    return word.sign === 1 ? laid : { ...laid, phase: (laid.phase + 2) & 3 };
  }
  /** All translates of a word. */
  all(word: Word): Laid[] {
    return this.cells.map((by) => this.lay(word, by));
  }
}

/** Rows that span the same lattice with zeros above the diagonal (row d has entries 0 … d only), by Euclid's algorithm. */
function triangular(periods: readonly (readonly number[])[]): number[][] {
  const rows = periods.map((r) => [...r]);
  for (let d = rows.length - 1; d > 0; d--) {
    for (let k = 0; k < d; k++)
      while (rows[k]![d] !== 0) {
        const q = Math.floor(rows[d]![d]! / rows[k]![d]!);
        const next = rows[d]!.map((x, i) => x - q * rows[k]![i]!);
        rows[d] = rows[k]!;
        rows[k] = next;
      }
  }
  return rows.map((r, d) => (r[d]! < 0 ? r.map((x) => 0 - x) : r));
}

/** i^phase X^x Z^z, bits as BigInt. */
export interface Laid {
  readonly x: bigint;
  readonly z: bigint;
  readonly phase: number;
}
export const one = (): Laid => ({ x: 0n, z: 0n, phase: 0 });
const single = (spin: number, pauli: string): Laid => {
  const b = 1n << BigInt(spin);
  return { x: pauli === 'z' ? 0n : b, z: pauli === 'x' ? 0n : b, phase: pauli === 'y' ? 1 : 0 };
};
export function parity(n: bigint): number {
  let odd = 0;
  for (let rest = n; rest !== 0n; rest &= rest - 1n) odd ^= 1;
  return odd;
}
export const multiply = (a: Laid, b: Laid): Laid => ({
  x: a.x ^ b.x,
  z: a.z ^ b.z,
  phase: (a.phase + b.phase + 2 * parity(a.z & b.x)) & 3,
});
export const commute = (a: Laid, b: Laid): boolean => parity(a.x & b.z) === parity(a.z & b.x);

/** Rank over F2 of rows, and for each dependent row the set of rows whose sum vanishes. */
export function eliminate(rows: readonly bigint[]): { rank: number; relations: number[][] } {
  const kept: { row: bigint; from: bigint; pivot: bigint }[] = [];
  const relations: number[][] = [];
  for (const [k, start] of rows.entries()) {
    let row = start;
    let from = 1n << BigInt(k);
    for (const p of kept)
      if (row & p.pivot) {
        row ^= p.row;
        from ^= p.from;
      }
    if (row === 0n) relations.push([...rows.keys()].filter((i) => (from >> BigInt(i)) & 1n));
    else kept.push({ row, from, pivot: row & -row });
  }
  return { rank: kept.length, relations };
}

export const vector = ({ x, z }: Laid, spins: number): bigint => x | (z << BigInt(spins));

export const product = (members: readonly Laid[]): Laid => members.reduce(multiply, one());

// ------------------------------------------------------------------ sources

export interface TestLattice {
  /** The statement, up to the size. */
  readonly text: (size: string) => string;
  readonly dimension: number;
  /** Classes of vertices, '' where there is only one. */
  readonly vertices: readonly string[];
}

const builtIn = (name: string, dimension: number, vertices: readonly string[]): TestLattice => ({
  text: (size) => `lattice ${name} torus ${size}`,
  dimension,
  vertices,
});

export const lattices: Readonly<Record<string, TestLattice>> = {
  chain: builtIn('chain', 1, ['']),
  square: builtIn('square', 2, ['']),
  triangular: builtIn('triangular', 2, ['']),
  honeycomb: builtIn('honeycomb', 2, ['A', 'B']),
  kagome: builtIn('kagome', 2, ['A', 'B', 'C']),
  custom: {
    text: (size) =>
      [
        'lattice custom',
        '  cell (1, 0), (1/2, 0.866)',
        '  vertex A at (0, 0)',
        '  vertex B at (1/2, 0)',
        '  link A -- B',
        '  link B -- A + (1, 0)',
        '  link A -- A + (0, 1)',
        `  size ${size} torus`,
      ].join('\n'),
    dimension: 2,
    vertices: ['A', 'B'],
  },
};

export const pauli = fc.constantFrom<'x' | 'y' | 'z'>('x', 'y', 'z');

/** A random word on the vertices of a lattice; its first factor is at the origin. */
export const wordOn = (lattice: TestLattice, species: readonly string[], most: number): fc.Arbitrary<Word> =>
  fc
    .record({
      sign: fc.constantFrom<1 | -1>(1, -1),
      places: fc.uniqueArray(
        fc.record({
          at: fc.constantFrom(...species.flatMap((s) => lattice.vertices.map((v) => `${s}.${v}`))),
          offset: fc.array(fc.integer({ min: -1, max: 1 }), {
            minLength: lattice.dimension,
            maxLength: lattice.dimension,
          }),
          pauli,
        }),
        { minLength: 1, maxLength: most, selector: (p) => `${p.at} ${p.offset.join()}` },
      ),
    })
    .map(({ sign, places }) => {
      // Some factor stands on the first class at the origin, so that the parameter of the law runs over all translates.
      const from = places[0]!.offset;
      return { sign, places: places.map((p) => ({ ...p, offset: p.offset.map((c, d) => c - from[d]!) })) };
    });

/** A word as a product that moves with the cell `v` of class `home`. */
export function phrase(word: Word, home: string): string {
  const axes = ['x', 'y', 'z'];
  const factors = word.places.map(({ at, offset, pauli: p }) => {
    const [species = '', cls = ''] = at.split('.');
    if (cls === home) return `${species}^${p}[v + (${offset.join(', ')})]`;
    const where = offset.map(
      (c, d) => `u.${axes[d] ?? ''} == v.${axes[d] ?? ''} ${c < 0 ? '-' : '+'} ${String(Math.abs(c))}`,
    );
    return `(prod(u: vertices.${cls} where ${where.join(' and ')}) ${species}^${p}[u])`;
  });
  return factors.join(' ');
}
export const domain = (home: string): string => (home === '' ? 'vertices' : `vertices.${home}`);
export const homeOf = (word: Word): string => word.places[0]!.at.split('.')[1] ?? '';

/** A law of a word; its sign is the value that the law declares. */
export const lawText = (name: string, word: Word): string =>
  `law ${name}(v: ${domain(homeOf(word))}) = ${phrase(word, homeOf(word))}${word.sign === 1 ? '' : ' is -1'}`;
/** A translation-invariant sum of a word. */
export const sumText = (coefficient: string, word: Word): string =>
  `${word.sign === 1 ? '+' : '-'} ${coefficient} sum(v: ${domain(homeOf(word))}) ${phrase(word, homeOf(word))}`;

export const derive = (text: string): Report => newDerivation().derive(text);

/** The report of a source without errors. */
export function clean(text: string): Report {
  const report = derive(text);
  const errors = report.problems.filter((p) => p.severity === 'error');
  if (errors.length > 0)
    throw new Error(`${errors.map((e) => `${String(e.line)}: ${e.message}`).join('\n')}\n--\n${text}`);
  return report;
}
export const claims = (of: Report, audit: string): Claim[] => of.claims.filter((claim) => claim.audit === audit);
