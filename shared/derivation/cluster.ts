import { toPauli } from '../algebra/finite/string.ts';
import { siteTable } from '../algebra/finite/wrap.ts';
import { type Coefficient, MissingValue } from '../algebra/numbers/coefficient.ts';
import type { Site } from '../algebra/pauli/types.ts';
import { finiteSubject, clusterOf, speciesCells } from '../audits/sector.ts';
import { Unanswerable } from '../audits/unanswerable.ts';
import type { ClusterCircuit, ClusterModel } from '../contracts/exchange.ts';
import { evaluateSource, type Program } from '../language/evaluate.ts';
import { readSizes } from '../language/sizes.ts';
import type { CircuitLayer, MapValue, Values } from '../language/values.ts';
import { shifted, type Size } from '../lattice/cells.ts';
import { type Cluster, sizeText } from '../lattice/cluster.ts';
import { BudgetSpent } from '../limits.ts';
import { inverseCircuit } from '../maps/circuit.ts';
import { buildMap } from '../maps/registry.ts';

/** What of a source goes onto a finite cluster: a model or a circuit by its name (null: the first), the size as text (null: as declared). */
export interface OnCluster {
  readonly what: 'model' | 'circuit';
  readonly name: string | null;
  readonly size: string | null;
}

/** Past this a file would be of no use: strings of a model, gates of a circuit. */
const mostRows = 200_000;

export type ClusterAnswer =
  { readonly model: ClusterModel } | { readonly circuit: ClusterCircuit } | { readonly fault: string };

/** A model's Pauli strings, or a circuit's gates, on a finite cluster; or, as a sentence, why there are none. */
export function onCluster(source: string, asked: OnCluster): ClusterAnswer {
  try {
    const program = evaluateSource(source, { buildMap });
    const size = sizeOf(program, asked.size);
    return asked.what === 'model'
      ? { model: clusterModel(program.values, chosen(program.values, 'model', asked.name), size) }
      : { circuit: clusterCircuit(program.values, chosen(program.values, 'map', asked.name), size) };
  } catch (error) {
    if (error instanceof Unanswerable) return { fault: `${error.message}.` };
    if (error instanceof BudgetSpent) return { fault: `A limit was reached: ${error.limit}.` };
    throw error;
  }
}

function sizeOf({ lattice }: Program, text: string | null): Size {
  if (!lattice) throw new Unanswerable('no lattice is declared');
  if (text === null) return lattice.size;
  const sizes = readSizes(text, lattice);
  if ('wrong' in sizes) throw new Unanswerable(`the size ${text} cannot be used: ${sizes.wrong}`);
  const [size, ...more] = sizes;
  if (size === undefined || more.length > 0) throw new Unanswerable('one size is needed');
  return size;
}

function chosen(values: Values, what: 'model' | 'map', name: string | null): string {
  const all = [...values.all.values()].filter(
    (value) => value.what === what && (value.what !== 'map' || layersOf(value) !== null),
  );
  const word = what === 'map' ? 'circuit' : what;
  const names = all.map((value) => value.name);
  const [first] = names;
  if (first === undefined) throw new Unanswerable(`the notebook has no ${word}`);
  if (name === null) return first;
  if (!names.includes(name)) throw new Unanswerable(`there is no ${word} ${name}; there is ${names.join(', ')}`);
  return name;
}

const clusterWords = (values: Values, size: Size): string =>
  `${values.lattice?.family.name ?? ''} lattice, ${sizeText(size)} ${values.lattice?.boundary ?? ''}`;

/** "g[links.1(0, 2)]", as the language names the cell. */
function siteName(values: Values, { species, cell }: Site): string {
  const family = values.lattice?.family;
  const classes = cell.kind === 'links' ? family?.links : cell.kind === 'plaquettes' ? family?.plaquettes : undefined;
  const all = cell.kind === 'vertices' ? family?.vertices : classes;
  const label = all === undefined || all.length < 2 ? '' : `.${all[cell.index]?.labels[0] ?? ''}`;
  return `${species}[${cell.kind}${label}(${cell.offset.join(', ')})]`;
}

function clusterModel(values: Values, name: string, size: Size): ClusterModel {
  const place = values.find(name)?.place;
  if (place === undefined) throw new Unanswerable(`there is no model ${name}`);
  const { model, table } = finiteSubject(values, { name, sector: [], place }, size);
  if (model.terms.length > mostRows)
    throw new Unanswerable(`the model has more than ${String(mostRows)} strings there`);
  const given = new Map<string, Coefficient>();
  for (const value of values.all.values()) {
    if (value.what === 'coupling' && value.value) given.set(value.name, value.value);
  }
  const numbers = (coefficient: Coefficient): Pick<ClusterModel['strings'][number], 'exact' | 're' | 'im'> => {
    const exact = coefficient.substitute(given);
    try {
      return { exact: exact.toText(), ...exact.toFloat() };
    } catch (error) {
      if (error instanceof MissingValue) throw new Unanswerable(error.message);
      throw error;
    }
  };
  const constant = model.constant.isZero() ? [] : [{ ...numbers(model.constant), paulis: [] }];
  const strings = model.terms.flatMap(({ coefficient, string }) => {
    if (coefficient.isZero()) return [];
    const paulis = toPauli(string).factors.map(({ spin, pauli }) => ({
      site: spin,
      letter: pauli.toUpperCase() as 'X' | 'Y' | 'Z',
    }));
    return [{ ...numbers(coefficient), paulis }];
  });
  return {
    name,
    cluster: clusterWords(values, size),
    sites: table.sites.map((site) => siteName(values, site)),
    strings: [...constant, ...strings],
  };
}

/** The layers of a map that is a circuit, of circuits one after the other, or of an inverse; null for any other. */
function layersOf({ declaration }: MapValue): readonly CircuitLayer[] | null {
  switch (declaration.kind) {
    case 'circuit':
      return declaration.layers;
    case 'then': {
      const first = layersOf(declaration.first);
      const second = layersOf(declaration.second);
      return first && second && [...first, ...second];
    }
    case 'inverse': {
      const layers = layersOf(declaration.of);
      return layers && inverseCircuit({ kind: 'circuit', layers }).layers;
    }
    default:
      return null;
  }
}

function clusterCircuit(values: Values, name: string, size: Size): ClusterCircuit {
  const value = values.find(name);
  const layers = value?.what === 'map' ? layersOf(value) : null;
  if (layers === null) throw new Unanswerable(`${name} is no circuit`);
  const cluster = clusterOf(values, size);
  const species = new Set(
    layers.flatMap((layer) => layer.gates.flatMap(({ targets }) => targets.map((target) => target.species))),
  );
  const table = siteTable(cluster, speciesCells(values, species));
  const gates = layers.flatMap((layer) =>
    layer.gates.flatMap((gate) =>
      landed(cluster, gate.steps, gate.needs, gate.targets, (site) => table.number(site), layer.gate),
    ),
  );
  if (gates.length > mostRows) throw new Unanswerable(`the circuit has more than ${String(mostRows)} gates there`);
  const sites = table.sites.map((site) => siteName(values, site));
  return { name, cluster: clusterWords(values, size), sites, gates };
}

/** All translates of a gate on the cluster; one that names a missing cell is left out. */
function landed(
  cluster: Cluster,
  steps: readonly number[],
  needs: readonly Site['cell'][],
  targets: readonly Site[],
  number: (site: Site) => number | undefined,
  gate: string,
): ClusterCircuit['gates'] {
  if (!cluster.admits(steps)) throw new Unanswerable(`the gate ${gate} has a period that does not divide this size`);
  const cells = [...targets.map(({ cell }) => cell), ...needs];
  const along = (pick: (...offsets: number[]) => number): number[] =>
    Array.from({ length: cluster.dimension }, (_, d) => pick(...cells.map(({ offset }) => offset[d] ?? 0)));
  return cluster.orbit(steps, along(Math.min), along(Math.max)).flatMap((by) => {
    const sites = targets.map(({ species, cell }) => number({ species, cell: shifted(cell, by) }));
    const whole = sites.filter((site) => site !== undefined);
    if (whole.length < sites.length) return [];
    if (needs.some((cell) => cluster.number(shifted(cell, by)) === undefined)) return [];
    if (new Set(whole).size < whole.length) {
      throw new Unanswerable(`on this size the gate ${gate} would act on one spin twice`);
    }
    return [{ gate, sites: whole }];
  });
}
