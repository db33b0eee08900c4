import { Coefficient } from '../algebra/numbers/coefficient.ts';
import { canonicalExtended } from '../algebra/pauli/extended.ts';
import { collect } from '../algebra/pauli/family.ts';
import { oddShifts } from '../algebra/pauli/overlaps.ts';
import { multiplyStrings, newString, toPhase, translateString } from '../algebra/pauli/string.ts';
import type { Extended, Factor, LocalString, Operator, ProductPart } from '../algebra/pauli/types.ts';
import { shifted } from '../lattice/cells.ts';
import type { Budget } from '../limits.ts';
import type { LawFamily, LawValue, MapDeclaration, OperatorMap, Outcome } from '../language/values.ts';
import { circuitMap, inverseCircuit } from './circuit.ts';
import type { Context } from './context.ts';
import { dictionaryMap } from './dictionary/dictionary.ts';
import { stringPhrase } from './phrases.ts';
import { allowed, refused } from './refusals.ts';
import { fixedPauli, ownSpins, type SolvingDeclaration } from './solving.ts';
import { inverseStates } from './states/isometry.ts';
import { stateMap } from './states/state-map.ts';
import { inSteps, refined, residues } from './steps.ts';

type Then = Extract<MapDeclaration, { kind: 'then' }>;
type Inverse = Extract<MapDeclaration, { kind: 'inverse' }>;
type Gauge = Extract<MapDeclaration, { kind: 'gauge' }>;

/**
 * What a law becomes under a map: each of its strings goes to its image, with the sign kept. Strings that have no single Pauli string as their
 * image, or none but ±1, are no law any more and are left out.
 */
function carried(law: LawValue, map: OperatorMap, budget: Budget): LawValue {
  const families = law.families.flatMap((f): LawFamily[] => {
    const still = f.steps.map(() => 0);
    const image = map.image(
      { families: [{ coefficient: Coefficient.one, string: f.string, steps: still, needs: f.needs }], extended: [] },
      budget,
    );
    if (!image.ok) return [];
    const [only, ...more] = image.value.families;
    const sign = only?.coefficient.isOne() ? 0 : only?.coefficient.neg().isOne() ? 2 : undefined;
    if (!only || more.length > 0 || sign === undefined || only.string.factors.length === 0) return [];
    return [{ ...f, string: { phase: toPhase(only.string.phase + sign), factors: only.string.factors } }];
  });
  return { ...law, families };
}

/** Laws of both maps; where both declare one by the same name with the same value, it holds the strings of both. */
function joinedLaws(
  first: ReadonlyMap<string, LawValue>,
  second: ReadonlyMap<string, LawValue>,
): ReadonlyMap<string, LawValue> {
  const all = new Map(first);
  for (const [name, law] of second) {
    const own = all.get(name);
    all.set(
      name,
      own && own.value === law.value && own.parameter.kind === law.parameter.kind
        ? { ...law, families: [...own.families, ...law.families] }
        : law,
    );
  }
  return new Map([...all].filter(([, law]) => law.families.length > 0));
}

/** `A then B`: A acts first. Laws of B hold, and those of A as B carries them; so do the cautions of both. */
export function composedMap({ first, second }: Then, context: Context, budget: Budget): OperatorMap {
  const after = <T>(outcome: Outcome<T>, next: (value: T) => Outcome<T>): Outcome<T> =>
    outcome.ok ? next(outcome.value) : outcome;
  const kept = new Map([...first.map.laws].map(([name, law]) => [name, carried(law, second.map, budget)]));
  const laws = new Map(
    [...joinedLaws(kept, second.map.laws)].map(([name, law]) => [name, { ...law, name: `${context.name}.${name}` }]),
  );
  return {
    kind: 'then',
    from: first.map.from,
    to: [...new Set([...first.map.to.filter((s) => !second.map.from.includes(s)), ...second.map.to])],
    image: (operator, spend) => after(first.map.image(operator, spend), (o) => second.map.image(o, spend)),
    imageExtended: (extended, spend) =>
      after(first.map.imageExtended(extended, spend), (e) => second.map.imageExtended(e, spend)),
    laws,
    cautions(operator, spend) {
      const image = first.map.image(operator, spend);
      return [...first.map.cautions(operator, spend), ...(image.ok ? second.map.cautions(image.value, spend) : [])];
    },
  };
}

/**
 * `inverse A`, where it exists: a circuit's inverse gates in reverse; a dictionary with its sides exchanged (it holds modulo the same
 * relations); a state map whose images fill the target block; of a composition the inverses, last first; of gauging and of solving what their docstrings say.
 * Throws MapRefused where there is none.
 */
export function invertedMap({ of }: Inverse, context: Context, budget: Budget): OperatorMap {
  return { ...inverseOf(of.declaration, context, budget), kind: 'inverse' };
}

function inverseOf(declaration: MapDeclaration, context: Context, budget: Budget): OperatorMap {
  switch (declaration.kind) {
    case 'circuit':
      return circuitMap(inverseCircuit(declaration), context, budget);
    case 'dictionary':
      return dictionaryMap(
        {
          kind: 'dictionary',
          from: declaration.to,
          to: declaration.from,
          rules: declaration.rules.map((r) => ({
            ...r,
            left: r.right,
            right: r.left,
            text: { left: r.text.right, right: r.text.left },
          })),
        },
        context,
      );
    case 'states':
      return stateMap(inverseStates(declaration), context);
    case 'then': {
      const [first, second] = [
        inverseOf(declaration.second.declaration, context, budget),
        inverseOf(declaration.first.declaration, context, budget),
      ];
      const wrap = (map: OperatorMap, of: Then['first']) => ({ ...of, map });
      return composedMap(
        {
          kind: 'then',
          first: wrap(first, declaration.second),
          second: wrap(second, declaration.first),
        },
        context,
        budget,
      );
    }
    case 'inverse':
      return declaration.of.map;
    case 'gauge':
      return ungauging(declaration, context);
    case 'solve':
      return restoring(declaration, context);
  }
}

/** A map given by what it does to one string, with the periods on which it is the same everywhere. */
function stringwise(
  kind: OperatorMap['kind'],
  sides: { readonly from: readonly string[]; readonly to: readonly string[] },
  periods: readonly (readonly number[])[],
  one: (string: LocalString) => Outcome<LocalString>,
  cautions: readonly string[],
  context: Context,
): OperatorMap {
  const { open } = context;
  const part = (p: ProductPart): Outcome<ProductPart[]> => {
    if (p.string.factors.length === 0) return allowed([p]);
    const steps = refined(p.steps, periods);
    const out: ProductPart[] = [];
    for (const by of residues(p.steps, steps)) {
      const image = one(translateString(p.string, by));
      if (!image.ok) return image;
      out.push({ string: image.value, steps, needs: p.needs.map((c) => shifted(c, by)) });
    }
    return allowed(out);
  };
  const imageExtended = (extended: Extended, budget: Budget): Outcome<Extended> => {
    const parts: ProductPart[] = [];
    for (const p of extended.parts) {
      const image = part(p);
      if (!image.ok) return refused(image.refusal.reason, extended, image.refusal.symmetry);
      parts.push(...image.value);
    }
    return allowed(canonicalExtended({ phase: extended.phase, parts }, { open, budget }));
  };
  return {
    kind,
    ...sides,
    image(operator, budget) {
      const out: Operator[] = [];
      for (const f of operator.families) {
        const image = part(f);
        if (!image.ok) return image;
        out.push({ families: image.value.map((p) => ({ ...p, coefficient: f.coefficient })), extended: [] });
      }
      for (const t of operator.extended) {
        const image = imageExtended(t.extended, budget);
        if (!image.ok) return image;
        out.push({ families: [], extended: [{ coefficient: t.coefficient, extended: image.value }] });
      }
      return allowed(collect(out, { open, budget }));
    },
    imageExtended,
    laws: new Map(),
    cautions: () => cautions,
  };
}

/**
 * Inverse of minimal coupling: a term that obeys the law and holds only g^z loses its field. It undoes gauging where every flux and every
 * holonomy of the field is +1; a term with g^x or g^y, an electric field, comes from no term before gauging and is refused.
 */
function ungauging({ symmetry, gauge }: Gauge, context: Context): OperatorMap {
  const one = (string: LocalString): Outcome<LocalString> => {
    const field = string.factors.find((f) => f.species === gauge.name && f.pauli !== 'z');
    if (field)
      return refused(
        `${stringPhrase(string, context.family)} holds an electric field of ${gauge.name}; it comes from no term before gauging`,
        string,
      );
    const rest = { phase: string.phase, factors: string.factors.filter((f) => f.species !== gauge.name) };
    return allowed(rest);
  };
  const matter = [...new Set(symmetry.extended.parts.flatMap((p) => p.string.factors.map((f) => f.species)))];
  return stringwise(
    'gauge',
    { from: [...matter, gauge.name], to: matter },
    [],
    one,
    [`holds where every flux and holonomy of ${gauge.name}^z is +1`],
    context,
  );
}

/**
 * Inverse of the unitary gauge: an operator of the remaining spins gains, at each cell whose law it breaks, the matrix of the removed spin
 * that was set to 1. The result commutes with the law, and products are kept, since these matrices commute.
 */
function restoring(declaration: SolvingDeclaration, context: Context): OperatorMap {
  const { law, species } = declaration;
  const solved = ownSpins(declaration);
  const one = (string: LocalString): Outcome<LocalString> => {
    if (string.factors.some((f) => f.species === species.name))
      return refused(`${stringPhrase(string, context.family)} already holds ${species.name}`, string);
    const restored = solved.flatMap(({ law: f, own }) =>
      oddShifts(string, f.string)
        .filter((by) => inSteps(by, f.steps))
        .map((by): Factor => ({ species: species.name, cell: shifted(own.cell, by), pauli: fixedPauli(own.pauli) })),
    );
    return allowed(multiplyStrings(string, newString(restored)));
  };
  const others = [...new Set(law.families.flatMap((f) => f.string.factors.map((x) => x.species)))].filter(
    (n) => n !== species.name,
  );
  return stringwise(
    'solve',
    { from: others, to: [species.name, ...others] },
    solved.map((s) => s.law.steps),
    one,
    [`stands for the sector ${law.name} = ${law.value === 1 ? '+1' : '-1'}`],
    context,
  );
}
