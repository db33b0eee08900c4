import { Coefficient } from '../numbers/coefficient.ts';
import { phaseCoefficient } from './collect.ts';
import { compareCells, factorOrder, siteKey } from './string.ts';
import type { Family, LocalString, Operator, Site } from './types.ts';

/**
 * Diagonal operators: sums of products of Z. On a basis state they are numbers, Z = +1 on |0> and −1 on |1>. Rules are made of them.
 */
const isDiagonalString = (string: LocalString): boolean => string.factors.every((f) => f.pauli === 'z');

/** True if it is diagonal in the basis of bits. */
export const isDiagonal = (operator: Operator): boolean =>
  operator.families.every((f) => isDiagonalString(f.string)) &&
  operator.extended.every((t) => t.extended.parts.every((p) => isDiagonalString(p.string)));

/** The terms that are not diagonal. */
export const offDiagonal = (operator: Operator): Family[] =>
  operator.families.filter((f) => !isDiagonalString(f.string));

/** Spins that pinned families act on, once each, in canonical order. */
export function spinsOf(families: readonly Family[]): Site[] {
  const sites = new Map<string, Site>();
  for (const { string } of families)
    for (const f of string.factors) sites.set(siteKey(f), { species: f.species, cell: f.cell });
  return [...sites.values()].sort((a, b) => factorOrder(a, b) || compareCells(a.cell, b.cell));
}

/** Value of pinned diagonal families on a basis state; `bit` is 1 where a spin is excited. Throws RangeError on X or Y. Exact. */
export function evaluateDiagonal(families: readonly Family[], bit: (site: Site) => 0 | 1): Coefficient {
  return families.reduce((sum, { coefficient, string }) => {
    if (!isDiagonalString(string)) throw new RangeError('only products of Z have a value on a basis state');
    const ones = string.factors.filter((f) => bit(f) === 1).length;
    return sum.add(coefficient.mul(phaseCoefficient(string.phase + 2 * ones)));
  }, Coefficient.zero);
}

export type RuleRelation = '==' | '<=' | '>=' | 'even' | 'odd';

/** True if the value stands in the relation to the bound; exact for rationals. Undefined for a value that is not rational: the comparison needs numbers. */
export function obeys(value: Coefficient, relation: RuleRelation, bound: Coefficient): boolean | undefined {
  if (relation === '==') return value.equals(bound);
  const v = value.asRational();
  if (!v) return undefined;
  if (relation === 'even' || relation === 'odd') return v.den === 1n && (v.num % 2n === 0n) === (relation === 'even');
  const b = bound.asRational();
  if (!b) return undefined;
  const [left, right] = [v.num * b.den, b.num * v.den];
  return relation === '<=' ? left <= right : left >= right;
}
