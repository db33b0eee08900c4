import { bit } from '../../../shared/algebra/finite/string.ts';
import type { FiniteString } from '../../../shared/algebra/finite/types.ts';
import { isWrapProblem, siteTable, wrapOperator } from '../../../shared/algebra/finite/wrap.ts';
import type { SiteTable } from '../../../shared/algebra/finite/types.ts';
import type { Operator } from '../../../shared/algebra/pauli/types.ts';
import type { SpeciesValue } from '../../../shared/language/values.ts';
import type { Lattice, Size } from '../../../shared/lattice/cells.ts';
import { newCluster, type Cluster } from '../../../shared/lattice/cluster.ts';

/** Dense complex matrices, for checks by another road: rows of [re, im] pairs flattened. Spin k is bit k of a basis state. */
export interface Dense {
  readonly n: number;
  readonly re: Float64Array;
  readonly im: Float64Array;
}

export const zeros = (n: number): Dense => ({ n, re: new Float64Array(n * n), im: new Float64Array(n * n) });

export function clusterOn(on: Lattice, size: Size): Cluster {
  const cluster = newCluster(on, size);
  if (!('unitCells' in cluster)) throw new Error(cluster.message);
  return cluster;
}

export const tableFor = (cluster: Cluster, species: readonly SpeciesValue[]): SiteTable =>
  siteTable(
    cluster,
    species.map((s) => ({ name: s.name, kind: s.kind, classes: s.classes })),
  );

/** Adds c times i^k X^x Z^z. */
function add(into: Dense, s: FiniteString, c: { re: number; im: number }): void {
  const { n } = into;
  let x = 0;
  for (let k = 0; k < s.n; k++) if (bit(s.x, k)) x |= 1 << k;
  for (let col = 0; col < n; col++) {
    let sign = 1;
    for (let k = 0; k < s.n; k++) if (bit(s.z, k) && (col >> k) & 1) sign = -sign;
    const [pr, pi] = [
      [1, 0],
      [0, 1],
      [-1, 0],
      [0, -1],
    ][s.phase & 3] ?? [1, 0];
    const at = (col ^ x) * n + col;
    into.re[at] = (into.re[at] ?? 0) + sign * (c.re * (pr ?? 0) - c.im * (pi ?? 0));
    into.im[at] = (into.im[at] ?? 0) + sign * (c.re * (pi ?? 0) + c.im * (pr ?? 0));
  }
}

/** An operator on a cluster as a dense matrix, couplings given. */
export function dense(
  operator: Operator,
  cluster: Cluster,
  table: SiteTable,
  couplings: ReadonlyMap<string, number>,
): Dense {
  const model = wrapOperator(table, cluster, operator);
  if (isWrapProblem(model)) throw new Error(model.message);
  const out = zeros(2 ** table.sites.length);
  for (const t of model.terms) add(out, t.string, t.coefficient.toFloat(couplings));
  const { re, im } = model.constant.toFloat(couplings);
  for (let k = 0; k < out.n; k++) {
    out.re[k * out.n + k] = (out.re[k * out.n + k] ?? 0) + re;
    out.im[k * out.n + k] = (out.im[k * out.n + k] ?? 0) + im;
  }
  return out;
}

export const stringMatrix = (s: FiniteString): Dense => {
  const out = zeros(2 ** s.n);
  add(out, s, { re: 1, im: 0 });
  return out;
};

/** A (p × q) times B (q × r), rectangular: given as rows of complex numbers. */
export function times(a: Dense, b: Dense): Dense {
  const out = zeros(a.n);
  const { n } = a;
  for (let r = 0; r < n; r++)
    for (let k = 0; k < n; k++) {
      const [x, y] = [a.re[r * n + k] ?? 0, a.im[r * n + k] ?? 0];
      if (x === 0 && y === 0) continue;
      for (let c = 0; c < n; c++) {
        const [u, v] = [b.re[k * n + c] ?? 0, b.im[k * n + c] ?? 0];
        out.re[r * n + c] = (out.re[r * n + c] ?? 0) + x * u - y * v;
        out.im[r * n + c] = (out.im[r * n + c] ?? 0) + x * v + y * u;
      }
    }
  return out;
}

export const dagger = (a: Dense): Dense => {
  const out = zeros(a.n);
  for (let r = 0; r < a.n; r++)
    for (let c = 0; c < a.n; c++) {
      out.re[c * a.n + r] = a.re[r * a.n + c] ?? 0;
      out.im[c * a.n + r] = -(a.im[r * a.n + c] ?? 0);
    }
  return out;
};

/** Largest entry of the difference. */
export const distance = (a: Dense, b: Dense): number =>
  Math.max(...a.re.map((x, k) => Math.max(Math.abs(x - (b.re[k] ?? 0)), Math.abs((a.im[k] ?? 0) - (b.im[k] ?? 0)))));

/** Traces of the first powers: equal for matrices with the same levels and multiplicities. */
export function moments(a: Dense, count: number): number[] {
  let power = a;
  return Array.from({ length: count }, (_, k) => {
    if (k > 0) power = times(power, a);
    let trace = 0;
    for (let r = 0; r < a.n; r++) trace += power.re[r * a.n + r] ?? 0;
    return trace;
  });
}
