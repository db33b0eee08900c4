import { Coefficient } from '../algebra/numbers/coefficient.ts';
import { canonicalExtended, extendedKey } from '../algebra/pauli/extended.ts';
import { multiplyStrings, translateString } from '../algebra/pauli/string.ts';
import type { Extended, LocalString, Operator, Pauli } from '../algebra/pauli/types.ts';
import type { MapValue, Outcome, Refusal, Value, Values } from '../language/values.ts';
import type { Cell } from '../lattice/cells.ts';
import { BudgetSpent, newBudget, type Budget } from '../limits.ts';
import { lawsOf } from './context.ts';

/** What a map makes of one thing that the other side may ask about. Everything at one place: nothing here is summed over the lattice. */
export interface ImageRow {
  readonly what: 'spin' | 'operator' | 'law' | 'symmetry';
  /** Name of what is declared; of a spin, its species and matrix: `s^z`. */
  readonly name: string;
  readonly left: Operator;
  readonly right: Operator | undefined;
  /** Name of the declared symmetry that the image is. */
  readonly known: string | undefined;
  readonly refusal: Refusal | undefined;
  /** Of what has no image alone: two copies some cells apart that have one, the string whose ends they are. */
  readonly pair: { readonly left: Operator; readonly right: Operator } | undefined;
  readonly notes: readonly string[];
}

/** Operations for one row: a row that takes more says so. What was declared by name may take longer than what every map is asked. */
const operationsPerRow = { spin: 20_000, operator: 100_000, law: 100_000, symmetry: 100_000 } as const;
/** Distance in unit cells of the two copies of a charged operator. */
const apart = 3;

/** A string at its place, as an operator. */
const pinned = (string: LocalString, dimension: number): Operator => ({
  families: [{ coefficient: Coefficient.one, string, steps: Array<number>(dimension).fill(0), needs: [] }],
  extended: [],
});
const whole = (extended: Extended): Operator => ({
  families: [],
  extended: [{ coefficient: Coefficient.one, extended }],
});

/** The string that an operator at one place is; undefined for sums. */
function onlyString(operator: Operator): LocalString | undefined {
  const [family, ...more] = operator.families;
  return family && more.length === 0 && operator.extended.length === 0 && family.steps.every((m) => m === 0)
    ? family.string
    : undefined;
}

/** Kinds of map whose cautions speak of one operator. */
const perOperator: ReadonlySet<MapValue['declaration']['kind']> = new Set(['states', 'gauge']);

type Subject = Pick<ImageRow, 'what' | 'name' | 'left'>;

/** Names of the species that a map takes: of a circuit those that its gates touch. */
const taken = ({ map }: MapValue): readonly string[] => (map.from.length > 0 ? map.from : map.to);

const speciesOfOperator = (operator: Operator): Set<string> =>
  new Set([
    ...operator.families.flatMap((f) => f.string.factors.map((x) => x.species)),
    ...operator.extended.flatMap((t) => t.extended.parts.flatMap((p) => p.string.factors.map((x) => x.species))),
  ]);

/** X and Z of each spin, at unit cell 0. */
function spins(names: readonly string[], values: Values, dimension: number): Subject[] {
  return names.flatMap((name) => {
    const value = values.find(name);
    if (value?.what !== 'spins') return [];
    return value.classes.flatMap((index) =>
      (['x', 'z'] as const).map((pauli: Pauli): Subject => {
        const cell: Cell = { kind: value.kind, index, offset: Array<number>(dimension).fill(0) };
        return {
          what: 'spin',
          name: `${name}^${pauli}`,
          left: pinned({ phase: 0, factors: [{ species: name, cell, pauli }] }, dimension),
        };
      }),
    );
  });
}

function subjectsOf(value: Value, dimension: number): Subject[] {
  switch (value.what) {
    case 'operator':
      return [{ what: 'operator', name: value.name, left: value.operator }];
    case 'symmetry':
      return [{ what: 'symmetry', name: value.name, left: whole(value.extended) }];
    case 'law':
      return value.families.map((f) => ({ what: 'law', name: value.name, left: pinned(f.string, dimension) }));
    default:
      return [];
  }
}

/** Image of an operator whose terms may be of unbounded support. */
function imageOf({ map }: MapValue, { families, extended }: Operator, budget: Budget): Outcome<Operator> {
  const local = map.image({ families, extended: [] }, budget);
  if (!local.ok) return local;
  const terms: Operator['extended'][number][] = [...local.value.extended];
  for (const term of extended) {
    const image = map.imageExtended(term.extended, budget);
    if (!image.ok) return image;
    terms.push({ coefficient: term.coefficient, extended: image.value });
  }
  return { ok: true, value: { families: local.value.families, extended: terms } };
}

/** Two copies of a charged string along the first direction in which the pair has an image. */
function pairOf(value: MapValue, string: LocalString, dimension: number, budget: Budget): ImageRow['pair'] {
  for (let d = 0; d < dimension; d++) {
    const by = Array.from({ length: dimension }, (_, k) => (k === d ? apart : 0));
    const left = pinned(multiplyStrings(string, translateString(string, by)), dimension);
    const right = imageOf(value, left, budget);
    if (right.ok) return { left, right: right.value };
  }
  return undefined;
}

function knownAs(image: Operator, values: Values): string | undefined {
  const [term] = image.extended;
  if (!term || image.extended.length > 1 || image.families.length > 0 || !term.coefficient.isOne()) return undefined;
  const key = extendedKey(canonicalExtended(term.extended, { open: false }));
  const found = [...values.all.values()].find(
    (value) => value.what === 'symmetry' && extendedKey(canonicalExtended(value.extended, { open: false })) === key,
  );
  return found?.name;
}

function rowOf(value: MapValue, subject: Subject, values: Values, dimension: number): ImageRow {
  const budget = newBudget(operationsPerRow[subject.what], 'operations of one image');
  const none = { right: undefined, known: undefined, pair: undefined, notes: [] };
  try {
    const image = imageOf(value, subject.left, budget);
    if (!image.ok) {
      const string = onlyString(subject.left);
      const pair = string && string.factors.length > 0 ? pairOf(value, string, dimension, budget) : undefined;
      return { ...subject, ...none, refusal: image.refusal, pair };
    }
    // What leaves a state map's states, or the path that a field takes, belongs to each operator; what holds of the map as a whole its claims say.
    const notes = perOperator.has(value.declaration.kind) ? value.map.cautions(subject.left, budget) : [];
    return {
      ...subject,
      right: image.value,
      known: knownAs(image.value, values),
      refusal: undefined,
      pair: undefined,
      notes,
    };
  } catch (error) {
    if (!(error instanceof BudgetSpent)) throw error;
    const way = subject.what === 'spin' ? '; declare an operator for it to have more spent on it' : '';
    const refusal = { reason: `not decided: ${error.limit}${way}`, term: undefined, symmetry: undefined };
    return { ...subject, ...none, refusal };
  }
}

const known = new WeakMap<MapValue, Map<Value | string, readonly ImageRow[]>>();

/**
 * The table of images of a map: each spin of the species it takes, and each declared operator, law and symmetry on them; what has no
 * image comes with the reason and, where two copies have one, with the string whose ends they are. Rows are kept while map and subject stay the same.
 */
export function imagesOf(value: MapValue, values: Values): readonly ImageRow[] {
  const dimension = values.lattice?.family.dimension;
  if (dimension === undefined) return [];
  const rows = known.get(value) ?? new Map<Value | string, readonly ImageRow[]>();
  known.set(value, rows);
  const names = taken(value);
  const kept = (key: Value | string, subjects: () => readonly Subject[]): readonly ImageRow[] => {
    const before = rows.get(key);
    if (before) return before;
    const made = subjects()
      .filter(({ left }) => {
        const own = [...speciesOfOperator(left)];
        // what already holds the other side's species is none of its operators
        return (
          own.some((name) => names.includes(name)) &&
          own.every((name) => names.includes(name) || !value.map.to.includes(name))
        );
      })
      .map((subject) => rowOf(value, subject, values, dimension));
    rows.set(key, made);
    return made;
  };
  const own = new Set([...value.map.laws.values()].map((law) => law.name));
  const laws = lawsOf(values).filter((law) => !values.all.has(law.name) && !own.has(law.name));
  return [
    ...kept('spins', () => spins(names, values, dimension)),
    ...[...values.all.values(), ...laws].flatMap((one) => kept(one, () => subjectsOf(one, dimension))),
  ];
}
