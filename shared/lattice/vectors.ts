/** Small linear algebra of primitive vectors: Gram matrix, inverse, fractional coordinates, all integer vectors within a ball. */

export const dot = (a: readonly number[], b: readonly number[]): number =>
  a.reduce((s, x, k) => s + x * (b[k] ?? 0), 0);

/** Gram matrix (dimension × dimension) of primitive vectors given as rows. */
export const gram = (vectors: readonly (readonly number[])[]): number[][] =>
  vectors.map((a) => vectors.map((b) => dot(a, b)));

/** Inverse of a positive semidefinite matrix (n × n, n <= 3), or undefined when it is singular to 1e-9 of its scale. */
export function invert(matrix: readonly (readonly number[])[]): number[][] | undefined {
  const n = matrix.length;
  const scale = Math.max(...matrix.map((row, k) => Math.abs(row[k]!)));
  const m = matrix.map((row, k) => [...row, ...row.map((_, j) => (j === k ? 1 : 0))]);
  for (let c = 0; c < n; c++) {
    let pivot = c;
    for (let r = c + 1; r < n; r++) if (Math.abs(m[r]![c]!) > Math.abs(m[pivot]![c]!)) pivot = r;
    if (!(Math.abs(m[pivot]![c]!) > 1e-9 * scale)) return undefined;
    [m[c], m[pivot]] = [m[pivot]!, m[c]!];
    const lead = m[c]![c]!;
    m[c] = m[c]!.map((x) => x / lead);
    for (let r = 0; r < n; r++) {
      const factor = m[r]![c]!;
      if (r !== c && factor !== 0) m[r] = m[r]!.map((x, k) => x - factor * m[c]![k]!);
    }
  }
  return m.map((row) => row.slice(n));
}

/** Cartesian position of an offset (in unit cells; need not be whole). */
export function cartesian(vectors: readonly (readonly number[])[], offset: readonly number[]): number[] {
  const width = vectors[0]?.length ?? 0;
  return Array.from({ length: width }, (_, k) => vectors.reduce((s, v, d) => s + v[k]! * (offset[d] ?? 0), 0));
}

/** Coordinates along the primitive vectors of the projection of a Cartesian position onto their span. */
export function fractional(vectors: readonly (readonly number[])[], position: readonly number[]): number[] {
  const inverse = invert(gram(vectors));
  if (!inverse) throw new Error('fractional: the primitive vectors are linearly dependent');
  const along = vectors.map((v) => dot(v, position));
  return inverse.map((row) => dot(row, along));
}

/**
 * All offsets o (integers) with |o·vectors + shift| <= radius, in no particular order.
 * Each entry is bounded by radius · sqrt((G^-1)_dd) around its fractional coordinate, G the Gram matrix.
 */
export function offsetsWithin(
  vectors: readonly (readonly number[])[],
  shift: readonly number[],
  radius: number,
): number[][] {
  const inverse = invert(gram(vectors));
  if (!inverse) throw new Error('offsetsWithin: the primitive vectors are linearly dependent');
  const middle = fractional(vectors, shift);
  let found: number[][] = [[]];
  for (let d = 0; d < vectors.length; d++) {
    const reach = radius * Math.sqrt(inverse[d]![d]!) + 1e-9;
    const low = Math.ceil(-middle[d]! - reach);
    const high = Math.floor(-middle[d]! + reach);
    const range = Array.from({ length: Math.max(0, high - low + 1) }, (_, k) => low + k);
    found = found.flatMap((o) => range.map((c) => [...o, c]));
  }
  const square = radius * radius * (1 + 1e-9) + 1e-12;
  return found.filter((o) => {
    const r = cartesian(vectors, o).map((x, k) => x + shift[k]!);
    return dot(r, r) <= square;
  });
}

/** Determinant of an integer matrix (n × n, n <= 3). */
export function determinant(m: readonly (readonly number[])[]): number {
  const at = (r: number, c: number): number => m[r]![c]!;
  if (m.length === 1) return at(0, 0);
  if (m.length === 2) return at(0, 0) * at(1, 1) - at(0, 1) * at(1, 0);
  return (
    at(0, 0) * (at(1, 1) * at(2, 2) - at(1, 2) * at(2, 1)) -
    at(0, 1) * (at(1, 0) * at(2, 2) - at(1, 2) * at(2, 0)) +
    at(0, 2) * (at(1, 0) * at(2, 1) - at(1, 1) * at(2, 0))
  );
}

/**
 * Hermite normal form of integer rows (any number × n): independent upper triangular rows that span the same lattice,
 * pivots positive, entries above a pivot reduced to 0 … pivot − 1.
 */
export function hermite(rows: readonly (readonly number[])[]): number[][] {
  let rest = rows.map((r) => [...r]);
  const width = rows[0]?.length ?? 0;
  const done: number[][] = [];
  for (let c = 0; c < width; c++) {
    let live = rest.filter((r) => r[c] !== 0);
    while (live.length > 1) {
      live.sort((a, b) => Math.abs(a[c]!) - Math.abs(b[c]!));
      const pivot = live[0]!;
      for (const r of live.slice(1)) {
        const q = Math.trunc(r[c]! / pivot[c]!);
        for (let k = 0; k < width; k++) r[k]! -= q * pivot[k]!;
      }
      live = live.filter((r) => r[c] !== 0);
    }
    const pivot = live[0];
    if (!pivot) continue;
    rest = rest.filter((r) => r !== pivot);
    // "+ 0" turns −0 into 0.
    const row = pivot[c]! < 0 ? pivot.map((x) => -x + 0) : pivot;
    for (const above of done) {
      const q = Math.floor(above[c]! / row[c]!);
      for (let k = 0; k < width; k++) above[k]! -= q * row[k]!;
    }
    done.push(row);
  }
  return done;
}

/** True if an integer vector lies in the lattice spanned by rows in Hermite normal form. */
export function inLattice(normal: readonly (readonly number[])[], vector: readonly number[]): boolean {
  const rest = [...vector];
  for (const row of normal) {
    const c = row.findIndex((x) => x !== 0);
    if (rest[c]! % row[c]! !== 0) return false;
    const q = rest[c]! / row[c]!;
    row.forEach((x, k) => (rest[k]! -= q * x));
  }
  return rest.every((x) => x === 0);
}
