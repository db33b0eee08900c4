import { isWrapProblem, wrapExtended, wrapOperator, wrapString } from '../algebra/finite/wrap.ts';
import type { FiniteModel } from '../algebra/finite/types.ts';
import { Coefficient } from '../algebra/numbers/coefficient.ts';
import { translateString } from '../algebra/pauli/string.ts';
import type { LawValue, Values } from '../language/values.ts';
import { sizeText } from '../lattice/cluster.ts';
import { BudgetSpent } from '../limits.ts';
import { NotHermitian, type NumericTerm } from '../spectra/hamiltonian.ts';
import { costOf, numericTerms, type Spectrum } from '../spectra/solve.ts';
import { MissingValue } from '../algebra/numbers/coefficient.ts';
import type { Cost, Means, Progress } from './audit.ts';
import { costWords, levelsOf, spectrumQuestion } from './numeric.ts';
import type { FiniteSubject } from './sector.ts';
import { fitting, Unanswerable } from './unanswerable.ts';

/** Ground spaces with their vectors, and operators that are measured in them. */

const firstLevels = 4;
const mostLevels = 96;

/** Whether the ground multiplet is whole and the next level known, or everything is. */
const isWhole = ({ multiplets, energies, dimension }: Spectrum): boolean =>
  (multiplets[0]?.complete === true && multiplets.length > 1) || energies.length >= dimension;

/** Whether the vectors of the ground multiplet are all kept, where they were asked for. */
const hasVectors = ({ multiplets, space }: Spectrum, vectors: boolean): boolean =>
  !vectors || (space !== undefined && space.vectors.length * space.copies >= (multiplets[0]?.multiplicity ?? 0));

/** The whole ground multiplet and, where it is not very large, the next level, for given couplings; with vectors on request (free `space` afterwards). Throws Fault, Unanswerable. */
export function* groundOf(
  values: Values,
  subject: FiniteSubject,
  couplings: ReadonlyMap<string, number>,
  vectors: boolean,
  means: Means,
  doing: string,
): Generator<Progress, Spectrum> {
  for (let levels = firstLevels; ; levels = Math.min(3 * levels, mostLevels)) {
    const question = { ...spectrumQuestion(values, subject, levels, couplings), vectors };
    const spectrum = yield* levelsOf(question, subject, means, doing);
    const last = levels >= mostLevels;
    const complete = spectrum.multiplets[0]?.complete === true;
    if ((isWhole(spectrum) || (last && complete)) && hasVectors(spectrum, vectors)) return spectrum;
    spectrum.space?.free();
    if (!last) continue;
    const at = sizeText(subject.cluster.size);
    throw new Unanswerable(
      complete
        ? `${String(spectrum.multiplets[0]?.multiplicity ?? 0)} states are degenerate on ${at}, too many to keep them all`
        : `more than ${String(spectrum.energies.length)} levels are degenerate on ${at}; the ground multiplet was not found whole`,
    );
  }
}

/** What one ground space costs, at given couplings; refusals count as cheap, so that deciding says why. */
export function groundCost(values: Values, subject: () => FiniteSubject, couplings: ReadonlyMap<string, number>): Cost {
  try {
    const question = spectrumQuestion(values, subject(), firstLevels, couplings);
    const told = costOf(question, { limits: { bytes: Infinity, operations: Infinity, spins: 30, states: 4_000_000 } });
    if (!told.ok) return { operations: 0, bytes: 0, words: told.fault.code };
    return { operations: told.cost.operations, bytes: told.cost.bytes, words: costWords(told.cost) };
  } catch (error) {
    if (
      error instanceof Unanswerable ||
      error instanceof MissingValue ||
      error instanceof NotHermitian ||
      error instanceof BudgetSpent
    )
      return { operations: 0, bytes: 0, words: error.message };
    throw error;
  }
}

/** The string of a law that stands for the cell at the origin: of the first class, in unit cell 0 where the law has one there. */
function atOrigin(law: LawValue): LawValue['families'][number] | undefined {
  const byClass = [...law.families].sort((a, b) => a.anchor.index - b.anchor.index);
  const [first] = byClass;
  const same = byClass.filter((family) => family.anchor.index === first?.anchor.index);
  return (
    same.find((family) =>
      family.anchor.offset.every((c, d) => (family.steps[d] ? c % (family.steps[d] ?? 1) === 0 : c === 0)),
    ) ?? first
  );
}

/**
 * An operator, law or symmetry on the cluster of a subject, as it is measured: one with a parameter stands for the cell at the origin.
 * Throws Unanswerable where it acts on spins that the subject does not have, or has no place there.
 */
export function measured(
  values: Values,
  name: string,
  subject: FiniteSubject,
): Pick<FiniteModel, 'terms' | 'constant'> {
  const { table, cluster } = subject;
  const value = values.find(name);
  const one = (string: FiniteModel['terms'][number]['string']) => ({
    terms: [{ coefficient: Coefficient.one, string }],
    constant: Coefficient.zero,
  });
  demandSpecies(values, name, subject);
  switch (value?.what) {
    case 'model':
    case 'operator': {
      // The subject itself has its seams already.
      if (name === subject.name) return subject.model;
      if (value.what === 'model' && value.seams.length > 0)
        throw new Unanswerable(`${name} has a seam; measure the parts of it as operators`, true);
      const model = wrapOperator(table, cluster, value.operator);
      if (isWrapProblem(model))
        throw new Unanswerable(`${name} does not fit on ${sizeText(cluster.size)}: ${model.message}`);
      return model;
    }
    case 'symmetry':
      return one(fitting(`symmetry ${name}`, cluster, () => wrapExtended(table, cluster, value.extended)));
    case 'law': {
      const family = atOrigin(value);
      const by = family?.anchor.offset.map((c, d) => (family.steps[d] ? -c + (c % (family.steps[d] ?? 1)) : 0)) ?? [];
      const string =
        family && wrapString(table, cluster, translateString(family.string, by), { needs: family.needs, by });
      if (!string) throw new Unanswerable(`${name} has no cell at the origin on ${sizeText(cluster.size)}`, true);
      return one(string);
    }
    default:
      throw new Unanswerable(`${name} is not an operator, a law or a symmetry`, true);
  }
}

function demandSpecies(values: Values, name: string, { table, name: model }: FiniteSubject): void {
  const value = values.find(name);
  const strings =
    value?.what === 'law'
      ? value.families.map((f) => f.string)
      : value?.what === 'symmetry'
        ? value.extended.parts.map((p) => p.string)
        : value?.what === 'model' || value?.what === 'operator'
          ? [...value.operator.families, ...value.operator.extended.flatMap((t) => t.extended.parts)].map(
              (f) => f.string,
            )
          : [];
  const here = new Set(table.sites.map((site) => site.species));
  const missing = strings.flatMap((s) => s.factors).find((f) => !here.has(f.species));
  if (missing)
    throw new Unanswerable(`${name} acts on the spins ${missing.species}, which ${model} does not have`, true);
}

/** Terms as numbers, for a mean: Hermitian ones only. Throws Unanswerable, MissingValue. */
export function meanTerms(
  name: string,
  operator: Pick<FiniteModel, 'terms' | 'constant'>,
  couplings: ReadonlyMap<string, number>,
): { terms: NumericTerm[]; constant: number; weight: number } {
  const terms = numericTerms(operator.terms, couplings);
  const constant = operator.constant.toFloat(couplings);
  const scale = terms.reduce((sum, t) => sum + Math.hypot(t.re, t.im), Math.abs(constant.re));
  if (Math.abs(constant.im) > 1e-12 * scale || !terms.every((t) => isReal(t)))
    throw new Unanswerable(`${name} is not Hermitian, so it has no real mean`, true);
  return { terms, constant: constant.re, weight: scale };
}

/** Whether a numeric term is Hermitian: i^k times its coefficient is real for the product of Pauli matrices that it is. */
function isReal({ re, im, string }: NumericTerm): boolean {
  let ys = 0;
  for (let w = 0; w < string.x.length; w++)
    for (let both = (string.x[w] ?? 0) & (string.z[w] ?? 0); both !== 0; both &= both - 1) ys++;
  const turn = (string.phase - ys) & 3;
  const off = turn % 2 === 0 ? im : re;
  return Math.abs(off) <= 1e-12 * Math.hypot(re, im);
}

/** How far a mean may be off: the residual turns the state by at most residual/gap, and the operator's norm is at most `weight`. */
export function meanBound(spectrum: Spectrum, weight: number): number {
  const [ground, next] = spectrum.multiplets;
  const residual = Math.max(0, ...spectrum.residuals.slice(0, ground?.multiplicity ?? 1));
  const gap = ground && next ? next.energy - ground.energy : Infinity;
  return 2 * weight * (residual / gap + 1e-13);
}
