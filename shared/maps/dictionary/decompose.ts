import { monomials } from '../../algebra/f2/laurent.ts';
import { LaurentModule } from '../../algebra/f2/module.ts';
import { adjointExtended, asExtended, canonicalExtended, isOrderFree } from '../../algebra/pauli/extended.ts';
import { bodyKey, identityString, multiplyStrings, toPhase, translateString } from '../../algebra/pauli/string.ts';
import { newFrame, spinClasses } from '../../algebra/pauli/vector.ts';
import type { Extended, LocalString, Phase, ProductPart, Steps } from '../../algebra/pauli/types.ts';
import { shifted, type Offset } from '../../lattice/cells.ts';
import { BudgetSpent, newBudget, type Budget } from '../../limits.ts';
import type { DictionaryRule } from '../../language/values.ts';
import { contains, inSteps, lcm, minus, plus, refined, residues } from '../steps.ts';
import type { Generator, Use } from './coordinates.ts';
import { product } from './search.ts';

/** Steps that membership over the Laurent ring may take for one term. */
const moduleSteps = 4_000_000;

/** A term as a product: i^phase times the left sides of the rules, translated, in the order of `uses` (generator = number of the rule). */
export interface Decomposition {
  readonly phase: Phase;
  readonly uses: readonly Use[];
}

export const isExtended = (side: LocalString | Extended): side is Extended => 'parts' in side;

export const translateExtended = (e: Extended, by: Offset): Extended => ({
  phase: e.phase,
  parts: e.parts.map((p) => ({
    string: translateString(p.string, by),
    steps: p.steps,
    needs: p.needs.map((c) => shifted(c, by)),
  })),
});

/** The rules whose left sides are local, as generators; others get an empty string, which nothing matches. */
export const generatorsOf = (rules: readonly DictionaryRule[]): Generator[] =>
  rules.map((r) => ({ string: isExtended(r.left) ? identityString : r.left, steps: r.steps }));

/** The rule and translation whose left side is the term itself up to its phase. */
export function exactUse(term: LocalString, shift: Steps, rules: readonly DictionaryRule[]): Use | undefined {
  const [first] = term.factors;
  if (!first) return undefined;
  for (const [k, g] of generatorsOf(rules).entries()) {
    const own = g.string.factors[0];
    if (!own || g.string.factors.length !== term.factors.length || !contains(g.steps, shift)) continue;
    const by = minus(first.cell.offset, own.cell.offset);
    if (inSteps(by, g.steps) && bodyKey(translateString(g.string, by)) === bodyKey(term)) return { generator: k, by };
  }
  return undefined;
}

/** Product of the left sides (translated) of uses, in order. */
const leftProduct = (uses: readonly Use[], rules: readonly DictionaryRule[]): LocalString =>
  uses.reduce((all, u) => {
    const left = rules[u.generator]?.left;
    return left && !isExtended(left) ? multiplyStrings(all, translateString(left, u.by)) : all;
  }, identityString);

/**
 * Membership in the module that the left sides generate over the Laurent polynomials over F2: a product where there is one, `outside` where a
 * Gröbner basis shows that there is none, undefined where the budget ends or some rule does not move everywhere.
 */
function byModule(
  term: LocalString,
  rules: readonly DictionaryRule[],
  budget: Budget,
): readonly Use[] | 'outside' | undefined {
  const dimension = term.factors[0]?.cell.offset.length ?? 0;
  if (rules.some((r) => isExtended(r.left) || r.steps.some((m) => m === 0))) return undefined;
  const period = rules.reduce<number[]>(
    (all, r) => all.map((m, d) => lcm(m, r.steps[d] ?? 1)),
    Array<number>(dimension).fill(1),
  );
  const items = rules.flatMap((r, generator) =>
    isExtended(r.left)
      ? []
      : residues(r.steps, period).map((by) => ({ generator, by, string: translateString(r.left as LocalString, by) })),
  );
  const frame = newFrame(spinClasses([term, ...items.map((i) => i.string)]), period);
  try {
    const module = new LaurentModule(
      items.map((i) => frame.toVector(i.string)),
      dimension,
      2 * frame.count,
      budget,
    );
    const found = module.decompose(frame.toVector(term));
    if (!found.inside) return 'outside';
    return found.coefficients.flatMap((p, k) => {
      const item = items[k];
      return item
        ? monomials(p, dimension).map((e): Use => ({
            generator: item.generator,
            by: plus(
              item.by,
              e.map((c, d) => c * (period[d] ?? 1)),
            ),
          }))
        : [];
    });
  } catch (error) {
    if (error instanceof BudgetSpent) return undefined;
    throw error;
  }
}

/**
 * Writes a local string as a product of left sides on the infinite lattice: an exact left side first, else a product of fewest
 * generators, where the search ends (E. Cobanera, G. Ortiz, Z. Nussinov, Adv. Phys. 60, 679 (2011), section 3: bonds as generators), else any product that
 * membership over the Laurent ring gives. `shift`: the translations that the answer must share with the term. `outside`: shown to be no such product;
 * undefined: none was found.
 */
export function decompose(
  term: LocalString,
  shift: Steps,
  rules: readonly DictionaryRule[],
  budget: Budget,
): Decomposition | 'outside' | undefined {
  const own = exactUse(term, shift, rules);
  const searched = own
    ? [own]
    : product(
        term,
        generatorsOf(rules),
        shift,
        shift.map(() => 0),
        budget,
      );
  const found = searched ?? byModule(term, rules, newBudget(moduleSteps));
  if (!found || found === 'outside') return found;
  // the order that reads along the lattice: by rule, then by place
  const uses = [...found].sort((a, b) => a.generator - b.generator || before(a.by, b.by));
  return { phase: toPhase(term.phase - leftProduct(uses, rules).phase), uses };
}

const before = (a: Offset, b: Offset): number => {
  const d = a.findIndex((c, k) => c !== b[k]);
  return d < 0 ? 0 : (a[d] ?? 0) - (b[d] ?? 0);
};

/** One generator of a product along translations: what it multiplies to on the left and on the right. */
interface Along {
  readonly generator: Generator;
  readonly left: (by: Offset) => Extended;
  readonly right: (by: Offset) => Extended | undefined;
}

const pinnedDirections = (steps: Steps): string => steps.map((m) => (m === 0 ? '.' : '*')).join('');

/** The residues of a part on coarser steps, as one string for each translate by them. */
function partOn(part: ProductPart, coarse: Steps): LocalString {
  return residues(part.steps, coarse).reduce(
    (all, r) => multiplyStrings(all, translateString(part.string, r)),
    identityString,
  );
}

function along(rule: DictionaryRule, quotient: Steps): Along | undefined {
  const { left, right } = rule;
  if (!isExtended(left)) {
    const lefts = (by: Offset): Extended => ({
      phase: 0,
      parts: [{ string: translateString(left, by), steps: quotient, needs: rule.needs.map((c) => shifted(c, by)) }],
    });
    if (!contains(rule.steps, quotient) || !isOrderFree(lefts(quotient.map(() => 0)))) return undefined;
    return {
      generator: { string: left, steps: rule.steps },
      left: lefts,
      right: (by) =>
        isExtended(right)
          ? undefined
          : {
              phase: 0,
              parts: [
                { string: translateString(right, by), steps: quotient, needs: rule.needs.map((c) => shifted(c, by)) },
              ],
            },
    };
  }
  if (!left.parts.every((p) => pinnedDirections(p.steps) === pinnedDirections(quotient) && contains(p.steps, quotient)))
    return undefined;
  const string = left.parts.reduce((all, p) => multiplyStrings(all, partOn(p, quotient)), identityString);
  return {
    generator: { string, steps: quotient.map((m, d) => (m > 0 ? m : (rule.steps[d] ?? 0))) },
    left: (by) => translateExtended(left, by),
    right: (by) =>
      isExtended(right)
        ? translateExtended(right, by)
        : asExtended(
            translateString(right, by),
            rule.needs.map((c) => shifted(c, by)),
          ),
  };
}

/** Periods that a rule brings: its own, and those of a left side of unbounded support. */
const stepsOf = (rule: DictionaryRule): Steps[] =>
  isExtended(rule.left) ? rule.left.parts.map((p) => p.steps) : [rule.steps];

/** Parts that are translated along the same directions, on their common period. */
function groups(extended: Extended): { period: Steps; parts: readonly ProductPart[] }[] {
  const by = new Map<string, ProductPart[]>();
  for (const p of extended.parts) {
    const key = pinnedDirections(p.steps);
    by.set(key, [...(by.get(key) ?? []), p]);
  }
  return [...by.values()].map((parts) => ({
    parts,
    period: parts.reduce<number[]>(
      (all, p) => all.map((m, d) => lcm(m, p.steps[d] ?? 0)),
      [...(parts[0]?.steps ?? [])],
    ),
  }));
}

/**
 * Image of a product of unbounded support under a dictionary: each group of parts is decomposed modulo the translations along which it
 * is multiplied up; global left sides count as generators and come first. Undefined where some group is no such product.
 * Signs are exact: what the left sides' product differs by from the string, for each translate and once, is carried over.
 */
export function extendedImage(
  extended: Extended,
  rules: readonly DictionaryRule[],
  open: boolean,
  budget: Budget,
): Extended | undefined {
  const whole = canonicalExtended(extended, { open: false, budget });
  const bare = whole.parts.filter((p) => p.string.factors.length === 0);
  let image: Extended = { phase: whole.phase, parts: bare };
  for (const { period, parts } of groups({ phase: 0, parts: whole.parts.filter((p) => p.string.factors.length > 0) })) {
    const quotient = refined(period, rules.flatMap(stepsOf));
    const isGlobal = (r: DictionaryRule) => isExtended(r.left);
    const candidates = [...rules.filter(isGlobal), ...rules.filter((r) => !isGlobal(r))].flatMap(
      (r) => along(r, quotient) ?? [],
    );
    const target = parts.reduce((all, p) => multiplyStrings(all, partOn(p, quotient)), identityString);
    const uses = product(
      target,
      candidates.map((c) => c.generator),
      quotient.map(() => 0),
      quotient,
      budget,
    );
    if (!uses) return undefined;
    const lefts = uses.map((u) => candidates[u.generator]?.left(u.by) ?? { phase: 0 as const, parts: [] });
    const rights = uses.map((u) => candidates[u.generator]?.right(u.by));
    const difference = canonicalExtended(
      [{ phase: 0 as const, parts }, ...lefts.reverse().map(adjointExtended)].reduce(join),
      { open: false, budget },
    );
    if (difference.parts.some((p) => p.string.factors.length > 0)) return undefined;
    image = join(image, difference);
    for (const r of rights) {
      if (!r) return undefined;
      image = join(image, r);
    }
  }
  return canonicalExtended(image, { open, budget });
}

const join = (a: Extended, b: Extended): Extended => ({
  phase: toPhase(a.phase + b.phase),
  parts: [...a.parts, ...b.parts],
});
