import { Coefficient } from '../algebra/numbers/coefficient.ts';
import type { AuditStatement, Value, Values } from '../language/values.ts';
import { sizeKey } from '../lattice/cluster.ts';
import type { Size } from '../lattice/cells.ts';
import type { Cost } from './audit.ts';

/** Symbolic questions are answered at once. */
export const cheap: Cost = { operations: 1e6, bytes: 1e6, words: 'symbolic' };

/** Left out of keys: where and how a thing was written changes no answer. */
const silent = new Set(['place', 'text', 'at', 'map', 'pieces']);

/** Plain text of any value of the language: exact coefficients by their canonical key, tables as sorted lists. */
function plain(key: string, value: unknown): unknown {
  if (silent.has(key) || typeof value === 'function') return undefined;
  if (value instanceof Coefficient) return value.key();
  if (value instanceof Map) return [...(value as Map<string, unknown>).entries()].sort(([a], [b]) => (a < b ? -1 : 1));
  return typeof value === 'bigint' ? String(value) : value;
}

const keys = new WeakMap<object, string>();

/** Canonical text of what a declared thing is, without where it stands. */
export function valueKey(value: Value): string {
  let key = keys.get(value);
  if (key === undefined) {
    key = JSON.stringify(value, plain);
    keys.set(value, key);
  }
  return key;
}

/** Names that a line speaks of. */
function namesOf(statement: AuditStatement): string[] {
  const { against } = statement;
  const subjects = against ? [...statement.subjects, against] : statement.subjects;
  const sectors = subjects.flatMap((subject) => subject.sector.map((label) => label.name));
  const more = [statement.quantity, statement.reference, statement.from].filter((name) => name !== undefined);
  return [...subjects.map((subject) => subject.name), ...sectors, ...statement.withNames, ...more];
}

/**
 * Canonical text of all that the answer to a part of a line depends on: two questions with one key have one answer.
 * `also` names kinds of declarations that matter without being named on the line (couplings for numbers, laws for maps).
 */
export function keyOf(
  statement: AuditStatement,
  values: Values,
  part: string,
  also: readonly Value['what'][] = [],
  size?: Size,
): string {
  const { lattice } = values;
  const named = namesOf(statement).map((name) => {
    const value = values.find(name);
    return value ? [name, valueKey(value)] : [name];
  });
  const others = [...values.all.values()].filter((value) => also.includes(value.what)).map(valueKey);
  const { audit, subjects, against, withNames, levels, order, from, quantity, reference, over } = statement;
  const line = { audit, subjects, against, withNames, levels, order, from, quantity, reference, over };
  const geometry = lattice ? [lattice.family, lattice.boundary, sizeKey(lattice.size)] : [];
  return JSON.stringify([line, part, size ? sizeKey(size) : '', geometry, named, others], plain);
}
