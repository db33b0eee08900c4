import { fromParts, NotHermitian, timesPhase, type Hamiltonian, type NumericTerm } from '../hamiltonian.ts';
import type { Kernel, RowForm } from '../kernel/kernel.ts';
import type { DiagonalRule } from './enumerated.ts';
import { factorsOf, maskOn, type Entry, type Factor, type ImageBlocks, type ImageFault } from './image-blocks.ts';
import { leavingTerms } from './image-leaving.ts';
import { joint, type Space } from './image-constraints.ts';
import { commute, hermitian, oddY, type Constraint } from './packed.ts';
import type { Block, Sector } from './sector.ts';

/**
 * The image of a product of isometries as a sector: blocks of spins with orthonormal vectors each, all other spins free.
 * A basis state is one vector for each block and one bit for each free spin; H = V† H V is built from the matrices that each term has
 * between the vectors of a block, and is what it is of the model only up to terms that lead out of the image (PHP).
 */

type Outcome<T> = { readonly ok: true; readonly value: T } | { readonly ok: false; readonly fault: ImageFault };

/** Sum of all terms on the same factors, as a sparse matrix between their joint vectors. */
interface Group {
  /** For each factor: its stride in the product basis and its dimension. */
  readonly places: readonly { readonly stride: number; readonly dimension: number }[];
  /** By joint index `from` (first place slowest): shift of the basis number, and the amplitude. */
  readonly columns: readonly (readonly { readonly shift: number; readonly re: number; readonly im: number }[])[];
}

/** Entries of one group: past them the matrix is refused rather than built. */
const mostEntries = 2 ** 20;

const stridesOf = (factors: readonly Factor[]): number[] => {
  let stride = 1;
  return factors.map(({ dimension }) => {
    const own = stride;
    stride *= dimension;
    return own;
  });
};

/** Sum of amplitudes by joint indices, for one set of factors. */
class Gathered {
  readonly sums = new Map<string, { from: number; shift: number; re: number; im: number }>();
  add(from: number, shift: number, re: number, im: number): void {
    const key = `${String(from)},${String(shift)}`;
    const old = this.sums.get(key) ?? { from, shift, re: 0, im: 0 };
    this.sums.set(key, { from, shift, re: old.re + re, im: old.im + im });
  }
}

function groupsOf(factors: readonly Factor[], terms: readonly NumericTerm[]): Group[] {
  const strides = stridesOf(factors);
  const found = new Map<string, { on: readonly number[]; sums: Gathered }>();
  for (const t of terms) {
    const masks = factors.map((f) => maskOn(t.string, f));
    const on = [...factors.keys()].filter((k) => masks[k]?.x !== 0 || masks[k].z !== 0);
    const key = on.join(',');
    const group = found.get(key) ?? { on, sums: new Gathered() };
    found.set(key, group);
    const [re, im] = timesPhase(t.re, t.im, t.string.phase);
    const locals = on.map((k) => factors[k]?.local(masks[k] ?? { x: 0, z: 0 }).entries ?? []);
    tensor(locals, on, factors, strides, (from, shift, a, b) => {
      group.sums.add(from, shift, re * a - im * b, re * b + im * a);
    });
  }
  return [...found.values()].map(({ on, sums }): Group => {
    const places = on.map((k) => ({ stride: strides[k] ?? 1, dimension: factors[k]?.dimension ?? 1 }));
    const size = places.reduce((p, { dimension }) => p * dimension, 1);
    const columns: { shift: number; re: number; im: number }[][] = Array.from({ length: size }, () => []);
    const scale = Math.max(1e-300, ...[...sums.sums.values()].map((e) => Math.hypot(e.re, e.im)));
    for (const { from, shift, re, im } of sums.sums.values())
      if (Math.hypot(re, im) > 1e-15 * scale) columns[from]?.push({ shift, re, im });
    return { places, columns };
  });
}

/** All products of one entry for each factor. */
function tensor(
  locals: readonly (readonly Entry[])[],
  on: readonly number[],
  factors: readonly Factor[],
  strides: readonly number[],
  visit: (from: number, shift: number, re: number, im: number) => void,
): void {
  const descend = (depth: number, from: number, shift: number, re: number, im: number): void => {
    const k = on[depth];
    if (k === undefined) {
      visit(from, shift, re, im);
      return;
    }
    for (const e of locals[depth] ?? [])
      descend(
        depth + 1,
        from * (factors[k]?.dimension ?? 1) + e.from,
        shift + (e.to - e.from) * (strides[k] ?? 1),
        re * e.re - im * e.im,
        re * e.im + im * e.re,
      );
  };
  descend(0, 0, 0, 1, 0);
}

/** Numbers of entries that a term has over all; decides whether its matrix is built. */
const entriesOf = (factors: readonly Factor[], t: NumericTerm): number =>
  factors.reduce((product, f) => {
    const mask = maskOn(t.string, f);
    return mask.x === 0 && mask.z === 0 ? product : product * f.local(mask).entries.length;
  }, 1);

/** Visits the nonzero amplitudes <to| Σ groups |from> of a product state; a `to` may come several times. */
function visitColumn(
  groups: readonly Group[],
  from: number,
  visit: (to: number, re: number, im: number) => void,
): void {
  for (const { places, columns } of groups) {
    let index = 0;
    for (const { stride, dimension } of places) index = index * dimension + (Math.floor(from / stride) % dimension);
    for (const { shift, re, im } of columns[index] ?? []) visit(from + shift, re, im);
  }
}

/** Product states that obey the rules; a rule must be told by the vectors of the blocks. Undefined where one is not. */
function statesThatObey(
  factors: readonly Factor[],
  size: number,
  rules: readonly DiagonalRule[],
): number[] | undefined {
  const strides = stridesOf(factors);
  const read = rules.map((rule) => {
    const parts = rule.sites.map((site, k) => {
      const at = factors.findIndex((f) => f.spins.includes(site));
      const bits = factors[at]?.bits(site);
      return bits && { stride: strides[at] ?? 1, dimension: bits.length, bits, weight: rule.weights[k] ?? 1 };
    });
    return parts.every((p) => p !== undefined) ? { rule, parts } : undefined;
  });
  if (!read.every((r) => r !== undefined)) return undefined;
  const states: number[] = [];
  for (let s = 0; s < size; s++) {
    const kept = read.every(({ rule, parts }) => {
      const sum = parts.reduce((t, p) => t + p.weight * (p.bits[Math.floor(s / p.stride) % p.dimension] ?? 0), 0);
      return obeys(rule, sum);
    });
    if (kept) states.push(s);
  }
  return states;
}

function obeys({ relation, bound }: DiagonalRule, sum: number): boolean {
  switch (relation) {
    case '==':
      return sum === bound;
    case '<=':
      return sum <= bound;
    case '>=':
      return sum >= bound;
    case 'even':
      return sum % 2 === 0;
    case 'odd':
      return sum % 2 !== 0;
  }
}

/** Throws NotHermitian: equal strings are collected, so each term must be Hermitian by itself. */
function checkHermitian(terms: readonly NumericTerm[]): void {
  const scale = terms.reduce((sum, t) => sum + Math.hypot(t.re, t.im), 0) || 1;
  for (const t of terms) {
    const [re, im] = timesPhase(t.re, t.im, t.string.phase);
    const wrong = Math.abs(oddY(t.string) === 1 ? re : im);
    if (wrong > 1e-12 * scale) throw new NotHermitian(wrong);
  }
}

function constraintFault(
  factors: readonly Factor[],
  terms: readonly NumericTerm[],
  constraints: readonly Constraint[],
): ImageFault | undefined {
  for (const [k, { string }] of constraints.entries()) {
    if (!hermitian(string)) return { code: 'not Hermitian', constraint: k };
    const other = constraints.slice(0, k).findIndex((c) => !commute(c.string, string));
    if (other >= 0) return { code: 'constraints clash', constraints: [other, k] };
    if (factors.some((f) => f.local(maskOn(string, f)).outside.length > 0))
      return { code: 'constraint leaves image', constraint: k };
  }
  for (const [k, { string }] of constraints.entries()) {
    const term = terms.findIndex((t) => !commute(t.string, string));
    if (term >= 0) return { code: 'term leaves', term, constraint: k };
  }
  return undefined;
}

/** First spin that two blocks share. */
function shared(images: readonly ImageBlocks[]): number | undefined {
  const seen = new Set<number>();
  for (const spin of images.flatMap((image) => image.blocks.flat())) {
    if (seen.has(spin)) return spin;
    seen.add(spin);
  }
  return undefined;
}

/**
 * The image of the blocks, together with rules and commuting constraints that act within it, on n spins. At most `limit`
 * product states. Throws NotHermitian.
 */
export function imageSector(
  n: number,
  terms: readonly NumericTerm[],
  constant: number,
  images: readonly ImageBlocks[],
  rules: readonly DiagonalRule[],
  constraints: readonly Constraint[],
  limit: number,
): Outcome<Sector> {
  const spin = shared(images);
  if (spin !== undefined) return { ok: false, fault: { code: 'blocks share a spin', spin } };
  checkHermitian(terms);
  const factors = factorsOf(n, images);
  const size = factors.reduce((product, f) => product * f.dimension, 1);
  if (size > limit) return { ok: false, fault: { code: 'too many states', limit } };
  const fault = constraintFault(factors, terms, constraints);
  if (fault) return { ok: false, fault };
  if (terms.some((t) => entriesOf(factors, t) > mostEntries))
    return { ok: false, fault: { code: 'too many states', limit } };
  const states = rules.length > 0 ? statesThatObey(factors, size, rules) : undefined;
  if (rules.length > 0 && !states) return { ok: false, fault: { code: 'rule crosses image' } };
  if (states?.length === 0) return { ok: false, fault: { code: 'rules allow no state' } };
  const space = joint(
    size,
    states,
    constraints.map(({ string, value }) => {
      const groups = groupsOf(factors, [{ re: value, im: 0, string }]);
      return (from, visit) => {
        visitColumn(groups, from, visit);
      };
    }),
  );
  if (!space.ok) return space;
  return { ok: true, value: sectorOf(n, factors, space.value, terms, constant, constraints) };
}

function sectorOf(
  n: number,
  factors: readonly Factor[],
  space: Space,
  terms: readonly NumericTerm[],
  constant: number,
  constraints: readonly Constraint[],
): Sector {
  const built = matrixOf(factors, space, terms, constant);
  const imaginary = built.imaginary.values.length > 0;
  const entries = built.real.values.length + built.imaginary.values.length;
  const block: Block = {
    dimension: space.dimension,
    real: !imaginary,
    productCost: 2 * entries + space.dimension,
    matrixBytes: 12 * entries + 8 * space.dimension + space.bytes,
    diagonal: undefined,
    hamiltonian: (kernel) => prepared(built, kernel, imaginary),
    operator(others, shift, kernel, complex) {
      const within = others.filter((t) => constraints.every((c) => commute(c.string, t.string)));
      const o = matrixOf(factors, space, within, shift);
      return prepared(o, kernel, complex && o.imaginary.values.length > 0, complex);
    },
  };
  const leaving = leavingTerms(factors, terms);
  return { kind: 'enumerated', spins: n, dimension: space.dimension, copies: 1, leaving, blocks: [block] };
}

interface Parts {
  readonly real: RowForm;
  readonly imaginary: RowForm;
}

const prepared = ({ real, imaginary }: Parts, kernel: Kernel, both: boolean, complex = false): Hamiltonian =>
  fromParts(kernel, kernel.prepareRows(real), both ? kernel.prepareRows(imaginary) : undefined, complex);

/** W† (Σ terms + constant) W for the states W of a space, in compressed rows. */
function matrixOf(factors: readonly Factor[], space: Space, terms: readonly NumericTerm[], constant: number): Parts {
  const groups = groupsOf(factors, terms);
  const scale = terms.reduce((sum, t) => sum + Math.hypot(t.re, t.im), Math.abs(constant)) || 1;
  const re = newRows(space.dimension);
  const im = newRows(space.dimension);
  for (let row = 0; row < space.dimension; row++) {
    // H is Hermitian: entry (row, column) is the conjugate of the amplitude that leads from row to column.
    for (const { column, a, b } of space.column(row, (from, visit) => {
      visitColumn(groups, from, visit);
    })) {
      const real = a + (column === row ? constant : 0);
      if (Math.abs(real) > 1e-14 * scale) re.add(column, real);
      if (Math.abs(b) > 1e-14 * scale) im.add(column, -b);
    }
    re.close();
    im.close();
  }
  return { real: re.done(), imaginary: im.done() };
}

function newRows(dimension: number) {
  const starts = new Uint32Array(dimension + 1);
  const columns: number[] = [];
  const values: number[] = [];
  let row = 0;
  return {
    add(column: number, value: number): void {
      columns.push(column);
      values.push(value);
    },
    close(): void {
      starts[++row] = columns.length;
    },
    done: (): RowForm => ({
      dimension,
      starts,
      columns: Uint32Array.from(columns),
      values: Float64Array.from(values),
    }),
  };
}
