import type { ImageFault } from './image-blocks.ts';

/** States of a product space on which commuting involutions are all +1, as sparse orthonormal vectors. */

/** Visits the amplitudes of an operator on one product state; a target may come several times. */
export type Column = (from: number, visit: (to: number, re: number, im: number) => void) => void;

export interface Space {
  readonly dimension: number;
  readonly bytes: number;
  /** Nonzero entries <column| O |row> of the operator between states of the space; the diagonal one is always there. */
  readonly column: (row: number, operator: Column) => Iterable<{ column: number; a: number; b: number }>;
}

/** A sparse vector: product states, ascending order not assumed, and amplitudes. */
interface Sparse {
  readonly at: readonly number[];
  readonly re: readonly number[];
  readonly im: readonly number[];
}

/** Vectors that one constraint may mix. */
const widest = 1024;
/** Product states with constraints; each is a vector of its own at first. */
const most = 2 ** 17;
const small = 1e-13;

/** Adds up amplitudes by product state, and hands them out once. */
class Scatter {
  private readonly re: Float64Array;
  private readonly im: Float64Array;
  private readonly seen: Uint8Array;
  private touched: number[] = [];
  constructor(size: number) {
    this.re = new Float64Array(size);
    this.im = new Float64Array(size);
    this.seen = new Uint8Array(size);
  }
  add(at: number, re: number, im: number): void {
    if (this.seen[at] === 0) {
      this.seen[at] = 1;
      this.touched.push(at);
    }
    this.re[at] = (this.re[at] ?? 0) + re;
    this.im[at] = (this.im[at] ?? 0) + im;
  }
  take(): { at: number; re: number; im: number }[] {
    const list = this.touched.sort((a, b) => a - b).map((at) => ({ at, re: this.re[at] ?? 0, im: this.im[at] ?? 0 }));
    for (const at of this.touched) {
      this.re[at] = 0;
      this.im[at] = 0;
      this.seen[at] = 0;
    }
    this.touched = [];
    return list;
  }
}

/** All product states, or those listed: basis vectors themselves. */
function plainSpace(size: number, states: readonly number[] | undefined): Space {
  const scatter = new Scatter(size);
  const numbers = states && new Int32Array(size).fill(-1);
  states?.forEach((s, k) => {
    if (numbers) numbers[s] = k;
  });
  return {
    dimension: states?.length ?? size,
    bytes: 21 * size,
    column(row, operator) {
      scatter.add(states?.[row] ?? row, 0, 0);
      operator(states?.[row] ?? row, (to, re, im) => {
        scatter.add(to, re, im);
      });
      return scatter.take().flatMap(({ at, re, im }) => {
        const column = numbers ? (numbers[at] ?? -1) : at;
        return column < 0 ? [] : [{ column, a: re, b: im }];
      });
    },
  };
}

function applied(v: Sparse, operator: Column, scatter: Scatter): { at: number; re: number; im: number }[] {
  v.at.forEach((from, k) => {
    const [a, b] = [v.re[k] ?? 0, v.im[k] ?? 0];
    operator(from, (to, re, im) => {
      scatter.add(to, a * re - b * im, a * im + b * re);
    });
  });
  return scatter.take();
}

/** Columns by product state. */
function owners(size: number, vectors: readonly Sparse[]): (readonly { k: number; re: number; im: number }[])[] {
  const lists: { k: number; re: number; im: number }[][] = Array.from({ length: size }, () => []);
  vectors.forEach((v, k) => {
    v.at.forEach((at, i) => lists[at]?.push({ k, re: v.re[i] ?? 0, im: v.im[i] ?? 0 }));
  });
  return lists;
}

function sparseSpace(size: number, vectors: readonly Sparse[]): Space {
  const scatter = new Scatter(size);
  const lists = owners(size, vectors);
  return {
    dimension: vectors.length,
    bytes: 21 * size + 48 * vectors.reduce((sum, v) => sum + v.at.length, 0),
    column(row, operator) {
      const v = vectors[row] ?? { at: [], re: [], im: [] };
      const sums = new Map<number, { a: number; b: number }>([[row, { a: 0, b: 0 }]]);
      for (const { at, re, im } of applied(v, operator, scatter))
        for (const own of lists[at] ?? []) {
          const old = sums.get(own.k) ?? { a: 0, b: 0 };
          sums.set(own.k, { a: old.a + own.re * re + own.im * im, b: old.b + own.re * im - own.im * re });
        }
      return [...sums].map(([column, { a, b }]) => ({ column, a, b }));
    },
  };
}

/** Columns that the operator joins, as groups. */
function components(size: number, vectors: readonly Sparse[], images: readonly Sparse[]): number[][] {
  const parent = vectors.map((_, k) => k);
  const root = (k: number): number => {
    let r = k;
    while (parent[r] !== r) r = parent[r] ?? r;
    parent[k] = r;
    return r;
  };
  const lists = owners(size, vectors);
  images.forEach((v, k) => {
    for (const at of v.at) for (const { k: other } of lists[at] ?? []) parent[root(other)] = root(k);
  });
  const groups = new Map<number, number[]>();
  vectors.forEach((_, k) => groups.set(root(k), [...(groups.get(root(k)) ?? []), k]));
  return [...groups.values()];
}

const norm = (v: Sparse): number => v.re.reduce((sum, a, k) => sum + a * a + (v.im[k] ?? 0) ** 2, 0);

/** Orthonormal vectors of the span, `rank` of them: the longest rest first, each cleaned twice. */
function orthonormal(list: readonly Sparse[], rank: number, scatter: Scatter): Sparse[] {
  let rest = [...list];
  const kept: Sparse[] = [];
  while (kept.length < rank) {
    const lengths = rest.map(norm);
    const at = lengths.indexOf(Math.max(...lengths));
    const longest = rest[at];
    if (!longest) break;
    const cleaned = kept.reduce((v, q) => without(v, q, scatter), longest);
    const length = Math.sqrt(norm(cleaned));
    const q = { ...cleaned, re: cleaned.re.map((a) => a / length), im: cleaned.im.map((b) => b / length) };
    kept.push(q);
    rest = rest.filter((_, k) => k !== at).map((v) => without(v, q, scatter));
  }
  return kept;
}

/** v − q <q|v> */
function without(v: Sparse, q: Sparse, scatter: Scatter): Sparse {
  const own = new Map(v.at.map((at, k) => [at, k]));
  let [a, b] = [0, 0];
  q.at.forEach((at, k) => {
    const i = own.get(at);
    if (i === undefined) return;
    const [qr, qi, vr, vi] = [q.re[k] ?? 0, q.im[k] ?? 0, v.re[i] ?? 0, v.im[i] ?? 0];
    a += qr * vr + qi * vi;
    b += qr * vi - qi * vr;
  });
  if (Math.hypot(a, b) < 1e-16) return v;
  v.at.forEach((at, k) => {
    scatter.add(at, v.re[k] ?? 0, v.im[k] ?? 0);
  });
  q.at.forEach((at, k) => {
    const [qr, qi] = [q.re[k] ?? 0, q.im[k] ?? 0];
    scatter.add(at, -(qr * a - qi * b), -(qr * b + qi * a));
  });
  return sparse(scatter.take());
}

function sparse(list: readonly { at: number; re: number; im: number }[]): Sparse {
  const kept = list.filter(({ re, im }) => Math.hypot(re, im) > small);
  return { at: kept.map((e) => e.at), re: kept.map((e) => e.re), im: kept.map((e) => e.im) };
}

/**
 * The states, among those listed of `size` product states, on which all the given operators are +1. Each operator is Hermitian and
 * squares to 1 on the product space, and they commute.
 */
export function joint(
  size: number,
  states: readonly number[] | undefined,
  operators: readonly Column[],
): { readonly ok: true; readonly value: Space } | { readonly ok: false; readonly fault: ImageFault } {
  if (operators.length === 0) return { ok: true, value: plainSpace(size, states) };
  if (size > most) return { ok: false, fault: { code: 'too many states', limit: most } };
  const scatter = new Scatter(size);
  const allowed = states && new Set(states);
  let vectors = (states ?? [...Array(size).keys()]).map((s): Sparse => ({ at: [s], re: [1], im: [0] }));
  for (const [constraint, operator] of operators.entries()) {
    const images = vectors.map((v) => sparse(applied(v, operator, scatter)));
    if (allowed && images.some((v) => v.at.some((at) => !allowed.has(at))))
      return { ok: false, fault: { code: 'rule broken by constraint', constraint } };
    const next: Sparse[] = [];
    for (const group of components(size, vectors, images)) {
      if (group.length > widest)
        return { ok: false, fault: { code: 'constraint is too wide', constraint, limit: widest } };
      const projected = group.map((k) => {
        for (const v of [vectors[k], images[k]])
          v?.at.forEach((at, i) => {
            scatter.add(at, (v.re[i] ?? 0) / 2, (v.im[i] ?? 0) / 2);
          });
        return sparse(scatter.take());
      });
      // The trace of a projector is its rank, and |P v|² = <v|P|v>.
      const rank = Math.round(projected.reduce((sum, v) => sum + norm(v), 0));
      next.push(...orthonormal(projected, rank, scatter));
    }
    vectors = next;
    if (vectors.length === 0) return { ok: false, fault: { code: 'no state', constraint } };
  }
  return { ok: true, value: sparseSpace(size, vectors) };
}
