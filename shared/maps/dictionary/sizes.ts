import { StabilizerGroup } from '../../algebra/finite/group.ts';
import { fromPauli, identityOn, multiply, toPauli, turned } from '../../algebra/finite/string.ts';
import type { FiniteString, SiteTable } from '../../algebra/finite/types.ts';
import { siteTable, wrapExtended, wrapString } from '../../algebra/finite/wrap.ts';
import { translateString } from '../../algebra/pauli/string.ts';
import type { Extended, LocalString } from '../../algebra/pauli/types.ts';
import { shifted, type Offset, type Size } from '../../lattice/cells.ts';
import { newCluster, sizeText, type Cluster } from '../../lattice/cluster.ts';
import { BudgetSpent, type Budget } from '../../limits.ts';
import { speciesOf, type Context } from '../context.ts';
import { toggled } from './coordinates.ts';
import { isExtended, translateExtended } from './decompose.ts';
import type { DictionaryDeclaration } from './declaration.ts';
import { nameSectors, type Sector } from './sectors.ts';

/** One translate of a rule on a cluster. */
export interface Instance {
  readonly rule: number;
  readonly by: Offset;
  readonly left: FiniteString;
  readonly right: FiniteString;
}

/** A product of generators that is ±1 on the left and the opposite on the right. */
export interface SignBreak {
  readonly members: readonly { readonly rule: number; readonly by: Offset }[];
  /** k of i^k: what the ordered product is on either side. */
  readonly leftPhase: number;
  readonly rightPhase: number;
}

/** What a dictionary does on one size: exact, by elimination over F2 with signs. */
export interface SizeFindings {
  readonly size: string;
  readonly generators: number;
  readonly leftSpins: number;
  readonly rightSpins: number;
  /** Independent generators, up to signs. */
  readonly leftRank: number;
  readonly rightRank: number;
  readonly leftRelations: number;
  readonly rightRelations: number;
  /** Independent relations that hold on both sides, with the same sign. */
  readonly kept: number;
  /** Pairs of instances that commute on one side only (from wrapping); then signs are not judged. */
  readonly commutationBroken: { readonly first: Instance; readonly second: Instance } | undefined;
  readonly signBreak: SignBreak | undefined;
  /** Strings that have to take a value for the map to hold. */
  readonly leftSectors: readonly Sector[];
  readonly rightSectors: readonly Sector[];
  /** log2 of the dimensions of the two sectors; they agree exactly where the map joins them one to one. */
  readonly leftDimension: number;
  readonly rightDimension: number;
}

export interface SizeProblem {
  readonly problem: string;
}

/** Spins of some species on a cluster. */
export function tableOf(context: Context, cluster: Cluster, names: readonly string[]): SiteTable {
  return siteTable(
    cluster,
    names.flatMap((name) => {
      const s = speciesOf(context, name);
      return s ? [{ name, kind: s.kind, classes: s.classes }] : [];
    }),
  );
}

function wrapSide(
  side: LocalString | Extended,
  by: Offset,
  table: SiteTable,
  cluster: Cluster,
  budget: Budget,
): FiniteString | undefined {
  return isExtended(side)
    ? wrapExtended(table, cluster, translateExtended(side, by), budget)
    : wrapString(table, cluster, translateString(side, by));
}

/** All translates of all rules that stand on a cluster, in order of rules. */
export function instances(
  declaration: DictionaryDeclaration,
  left: SiteTable,
  right: SiteTable,
  cluster: Cluster,
  budget: Budget,
): Instance[] {
  return declaration.rules.flatMap((rule, k) => {
    const cells = [rule.left, rule.right].flatMap((s) => (isExtended(s) ? [] : s.factors.map((f) => f.cell)));
    const all = [...cells, ...rule.needs];
    const low = rule.steps.map((_, d) => (all.length === 0 ? 0 : Math.min(...all.map((c) => c.offset[d] ?? 0))));
    const high = rule.steps.map((_, d) => (all.length === 0 ? 0 : Math.max(...all.map((c) => c.offset[d] ?? 0))));
    return cluster.orbit(rule.steps, low, high).flatMap((by): Instance[] => {
      budget.spend(all.length + 1 + (left.sites.length >>> 3) + (right.sites.length >>> 3));
      if (rule.needs.some((c) => cluster.number(shifted(c, by)) === undefined)) return [];
      const l = wrapSide(rule.left, by, left, cluster, budget);
      const r = wrapSide(rule.right, by, right, cluster, budget);
      return l && r ? [{ rule: k, by, left: l, right: r }] : [];
    });
  });
}

const product = (strings: readonly FiniteString[], members: readonly number[], n: number): FiniteString =>
  members.reduce<FiniteString>((all, m) => {
    const s = strings[m];
    return s ? multiply(all, s) : all;
  }, identityOn(n));

/** Signed strings that products of one side's relations come to on the other side; +1 is what each has to be. */
export function forced(
  group: StabilizerGroup,
  others: readonly FiniteString[],
  n: number,
  budget: Budget,
): FiniteString[] {
  return group.relations().map(({ members, phase }) => {
    budget.spend(members.length * (1 + (n >>> 5)));
    return turned(product(others, members, n), -phase);
  });
}

/** A relation of both sides with opposite signs, made short; `sectors` are the forced strings for the group's relations. */
function signBreak(
  group: StabilizerGroup,
  sectors: StabilizerGroup,
  items: readonly Instance[],
  budget: Budget,
): SignBreak | undefined {
  const relations = group.relations();
  const own = sectors.relations().map((r) => ({
    odd: r.phase !== 0,
    members: r.members.reduce<readonly number[]>(
      (all, k) =>
        toggled(
          all,
          [...(relations[k]?.members ?? [])].sort((a, b) => a - b),
        ),
      [],
    ),
  }));
  let best = own.filter((r) => r.odd).sort((a, b) => a.members.length - b.members.length)[0]?.members;
  if (!best) return undefined;
  const even = own.filter((r) => !r.odd);
  for (let changed = true; changed;) {
    changed = false;
    for (const r of even) {
      budget.spend(r.members.length + best.length);
      const other = toggled(best, r.members);
      if (other.length < best.length && other.length > 0) [best, changed] = [other, true];
    }
  }
  const phaseOn = (strings: FiniteString[]) => product(strings, best, strings[0]?.n ?? 0).phase & 3;
  return {
    members: best.flatMap((m) => (items[m] ? [{ rule: items[m].rule, by: items[m].by }] : [])),
    leftPhase: phaseOn(items.map((i) => i.left)),
    rightPhase: phaseOn(items.map((i) => i.right)),
  };
}

/** The first pair of instances that commute on one side only; undefined where wrapping breaks nothing. */
function brokenPair(items: readonly Instance[], budget: Budget): SizeFindings['commutationBroken'] {
  const n = items[0]?.left.n ?? 0;
  const m = items[0]?.right.n ?? 0;
  const joined = items.map((i) => fuse(i.left, i.right, n, m));
  const pair = new StabilizerGroup(n + m, joined, budget).anticommutingPair();
  const [first, second] = (pair ?? []).map((k) => items[k]);
  return first && second ? { first, second } : undefined;
}

/** Left times right on separate spins: they commute pairwise exactly where the two sides agree. */
function fuse(left: FiniteString, right: FiniteString, n: number, m: number): FiniteString {
  const moved = toPauli(right).factors.map(({ spin, pauli }) => ({ spin: spin + n, pauli }));
  return fromPauli(n + m, [...toPauli(left).factors, ...moved]);
}

/**
 * Everything that can be said of a dictionary on one size, exactly: independent generators, relations on either side and what they
 * force on the other, with signs (bond algebras: E. Cobanera, G. Ortiz, Z. Nussinov, Adv. Phys. 60, 679 (2011), section 3.4).
 * A size on which the rules do not close, or a limit, is a problem in words.
 */
export function onSize(
  declaration: DictionaryDeclaration,
  context: Context,
  size: Size,
  budget: Budget,
): SizeFindings | SizeProblem {
  const cluster = newCluster(context.lattice, size);
  if (!('unitCells' in cluster)) return { problem: cluster.message };
  const misfit = declaration.rules.find((r) => !cluster.admits(r.steps));
  if (misfit) return { problem: `a rule of period ${misfit.steps.join(' x ')} does not close on ${sizeText(size)}` };
  try {
    const [leftTable, rightTable] = [
      tableOf(context, cluster, declaration.from),
      tableOf(context, cluster, declaration.to),
    ];
    const items = instances(declaration, leftTable, rightTable, cluster, budget);
    const [n, m] = [leftTable.sites.length, rightTable.sites.length];
    const lefts = items.map((i) => i.left);
    const rights = items.map((i) => i.right);
    const left = new StabilizerGroup(n, lefts, budget);
    const right = new StabilizerGroup(m, rights, budget);
    const commutationBroken = brokenPair(items, budget);
    const onRight = new StabilizerGroup(m, forced(left, rights, m, budget), budget);
    const onLeft = new StabilizerGroup(n, forced(right, lefts, n, budget), budget);
    const broken = commutationBroken ? undefined : signBreak(left, onRight, items, budget);
    const judged = !commutationBroken && !broken;
    return {
      size: sizeText(size),
      generators: items.length,
      leftSpins: n,
      rightSpins: m,
      leftRank: left.rank,
      rightRank: right.rank,
      leftRelations: items.length - left.rank,
      rightRelations: items.length - right.rank,
      kept: onRight.generators.length - onRight.rank,
      commutationBroken,
      signBreak: broken,
      rightSectors: judged ? nameSectors(onRight, rightTable, cluster, declaration.to, context, budget) : [],
      leftSectors: judged ? nameSectors(onLeft, leftTable, cluster, declaration.from, context, budget) : [],
      leftDimension: n - onLeft.rank,
      rightDimension: m - onRight.rank,
    };
  } catch (error) {
    if (error instanceof BudgetSpent) return { problem: error.limit };
    throw error;
  }
}
