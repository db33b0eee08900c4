import { Coefficient } from '../../../shared/algebra/numbers/coefficient.ts';
import { newString } from '../../../shared/algebra/pauli/string.ts';
import type { Extended, Factor, LocalString, Operator, Pauli, Steps } from '../../../shared/algebra/pauli/types.ts';
import type {
  DictionaryRule,
  LawValue,
  MapDeclaration,
  OperatorMap,
  SpeciesValue,
  SymmetryValue,
  Value,
  Values,
} from '../../../shared/language/values.ts';
import { builtInFamily } from '../../../shared/lattice/built-in.ts';
import type { Cell, CellKind, Lattice, LatticeFamily } from '../../../shared/lattice/cells.ts';
import { straight } from '../../../shared/lattice/cluster.ts';
import { boundary } from '../../../shared/lattice/incidence.ts';
import { incident } from '../../../shared/typeset/shapes.ts';
import { newBudget } from '../../../shared/limits.ts';
import { buildMap } from '../../../shared/maps/registry.ts';

export const place = { line: 1, column: 1, length: 1 };

export function familyNamed(name: string): LatticeFamily {
  const family = builtInFamily(name);
  if (!family) throw new Error(`no lattice ${name}`);
  return family;
}

export const lattice = (name: string, ...size: number[]): Lattice => {
  const family = familyNamed(name);
  return { family, boundary: 'torus', periodic: family.vectors.map(() => true), size: straight(...size) };
};

export const species = (family: LatticeFamily, name: string, kind: CellKind): SpeciesValue => ({
  what: 'spins',
  name,
  place,
  text: `spins ${name} on ${kind}`,
  kind,
  classes: family[kind].map((_, k) => k),
});

export const valuesOf = (on: Lattice, all: readonly Value[]): Values => {
  const map = new Map(all.map((v) => [v.name, v]));
  return { lattice: on, all: map, find: (name) => map.get(name) };
};

export const cellAt = (kind: CellKind, index: number, ...offset: number[]): Cell => ({ kind, index, offset });
export const factor = (name: string, pauli: Pauli, cell: Cell): Factor => ({ species: name, cell, pauli });
export const on = (name: string, pauli: Pauli, cells: readonly Cell[], phase = 0): LocalString =>
  newString(
    cells.map((c) => factor(name, pauli, c)),
    phase,
  );

const origin = (family: LatticeFamily): number[] => family.vectors.map(() => 0);
export const every = (family: LatticeFamily): Steps => family.vectors.map(() => 1);

/** One rule for each class of a kind, both sides given as functions of the cell. */
export function rules(
  family: LatticeFamily,
  kind: CellKind,
  rule: number,
  left: (c: Cell) => LocalString,
  right: (c: Cell) => LocalString,
): DictionaryRule[] {
  return family[kind].map((_, index): DictionaryRule => {
    const anchor = { kind, index, offset: origin(family) };
    return {
      left: left(anchor),
      right: right(anchor),
      steps: every(family),
      needs: [],
      anchor,
      place,
      rule,
      text: { left: 'left', right: 'right' },
    };
  });
}

/** coefficient × Σ over all cells of a kind. */
export const sumOver = (
  family: LatticeFamily,
  kind: CellKind,
  coefficient: Coefficient,
  string: (c: Cell) => LocalString,
): Operator => ({
  families: family[kind].map((_, index) => ({
    coefficient,
    string: string({ kind, index, offset: origin(family) }),
    steps: every(family),
    needs: [],
  })),
  extended: [],
});

export const plus = (...operators: readonly Operator[]): Operator => ({
  families: operators.flatMap((o) => o.families),
  extended: operators.flatMap((o) => o.extended),
});

export const wholeProduct = (family: LatticeFamily, name: string, pauli: Pauli, kind: CellKind): Extended => ({
  phase: 0,
  parts: family[kind].map((_, index) => ({
    string: on(name, pauli, [{ kind, index, offset: origin(family) }]),
    steps: every(family),
    needs: [],
  })),
});

export const symmetry = (name: string, extended: Extended): SymmetryValue => ({
  what: 'symmetry',
  name,
  place,
  text: '',
  extended,
});

export const law = (
  family: LatticeFamily,
  name: string,
  kind: CellKind,
  string: (c: Cell) => LocalString,
  value: 1 | -1 = 1,
): LawValue => ({
  what: 'law',
  name,
  place,
  text: '',
  value,
  parameter: { variable: 'v', kind },
  families: family[kind].map((_, index) => {
    const anchor = { kind, index, offset: origin(family) };
    return { string: string(anchor), steps: every(family), needs: [], anchor };
  }),
});

export const ends = (family: LatticeFamily, link: Cell): Cell[] => boundary(family, link);
export const around = incident;

export const symbol = (name: string): Coefficient => Coefficient.symbol(name);

export function build(declaration: MapDeclaration, values: Values, name = 'N'): OperatorMap {
  return buildMap(declaration, values, newBudget(), name);
}

export const value = <T>(
  outcome:
    { readonly ok: true; readonly value: T } | { readonly ok: false; readonly refusal: { readonly reason: string } },
): T => {
  if (!outcome.ok) throw new Error(outcome.refusal.reason);
  return outcome.value;
};

/** Wegner's duality on any lattice: bonds to links, fields to stars. */
export function bonds(family: LatticeFamily): Extract<MapDeclaration, { kind: 'dictionary' }> {
  return {
    kind: 'dictionary',
    from: ['s'],
    to: ['g'],
    rules: [
      ...rules(
        family,
        'links',
        0,
        (l) => on('s', 'z', ends(family, l)),
        (l) => on('g', 'z', [l]),
      ),
      ...rules(
        family,
        'vertices',
        1,
        (v) => on('s', 'x', [v]),
        (v) => on('g', 'x', around(family, v, 'links')),
      ),
    ],
  };
}
