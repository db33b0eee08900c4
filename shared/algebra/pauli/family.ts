import { newBudget } from '../../limits.ts';
import { cellKey, type Cell } from '../../lattice/cells.ts';
import { Coefficient } from '../numbers/coefficient.ts';
import { collectFamilies, lcmOf, phaseCoefficient, residues, type CollectOptions } from './collect.ts';
import { adjointExtended, canonicalExtended, extendedKey, isHermitianExtended } from './extended.ts';
import { adjointString, identityString, multiplyStrings, translateString } from './string.ts';
import type { Extended, ExtendedTerm, Family, LocalString, Operator, Steps } from './types.ts';

export { canonicalFamily, collectFamilies, compareFamilies, familyKey, type CollectOptions } from './collect.ts';

export const zeroOperator: Operator = { families: [], extended: [] };

/** A constant that stands once (not for each cell), in `dimension` directions. */
export const constantOperator = (coefficient: Coefficient, dimension: number): Operator => ({
  families: [{ coefficient, string: identityString, steps: Array<number>(dimension).fill(0), needs: [] }],
  extended: [],
});

/** A single local string. */
export const pinnedOperator = (string: LocalString, dimension: number, needs: readonly Cell[] = []): Operator => ({
  families: [{ coefficient: Coefficient.one, string, steps: Array<number>(dimension).fill(0), needs }],
  extended: [],
});

export const isPinned = (family: Family): boolean => family.steps.every((m) => m === 0);

function collectExtended(
  terms: readonly ExtendedTerm[],
  dimension: number | undefined,
  options: CollectOptions,
): Operator {
  const sums = new Map<string, ExtendedTerm>();
  const families: Family[] = [];
  for (const { coefficient, extended } of terms) {
    const form = canonicalExtended(extended, options);
    const whole = coefficient.mul(phaseCoefficient(form.phase));
    if (form.parts.length === 0 && dimension !== undefined) {
      families.push(...constantOperator(whole, dimension).families);
      continue;
    }
    const bare: Extended = { phase: 0, parts: form.parts };
    const key = extendedKey(bare);
    sums.set(key, { coefficient: sums.get(key)?.coefficient.add(whole) ?? whole, extended: bare });
  }
  return {
    families,
    extended: [...sums.entries()]
      .filter(([, t]) => !t.coefficient.isZero())
      .sort(([a], [b]) => (a < b ? -1 : 1))
      .map(([, t]) => t),
  };
}

/**
 * Sum of operators in one canonical form: equal sums are equal as data (see `collectFamilies`, `canonicalExtended`). Extended strings that
 * turn out to be the identity become constants.
 */
export function collect(operators: readonly Operator[], options: CollectOptions): Operator {
  const budget = options.budget ?? newBudget();
  const all = { ...options, budget };
  const terms = operators.flatMap((o) => o.extended);
  const dimension =
    terms.flatMap((t) => t.extended.parts)[0]?.steps.length ?? operators.flatMap((o) => o.families)[0]?.steps.length;
  const { families, extended } = collectExtended(terms, dimension, all);
  return { families: collectFamilies([...operators.flatMap((o) => o.families), ...families], all), extended };
}

export const addOperators = (a: Operator, b: Operator, options: CollectOptions): Operator => collect([a, b], options);

/** c times the operator; zero if c is. */
export const scaleOperator = (a: Operator, c: Coefficient): Operator =>
  c.isZero()
    ? zeroOperator
    : {
        families: a.families.map((f) => ({ ...f, coefficient: f.coefficient.mul(c) })),
        extended: a.extended.map((t) => ({ ...t, coefficient: t.coefficient.mul(c) })),
      };

export const subtractOperators = (a: Operator, b: Operator, options: CollectOptions): Operator =>
  collect([a, scaleOperator(b, Coefficient.one.neg())], options);

/** Hermitian conjugate, couplings real. */
export const adjointOperator = (a: Operator): Operator => ({
  families: a.families.map((f) => ({ ...f, coefficient: f.coefficient.conj(), string: adjointString(f.string) })),
  extended: a.extended.map((t) => ({ coefficient: t.coefficient.conj(), extended: adjointExtended(t.extended) })),
});

/** Equal as operators at every size. */
export const equalOperators = (a: Operator, b: Operator, options: CollectOptions): boolean => {
  const difference = subtractOperators(a, b, options);
  return difference.families.length === 0 && difference.extended.length === 0;
};

/** Cells that a product of two pinned families demands: those of both, and those of required factors that cancel. */
function productNeeds(a: Family, b: Family, product: LocalString): Cell[] {
  const kept = new Set(product.factors.map((f) => cellKey(f.cell)));
  const lost = [...a.string.factors, ...b.string.factors].filter((f) => !f.optional && !kept.has(cellKey(f.cell)));
  return [...a.needs, ...b.needs, ...lost.map((f) => f.cell)];
}

/** Product of two pinned families, coefficient and all. */
function multiplyPinned(a: Family, b: Family, { open, budget }: CollectOptions): Family {
  budget?.spend(1 + a.string.factors.length + b.string.factors.length);
  const string = multiplyStrings(a.string, b.string);
  return {
    coefficient: a.coefficient.mul(b.coefficient),
    string,
    steps: a.steps,
    needs: open ? productNeeds(a, b, string) : [],
  };
}

/** A constant that stands once and needs no cell: it multiplies anything. */
const isScalar = (f: Family): boolean => isPinned(f) && f.string.factors.length === 0 && f.needs.length === 0;

const familyAsExtended = (f: Family): ExtendedTerm => ({
  coefficient: f.coefficient,
  extended: { phase: 0, parts: [{ string: f.string, steps: f.steps, needs: f.needs }] },
});

/**
 * Product a·b, where it is a sum of strings that this form can hold: pinned operators, constants and extended strings with one another.
 * Undefined where a sum over the whole lattice meets anything but a constant: that product is not a local operator.
 */
export function multiplyOperators(a: Operator, b: Operator, options: CollectOptions): Operator | undefined {
  const budget = options.budget ?? newBudget();
  const all = { ...options, budget };
  const families: Family[] = [];
  const extended: ExtendedTerm[] = [];
  for (const f of a.families)
    for (const g of b.families) {
      if (isScalar(f) || isScalar(g)) {
        const [scalar, other] = isScalar(f) ? [f, g] : [g, f];
        const factor = scalar.coefficient.mul(phaseCoefficient(scalar.string.phase));
        families.push({ ...other, coefficient: factor.mul(other.coefficient) });
      } else if (isPinned(f) && isPinned(g)) families.push(multiplyPinned(f, g, all));
      else return undefined;
    }
  const terms = (o: Operator): ExtendedTerm[] | undefined =>
    o.families.every(isPinned) ? [...o.families.map(familyAsExtended), ...o.extended] : undefined;
  if (a.extended.length > 0 || b.extended.length > 0) {
    const [left, right] = [terms(a), terms(b)];
    if (!left || !right) return scaledByConstant(a, b, all);
    for (const [i, s] of left.entries())
      for (const [j, t] of right.entries()) {
        budget.spend();
        if (i < a.families.length && j < b.families.length) continue;
        extended.push({
          coefficient: s.coefficient.mul(t.coefficient),
          extended: {
            phase: ((s.extended.phase + t.extended.phase) % 4) as 0 | 1 | 2 | 3,
            parts: [...s.extended.parts, ...t.extended.parts],
          },
        });
      }
  }
  return collect([{ families, extended }], all);
}

/** A product one side of which is a bare constant. */
function scaledByConstant(a: Operator, b: Operator, options: CollectOptions): Operator | undefined {
  for (const [constant, other] of [
    [a, b],
    [b, a],
  ] as const) {
    if (constant.extended.length > 0 || !constant.families.every(isScalar)) continue;
    const sum = constant.families.reduce(
      (c, f) => c.add(f.coefficient.mul(phaseCoefficient(f.string.phase))),
      Coefficient.zero,
    );
    return collect([scaleOperator(other, sum)], options);
  }
  return undefined;
}

/** Σ over translations by `steps` of a pinned operator; each translate also needs the cells `needs`. */
export const spread = (a: Operator, steps: Steps, needs: readonly Cell[] = []): Operator => ({
  families: a.families.map((f) => ({ ...f, steps, needs: [...f.needs, ...needs] })),
  extended: a.extended,
});

/** A pinned operator moved by unit cells. */
export const translateOperator = (a: Operator, by: readonly number[]): Operator => {
  const move = (cells: readonly Cell[]): Cell[] =>
    cells.map((c) => ({ ...c, offset: c.offset.map((o, d) => o + (by[d] ?? 0)) }));
  return {
    families: a.families.map((f) => ({ ...f, string: translateString(f.string, by), needs: move(f.needs) })),
    extended: a.extended.map((t) => ({
      ...t,
      extended: {
        ...t.extended,
        parts: t.extended.parts.map((p) => ({ ...p, string: translateString(p.string, by), needs: move(p.needs) })),
      },
    })),
  };
};

/** The family written with longer steps (multiples of its own): one family for each residue. Throws RangeError if they are not multiples. */
export function refineFamily(family: Family, steps: Steps): Family[] {
  const repeats = family.steps.map((m, d) => {
    const longer = steps[d] ?? 0;
    if (lcmOf(m, longer) !== longer || (m === 0) !== (longer === 0))
      throw new RangeError(`steps ${steps.join(', ')} are not multiples of ${family.steps.join(', ')}`);
    return m === 0 ? 1 : longer / m;
  });
  return [...residues(repeats)].map((k) => {
    const by = k.map((c, d) => c * (family.steps[d] ?? 0));
    const moved = translateOperator({ families: [family], extended: [] }, by).families[0] ?? family;
    return { ...moved, steps };
  });
}

/** The parts of a collected operator that are not Hermitian; none if and only if it is. */
export function notHermitian(a: Operator, options: CollectOptions): Operator {
  const whole = collect([a], options);
  return {
    families: whole.families.filter((f) => !f.coefficient.isReal()),
    extended: whole.extended.filter((t) => !t.coefficient.isReal() || !isHermitianExtended(t.extended, options)),
  };
}

/** Species that occur in it. */
export const speciesOfOperator = (a: Operator): ReadonlySet<string> =>
  new Set([
    ...a.families.flatMap((f) => f.string.factors.map((x) => x.species)),
    ...a.extended.flatMap((t) => t.extended.parts.flatMap((p) => p.string.factors.map((x) => x.species))),
  ]);
