import { asExtended } from '../../algebra/pauli/extended.ts';
import {
  commuteExtended,
  commuteOrbits,
  commuteWithExtended,
  type SizeParity,
  type Verdict,
} from '../../algebra/pauli/commutation.ts';
import { newString } from '../../algebra/pauli/string.ts';
import type { Extended, Factor, LocalString, Site } from '../../algebra/pauli/types.ts';
import type { AllSizes } from '../../algebra/f2/all-sizes.ts';
import type { Offset } from '../../lattice/cells.ts';
import type { Budget } from '../../limits.ts';
import type { DictionaryRule } from '../../language/values.ts';
import { points } from '../steps.ts';
import { isExtended, translateExtended } from './decompose.ts';

/** Two rules whose left sides commute where their right sides do not, or the other way round. */
export interface CommutationBreak {
  readonly first: number;
  readonly second: number;
  /** The second rule is moved by this. */
  readonly shift: Offset;
  readonly leftCommute: boolean;
  /** Spins where the two sides meet with different Pauli matrices, left and right. */
  readonly leftOverlap: readonly Site[];
  readonly rightOverlap: readonly Site[];
}

export interface KeptCommutation {
  readonly kept: boolean | 'depends';
  /** Pairs of rules looked at. */
  readonly pairs: number;
  /** Proofs for each pair: from which extents on, and for which multiples. */
  readonly evidence: readonly AllSizes[];
  /** Smallest first. */
  readonly broken: readonly CommutationBreak[];
  /** Pairs of rules of unbounded support whose agreement depends on the extents. */
  readonly depends: readonly { readonly first: number; readonly second: number; readonly on: readonly SizeParity[] }[];
}

const mark = "'";
const primed = (s: LocalString): LocalString => ({
  phase: s.phase,
  factors: s.factors.map((f): Factor => ({ ...f, species: `${f.species}${mark}` })),
});
const primedExtended = (e: Extended): Extended => ({
  phase: e.phase,
  parts: e.parts.map((p) => ({ ...p, string: primed(p.string) })),
});

/**
 * Left side times right side on separate spins. Two such products commute exactly where left and right agree on whether they commute,
 * so the verdict for families decides at once, for every size, whether a map keeps commutation (derived here from the symplectic form's additivity).
 */
function joined(rule: DictionaryRule): LocalString | Extended {
  const { left, right } = rule;
  if (!isExtended(left) && !isExtended(right)) return newString([...left.factors, ...primed(right).factors]);
  const wide = (s: LocalString | Extended): Extended =>
    isExtended(s) ? s : s.factors.length === 0 ? { phase: 0, parts: [] } : asExtended(s);
  return { phase: 0, parts: [...wide(left).parts, ...primedExtended(wide(right)).parts] };
}

const unprimed = (sites: readonly Site[], right: boolean): Site[] =>
  sites.flatMap((s) =>
    s.species.endsWith(mark) === right ? [{ ...s, species: right ? s.species.slice(0, -1) : s.species }] : [],
  );

/** Whether all pairs of rules commute on the right exactly where they do on the left: on the infinite lattice, hence at every size. */
export function keptCommutation(rules: readonly DictionaryRule[], budget: Budget): KeptCommutation {
  const sides = rules.map(joined);
  const evidence: AllSizes[] = [];
  const broken: CommutationBreak[] = [];
  const depends: { first: number; second: number; on: readonly SizeParity[] }[] = [];
  let pairs = 0;
  for (const [i, first] of sides.entries())
    for (const [k, second] of sides.slice(i).entries()) {
      const j = i + k;
      pairs++;
      for (const { shift, verdict } of verdicts(first, second, rules[i], rules[j], budget)) {
        if (verdict.commutes === true) evidence.push(verdict.evidence);
        else if (verdict.commutes === 'depends') depends.push({ first: i, second: j, on: verdict.on });
        else
          for (const w of verdict.witnesses) {
            const left = unprimed(w.overlap, false);
            broken.push({
              first: i,
              second: j,
              shift: w.shift.map((c, d) => c + (shift[d] ?? 0)),
              leftCommute: left.length % 2 === 0,
              leftOverlap: left,
              rightOverlap: unprimed(w.overlap, true),
            });
          }
      }
    }
  broken.sort(
    (a, b) =>
      a.leftOverlap.length + a.rightOverlap.length - b.leftOverlap.length - b.rightOverlap.length ||
      length(a.shift) - length(b.shift),
  );
  return { kept: broken.length > 0 ? false : depends.length > 0 ? 'depends' : true, pairs, evidence, broken, depends };
}

const length = (shift: Offset): number => shift.reduce((sum, c) => sum + Math.abs(c), 0);

/** Verdicts for a pair; where a string of unbounded support is itself translated, one for each shift within reach. */
function verdicts(
  a: LocalString | Extended,
  b: LocalString | Extended,
  first: DictionaryRule | undefined,
  second: DictionaryRule | undefined,
  budget: Budget,
): { shift: Offset; verdict: Verdict }[] {
  const [m, n] = [first?.steps ?? [], second?.steps ?? []];
  const zero = m.map(() => 0);
  if (!isExtended(a) && !isExtended(b))
    return [{ shift: zero, verdict: commuteOrbits({ string: a, steps: m }, { string: b, steps: n }, budget) }];
  if (!isExtended(a) && isExtended(b) && n.every((s) => s === 0))
    return [{ shift: zero, verdict: commuteWithExtended({ string: a, steps: m }, b, budget) }];
  if (isExtended(a) && !isExtended(b) && m.every((s) => s === 0))
    return [{ shift: zero, verdict: commuteWithExtended({ string: b, steps: n }, a, budget) }];
  const wide = (s: LocalString | Extended): Extended => (isExtended(s) ? s : asExtended(s));
  const reach = [a, b]
    .flatMap((s) => (isExtended(s) ? s.parts.flatMap((p) => p.string.factors) : s.factors))
    .flatMap((f) => f.cell.offset.map(Math.abs));
  const far = 2 * Math.max(0, ...reach) + Math.max(1, ...m, ...n);
  const shifts = points(
    m.map((s, d) => (s > 0 || (n[d] ?? 0) > 0 ? -far : 0)),
    m.map((s, d) => (s > 0 || (n[d] ?? 0) > 0 ? far : 0)),
  ).filter((by) => by.every((c, d) => c % gcdOr1(m[d] ?? 0, n[d] ?? 0) === 0));
  return shifts.map((shift) => ({
    shift,
    verdict: commuteExtended(wide(a), translateExtended(wide(b), shift), budget),
  }));
}

const gcdOr1 = (a: number, b: number): number => (b === 0 ? Math.abs(a) || 1 : gcdOr1(b, a % b));
