import { oddShifts } from '../../algebra/pauli/overlaps.ts';
import { asExtended, isOrderFree } from '../../algebra/pauli/extended.ts';
import type { Extended, LocalString } from '../../algebra/pauli/types.ts';
import type { Budget } from '../../limits.ts';
import type { DictionaryRule, LawFamily, LawValue, Refusal } from '../../language/values.ts';
import { speciesOf, type Context } from '../context.ts';
import { extendedPhrase } from '../phrases.ts';
import { inSteps } from '../steps.ts';
import { anticommutesWith, charge, generatorCommutes, type Slot } from './charges.ts';
import { generatorsOf, isExtended, translateExtended } from './decompose.ts';

/** All classes of spins of some species. */
export function slotsOf(context: Context, species: Iterable<string>): Slot[] {
  return [...species].flatMap((name) => {
    const value = speciesOf(context, name);
    return (value?.classes ?? []).map((index): Slot => ({ species: name, kind: value?.kind ?? 'vertices', index }));
  });
}

/** Whether a candidate commutes with every left side, global ones included. */
function respects(candidate: Extended, rules: readonly DictionaryRule[], budget: Budget): boolean {
  return (
    generatorsOf(rules).every((g) => generatorCommutes(g, candidate)) &&
    rules.every(
      (r) => !isExtended(r.left) || isOrderFree({ phase: 0, parts: [...candidate.parts, ...r.left.parts] }, budget),
    )
  );
}

/** The instance of a law that anticommutes with a term, if any does. */
function lawAt(term: LocalString, law: LawFamily): Extended | undefined {
  const by = oddShifts(term, law.string).find((shift) => inSteps(shift, law.steps));
  return by && translateExtended(asExtended({ phase: 0, factors: law.string.factors }), by);
}

/**
 * A symmetry of all left sides under which a term is charged: a declared one where there is one, else one found by elimination. It
 * proves that the term lies outside the algebra that the left sides generate. `familiar`: only whole-lattice ones are searched for. Undefined when none is found.
 */
export function chargedUnder(
  term: LocalString,
  rules: readonly DictionaryRule[],
  from: readonly string[],
  context: Context,
  search: 'familiar' | 'all',
  budget: Budget,
): Refusal['symmetry'] {
  for (const value of context.values.all.values()) {
    if (value.what === 'symmetry' && anticommutesWith(term, value.extended) && respects(value.extended, rules, budget))
      return { text: `${value.name} = ${extendedPhrase(value.extended, context.family)}`, extended: value.extended };
    const law = value.what === 'law' ? declaredLaw(term, value, rules, budget) : undefined;
    if (law) return { text: `${value.name} = ${extendedPhrase(law, context.family)}`, extended: law };
  }
  const found = charge(term, generatorsOf(rules), slotsOf(context, from), search, budget);
  if (!found || !respects(found, rules, budget)) return undefined;
  return { text: extendedPhrase(found, context.family), extended: found };
}

function declaredLaw(
  term: LocalString,
  law: LawValue,
  rules: readonly DictionaryRule[],
  budget: Budget,
): Extended | undefined {
  for (const f of law.families) {
    const at = lawAt(term, f);
    if (at && respects(at, rules, budget)) return at;
  }
  return undefined;
}
