import { familyKey } from '../algebra/pauli/family.ts';
import { extendedKey } from '../algebra/pauli/extended.ts';
import { bodyKey } from '../algebra/pauli/string.ts';
import type { Extended, Factor, Family, Operator, Steps } from '../algebra/pauli/types.ts';
import type { Kind, ReportModel, ReportTerm } from '../contracts/report.ts';
import { newBudget } from '../limits.ts';
import type { LawFamily, ModelValue, Values } from '../language/values.ts';
import { cellWord } from '../lattice/cells.ts';
import type { TypesetContext } from '../typeset/context.ts';
import {
  gather,
  gatheredSpoken,
  gatheredTex,
  inSourceOrder,
  operatorSpoken,
  sumTex,
  type Gathered,
} from '../typeset/operators.ts';
import { rolesOf } from '../typeset/roles.ts';

/** Models as the report has them: families one by one, gathered sums, roles, and which sum of the origin each comes from. */

export type Orbit = ReportTerm['orbit'];

export const orbitOf = (factors: readonly Factor[], context: TypesetContext): Orbit =>
  factors.map((factor) => ({
    species: factor.species,
    cell: cellWord(context.family, factor.cell),
    offset: [...factor.cell.offset],
    pauli: factor.pauli,
  }));

/** Strings of a product, one after another, for the plate. */
export const supportsOf = (extended: Extended, context: TypesetContext): { orbit: Orbit; steps: number[] }[] =>
  extended.parts.map((part) => ({ orbit: orbitOf(part.string.factors, context), steps: [...part.steps] }));

const isConstant = (family: Family): boolean => family.string.factors.length === 0;

/** Body and steps of a family: what is left when its coefficient is forgotten. */
const bodyOf = (family: Family): string => `${bodyKey(family.string)}/${family.steps.join(',')}`;

/** The constant of an operator as text: per unit cell and absolute parts apart. */
function constantText(operator: Operator): string {
  const parts = operator.families.filter(isConstant).map((family) => {
    const text = family.coefficient.toText();
    return family.steps.some((m: Steps[number]) => m > 0) ? `${text} for each cell` : text;
  });
  return parts.length === 0 ? '0' : parts.join(' + ');
}

/** Constants as sums of their own: the page shows them apart, a formula to paste elsewhere must not lose them. */
const constantSums = (operator: Operator, context: TypesetContext): Gathered[] =>
  gather(operator, context).filter((sum) => sum.members.every((member) => isConstantAt(operator, member)));

const operatorKey = (operator: Operator): string =>
  [
    ...operator.families.map(familyKey),
    ...operator.extended.map((term) => `${term.coefficient.key()} ${extendedKey(term.extended)}`),
  ].join('\n');

const keys = new WeakMap<ModelValue, string>();
/** Equal for models that are the same operator. */
function modelKey(model: ModelValue): string {
  const key = keys.get(model) ?? operatorKey(model.operator);
  keys.set(model, key);
  return key;
}

const byOperator = new WeakMap<Values, ReadonlyMap<string, ModelValue>>();
/** The first model that is each operator. */
function modelsByOperator(values: Values): ReadonlyMap<string, ModelValue> {
  const known = byOperator.get(values);
  if (known) return known;
  const all = new Map<string, ModelValue>();
  for (const value of values.all.values())
    if (value.what === 'model' && !all.has(modelKey(value))) all.set(modelKey(value), value);
  byOperator.set(values, all);
  return all;
}

/**
 * Pieces of a model's source in order; a piece that is an earlier model by name stands for that model's own sums, in the
 * order in which that model is set.
 */
function piecesInOrder(model: ModelValue, values: Values, context: TypesetContext): Operator[] {
  const known = modelsByOperator(values);
  return model.pieces.flatMap(({ operator }) => {
    const named = known.get(operatorKey(operator));
    // Only one declared before: two models may be equal.
    if (!named || named.place.line >= model.place.line) return [operator];
    return sumsOf(named, values, context).sums.map(({ members }) => ({
      families: members.flatMap((member) => named.operator.families[member] ?? []),
      extended: members.flatMap((member) => named.operator.extended[member - named.operator.families.length] ?? []),
    }));
  });
}

/** Which gathered sum of this model each gathered sum of the origin turns into. */
function pairsWith(
  origin: { readonly operator: Operator; readonly sums: readonly Gathered[] },
  own: { readonly operator: Operator; readonly sums: readonly Gathered[] },
  values: Values,
  mapName: string,
): [number, number][] {
  const value = values.find(mapName);
  if (value?.what !== 'map') return [];
  const groupOf = new Map<string, number>();
  own.sums.forEach((sum, k) => {
    for (const member of sum.members) {
      const family = own.operator.families[member];
      if (family) groupOf.set(bodyOf(family), k);
    }
  });
  const budget = newBudget();
  return origin.sums.flatMap((sum, k) => {
    const families = sum.members.flatMap((member) => origin.operator.families[member] ?? []);
    const image = value.map.image({ families, extended: [] }, budget);
    if (!image.ok) return [];
    const targets = new Set(
      image.value.families.filter((f) => !isConstant(f)).flatMap((f) => groupOf.get(bodyOf(f)) ?? []),
    );
    return [...targets].map((target): [number, number] => [k, target]);
  });
}

/** Gathered sums of a model, constants left out, in the order of its source; of an image, in the order of its origin. */
function sumsOf(
  model: ModelValue,
  values: Values,
  context: TypesetContext,
): { sums: Gathered[]; image: ReportModel['image'] } {
  const all = gather(model.operator, context).filter(
    (sum) => !sum.members.every((m) => isConstantAt(model.operator, m)),
  );
  const ordered = inSourceOrder(model.operator, all, piecesInOrder(model, values, context));
  const { image } = model;
  const origin = image && values.find(image.of);
  if (!image || origin?.what !== 'model') return { sums: ordered, image: null };
  const from = sumsOf(origin, values, context);
  const pairs = pairsWith(
    { operator: origin.operator, sums: from.sums },
    { operator: model.operator, sums: ordered },
    values,
    image.map,
  );
  const first = (k: number): number =>
    Math.min(...pairs.filter(([, target]) => target === k).map(([source]) => source));
  const order = ordered.map((_, k) => k).sort((a, b) => first(a) - first(b) || a - b);
  const moved = new Map(order.map((old, now) => [old, now]));
  return {
    sums: order.flatMap((k) => ordered[k] ?? []),
    image: { map: image.map, of: image.of, pairs: pairs.map(([a, b]) => [a, moved.get(b) ?? b]) },
  };
}

const isConstantAt = (operator: Operator, member: number): boolean => {
  const family = operator.families[member];
  return family !== undefined && isConstant(family);
};

/** Place of the piece of source that a sum comes from. */
function placeOf(model: ModelValue, sum: Gathered): ReportModel['groups'][number]['place'] {
  const bodies = new Set(
    sum.members.flatMap((m) => (model.operator.families[m] ? [bodyKey(model.operator.families[m].string)] : [])),
  );
  const piece = model.pieces.find(({ operator }) =>
    operator.families.some((family) => bodies.has(bodyKey(family.string))),
  );
  return piece ? { line: piece.place.line, column: piece.place.column, length: piece.place.length } : null;
}

const signed = (sum: Gathered, style: 'page' | 'plain'): string => {
  const { sign, tex } = gatheredTex(sum, style);
  return `${sign === '-' ? '-' : ''}${tex}`;
};

function termsOf(
  model: ModelValue,
  sums: readonly Gathered[],
  roles: readonly Kind[],
  context: TypesetContext,
): ReportTerm[] {
  return sums.flatMap((sum, group) =>
    sum.members.map((member): ReportTerm => {
      const family = model.operator.families[member];
      const extended = model.operator.extended[member - model.operator.families.length];
      const alone =
        sum.members.length === 1
          ? sum
          : gather(
              family ? { families: [family], extended: [] } : { families: [], extended: extended ? [extended] : [] },
              context,
            )[0];
      const factors = family
        ? family.string.factors
        : (extended?.extended.parts.flatMap((part) => part.string.factors) ?? []);
      const steps = family ? family.steps : (extended?.extended.parts[0]?.steps ?? []);
      const coefficient = family?.coefficient ?? extended?.coefficient;
      return {
        coefficient: coefficient?.toText() ?? '0',
        tex: alone ? signed(alone, 'plain') : '0',
        kind: roles[member] ?? 'other',
        orbit: orbitOf(factors, context),
        steps: [...steps],
        spoken: alone ? gatheredSpoken(alone) : '',
        group,
        piece: member - model.operator.families.slice(0, member).filter(isConstant).length,
      };
    }),
  );
}

/** Kinds of cell by species, for roles. */
const kindsOf = (
  context: TypesetContext,
  names: ReadonlySet<string>,
): Map<string, 'vertices' | 'links' | 'plaquettes' | 'cubes'> =>
  new Map([...context.species].filter(([name]) => names.has(name)).map(([name, carrier]) => [name, carrier.kind]));

/** The page a model stands on: images and models of a gauge field on the right, spin models on the left. */
function languageOf(model: ModelValue, kinds: ReadonlyMap<string, string>): ReportModel['language'] {
  if (model.image) return 'gauge';
  return [...kinds.values()].some((kind) => kind !== 'vertices') ? 'gauge' : 'spin';
}

const laws = new WeakMap<Values, readonly LawFamily[]>();
/** Families of all laws, those that maps declare included. */
function lawsOf(values: Values): readonly LawFamily[] {
  const known = laws.get(values);
  if (known) return known;
  const all = [...values.all.values()];
  const found = [
    ...all.flatMap((value) => (value.what === 'law' ? value.families : [])),
    ...all.flatMap((value) =>
      value.what === 'map' ? [...value.map.laws.values()].flatMap((law) => law.families) : [],
    ),
  ];
  laws.set(values, found);
  return found;
}

export function reportModel(model: ModelValue, values: Values, context: TypesetContext): ReportModel {
  const { sums, image } = sumsOf(model, values, context);
  const names = new Set(model.species);
  for (const family of model.operator.families) for (const factor of family.string.factors) names.add(factor.species);
  const kinds = kindsOf(context, names);
  const roles = rolesOf({
    family: context.family,
    operator: model.operator,
    species: kinds,
    laws: lawsOf(values),
  });
  const groups = sums.map((sum) => ({
    tex: signed(sum, 'page'),
    kind: roles[sum.members[0] ?? -1] ?? 'other',
    spoken: gatheredSpoken(sum),
    place: placeOf(model, sum),
  }));
  return {
    terms: termsOf(model, sums, roles, context),
    groups,
    tex: sumTex([...sums, ...constantSums(model.operator, context)], 'plain'),
    spoken: operatorSpoken(model.operator, context),
    constant: constantText(model.operator),
    line: model.place.line,
    species: [...names],
    language: languageOf(model, kinds),
    image,
  };
}
