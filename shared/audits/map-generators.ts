import { Coefficient } from '../algebra/numbers/coefficient.ts';
import { newString, toPhase, translateString } from '../algebra/pauli/string.ts';
import type { Extended, Factor, LocalString, Pauli, Steps } from '../algebra/pauli/types.ts';
import { mapPeriod } from '../language/calls.ts';
import type { DictionaryRule, MapDeclaration, MapValue, Values } from '../language/values.ts';
import { cellKey, shifted, type Cell, type Lattice } from '../lattice/cells.ts';
import { around, boundary, incidence } from '../lattice/incidence.ts';
import { limits, newBudget, type Budget } from '../limits.ts';
import { isExtended, translateExtended } from '../maps/dictionary/decompose.ts';
import type { DictionaryDeclaration } from '../maps/dictionary/declaration.ts';
import { buildMap, MapRefused } from '../maps/registry.ts';
import { refined, residues } from '../maps/steps.ts';

export type Declared<K extends MapDeclaration['kind']> = Extract<MapDeclaration, { kind: K }>;

/** Any map as a dictionary: strings that generate what it acts on, with their images as the lines. */

/** Least common steps of several, pinned ones left out. */
function commonPeriod(all: readonly Steps[], dimension: number): number[] {
  const gcd = (a: number, b: number): number => (b === 0 ? a : gcd(b, a % b));
  const lcm = (a: number, b: number): number => (b === 0 ? a : (a / gcd(a, b)) * b);
  return all.reduce<number[]>(
    (period, steps) => period.map((m, d) => lcm(m, steps[d] ?? 0)),
    Array<number>(dimension).fill(1),
  );
}

/** Every offset within a period. */
function offsetsIn(period: readonly number[]): number[][] {
  return period.reduce<number[][]>(
    (heads, m) => heads.flatMap((head) => Array.from({ length: m }, (_, k) => [...head, k])),
    [[]],
  );
}

/** The image of one string at its place as a signed string; undefined where it is no single Pauli string. */
function imageString(value: MapValue, string: LocalString, budget: Budget): LocalString | string {
  const steps = (string.factors[0]?.cell.offset ?? []).map(() => 0);
  const image = value.map.image(
    { families: [{ coefficient: Coefficient.one, string, steps, needs: [] }], extended: [] },
    budget,
  );
  if (!image.ok) return image.refusal.reason;
  const [family, ...more] = image.value.families;
  if (!family || more.length > 0 || image.value.extended.length > 0) return 'its image is a sum, no Pauli string';
  const { coefficient, string: own } = family;
  const phase = [Coefficient.one, Coefficient.i, Coefficient.one.neg(), Coefficient.i.neg()].findIndex((c) =>
    c.equals(coefficient),
  );
  return phase < 0 ? 'its image is no Pauli string' : { phase: toPhase(own.phase + phase), factors: own.factors };
}

/** Generators with their images as the lines of a dictionary; a sentence where one has no image. */
function generated(value: MapValue, generators: readonly LocalString[], steps: Steps): DictionaryRule[] | string {
  const budget = newBudget(limits.operations, 'operations of the images of generators');
  const rules: DictionaryRule[] = [];
  for (const [rule, left] of generators.entries()) {
    const right = imageString(value, left, budget);
    if (typeof right === 'string') return right;
    rules.push({
      left,
      right,
      steps,
      needs: [],
      anchor: undefined,
      place: value.place,
      rule,
      text: { left: '', right: '' },
    });
  }
  return rules;
}

const single = (species: string, cell: Cell, pauli: Pauli): LocalString => ({
  phase: 0,
  factors: [{ species, cell, pauli }],
});

/** X and Z of every spin of the species, one for each class and residue. */
function singleSpins(names: readonly string[], values: Values, period: readonly number[]): LocalString[] {
  return names.flatMap((name) => {
    const value = values.find(name);
    if (value?.what !== 'spins') return [];
    return value.classes.flatMap((index) =>
      offsetsIn(period).flatMap((offset) => {
        const cell: Cell = { kind: value.kind, index, offset };
        return [single(name, cell, 'x'), single(name, cell, 'z')];
      }),
    );
  });
}

/** Factors of the symmetry at a cell. */
type OnSite = (cell: Cell) => Factor[];

/** Vertices that carry a charge and are reached from one through vertices that carry none. */
function nextCharged(start: Cell, declaration: Declared<'gauge'>, { family }: Lattice, at: OnSite): Cell[] {
  const { star } = incidence(family);
  const seen = new Set([cellKey(start)]);
  const found: Cell[] = [];
  let front = [start];
  // a charge farther than four links from all others moves by longer paths; the nearest ones generate
  for (let step = 0; step < 4 && front.length > 0; step++) {
    const next: Cell[] = [];
    for (const vertex of front)
      for (const link of around(star, vertex).filter((l) => declaration.gauge.classes.includes(l.index)))
        for (const end of boundary(family, link)) {
          if (seen.has(cellKey(end))) continue;
          seen.add(cellKey(end));
          (at(end).length > 0 ? found : next).push(end);
        }
    front = next;
  }
  return found;
}

/** Neutral strings that generate all neutral ones of the matter: P(v) factor by factor, charges turned within a vertex, and moved to the next. */
function neutralStrings(declaration: Declared<'gauge'>, lattice: Lattice, period: readonly number[]): LocalString[] {
  const onSite = declaration.symmetry.extended.parts.flatMap((part) =>
    part.string.factors.map((factor) => ({ factor, steps: part.steps })),
  );
  const at: OnSite = (cell) =>
    onSite.flatMap(({ factor, steps }) =>
      factor.cell.kind === cell.kind &&
      factor.cell.index === cell.index &&
      cell.offset.every((c, d) =>
        steps[d] ? (c - (factor.cell.offset[d] ?? 0)) % steps[d] === 0 : c === factor.cell.offset[d],
      )
        ? [{ species: factor.species, cell, pauli: factor.pauli }]
        : [],
    );
  const charged = (factor: Factor): Factor => ({ ...factor, pauli: factor.pauli === 'z' ? 'x' : 'z' });
  const out = new Map<string, LocalString>();
  const take = (...factors: Factor[]): void => {
    const string = newString(factors);
    const key = string.factors.map((f) => `${f.species}^${f.pauli}${cellKey(f.cell)}`).join(' ');
    if (!out.has(key)) out.set(key, string);
  };
  for (const index of lattice.family.vertices.keys())
    for (const offset of offsetsIn(period)) {
      const vertex: Cell = { kind: 'vertices', index, offset };
      const [first, ...more] = at(vertex);
      if (!first) continue;
      [first, ...more].forEach((factor) => take(factor));
      more.forEach((factor) => take(charged(first), charged(factor)));
      for (const other of nextCharged(vertex, declaration, lattice, at)) {
        const [partner] = at(other);
        // one of a pair and its reverse: both are translates of one another's product
        if (partner && cellKey(vertex) < cellKey(other)) take(charged(first), charged(partner));
        else if (partner) take(charged(partner), charged(first));
      }
    }
  return distinctOrbits([...out.values()], period);
}

/** One string of each translation orbit. */
function distinctOrbits(strings: readonly LocalString[], period: readonly number[]): LocalString[] {
  const seen = new Set<string>();
  return strings.filter((string) => {
    const [first] = string.factors;
    if (!first) return false;
    const home = first.cell.offset.map((c, d) => {
      const m = period[d] ?? 1;
      return Math.floor(c / m) * -m;
    });
    const key = translateString(string, home)
      .factors.map((f) => `${f.species}^${f.pauli}${cellKey(f.cell)}`)
      .join(' ');
    if (seen.has(key)) return false;
    seen.add(key);
    return true;
  });
}

const line = (
  left: DictionaryRule['left'],
  right: DictionaryRule['right'],
  steps: Steps,
  rule: number,
  value: MapValue,
): DictionaryRule => ({
  left,
  right,
  steps,
  needs: [],
  anchor: undefined,
  place: value.place,
  rule,
  text: { left: '', right: '' },
});

/** What commutes with the law that is solved: each remaining spin's X and Z, dressed by the removed spin, and the law, which is its value. */
function solvedLines(
  value: MapValue,
  declaration: Declared<'solve'>,
  values: Values,
  budget: Budget,
): DictionaryRule[] | string {
  const { law } = declaration;
  const { lattice } = values;
  if (!lattice) return 'there is no lattice';
  const period = commonPeriod(
    law.families.map((family) => family.steps),
    lattice.family.dimension,
  );
  const restore = buildMap({ kind: 'inverse', of: value }, values, budget, value.name);
  const back: MapValue = { ...value, map: restore };
  const rules: DictionaryRule[] = [];
  for (const right of singleSpins(value.map.to, values, period)) {
    const left = imageString(back, right, budget);
    if (typeof left === 'string') return left;
    rules.push(line(left, right, period, rules.length, value));
  }
  for (const family of law.families)
    rules.push(line(family.string, { phase: law.value === 1 ? 0 : 2, factors: [] }, family.steps, rules.length, value));
  return rules;
}

/** Lines carried on by a second map: their right sides, on every residue of its period. */
function carriedOn(
  rules: readonly DictionaryRule[],
  second: MapValue,
  dimension: number,
  budget: Budget,
): DictionaryRule[] | string {
  const period = mapPeriod(second, dimension);
  const out: DictionaryRule[] = [];
  for (const rule of rules) {
    const steps = refined(rule.steps, [period]);
    for (const by of residues(rule.steps, steps)) {
      const moved = isExtended(rule.right) ? translateExtended(rule.right, by) : translateString(rule.right, by);
      const right = isExtended(moved) ? imageExtended(second, moved, budget) : imageString(second, moved, budget);
      if (typeof right === 'string') return right;
      const left = isExtended(rule.left) ? translateExtended(rule.left, by) : translateString(rule.left, by);
      // a law that the second map has used up
      if (isOne(left) && isOne(right)) continue;
      out.push({ ...rule, left, right, steps, needs: rule.needs.map((cell) => shifted(cell, by)) });
    }
  }
  return out;
}

function imageExtended(value: MapValue, extended: Extended, budget: Budget): Extended | string {
  const image = value.map.imageExtended(extended, budget);
  return image.ok ? image.value : image.refusal.reason;
}

const isOne = (side: DictionaryRule['left']): boolean =>
  !isExtended(side) && side.factors.length === 0 && side.phase === 0;

const exchanged = (rules: readonly DictionaryRule[]): DictionaryRule[] =>
  rules.map((rule) => ({
    ...rule,
    left: rule.right,
    right: rule.left,
    text: { left: rule.text.right, right: rule.text.left },
  }));

/**
 * A map as lines of a dictionary: a set of strings that generate the operators it takes, each with its image. Compositions carry the lines of one
 * part through the other (a circuit first is undone on the left). A sentence where a generator has no single Pauli string as image, or the
 * kind (state maps) has no such lines.
 */
export function linesOf(value: MapValue, values: Values, budget: Budget): DictionaryDeclaration | string {
  const { declaration } = value;
  const { lattice } = values;
  if (!lattice) return 'there is no lattice';
  const { dimension } = lattice.family;
  const sides = (rules: DictionaryRule[] | string, from: readonly string[], to: readonly string[]) =>
    typeof rules === 'string' ? rules : { kind: 'dictionary' as const, from, to, rules };
  switch (declaration.kind) {
    case 'dictionary':
      return declaration;
    case 'circuit': {
      const period = commonPeriod(
        declaration.layers.flatMap((layer) => layer.gates.map((gate) => gate.steps)),
        dimension,
      );
      return sides(generated(value, singleSpins(value.map.to, values, period), period), value.map.to, value.map.to);
    }
    case 'gauge': {
      const period = commonPeriod(
        declaration.symmetry.extended.parts.map((part) => part.steps),
        dimension,
      );
      const neutral = generated(value, neutralStrings(declaration, lattice, period), period);
      if (typeof neutral === 'string') return neutral;
      // The Gauss law is 1 in the gauged model: a line of its own, with nothing on the left.
      const gauss = (value.map.laws.get('gauss')?.families ?? []).map((law, k) =>
        line({ phase: 0, factors: [] }, law.string, law.steps, neutral.length + k, value),
      );
      return sides([...neutral, ...gauss], value.map.from, value.map.to);
    }
    case 'solve':
      return sides(solvedLines(value, declaration, values, budget), value.map.from, value.map.to);
    case 'states':
      return 'a state map sends strings to sums';
    case 'inverse': {
      const of = linesOf(declaration.of, values, budget);
      return typeof of === 'string' ? of : sides(exchanged(of.rules), of.to, of.from);
    }
    case 'then': {
      const { first, second } = declaration;
      if (first.declaration.kind === 'circuit' && second.declaration.kind !== 'circuit') {
        const own = linesOf(second, values, budget);
        if (typeof own === 'string') return own;
        const undo: MapValue = {
          ...first,
          declaration: { kind: 'inverse', of: first },
          map: buildMap({ kind: 'inverse', of: first }, values, budget, first.name),
        };
        const left = carriedOn(exchanged(own.rules), undo, dimension, budget);
        const species = [...new Set([...own.from, ...first.map.to])];
        return typeof left === 'string' ? left : sides(exchanged(left), species, own.to);
      }
      const own = linesOf(first, values, budget);
      if (typeof own === 'string') return own;
      const rules = carriedOn(own.rules, second, dimension, budget);
      const taken = second.map.from;
      const to = new Set([...own.to.filter((name) => taken.length === 0 || !taken.includes(name)), ...second.map.to]);
      return sides(rules, own.from, [...to]);
    }
  }
}

/** The same, where what goes wrong on the way is a sentence too. */
export function linesOrWhy(value: MapValue, values: Values, budget: Budget): DictionaryDeclaration | string {
  try {
    return linesOf(value, values, budget);
  } catch (error) {
    if (error instanceof MapRefused) return error.message;
    throw error;
  }
}
