import type { Offset } from '../../lattice/cells.ts';
import { shownForAllSizes, type AllSizes } from '../f2/all-sizes.ts';
import { newBudget, type Budget } from '../../limits.ts';
import { lcmOf, modulo } from './collect.ts';
import { commonMultiples, inGroup, oddShifts, relativeSteps } from './overlaps.ts';
import { classKey, compareOffsets, newString, overlap, translateString } from './string.ts';
import type { Extended, Factor, LocalString, ProductPart, Site, Steps } from './types.ts';

/**
 * Commutation on the infinite lattice.
 *
 * Why it settles tori: a torus with periods P is the infinite lattice modulo the translations P. Wrapping sends a Laurent polynomial to its class in the group
 * ring of Z^D / P, and this is a ring homomorphism. The parity of the overlap of two wrapped strings in relative position s is the sum of the infinite parities over s + P; if P
 * is made of allowed relative translations (the steps divide the periods) and all of those parities vanish, so does the sum. Where both operators are pinned along a direction, s + P
 * holds positions that were never compared; `AllSizes.from` excludes the extents at which one of them is odd. The converse fails: on a small torus odd overlaps may meet
 * and cancel, so a refutation speaks of the infinite lattice and of large tori.
 * Source: J. Haah, Commun. Math. Phys. 324, 351 (2013), sections 2 and 3; steps, pinned directions and extended products derived here.
 */
export type Verdict =
  | { readonly commutes: true; readonly evidence: AllSizes }
  | { readonly commutes: false; readonly witnesses: readonly Witness[] }
  | { readonly commutes: 'depends'; readonly on: readonly SizeParity[] };

/** A pair of translates that anticommute: `left` in place and `right` moved by `shift`; they differ on an odd number of spins. */
export interface Witness {
  readonly shift: Offset;
  /** Spins where both act, with different Pauli matrices. */
  readonly overlap: readonly Site[];
  readonly left: LocalString;
  readonly right: LocalString;
}

/**
 * One term of a parity that depends on the size: odd if L_d / unit_d is odd for every listed direction d (from 0). Two extended strings anticommute
 * where the number of odd terms is odd.
 */
export interface SizeParity {
  readonly directions: readonly { readonly direction: number; readonly unit: number }[];
}

/** Translates of one string: what families, laws and parts of products share. */
export interface Orbit {
  readonly string: LocalString;
  readonly steps: Steps;
}

const size = (offset: Offset): number => offset.reduce((sum, c) => sum + Math.abs(c), 0);

/** Smallest overlap first, then shortest shift. */
const bySize = (a: Witness, b: Witness): number =>
  a.overlap.length - b.overlap.length || size(a.shift) - size(b.shift) || compareOffsets(a.shift, b.shift);

function witness(left: LocalString, right: LocalString, shift: Offset): Witness {
  const moved = translateString(right, shift);
  return { shift, overlap: overlap(left, moved), left, right: moved };
}

/** Raises `from` past the extents at which a shift that was not compared wraps onto one that was: only along pinned directions. */
function raise(from: number[], shift: Offset, steps: Steps): void {
  const reachable = shift.every((s, d) => steps[d] === 0 || s % (steps[d] ?? 1) === 0);
  if (!reachable) return;
  shift.forEach((s, d) => {
    if (steps[d] === 0) from[d] = Math.max(from[d] ?? 1, Math.abs(s) + 1);
  });
}

/** Do all translates of a commute with all translates of b? Exact; quadratic in the number of factors on one class of spins. */
export function commuteOrbits(a: Orbit, b: Orbit, budget: Budget = newBudget()): Verdict {
  const steps = relativeSteps(a.steps, b.steps);
  const from = steps.map(() => 1);
  const witnesses: Witness[] = [];
  for (const shift of oddShifts(a.string, b.string, budget)) {
    if (inGroup(shift, steps)) witnesses.push(witness(a.string, b.string, shift));
    else raise(from, shift, steps);
  }
  if (witnesses.length > 0) return { commutes: false, witnesses: witnesses.sort(bySize) };
  return { commutes: true, evidence: shownForAllSizes(from, commonMultiples(a.steps, b.steps)) };
}

/** A translate of the family (its shift; modulo the period, exact along pinned directions) at which it meets the product oddly. */
type Positions = Map<string, Offset>;

/** Common period of the family and the parts in the directions in which the family is translated; 0 in the others. */
const commonPeriod = (family: Orbit, extended: Extended): number[] =>
  family.steps.map((m, d) =>
    m === 0 ? 0 : extended.parts.reduce((all, p) => (p.steps[d] ? lcmOf(all, p.steps[d]) : all), m),
  );

/**
 * Odd positions, by the pattern of directions in which the product is pinned and the family is not. What a pattern contributes is periodic in its other
 * directions and of finite support in the pinned ones, so contributions of different patterns cannot cancel as a whole: all must vanish.
 */
function oddPositions(family: Orbit, extended: Extended, from: number[], budget: Budget): Map<string, Positions> {
  const period = commonPeriod(family, extended);
  const bothPinned = (part: ProductPart): number[] =>
    part.steps.map((m, d) => (m === 0 && family.steps[d] === 0 ? 0 : 1));
  const patterns = new Map<string, Positions>();
  for (const part of extended.parts) {
    const pattern = part.steps.map((m, d) => (m === 0 && family.steps[d] !== 0 ? '.' : '*')).join('');
    const odd = patterns.get(pattern) ?? new Map<string, Offset>();
    patterns.set(pattern, odd);
    for (const shift of oddShifts(family.string, part.string, budget)) {
      const free = bothPinned(part);
      if (!inGroup(shift, free)) {
        raise(from, shift, free);
        continue;
      }
      for (const at of standing(shift, part.steps, family.steps, period)) {
        budget.spend();
        if (!odd.delete(at.join(','))) odd.set(at.join(','), at);
      }
    }
  }
  return patterns;
}

/** The t (modulo the period; exact along pinned directions) in the family's group with t + shift in the part's group. */
function standing(shift: Offset, part: Steps, family: Steps, period: Steps): number[][] {
  let all: number[][] = [[]];
  shift.forEach((s, d) => {
    const [m, n, whole] = [family[d] ?? 0, part[d] ?? 0, period[d] ?? 0];
    const along: number[] = [];
    if (m === 0) {
      if (n === 0 ? s === 0 : s % n === 0) along.push(0);
    } else if (n === 0) {
      if (s % m === 0) along.push(-s + 0);
    } else for (let t = 0; t < whole; t += m) if (modulo(t + s, n) === 0) along.push(t);
    all = all.flatMap((head) => along.map((t) => [...head, t]));
  });
  return all;
}

/** The piece of a product that stands on the spins of a string. */
function restricted(extended: Extended, to: LocalString): LocalString {
  const pieces: Factor[] = [];
  for (const part of extended.parts)
    for (const g of part.string.factors)
      for (const f of to.factors) {
        if (classKey(f) !== classKey(g)) continue;
        const shift = f.cell.offset.map((c, d) => c - (g.cell.offset[d] ?? 0));
        if (inGroup(shift, part.steps)) pieces.push({ species: f.species, cell: f.cell, pauli: g.pauli });
      }
  return { phase: 0, factors: newString(pieces).factors };
}

/** A true witness at the position or, where patterns meet and cancel there, further along; undefined if they cancel all along. */
function witnessAt(
  family: Orbit,
  extended: Extended,
  at: Offset,
  pattern: string,
  period: Steps,
  tries: number,
): Witness | undefined {
  for (let k = 0; k <= tries; k++) {
    const shift = at.map((t, d) => (pattern[d] === '*' ? t + k * (period[d] ?? 0) : t));
    const left = translateString(family.string, shift);
    const right = restricted(extended, left);
    const sites = overlap(left, right);
    if (sites.length % 2 === 1) return { shift, overlap: sites, left, right };
  }
  return undefined;
}

/**
 * Does every translate of the family commute with the product? Where not: the translate (`left`, moved by `shift`) and the piece of the product on its
 * spins (`right`).
 */
export function commuteWithExtended(family: Orbit, extended: Extended, budget: Budget = newBudget()): Verdict {
  const from = family.steps.map(() => 1);
  const period = commonPeriod(family, extended);
  const patterns = oddPositions(family, extended, from, budget);
  // beyond this many periods no pinned part is within reach of the family
  const reach = [family.string, ...extended.parts.map((p) => p.string)].flatMap((s) =>
    s.factors.flatMap((f) => f.cell.offset.map(Math.abs)),
  );
  const tries = 1 + 2 * reach.reduce((a, b) => Math.max(a, b), 0) * 2;
  const witnesses = [...patterns].flatMap(([pattern, odd]) =>
    [...odd.values()].flatMap((at) => witnessAt(family, extended, at, pattern, period, tries) ?? []),
  );
  if (witnesses.length > 0) return { commutes: false, witnesses: witnesses.sort(bySize) };
  const multiples = extended.parts.reduce(
    (all, p) => all.map((m, d) => Math.max(lcmOf(m, p.steps[d] ?? 0), 1)),
    family.steps.map((m) => Math.max(m, 1)),
  );
  return { commutes: true, evidence: shownForAllSizes(from, multiples) };
}

/**
 * Do two extended products commute? Along a direction in which both are translated by m and n, a relative position occurs L / lcm(m, n) times, so the
 * verdict may depend on the parity of the size; pairs pinned against translated occur once. Straight sizes.
 */
export function commuteExtended(a: Extended, b: Extended, budget: Budget = newBudget()): Verdict {
  const terms = new Map<string, SizeParity>();
  const dimension = (a.parts[0] ?? b.parts[0])?.steps.length ?? 0;
  const from = Array<number>(dimension).fill(1);
  let multiples = Array<number>(dimension).fill(1);
  let once: Witness | undefined;
  for (const p of a.parts)
    for (const q of b.parts) {
      const steps = relativeSteps(p.steps, q.steps);
      multiples = commonMultiples(p.steps, q.steps).map((m, d) => lcmOf(m, multiples[d] ?? 1));
      const meeting = oddShifts(p.string, q.string, budget).filter((shift) => {
        const meets = inGroup(shift, steps);
        if (!meets) raise(from, shift, steps);
        return meets;
      });
      const [shift] = meeting;
      if (!shift || meeting.length % 2 === 0) continue;
      const directions = p.steps.flatMap((m, d) => {
        const n = q.steps[d] ?? 0;
        return m > 0 && n > 0 ? [{ direction: d, unit: lcmOf(m, n) }] : [];
      });
      once ??= directions.length === 0 ? witness(p.string, q.string, shift) : undefined;
      const key = directions.map((d) => `${String(d.direction)}:${String(d.unit)}`).join(' ');
      if (!terms.delete(key)) terms.set(key, { directions });
    }
  const on = [...terms.values()];
  if (on.length === 0) return { commutes: true, evidence: shownForAllSizes(from, multiples) };
  if (on.length === 1 && on[0]?.directions.length === 0 && once) return { commutes: false, witnesses: [once] };
  return { commutes: 'depends', on };
}

/** Settles a verdict that depends on the size at a straight size (extents in unit cells): true if the two commute there. */
export const commutesAt = (on: readonly SizeParity[], extents: readonly number[]): boolean =>
  on.filter((term) => term.directions.every(({ direction, unit }) => ((extents[direction] ?? 1) / unit) % 2 === 1))
    .length %
    2 ===
  0;

/** Two operators each of which has a counterpart: the two sides of a rule of a map. Both sides move together, by `steps`. */
export interface PairOfStrings {
  readonly left: LocalString;
  readonly right: LocalString;
  readonly steps: Steps;
}

export type SameCommutation =
  | { readonly same: true; readonly evidence: AllSizes }
  | {
      readonly same: false;
      /** Relative translations of b at which one side commutes and the other does not, shortest first, with the strings there. */
      readonly witnesses: readonly { readonly shift: Offset; readonly left: Witness; readonly right: Witness }[];
    };

/**
 * Do the left sides of a and b commute in exactly those relative positions in which the right sides do? Then the correspondence keeps commutation at every
 * size: the parities on either side are equal Laurent polynomials, and wrapping sends equal ones to equal ones.
 */
export function commuteAlike(a: PairOfStrings, b: PairOfStrings, budget: Budget = newBudget()): SameCommutation {
  const steps = relativeSteps(a.steps, b.steps);
  const differing = new Map<string, Offset>();
  for (const shift of [...oddShifts(a.left, b.left, budget), ...oddShifts(a.right, b.right, budget)])
    if (!differing.delete(shift.join(','))) differing.set(shift.join(','), shift);
  const from = steps.map(() => 1);
  const bad: Offset[] = [];
  for (const shift of differing.values()) {
    if (inGroup(shift, steps)) bad.push(shift);
    else raise(from, shift, steps);
  }
  if (bad.length === 0) return { same: true, evidence: shownForAllSizes(from, commonMultiples(a.steps, b.steps)) };
  bad.sort((s, t) => size(s) - size(t) || compareOffsets(s, t));
  return {
    same: false,
    witnesses: bad.map((shift) => ({
      shift,
      left: witness(a.left, b.left, shift),
      right: witness(a.right, b.right, shift),
    })),
  };
}

export type { AllSizes };
