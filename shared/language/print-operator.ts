import { phaseCoefficient } from '../algebra/pauli/collect.ts';
import type { ExtendedTerm, Factor, Family, Operator, ProductPart, Steps } from '../algebra/pauli/types.ts';
import { cellKey, sameCell, type Cell, type CellKind, type LatticeFamily } from '../lattice/cells.ts';
import { coordinateNames, geometryTable, type AroundFunction } from '../lattice/geometry.ts';
import type { ModelValue, Values } from './values.ts';

/**
 * Operators back to text of the language: evaluated on the same lattice, with the same species and couplings declared, the
 * text is that operator again (its canonical families are equal as data).
 */

const letters: Readonly<Record<CellKind, string>> = { vertices: 'v', links: 'l', plaquettes: 'p', cubes: 'c' };
/** Variables of the products inside a sum. */
const inner: Readonly<Record<CellKind, string>> = { vertices: 'u', links: 'k', plaquettes: 'q', cubes: 'd' };

/** How the class of a cell is named: `links.1`, the bare kind where it has one class; with conditions where no label is its own. */
interface Class {
  readonly words: string;
  /** What tells a bound cell of it from the others of these words: `k.a in vertices.A`. */
  readonly conditions: (variable: string) => readonly string[];
}

function classOf(family: LatticeFamily, { kind, index }: Cell): Class {
  const classes = family[kind];
  if (classes.length === 1) return { words: kind, conditions: () => [] };
  const labels = classes[index]?.labels ?? [];
  const own = labels.find((label) => classes.filter((c) => c.labels.includes(label)).length === 1);
  if (own !== undefined) return { words: `${kind}.${own}`, conditions: () => [] };
  const words = `${kind}.${labels[0] ?? ''}`;
  const link = kind === 'links' ? family.links[index] : undefined;
  if (!link) return { words, conditions: () => [] };
  const end = (which: 'a' | 'b') => (variable: string) =>
    `${variable}.${which} in ${classOf(family, link[which]).words}`;
  return { words, conditions: (variable) => [end('a')(variable), end('b')(variable)] };
}

const isNamed = (family: LatticeFamily, cell: Cell): boolean => classOf(family, cell).conditions('').length === 0;

const plus = (name: string, by: number): string =>
  by === 0 ? name : `${name} ${by > 0 ? '+' : '-'} ${String(Math.abs(by))}`;

/** Where cells are named from: a bound variable that moves by `steps`, or nothing for what stands still. */
interface Anchor {
  readonly cell: Cell;
  readonly variable: string;
  readonly steps: Steps;
}

/** A cell beside an anchor: by a shift where it is of the same class, else by its place; by its place alone without one. */
function cellText(cell: Cell, family: LatticeFamily, anchor: Anchor | undefined): string {
  if (!anchor) return `${classOf(family, cell).words}(${cell.offset.join(', ')})`;
  const by = cell.offset.map((c, d) => c - (anchor.cell.offset[d] ?? 0));
  if (cell.kind === anchor.cell.kind && cell.index === anchor.cell.index)
    return by.every((c) => c === 0) ? anchor.variable : `${anchor.variable} + (${by.join(', ')})`;
  return `${classOf(family, cell).words}(${coordinates(cell, anchor).join(', ')})`;
}

const isAnchors = (cell: Cell, anchor: Anchor | undefined): boolean =>
  anchor !== undefined && cell.kind === anchor.cell.kind && cell.index === anchor.cell.index;

/** Conditions that a bound cell of the words of its class is this very cell. */
const thisCell = (variable: string, cell: Cell, family: LatticeFamily, anchor: Anchor | undefined): string =>
  [
    ...classOf(family, cell).conditions(variable),
    ...coordinates(cell, anchor).map((c, d) => `${variable}.${coordinateNames[d] ?? 'x'} == ${c}`),
  ].join(' and ');

/** Coordinates of a cell, each beside the anchor's along the directions in which that one moves. */
const coordinates = (cell: Cell, anchor: Anchor | undefined): string[] =>
  cell.offset.map((c, d) =>
    anchor && (anchor.steps[d] ?? 0) > 0
      ? plus(`${anchor.variable}.${coordinateNames[d] ?? 'x'}`, c - (anchor.cell.offset[d] ?? 0))
      : String(c),
  );

/** `v: vertices.A where v.x % 2 == 1`: the translates of a cell. */
function binder({ cell, variable, steps }: Anchor, family: LatticeFamily): string {
  const where = steps.flatMap((m, d) => {
    const at = cell.offset[d] ?? 0;
    const name = `${variable}.${coordinateNames[d] ?? 'x'}`;
    if (m === 0) return [`${name} == ${String(at)}`];
    return m === 1 ? [] : [`${name} % ${String(m)} == ${String(((at % m) + m) % m)}`];
  });
  const { words, conditions } = classOf(family, cell);
  const all = [...conditions(variable), ...where];
  return `${variable}: ${words}${all.length > 0 ? ` where ${all.join(' and ')}` : ''}`;
}

function factorText(f: Factor, family: LatticeFamily, anchor: Anchor | undefined): string {
  if (isAnchors(f.cell, anchor) || isNamed(family, f.cell))
    return `${f.species}^${f.pauli}[${cellText(f.cell, family, anchor)}]`;
  const variable = inner[f.cell.kind];
  const { words } = classOf(family, f.cell);
  return `(prod(${variable}: ${words} where ${thisCell(variable, f.cell, family, anchor)}) ${f.species}^${f.pauli}[${variable}])`;
}

const cutting = geometryTable.filter((f): f is AroundFunction => f.form === 'around' && f.optional);

/** A factor that an open boundary may leave out: taken from a set around a cell that must exist. */
function optionalText(
  f: Factor,
  family: LatticeFamily,
  anchor: Anchor | undefined,
  around: readonly Cell[],
): string | undefined {
  for (const cell of around)
    for (const fn of cutting) {
      if (!fn.takes.includes(cell.kind) || !fn.dimensions.includes(family.dimension)) continue;
      if (!isAnchors(cell, anchor) && !isNamed(family, cell)) continue;
      if (fn.cells(family, cell).filter((c) => sameCell(c, f.cell)).length !== 1) continue;
      const variable = inner[f.cell.kind];
      const which = family[f.cell.kind].length > 1 ? `${variable} in ${classOf(family, f.cell).words} and ` : '';
      const set = `${fn.name}(${cellText(cell, family, anchor)})`;
      return `(prod(${variable}: ${set} where ${which}${thisCell(variable, f.cell, family, anchor)}) ${f.species}^${f.pauli}[${variable}])`;
    }
  return undefined;
}

/** A sign and what follows it. */
interface Signed {
  readonly sign: '+' | '-';
  readonly text: string;
}

function signed(coefficient: ExtendedTerm['coefficient'], rest: string): Signed {
  const text = coefficient.toFactorText();
  const sign = text.startsWith('-') ? '-' : '+';
  const size = sign === '-' ? text.slice(1) : text;
  return { sign, text: rest === '' ? size : size === '1' ? rest : `${size} ${rest}` };
}

function familyText(one: Family, family: LatticeFamily): Signed | undefined {
  const { string, steps, needs } = one;
  const coefficient = one.coefficient.mul(phaseCoefficient(string.phase));
  const firm = string.factors.filter((f) => !f.optional).map((f) => f.cell);
  const around = [...new Map([...firm, ...needs].map((c) => [cellKey(c), c])).values()];
  const still = steps.every((m) => m === 0);
  const zero: Cell = { kind: 'vertices', index: 0, offset: steps.map(() => 0) };
  // what must exist beside the factors is bound first, and so is what no factor names
  const [cell = zero] = [...needs, ...around];
  const anchor = still ? undefined : { cell, variable: letters[cell.kind], steps };
  const demanded = needs.slice(1).map((c) => onlyIf(c, family, anchor));
  if (still && needs.length > 0) demanded.unshift(onlyIf(needs[0] ?? zero, family, undefined));
  const texts = string.factors.map((f) =>
    f.optional ? optionalText(f, family, anchor, around) : factorText(f, family, anchor),
  );
  if (texts.some((t) => t === undefined)) return undefined;
  const body = [...demanded, ...texts].join(' ');
  if (!anchor) return signed(coefficient, body);
  // a constant for each cell has its number inside the sum
  return signed(coefficient, `sum(${binder(anchor, family)}) ${body === '' ? '1' : body}`);
}

/** The factor 1 that stands only where a cell exists. */
const onlyIf = (cell: Cell, family: LatticeFamily, anchor: Anchor | undefined): string => {
  const variable = inner[cell.kind];
  return `(sum(${variable}: ${classOf(family, cell).words} where ${thisCell(variable, cell, family, anchor)}) 1)`;
};

function partText({ string, steps }: ProductPart, family: LatticeFamily): string {
  const [first] = string.factors;
  const phase = phaseCoefficient(string.phase);
  if (!first) return `(${phase.toFactorText()})`;
  const still = steps.every((m) => m === 0);
  const anchor = still ? undefined : { cell: first.cell, variable: letters[first.cell.kind], steps };
  const factors = string.factors.map((f) => factorText(f, family, anchor)).join(' ');
  const body = phase.isOne() ? factors : `(${phase.toText()} ${factors})`;
  return anchor ? `(prod(${binder(anchor, family)}) ${body})` : body;
}

function extendedText({ coefficient, extended }: ExtendedTerm, family: LatticeFamily): Signed {
  const parts = extended.parts.map((part) => partText(part, family)).join(' ');
  return signed(coefficient.mul(phaseCoefficient(extended.phase)), parts);
}

/** Terms of an operator, each with its sign; undefined where one cannot be said without a name. */
function termsOf(operator: Operator, family: LatticeFamily): Signed[] | undefined {
  const terms = operator.families.map((one) => familyText(one, family));
  if (terms.some((t) => t === undefined)) return undefined;
  return [...terms.flatMap((t) => t ?? []), ...operator.extended.map((one) => extendedText(one, family))];
}

/** An operator on one line; `0` for zero. Undefined where a factor at an open boundary cannot be said. */
export function operatorText(operator: Operator, family: LatticeFamily): string | undefined {
  const terms = termsOf(operator, family);
  if (!terms) return undefined;
  const text = terms.map(({ sign, text: t }) => `${sign} ${t}`).join(' ');
  return text === '' ? '0' : text;
}

/**
 * `model M =` with one term a line, written out in full: the operator it stands for, whatever maps and names made it. Species
 * that it lives on without a term are named with coefficient 0. Undefined for a model with a seam, which no sum of terms says.
 */
export function modelText(model: ModelValue, values: Values): string | undefined {
  const family = values.lattice?.family;
  const terms = family && termsOf(model.operator, family);
  if (!terms || model.seams.length > 0) return undefined;
  const named = new Set(
    [
      ...model.operator.families.map((f) => f.string),
      ...model.operator.extended.flatMap((t) => t.extended.parts.map((p) => p.string)),
    ].flatMap((s) => s.factors.map((f) => f.species)),
  );
  const bare = model.species.flatMap((name): Signed[] => {
    const species = values.find(name);
    if (named.has(name) || species?.what !== 'spins') return [];
    const cell: Cell = { kind: species.kind, index: species.classes[0] ?? 0, offset: family.vectors.map(() => 0) };
    return [{ sign: '+', text: `0 ${name}^z[${cellText(cell, family, undefined)}]` }];
  });
  const lines = [...terms, ...bare].map(({ sign, text }) => `  ${sign} ${text}`);
  return lines.length === 0 ? `model ${model.name} = 0` : [`model ${model.name} =`, ...lines].join('\n');
}
