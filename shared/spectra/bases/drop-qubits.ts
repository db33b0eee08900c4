import type { FiniteString } from '../../algebra/finite/types.ts';
import { bit, commute, dropSite, hermitian, isIdentity, multiply, signed, support, type Constraint } from './packed.ts';

/**
 * Dropping one spin for each independent constraint (S. Bravyi, J. M. Gambetta, A. Mezzacapo, K. Temme,
 * arXiv:1701.08213 (2017)): exact, in the sector of a group of commuting signed strings.
 *
 * For one constraint g = v take a spin p and a Pauli matrix q on p that anticommutes with g. Each string that commutes
 * with g equals, in the sector, v g times itself, and exactly one of the two commutes with q: at p it is 1 or q. Leaving
 * out p is then an isomorphism of the strings modulo g with the strings on the other spins; it is what the Clifford
 * unitary (q + g)/√2, which turns g into the single-spin q, does to them. q is X or Z, so that a real string stays real.
 */

/** Why there is no sector. Indices are those of the given constraints (and of the terms, for `leaves`). */
export type SectorFault =
  | { readonly code: 'not Hermitian'; readonly constraint: number }
  | { readonly code: 'constraints clash'; readonly constraints: readonly [number, number] }
  | { readonly code: 'no state'; readonly constraint: number }
  | { readonly code: 'term leaves'; readonly term: number; readonly constraint: number };

/** A map of strings on the spins before to strings on fewer spins, which keeps products and signs. */
export interface Reduction {
  /** Spins that are left. */
  readonly spins: number;
  /** Number of independent constraints. */
  readonly rank: number;
  /** Image of a string; undefined when it does not commute with the constraints (its block in the sector is zero). */
  readonly reduce: (string: FiniteString) => FiniteString | undefined;
}

/** One dropped spin: q = X if `pivotX`, else Z, on spin `site` (numbered as at that step). */
interface Step {
  /** The constraint with its value as sign, so that it is +1 in the sector. */
  readonly law: FiniteString;
  readonly site: number;
  readonly pivotX: boolean;
}

/**
 * Sector of the constraints for the given strings of n spins. `terms` are checked against each constraint; an empty
 * list checks none. Returns a fault as a value. Costs (constraints × (constraints + terms)) products of n bits.
 */
export function dropQubits(
  n: number,
  terms: readonly FiniteString[],
  constraints: readonly Constraint[],
): { readonly ok: true; readonly value: Reduction } | { readonly ok: false; readonly fault: SectorFault } {
  const fault = firstFault(terms, constraints);
  if (fault) return { ok: false, fault };
  const steps: Step[] = [];
  for (const [k, constraint] of constraints.entries()) {
    const law = run(steps, signed(constraint.string, constraint.value === -1));
    if (isIdentity(law)) {
      if (law.phase !== 0) return { ok: false, fault: { code: 'no state', constraint: k } };
    } else steps.push(step(law));
  }
  return { ok: true, value: reduction(n, constraints, steps) };
}

function reduction(n: number, constraints: readonly Constraint[], steps: readonly Step[]): Reduction {
  return {
    spins: n - steps.length,
    rank: steps.length,
    reduce: (string) => (constraints.every((c) => commute(c.string, string)) ? run(steps, string) : undefined),
  };
}

function firstFault(terms: readonly FiniteString[], constraints: readonly Constraint[]): SectorFault | undefined {
  for (const [k, { string }] of constraints.entries()) {
    if (!hermitian(string)) return { code: 'not Hermitian', constraint: k };
    const other = constraints.slice(0, k).findIndex((c) => !commute(c.string, string));
    if (other >= 0) return { code: 'constraints clash', constraints: [other, k] };
  }
  for (const [k, { string }] of constraints.entries()) {
    const term = terms.findIndex((t) => !commute(t, string));
    if (term >= 0) return { code: 'term leaves', term, constraint: k };
  }
  return undefined;
}

/** Prefers a spin where the law is a pure Z or X: there the products with the law add no Y. */
function step(law: FiniteString): Step {
  const sites = support(law);
  const site = sites.find((s) => !(bit(law.x, s) && bit(law.z, s))) ?? sites[0] ?? 0;
  return { law, site, pivotX: bit(law.z, site) === 1 };
}

function run(steps: readonly Step[], string: FiniteString): FiniteString {
  return follow(steps, string).string;
}

/** Image of a string, and which steps multiplied it by their law. */
function follow(steps: readonly Step[], string: FiniteString): { string: FiniteString; used: boolean[] } {
  let s = string;
  const used = steps.map(({ law, site, pivotX }) => {
    // Anticommutes with q: take the other representative. Commuting strings have a commuting product, in either order.
    const meets = bit(pivotX ? s.z : s.x, site) === 1;
    if (meets) s = multiply(s, law);
    s = dropSite(s, site);
    return meets;
  });
  return { string: s, used };
}

/**
 * A frame in which independent commuting Hermitian strings, kept by every term, are single Z's: law i is Z on spin
 * (n − laws + i), and all images have only 1 or Z there. The image of a string is its representative where all laws are
 * +1, times the Z's of the laws it was multiplied by. Strings that do not commute with the laws have no image.
 */
export function labelFrame(
  n: number,
  laws: readonly FiniteString[],
): (string: FiniteString) => FiniteString | undefined {
  const steps: Step[] = [];
  // A law, reduced by those before it, may have taken up some of them: then its value stands for the product.
  const masks: boolean[][] = [];
  for (const [k, law] of laws.entries()) {
    const { string, used } = follow(steps, law);
    const mask = laws.map((_, i) => i === k);
    used.forEach((yes, i) => yes && masks[i]?.forEach((m, l) => m && (mask[l] = !mask[l])));
    steps.push(step(string));
    masks.push(mask);
  }
  const left = n - laws.length;
  return (string) => {
    if (!laws.every((law) => commute(law, string))) return undefined;
    const { string: inner, used } = follow(steps, string);
    const labels = laws.map(() => false);
    used.forEach((yes, i) => yes && masks[i]?.forEach((m, l) => m && (labels[l] = !labels[l])));
    const x = new Uint32Array(Math.max(1, (n + 31) >>> 5));
    const z = new Uint32Array(x.length);
    x.set(inner.x.subarray(0, x.length));
    z.set(inner.z.subarray(0, x.length));
    labels.forEach((yes, i) => {
      const place = left + i;
      if (yes) z[place >>> 5] = (z[place >>> 5] ?? 0) | (2 ** (place & 31));
    });
    return { n, x, z, phase: inner.phase };
  };
}
