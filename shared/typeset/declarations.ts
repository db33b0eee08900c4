import type { LocalString, Operator } from '../algebra/pauli/types.ts';
import type { Extended } from '../algebra/pauli/types.ts';
import type { LawValue, OperatorValue, Values } from '../language/values.ts';
import { newBudget, type Budget } from '../limits.ts';
import { letters, type Carrier, type NamedShape, type Style, type TypesetContext } from './context.ts';
import { extendedTex } from './extended.ts';
import { nameSpoken, nameTex } from './names.ts';
import { operatorTex } from './operators.ts';
import { placed } from './shapes.ts';
import { shapeSpoken, shapeTex } from './shape-tex.ts';

const isExtended = (side: LocalString | Extended): side is Extended => 'parts' in side;
const signs = ['', '\\mathrm{i}\\,', '-', '-\\mathrm{i}\\,'] as const;
const spokenSigns = ['', 'i times ', 'minus ', 'minus i times '] as const;

/** Strings of a declared law as a named shape: `A_{v}`. */
const lawShape = (law: LawValue): NamedShape => ({
  name: law.name,
  kind: law.parameter.kind,
  instances: law.families.map((f) => ({
    index: f.anchor.index,
    steps: f.steps,
    string: {
      phase: f.string.phase,
      factors: f.string.factors.map((x) => ({
        ...x,
        cell: { ...x.cell, offset: x.cell.offset.map((c, d) => c - (f.anchor.offset[d] ?? 0)) },
      })),
    },
  })),
});

/** A declared operator with a parameter as a named shape, where it is one Pauli string for each class of its cells. */
function operatorShape(
  value: OperatorValue,
  { family }: Pick<TypesetContext, 'family'>,
  budget: Budget,
): NamedShape | undefined {
  const { parameter, at } = value;
  if (!parameter || !at) return undefined;
  const instances = family[parameter.kind].flatMap((_, index) => {
    try {
      const { families, extended } = at(
        { kind: parameter.kind, index, offset: Array<number>(family.dimension).fill(0) },
        budget,
      );
      const [only] = families;
      if (!only || families.length !== 1 || extended.length > 0) return [];
      const sign = only.coefficient.isOne() ? 0 : only.coefficient.neg().isOne() ? 2 : undefined;
      if (sign === undefined) return [];
      const string: LocalString = {
        phase: ((only.string.phase + sign) % 4) as LocalString['phase'],
        factors: only.string.factors,
      };
      return [{ index, string, steps: Array<number>(family.dimension).fill(1) }];
    } catch {
      return []; // the class lies outside the operator's domain
    }
  });
  return instances.length === family[parameter.kind].length
    ? { name: value.name, kind: parameter.kind, instances }
    : undefined;
}

/**
 * The context in which a program's formulas are set: its lattice and species, and the laws and operators with a parameter whose names
 * may stand for their strings (`named: true`).
 */
export function typesetContext(
  values: Values,
  { named = true, budget = newBudget() }: { readonly named?: boolean; readonly budget?: Budget } = {},
): TypesetContext | undefined {
  const family = values.lattice?.family;
  if (!family) return undefined;
  const species = new Map<string, Carrier>();
  const names: NamedShape[] = [];
  for (const v of values.all.values()) {
    if (v.what === 'spins') species.set(v.name, { kind: v.kind, classes: v.classes });
    if (!named) continue;
    if (v.what === 'law') names.push(lawShape(v));
    if (v.what === 'operator') names.push(...[operatorShape(v, { family }, budget)].filter((s) => s !== undefined));
  }
  return { family, species, names };
}

/** A signed Pauli product at its anchor's letter: `s^{z}_{a} s^{z}_{b}`, `-\prod_{l\ni v} g^{x}_{l}`. */
function stringTex(string: LocalString, context: TypesetContext, style: Style = 'plain'): string {
  if (string.factors.length === 0) return `${signs[string.phase]}1`;
  const steps = Array<number>(context.family.dimension).fill(1);
  return `${signs[string.phase]}${shapeTex(placed(string, steps, context).shape, style, { species: context.species.keys() })}`;
}

function stringSpoken(string: LocalString, context: TypesetContext): string {
  if (string.factors.length === 0) return `${spokenSigns[string.phase]}1`;
  return `${spokenSigns[string.phase]}${shapeSpoken(placed(string, Array<number>(context.family.dimension).fill(1), context).shape)}`;
}

export const sideTex = (side: LocalString | Extended, context: TypesetContext, style: Style = 'plain'): string =>
  isExtended(side) ? extendedTex(side, context, style) : stringTex(side, context, style);

/** `A_{v} = \prod_{l\ni v} g^{x}_{l} = +1`, one formula for each shape that its classes have. */
export function lawTex(law: LawValue, context: TypesetContext, style: Style = 'plain'): string {
  const own: TypesetContext = { ...context, names: context.names.filter((n) => n.name !== law.name) };
  const bodies = [...new Set(law.families.map((f) => stringTex(f.string, own, style)))];
  const head = `${nameTex(law.name)}_{${letters[law.parameter.kind]}}`;
  return `${head} = ${bodies.join('\\ \\text{or}\\ ')} = ${law.value === 1 ? '+1' : '-1'}`;
}

export function lawSpoken(law: LawValue, context: TypesetContext): string {
  const own: TypesetContext = { ...context, names: context.names.filter((n) => n.name !== law.name) };
  const bodies = [...new Set(law.families.map((f) => stringSpoken(f.string, own)))];
  return `${nameSpoken(law.name)} is ${bodies.join(' or ')}, equal to ${law.value === 1 ? 'plus' : 'minus'} one`;
}

/** `name = body` for a symmetry. */
export const symmetryTex = (
  name: string,
  extended: Extended,
  context: TypesetContext,
  style: Style = 'plain',
): string => `${nameTex(name)} = ${extendedTex(extended, context, style)}`;

/** `name = body` for an operator or model. */
export function namedOperatorTex(
  name: string,
  operator: Operator,
  context: TypesetContext,
  style: Style = 'plain',
): string {
  const own: TypesetContext = { ...context, names: context.names.filter((n) => n.name !== name) };
  return `${nameTex(name)} = ${operatorTex(operator, own, style)}`;
}
