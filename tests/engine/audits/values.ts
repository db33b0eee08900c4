import { Coefficient } from '../../../shared/algebra/numbers/coefficient.ts';
import { collect, scaleOperator, multiplyOperators, pinnedOperator } from '../../../shared/algebra/pauli/family.ts';
import { newString } from '../../../shared/algebra/pauli/string.ts';
import type { Factor, Family, LocalString, Operator, Pauli, Steps } from '../../../shared/algebra/pauli/types.ts';
import type { AuditStatement, ModelValue, RuleValue, Value, Values } from '../../../shared/language/values.ts';
import { builtInFamily } from '../../../shared/lattice/built-in.ts';
import type { Cell, CellKind, Lattice } from '../../../shared/lattice/cells.ts';
import { periodicDirections, straight } from '../../../shared/lattice/cluster.ts';

/** Values built by hand, without the language: a lattice, species, models, laws and rules in a few words each. */

const place = { line: 1, column: 1, length: 1 };
const letters: Record<string, CellKind> = { v: 'vertices', l: 'links', p: 'plaquettes', c: 'cubes' };

export const lattice = (name: string, boundary: Lattice['boundary'], ...extents: number[]): Lattice => {
  const family = builtInFamily(name);
  if (!family) throw new Error(`no lattice ${name}`);
  return { family, boundary, periodic: periodicDirections(boundary, family.dimension), size: straight(...extents) };
};

/** A cell as "v0(1,0)", "l1(0,0)". */
export function cell(text: string): Cell {
  const m = /^([vlpc])(\d+)\(([-\d,]+)\)$/.exec(text);
  if (!m) throw new Error(`"${text}" is no cell`);
  return { kind: letters[m[1] ?? ''] ?? 'vertices', index: Number(m[2]), offset: (m[3] ?? '').split(',').map(Number) };
}

/** A string as "sx:v0(0,0) sz?:l1(1,0)"; `?` marks a factor that open edges cut. */
export function string(text: string, phase = 0): LocalString {
  const factors = text
    .split(/\s+/)
    .filter((word) => word !== '')
    .map((word): Factor => {
      const m = /^(\w+)([xyz])(\??):(.*)$/.exec(word);
      if (!m) throw new Error(`"${word}" is no factor`);
      return {
        species: m[1] ?? '',
        pauli: m[2] as Pauli,
        cell: cell(m[4] ?? ''),
        ...(m[3] === '?' ? { optional: true as const } : {}),
      };
    });
  return newString(factors, phase);
}

export const number = (n: number, d = 1): Coefficient => Coefficient.rational(n, d);

export const family = (coefficient: Coefficient | number, text: string, steps: Steps): Family => ({
  coefficient: typeof coefficient === 'number' ? number(coefficient) : coefficient,
  string: string(text),
  steps,
  needs: [],
});

export const operator = (...families: Family[]): Operator => collect([{ families, extended: [] }], { open: false });

export const spins = (name: string, kind: CellKind, classes: readonly number[]): Value => ({
  what: 'spins',
  name,
  place,
  text: '',
  kind,
  classes,
});

export function model(name: string, op: Operator): ModelValue {
  const species = [...new Set(op.families.flatMap((f) => f.string.factors.map((x) => x.species)))];
  return {
    what: 'model',
    name,
    place,
    text: '',
    operator: op,
    species,
    image: undefined,
    pieces: [{ place, operator: op }],
    seams: [],
  };
}

/** (1 − Z)/2 of each spin, times its weight, summed. */
function occupation(sites: readonly (readonly [site: string, weight: number])[], dimension: number): Operator {
  const pinned = Array<number>(dimension).fill(0);
  const families = sites.flatMap(([site, weight]): Family[] => {
    const [species = '', where = ''] = site.split(':');
    const optional = species.endsWith('?') ? '?' : '';
    return [
      { coefficient: number(weight, 2), string: string(''), steps: pinned, needs: [cell(where)] },
      {
        coefficient: number(-weight, 2),
        string: string(`${species.replace('?', '')}z${optional}:${where}`),
        steps: pinned,
        needs: [cell(where)],
      },
    ];
  });
  return { families, extended: [] };
}

export const rule = (
  name: string,
  relation: RuleValue['relation'],
  bound: number,
  instances: readonly { sites: readonly (readonly [string, number])[]; anchor: string; steps: Steps }[],
): RuleValue => ({
  what: 'rule',
  name,
  place,
  text: '',
  parameter: { variable: 'v', kind: cell(instances[0]?.anchor ?? 'v0(0)').kind },
  families: instances.map(({ sites, anchor, steps }) => ({
    operator: occupation(sites, steps.length),
    steps,
    needs: [],
    anchor: cell(anchor),
  })),
  relation,
  bound: number(bound),
});

/** Product of pinned sums, spread over the lattice: `moves([['x', …], …])` are sums of strings with coefficients. */
export function product(
  factors: readonly (readonly (readonly [Coefficient | number, string])[])[],
  steps: Steps,
): Family[] {
  const dimension = steps.length;
  let whole: Operator | undefined;
  for (const sum of factors) {
    const one = collect(
      sum.map(([c, text]) =>
        scaleOperator(pinnedOperator(string(text), dimension), typeof c === 'number' ? number(c) : c),
      ),
      { open: false },
    );
    whole = whole ? multiplyOperators(whole, one, { open: false }) : one;
  }
  return (whole?.families ?? []).map((f) => ({ ...f, steps }));
}

/** Raising (^-, to |1>) and lowering operators as the language has them: ^± = (X ± iY)/2. */
export const plus = (species: string, where: string): [Coefficient, string][] => [
  [number(1, 2), `${species}x:${where}`],
  [Coefficient.i.mul(number(1, 2)), `${species}y:${where}`],
];
export const minus = (species: string, where: string): [Coefficient, string][] => [
  [number(1, 2), `${species}x:${where}`],
  [Coefficient.i.mul(number(-1, 2)), `${species}y:${where}`],
];

export function values(on: Lattice, ...all: Value[]): Values {
  const map = new Map(all.map((value) => [value.name, value]));
  return { lattice: on, all: map, find: (name) => map.get(name) };
}

export const statement = (audit: string, more: Partial<AuditStatement>): AuditStatement => ({
  audit,
  place,
  text: `audit ${audit}`,
  subjects: [],
  withNames: [],
  against: undefined,
  sizes: [],
  levels: undefined,
  order: undefined,
  from: undefined,
  quantity: undefined,
  reference: undefined,
  over: [],
  ...more,
});
export const subject = (name: string, sector: AuditStatement['subjects'][number]['sector'] = []) => ({
  name,
  sector,
  place,
});
