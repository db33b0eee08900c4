import type { AllSizes } from '../../algebra/f2/all-sizes.ts';
import { monomials, zeroVector, type LaurentVector } from '../../algebra/f2/laurent.ts';
import { LaurentModule } from '../../algebra/f2/module.ts';
import { bodyKey, identityString, multiplyStrings, toPhase, translateString } from '../../algebra/pauli/string.ts';
import type { LocalString, Phase, Steps } from '../../algebra/pauli/types.ts';
import { newFrame, type Frame } from '../../algebra/pauli/vector.ts';
import { BudgetSpent, type Budget } from '../../limits.ts';
import type { DictionaryRule } from '../../language/values.ts';
import { lawsOf, type Context } from '../context.ts';
import { incidencePhrase, stringPhrase } from '../phrases.ts';
import { inSteps, lcm, minus, residues } from '../steps.ts';
import { slotsOf } from './charged.ts';
import type { Use } from './coordinates.ts';
import { isExtended } from './decompose.ts';
import type { DictionaryDeclaration } from './declaration.ts';
import type { SignBreak } from './sizes.ts';

/** A law that the map forces: the string, with its phase, has to be +1 at every place. */
export interface ForcedLaw {
  readonly string: LocalString;
  readonly steps: Steps;
  /** Name of the declared law that it is, and the value it forces; else the string in words. */
  readonly name: string | undefined;
  readonly text: string;
  /** The generators whose product on the other side is ±1. */
  readonly members: readonly Use[];
}

/**
 * Local product relations of a dictionary on the infinite lattice, hence at every size: a generating set of them on either side, each
 * multiplied out on both. Relations that close around the lattice are not among these.
 */
export interface LocalRelations {
  /** Independent local relations: those on the left, and those on the right. */
  readonly left: number;
  readonly right: number;
  /** Relations of the left that hold on the right with the same sign. */
  readonly kept: number;
  readonly signBreak: SignBreak | undefined;
  readonly rightLaws: readonly ForcedLaw[];
  readonly leftLaws: readonly ForcedLaw[];
  /** Proof of each relation, for every size. */
  readonly evidence: readonly AllSizes[];
}

interface Item {
  readonly rule: number;
  readonly residue: readonly number[];
  readonly left: LocalString;
  readonly right: LocalString;
}

/** Translates of the rules within one enlarged cell. */
function items(rules: readonly DictionaryRule[], period: Steps): Item[] {
  return rules.flatMap((r, rule) => {
    const { left, right } = r;
    if (isExtended(left) || isExtended(right) || r.steps.some((m) => m === 0)) return [];
    return residues(r.steps, period).map((residue): Item => ({
      rule,
      residue,
      left: translateString(left, residue),
      right: translateString(right, residue),
    }));
  });
}

const membersOf = (syzygy: LaurentVector, all: readonly Item[], period: Steps): Use[] =>
  syzygy.flatMap((p, k) => {
    const item = all[k];
    return item
      ? monomials(p, period.length).map((e): Use => ({
          generator: item.rule,
          by: e.map((c, d) => c * (period[d] ?? 1) + (item.residue[d] ?? 0)),
        }))
      : [];
  });

function productOf(members: readonly Use[], rules: readonly DictionaryRule[], side: 'left' | 'right'): LocalString {
  return members.reduce((all, m) => {
    const s = rules[m.generator]?.[side];
    return s && !isExtended(s) ? multiplyStrings(all, translateString(s, m.by)) : all;
  }, identityString);
}

/** Where a declared law has this string, up to translation: its name, and the sign between the two. */
function declaredAs(
  string: LocalString,
  context: Context,
): { readonly name: string; readonly phase: number } | undefined {
  const [first] = string.factors;
  if (!first) return undefined;
  for (const value of lawsOf(context.values)) {
    for (const f of value.families) {
      const own = f.string.factors[0];
      if (!own || f.string.factors.length !== string.factors.length) continue;
      const by = minus(first.cell.offset, own.cell.offset);
      if (inSteps(by, f.steps) && bodyKey(translateString(f.string, by)) === bodyKey(string))
        return { name: value.name, phase: toPhase(f.string.phase - string.phase) };
    }
  }
  return undefined;
}

function forcedLaw(string: LocalString, steps: Steps, members: readonly Use[], context: Context): ForcedLaw {
  const declared = declaredAs(string, context);
  // string = +1 and law = i^phase string
  const text =
    declared && declared.phase % 2 === 0
      ? `${declared.name} = ${declared.phase === 0 ? '+1' : '-1'}`
      : `${incidencePhrase(string, context.family) ?? stringPhrase(string, context.family)} = +1`;
  return { string, steps, name: declared?.name, text, members };
}

/** One side's relations, multiplied out on the other. */
interface Side {
  readonly count: number;
  readonly kept: number;
  readonly signBreak: SignBreak | undefined;
  readonly laws: ForcedLaw[];
  readonly evidence: AllSizes[];
}

function oneSide(
  side: 'left' | 'right',
  frame: Frame,
  all: readonly Item[],
  rules: readonly DictionaryRule[],
  period: Steps,
  context: Context,
  budget: Budget,
): Side {
  const other = side === 'left' ? 'right' : 'left';
  const vectors = all.map((i) => frame.toVector(i[side]));
  const module = new LaurentModule(vectors, frame.dimension, 2 * frame.count, budget);
  const laws: ForcedLaw[] = [];
  const evidence: AllSizes[] = [];
  let kept = 0;
  let signBreak: SignBreak | undefined;
  const syzygies = module.syzygies();
  for (const syzygy of syzygies) {
    const proof = module.verify(syzygy, zeroVector(2 * frame.count));
    if (proof) evidence.push(proof);
    const members = membersOf(syzygy, all, period);
    const [own, image] = [productOf(members, rules, side), productOf(members, rules, other)];
    const forced: LocalString = { phase: toPhase(image.phase - own.phase), factors: image.factors };
    if (forced.factors.length > 0) laws.push(forcedLaw(forced, period, members, context));
    else if (forced.phase === 0) kept++;
    else {
      const [leftPhase, rightPhase]: [Phase, Phase] =
        side === 'left' ? [own.phase, image.phase] : [image.phase, own.phase];
      signBreak ??= { members: members.map((m) => ({ rule: m.generator, by: m.by })), leftPhase, rightPhase };
    }
  }
  return { count: syzygies.length, kept, signBreak, laws, evidence };
}

/**
 * Local relations of the rules that are translated everywhere, from the syzygies of their Laurent vectors over F2 (J. Haah, Commun. Math.
 * Phys. 324, 351 (2013), section 4), with the signs of the products. Signs multiply, so a generating set decides all where commutation is kept.
 * Undefined where the budget ends before the set is complete.
 */
export function localRelations(
  declaration: DictionaryDeclaration,
  context: Context,
  budget: Budget,
): LocalRelations | undefined {
  const { rules, from, to } = declaration;
  const moving = rules.filter((r) => r.steps.every((m) => m > 0));
  const period = moving.reduce<number[]>(
    (all, r) => all.map((m, d) => lcm(m, r.steps[d] ?? 1)),
    context.family.vectors.map(() => 1),
  );
  const all = items(rules, period);
  try {
    const left = oneSide('left', newFrame(slotsOf(context, from), period), all, rules, period, context, budget);
    const right = oneSide('right', newFrame(slotsOf(context, to), period), all, rules, period, context, budget);
    return {
      left: left.count,
      right: right.count,
      kept: left.kept,
      signBreak: left.signBreak ?? right.signBreak,
      rightLaws: left.laws,
      leftLaws: right.laws,
      evidence: [...left.evidence, ...right.evidence],
    };
  } catch (error) {
    if (error instanceof BudgetSpent) return undefined;
    throw error;
  }
}
