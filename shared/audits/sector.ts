import { bodyKey } from '../algebra/finite/string.ts';
import type { FiniteModel, FiniteString, SiteTable } from '../algebra/finite/types.ts';
import {
  anticommutesOnSite,
  isWrapProblem,
  siteTable,
  wrapExtended,
  wrapOperator,
  wrapOrbit,
  type Seam,
  type SpeciesCells,
} from '../algebra/finite/wrap.ts';
import { Coefficient } from '../algebra/numbers/coefficient.ts';
import type { Operator } from '../algebra/pauli/types.ts';
import type {
  LawValue,
  MapValue,
  ModelValue,
  OperatorValue,
  RuleValue,
  SectorLabel,
  Subject,
  SymmetryValue,
  Values,
} from '../language/values.ts';
import { newCluster, sizeText, type Cluster } from '../lattice/cluster.ts';
import { isLatticeProblem, type LatticeFamily, type Size } from '../lattice/cells.ts';
import { stringPhrase } from '../maps/phrases.ts';
import type { DiagonalRule } from '../spectra/bases/enumerated.ts';
import type { ImageBlocks } from '../spectra/bases/image-blocks.ts';
import { diagonalRules } from './finite-rules.ts';
import { imageBlocks } from './image-sector.ts';
import { fitting, Unanswerable } from './unanswerable.ts';

/** A signed Pauli string of a sector on a cluster: in the sector it equals `value`. */
export interface SectorConstraint {
  readonly label: string;
  readonly string: FiniteString;
  readonly value: 1 | -1;
}

/** A model in its sector, on one cluster. */
export interface FiniteSubject {
  readonly name: string;
  readonly cluster: Cluster;
  readonly table: SiteTable;
  readonly model: FiniteModel;
  readonly constraints: readonly SectorConstraint[];
  readonly rules: readonly DiagonalRule[];
  /** State maps named in the sector: the subspace is their image. */
  readonly images: readonly ImageBlocks[];
  /** Their names. */
  readonly imageNames: readonly string[];
}

/** The cluster of a size. Throws Unanswerable. */
export function clusterOf(values: Values, size: Size): Cluster {
  const { lattice } = values;
  if (!lattice) throw new Unanswerable('no lattice is declared');
  const cluster = newCluster(lattice, size);
  if (isLatticeProblem(cluster)) throw new Unanswerable(cluster.message);
  return cluster;
}

/** Species on which an operator acts. */
export function speciesOfOperator(operator: Operator, into: Set<string>): void {
  const parts = operator.extended.flatMap((term) => term.extended.parts);
  for (const { string } of [...operator.families, ...parts])
    for (const factor of string.factors) into.add(factor.species);
}

function speciesOfLabel(values: Values, label: SectorLabel, into: Set<string>): void {
  const value = values.find(label.name);
  const add = (
    strings: readonly { readonly string: { readonly factors: readonly { readonly species: string }[] } }[],
  ): void => {
    for (const { string } of strings) for (const factor of string.factors) into.add(factor.species);
  };
  if (value?.what === 'law') add(value.families);
  if (value?.what === 'symmetry') add(value.extended.parts);
  if (value?.what === 'operator') speciesOfOperator(value.operator, into);
  if (value?.what === 'rule') for (const family of value.families) speciesOfOperator(family.operator, into);
  if (value?.what === 'map') for (const name of value.map.to) into.add(name);
}

/** Cells of the named species, in the order of their declaration. */
export function speciesCells(values: Values, names: ReadonlySet<string>): SpeciesCells[] {
  const all = [...values.all.values()];
  return all.flatMap((value) =>
    value.what === 'spins' && names.has(value.name)
      ? [{ name: value.name, kind: value.kind, classes: value.classes }]
      : [],
  );
}

/** All instances of a law on a cluster, in the order of its classes; what an open edge leaves out is not there. */
export function lawConstraints(
  cluster: Cluster,
  table: SiteTable,
  law: LawValue,
  value: 1 | -1 = law.value,
): SectorConstraint[] {
  return fitting(`law ${law.name}`, cluster, () =>
    law.families.flatMap((family) =>
      wrapOrbit(table, cluster, family).map((string) => ({ label: law.name, string, value })),
    ),
  );
}

/** The one constraint of a symmetry on a cluster. */
export function symmetryConstraint(
  cluster: Cluster,
  table: SiteTable,
  symmetry: SymmetryValue,
  value: 1 | -1 = 1,
): SectorConstraint {
  const string = fitting(`symmetry ${symmetry.name}`, cluster, () => wrapExtended(table, cluster, symmetry.extended));
  return { label: symmetry.name, string, value };
}

/** The one string that an operator of a sector is; with a parameter that of the cell at the origin. Throws Unanswerable. */
function chargeConstraint(
  cluster: Cluster,
  table: SiteTable,
  { name, operator }: OperatorValue,
  value: 1 | -1 = 1,
): SectorConstraint {
  const [family] = operator.families;
  const [term] = operator.extended;
  const only = operator.families.length + operator.extended.length === 1 ? (family ?? term) : undefined;
  const sign = only?.coefficient.equals(Coefficient.one)
    ? 1
    : only?.coefficient.equals(Coefficient.one.neg())
      ? -1
      : undefined;
  if (!only || !sign || family?.steps.some((m) => m > 0))
    throw new Unanswerable(`${name} is no single Pauli product, so it labels no sector`, true);
  const [string] = fitting(`operator ${name}`, cluster, () =>
    family ? wrapOrbit(table, cluster, family) : term ? [wrapExtended(table, cluster, term.extended)] : [],
  );
  if (!string) throw new Unanswerable(`${name} does not stand on ${sizeText(cluster.size)}`);
  return { label: name, string, value: value * sign === 1 ? 1 : -1 };
}

/** A label for one cell stands instead of the law's instance there: a static charge. */
function placeCharge(constraints: SectorConstraint[], charge: SectorConstraint): void {
  const key = bodyKey(charge.string);
  const at = constraints.findIndex((c) => bodyKey(c.string) === key);
  if (at < 0) constraints.push(charge);
  else constraints[at] = charge;
}

interface Labels {
  readonly constraints: SectorConstraint[];
  readonly rules: RuleValue[];
  readonly images: MapValue[];
}

function resolve(values: Values, cluster: Cluster, table: SiteTable, sector: readonly SectorLabel[]): Labels {
  const labels: Labels = { constraints: [], rules: [], images: [] };
  // Labels of single cells last: they stand instead of a law's instance.
  const isCharge = (label: SectorLabel): number => (values.find(label.name)?.what === 'operator' ? 1 : 0);
  for (const label of [...sector].sort((a, b) => isCharge(a) - isCharge(b))) {
    const value = values.find(label.name);
    if (value?.what === 'law') labels.constraints.push(...lawConstraints(cluster, table, value, label.value));
    else if (value?.what === 'symmetry')
      labels.constraints.push(symmetryConstraint(cluster, table, value, label.value));
    else if (value?.what === 'operator')
      placeCharge(labels.constraints, chargeConstraint(cluster, table, value, label.value));
    else if (value?.what === 'rule') labels.rules.push(value);
    else if (value?.what === 'map') labels.images.push(value);
    else throw new Unanswerable(`${label.name} is not a law, a symmetry, a rule, a Pauli product or a state map`, true);
  }
  return labels;
}

/** Seams of a model; throws Unanswerable where they do not say what the model is. */
function seamsOf(values: Values, value: ModelValue | OperatorValue): readonly Seam[] {
  if (value.what === 'operator') return [];
  const source = value.image && values.find(value.image.of);
  if (source?.what === 'model' && source.seams.length > 0)
    throw new Unanswerable(
      `${value.name} is the image of ${source.name}, which has a seam: map the model without it and take the sector of the seam, or twist the image`,
      true,
    );
  for (const { symmetry } of value.seams)
    for (const { string } of value.operator.families)
      if (anticommutesOnSite(string, symmetry))
        throw new Unanswerable(
          `${value.name} is twisted by a product that does not commute with its term ${stringPhrase(string, familyOf(values))}, so the seam could be felt anywhere`,
          true,
        );
  return value.seams;
}

function familyOf({ lattice }: Values): LatticeFamily {
  if (!lattice) throw new Unanswerable('no lattice is declared');
  return lattice.family;
}

/**
 * The model of a subject on a cluster of the given size, with its sector. A model lives on all spins of the species that
 * occur in it or in the sector. Throws Unanswerable.
 */
export function finiteSubject(values: Values, subject: Subject, size: Size): FiniteSubject {
  const value = values.find(subject.name);
  if (value?.what !== 'model' && value?.what !== 'operator')
    throw new Unanswerable(`${subject.name} is not a model`, true);
  const cluster = clusterOf(values, size);
  const names = new Set<string>(value.what === 'model' ? value.species : []);
  speciesOfOperator(value.operator, names);
  for (const label of subject.sector) speciesOfLabel(values, label, names);
  const table = siteTable(cluster, speciesCells(values, names));
  const model = wrapOperator(table, cluster, value.operator, undefined, seamsOf(values, value));
  if (isWrapProblem(model))
    throw new Unanswerable(`${subject.name} does not fit on ${sizeText(size)}: ${model.message}`);
  const { constraints, rules, images } = resolve(values, cluster, table, subject.sector);
  return {
    name: subject.name,
    cluster,
    table,
    model,
    constraints,
    rules: rules.flatMap((rule) => diagonalRules(cluster, table, rule)),
    images: images.map((map) => imageBlocks(cluster, table, map)),
    imageNames: images.map((map) => map.name),
  };
}

/** "ising [flip = +1]" as the line has it. */
export function subjectWords(values: Values, subject: Subject): string {
  if (subject.sector.length === 0) return subject.name;
  const labels = subject.sector.map((label) => {
    const value = values.find(label.name);
    if (value?.what === 'rule' || value?.what === 'map') return label.name;
    const sign = label.value ?? (value?.what === 'law' ? value.value : 1);
    return `${label.name} = ${sign === 1 ? '+1' : '-1'}`;
  });
  return `${subject.name} [${labels.join(', ')}]`;
}
