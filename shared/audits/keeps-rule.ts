import type { AllSizes } from '../algebra/f2/all-sizes.ts';
import { siteTable } from '../algebra/finite/wrap.ts';
import { collectFamilies } from '../algebra/pauli/collect.ts';
import { keepsRules, obeys, type Leak, type LinearRule } from '../algebra/pauli/keeping.ts';
import { siteKey } from '../algebra/pauli/string.ts';
import type { Family, Site } from '../algebra/pauli/types.ts';
import { Coefficient } from '../algebra/numbers/coefficient.ts';
import type { RuleValue, Values } from '../language/values.ts';
import { isLatticeProblem, type Lattice, type LatticeFamily } from '../lattice/cells.ts';
import { isStraight, newCluster, sizeText, straight } from '../lattice/cluster.ts';
import { BudgetSpent, newBudget } from '../limits.ts';
import { stringPhrase } from '../maps/phrases.ts';
import type { Finding } from './audit.ts';
import { completeState } from './complete.ts';
import { diagonalRules } from './finite-rules.ts';
import { sizesWords } from './pieces.ts';
import { speciesCells, speciesOfOperator } from './sector.ts';
import { Unanswerable } from './unanswerable.ts';

const whole = (value: Coefficient, rule: string): bigint[] => {
  const r = value.asRational();
  if (!r) throw new Unanswerable(`rule ${rule} has the coefficient ${value.toText()}; counts take plain numbers`, true);
  return [r.num, r.den];
};

/** A rule as whole-number forms in bits, one a class and residue. Throws Unanswerable where it is not linear in bits. */
function linearRules(rule: RuleValue): LinearRule[] {
  return rule.families.map((family) => {
    if (family.steps.some((m) => m === 0))
      throw new Unanswerable(
        `rule ${rule.name} stands in one place only along a direction; moves are compared with rules that stand everywhere`,
      );
    let constant = Coefficient.zero;
    const weights = new Map<string, { site: Site; weight: Coefficient }>();
    for (const { coefficient, string } of family.operator.families) {
      const [factor, ...more] = string.factors;
      const signed = string.phase === 2 ? coefficient.neg() : coefficient;
      if (more.length > 0 || (factor && factor.pauli !== 'z'))
        throw new Unanswerable(`rule ${rule.name} is not a sum of n's: each term takes one spin and is diagonal`, true);
      constant = constant.add(signed);
      if (!factor) continue;
      const site = { species: factor.species, cell: factor.cell };
      const old = weights.get(siteKey(site))?.weight ?? Coefficient.zero;
      weights.set(siteKey(site), { site, weight: old.sub(signed.add(signed)) });
    }
    return inWhole(rule, constant, [...weights.values()], family.steps);
  });
}

function inWhole(
  rule: RuleValue,
  constant: Coefficient,
  weights: readonly { site: Site; weight: Coefficient }[],
  steps: readonly number[],
): LinearRule {
  const parity = rule.relation === 'even' || rule.relation === 'odd';
  const bound = parity ? constant : rule.bound.sub(constant);
  const pairs = [...weights.map((w) => w.weight), bound].map((c) => whole(c, rule.name));
  const gcd = (a: bigint, b: bigint): bigint => (b === 0n ? a : gcd(b, a % b));
  const den = pairs.reduce((all, [, d = 1n]) => (all * d) / gcd(all, d), 1n);
  if (parity && den !== 1n)
    throw new Unanswerable(`rule ${rule.name} counts in fractions, so even and odd have no meaning`, true);
  const scaled = pairs.map(([n = 0n, d = 1n]) => Number((n * den) / d));
  if (!scaled.every(Number.isSafeInteger)) throw new Unanswerable(`rule ${rule.name} has numbers past 2^53`);
  const last = scaled.pop() ?? 0;
  const relation = parity && last % 2 !== 0 ? (rule.relation === 'even' ? 'odd' : 'even') : rule.relation;
  return {
    weights: weights.map(({ site }, k) => ({ site, weight: scaled[k] ?? 0 })).filter((w) => w.weight !== 0),
    steps,
    relation,
    bound: parity ? 0 : last,
  };
}

/** Tori that may hold a local configuration: extents past its span, whole periods, a few cells larger. */
function roomyTori(leak: Leak, steps: readonly number[]): number[][] {
  const most = [24, 64, 48][steps.length - 1] ?? 24;
  const ranges = steps.map((m, d) => {
    const along = leak.before.map(({ site }) => site.cell.offset[d] ?? 0);
    const span = Math.max(...along) - Math.min(...along) + 1;
    const first = Math.ceil(Math.max(span, 2) / m) * m;
    return [first, first + m, first + 2 * m];
  });
  return ranges
    .reduce<number[][]>((heads, range) => heads.flatMap((head) => range.map((l) => [...head, l])), [[]])
    .map((extents) => ({ extents, cells: extents.reduce((a, b) => a * b, 1) }))
    .filter(({ cells }, k) => cells <= most || k === 0)
    .sort((a, b) => a.cells - b.cells)
    .map(({ extents }) => extents);
}

/** A torus on which a whole allowed state holds the local configuration. */
function extended(
  leak: Leak,
  rules: readonly RuleValue[],
  period: readonly number[],
  values: Values,
): string | undefined {
  const { lattice } = values;
  if (!lattice) return undefined;
  const names = new Set(leak.before.map(({ site }) => site.species));
  for (const family of rules.flatMap((rule) => rule.families)) speciesOfOperator(family.operator, names);
  for (const extents of roomyTori(leak, period)) {
    const cluster = newCluster({ family: lattice.family, periodic: extents.map(() => true) }, straight(...extents));
    if (isLatticeProblem(cluster)) continue;
    const table = siteTable(cluster, speciesCells(values, names));
    const fixed = new Map(leak.before.map(({ site, bit }) => [table.number(site) ?? -1, bit] as const));
    if (fixed.has(-1) || fixed.size < leak.before.length) continue;
    const instances = rules.flatMap((rule) => diagonalRules(cluster, table, rule));
    if (typeof completeState(table.sites.length, instances, fixed) !== 'string') return sizeText(straight(...extents));
  }
  return undefined;
}

/**
 * Whether a model, operator, law or symmetry keeps a rule: whether it leads from states that obey it to such states alone. Decided on the
 * infinite lattice, move by move, in states that obey `others` besides (`algebra/pauli/keeping.ts`); refuted with a local configuration that stands in a whole allowed state of a torus.
 */
export function keepsRule(name: string, rule: RuleValue, values: Values, others: readonly RuleValue[] = []): Finding {
  const beside = others.filter((other) => other.name !== rule.name);
  const among = beside.length > 0 ? ` among the states of ${beside.map((other) => other.name).join(', ')}` : '';
  const { lattice } = values;
  const value = values.find(name);
  const open = (reason: string, figures: Record<string, unknown> = {}, problem = false): Finding => ({
    evidence: { kind: 'reason', reason },
    statement: `whether ${name} keeps ${rule.name}`,
    figures,
    ...(problem ? { problem: reason } : {}),
  });
  const parts = familiesOf(value);
  if (!lattice || !parts) return open(`${name} is not a model, operator, law or symmetry`);
  if (parts.global)
    return open(
      `${name} holds a product over the whole lattice; moves are compared with ${rule.name} where they are local`,
    );
  const families = collectFamilies(parts.families, { open: false }).filter(
    (family) => family.string.factors.length > 0,
  );
  let at: string | undefined;
  try {
    const judged = linearRules(rule);
    const rules = [...judged, ...beside.flatMap(linearRules)];
    const period = [...families, ...rules].reduce<number[]>(
      (all, { steps }) => all.map((m, d) => lcm(m, steps[d] ?? 1)),
      lattice.family.vectors.map(() => 1),
    );
    const verdict = keepsRules(
      families,
      rules,
      (leak) => (at = extended(leak, [rule, ...beside], period, values)) !== undefined,
      judged.length,
      newBudget(8_000_000, 'operations of comparing moves with a rule'),
    );
    const figures = {
      terms: families.length,
      commuting: families.length - (verdict.kept ? 0 : verdict.leaving.length),
      moves: verdict.moves,
    };
    const edges = lattice.periodic.every(Boolean)
      ? []
      : ['decided in the bulk; at open edges the rule is cut, and that is not looked at here'];
    if (verdict.kept)
      return {
        evidence: { kind: 'all sizes', proof: [verdict.evidence] },
        statement: `every move of ${name} keeps ${rule.name}${among}, on ${sizesWords([verdict.evidence])}`,
        figures,
        cautions: [...edges, ...tooSmall(verdict.evidence, lattice)],
      };
    if (!verdict.leak || at === undefined) return open(verdict.reason, figures);
    const witness = witnessOf(verdict.leak, rule, rules, at, lattice.family);
    return {
      evidence: { kind: 'counterexample' },
      statement: `${name} does not keep ${rule.name}${among}: ${String(verdict.leaving.length)} of ${String(families.length)} terms lead out of it`,
      figures: { ...figures, size: at },
      witness,
      cautions: [...edges, ...cancels(verdict.leak, values)],
    };
  } catch (error) {
    if (error instanceof BudgetSpent) return open(error.message);
    if (error instanceof Unanswerable) return open(error.message, {}, error.isProblem);
    throw error;
  }
}

/** Says so where the declared size is below those that are decided. */
function tooSmall(evidence: AllSizes, { size }: Lattice): string[] {
  const small = isStraight(size) && evidence.from.some((from, d) => (size.periods[d]?.[d] ?? 1) < from);
  return small
    ? [`the declared ${sizeText(size)} is smaller: there a move may meet itself, and that is not looked at`]
    : [];
}

const lcm = (a: number, b: number): number => {
  const gcd = (x: number, y: number): number => (y === 0 ? x : gcd(y, x % y));
  return b < 1 ? a : (a / gcd(a, b)) * b;
};

function familiesOf(value: ReturnType<Values['find']>): { families: readonly Family[]; global: boolean } | undefined {
  switch (value?.what) {
    case 'model':
    case 'operator': {
      const diagonal = value.operator.extended.every((t) =>
        t.extended.parts.every((p) => p.string.factors.every((f) => f.pauli === 'z')),
      );
      return { families: value.operator.families, global: !diagonal };
    }
    case 'law':
      return { families: value.families.map((f) => ({ ...f, coefficient: Coefficient.one })), global: false };
    case 'symmetry':
      return {
        families: [],
        global: !value.extended.parts.every((p) => p.string.factors.every((f) => f.pauli === 'z')),
      };
    default:
      return undefined;
  }
}

/** Says so where the declared values of the couplings make the amplitude vanish. */
function cancels(leak: Leak, values: Values): string[] {
  const declared = new Map(
    [...leak.amplitude.symbols()].flatMap((name) => {
      const value = values.find(name);
      return value?.what === 'coupling' && value.value ? [[name, value.value] as const] : [];
    }),
  );
  const there = declared.size === leak.amplitude.symbols().size && leak.amplitude.substitute(declared).isZero();
  return there ? ['the amplitude of this move vanishes for the declared values of the couplings, not in general'] : [];
}

function witnessOf(
  leak: Leak,
  rule: RuleValue,
  rules: readonly LinearRule[],
  size: string,
  family: LatticeFamily,
): Record<string, unknown> {
  const spinText = (site: Site): string =>
    stringPhrase({ phase: 0, factors: [{ ...site, pauli: 'z' }] }, family).replace('^z', '');
  const flips = new Set(leak.flip.map(siteKey));
  const before = leak.before.map(({ site, bit }) => ({ species: site.species, cell: site.cell, bit }));
  const after = before.map((b) => (flips.has(siteKey(b)) ? { ...b, bit: 1 - b.bit } : b));
  const excited = leak.before.filter(({ bit }) => bit === 1).map(({ site }) => spinText(site));
  const { broken } = leak;
  const form = rules[broken.rule];
  const sum =
    form && !obeys(form.relation, broken.after, form.bound)
      ? `its sum goes from ${String(broken.before)} to ${String(broken.after)}`
      : '';
  return {
    size,
    flip: leak.flip.map(spinText),
    amplitude: leak.amplitude.toText(),
    before,
    after,
    rule: rule.name,
    where: broken.sites.map(spinText),
    words: `where ${excited.length === 0 ? 'no spin nearby is excited' : `of the spins nearby ${excited.join(', ')} are excited`}, a move flips ${leak.flip.map(spinText).join(', ')} and breaks ${rule.name} at ${broken.sites.map(spinText).join(', ')}: ${sum}; the state stands on ${size}`,
  };
}
