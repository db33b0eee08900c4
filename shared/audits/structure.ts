import {
  commuteExtended,
  commuteOrbits,
  commuteWithExtended,
  commutesAt,
  type AllSizes,
  type Orbit,
} from '../algebra/pauli/commutation.ts';
import { commonPeriod } from '../algebra/pauli/commutant.ts';
import { lcmOf } from '../algebra/pauli/collect.ts';
import type { SpinClass } from '../algebra/pauli/vector.ts';
import { Echelon } from '../algebra/f2/bits.ts';
import { columnsOf, toSparse, type SparseString } from '../algebra/finite/sparse.ts';
import { siteTable, wrapExtended, wrapOrbit } from '../algebra/finite/wrap.ts';
import { canonicalExtended } from '../algebra/pauli/extended.ts';
import { translateString } from '../algebra/pauli/string.ts';
import type { Extended } from '../algebra/pauli/types.ts';
import type { Values } from '../language/values.ts';
import { isLatticeProblem, type Lattice } from '../lattice/cells.ts';
import { newCluster, sizeText, straight, type Cluster } from '../lattice/cluster.ts';
import { BudgetSpent, newBudget, type Budget } from '../limits.ts';
import { extendedPhrase } from '../maps/phrases.ts';
import type { Audit, Finding, Progress, Question } from './audit.ts';
import { fewestGenerators, foldedCommutant, repeated, type Folded } from './foldings.ts';
import { lawText } from './found-text.ts';
import { openFinding } from './numeric.ts';
import { operatorPieces, sizesWords } from './pieces.ts';
import { cheap, keyOf } from './question.ts';
import { speciesCells } from './sector.ts';

const source = 'Local symmetries as syzygies over Laurent polynomials: J. Haah, Commun. Math. Phys. 324, 351 (2013).';

/** What is asked: the translated families of a model and the spins it lives on. */
interface Model {
  readonly lattice: Lattice;
  readonly orbits: readonly Orbit[];
  readonly classes: readonly SpinClass[];
  readonly species: ReturnType<typeof speciesCells>;
  readonly period: readonly number[];
}

/** Everything that was found at one repeat length, and how it stands on tori. */
interface Found {
  readonly repeat: number;
  /** The longest repeat length that was tried. */
  readonly tried: number;
  readonly local: readonly Folded[];
  /** No generating set of the local ones is smaller; undefined where that was not settled. */
  readonly fewest: number | undefined;
  /** Subsystem families with one representative; global strings one by one. */
  readonly extended: readonly { readonly kind: 'subsystem' | 'global'; readonly extended: Extended }[];
  readonly sizes: readonly string[];
  /** Sizes on which more strings commute than the found ones generate, with how many more. */
  readonly unexplained: readonly { readonly size: string; readonly more: number }[];
}

/** Nonempty sets of directions, small ones first. */
function directionSets(dimension: number): number[][] {
  const all = Array.from({ length: 2 ** dimension - 1 }, (_, k) =>
    Array.from({ length: dimension }, (__, d) => d).filter((d) => ((k + 1) >> d) & 1),
  );
  return all.sort((a, b) => a.length - b.length);
}

/** Extents of the tori on which completeness is tested, in multiples of `unit`. */
const series: Readonly<Record<number, readonly (readonly number[])[]>> = {
  1: [[3], [4], [5], [6], [7], [8], [9], [12]],
  2: [
    [3, 3],
    [3, 4],
    [4, 4],
    [4, 5],
    [5, 5],
    [6, 6],
    [7, 7],
    [8, 8],
  ],
  3: [
    [3, 3, 3],
    [3, 3, 4],
    [4, 4, 4],
    [3, 4, 5],
  ],
};

const mostSpins = 1_600;

/** The tori for a period: those of the series that fit, or the series in units of the period where few of them do. */
function toriOf(model: Model, repeat: number): Cluster[] {
  const { lattice, period, classes } = model;
  const unit = period.map((m) => lcmOf(m, repeat));
  const list = series[period.length] ?? [];
  const fit = list.filter((extents) => extents.every((l, d) => l % (unit[d] ?? 1) === 0));
  const short = [1, 2, 3]
    .map((k) => unit.map((m) => Math.max(k, 1) * m))
    .filter((extents) => extents.every((l) => l >= 3));
  const chosen = fit.length >= 3 ? fit : [...fit, ...short.filter((s) => !fit.some((f) => f.join() === s.join()))];
  return chosen.flatMap((extents) => {
    const cells = extents.reduce((a, b) => a * b, 1);
    const cluster = newCluster({ family: lattice.family, periodic: extents.map(() => true) }, straight(...extents));
    return isLatticeProblem(cluster) || cells * classes.length > mostSpins ? [] : [cluster];
  });
}

/** Shifts of a string that repeats along some directions, on a torus: all that tell translates apart. */
function shiftsOf(cluster: Cluster, folded: Folded): number[][] {
  const reach = cluster.size.periods.map((row, d) => (folded.steps[d] ? (folded.steps[d] ?? 1) : (row[d] ?? 1)));
  return reach.reduce<number[][]>(
    (heads, l) => heads.flatMap((head) => Array.from({ length: l }, (_, c) => [...head, c])),
    [[]],
  );
}

const shiftedBy = (folded: Folded, by: readonly number[]): Extended =>
  repeated(translateString(folded.string, by), folded.steps);

/** The shifts by which each found one adds independent strings on a torus, in order, and how many strings are left unexplained. */
function ranks(
  model: Model,
  cluster: Cluster,
  local: readonly Folded[],
  folded: readonly Folded[],
  budget: Budget,
): { added: number[][][]; more: number } {
  const table = siteTable(cluster, model.species);
  const n = table.sites.length;
  const terms = new Echelon(2 * n, budget);
  for (const orbit of model.orbits)
    for (const string of wrapOrbit(table, cluster, { ...orbit, needs: [] }, budget))
      terms.insert(columnsOf(toSparse(string)));
  const found = new Echelon(2 * n, budget);
  const take = (one: Folded): number[][] =>
    shiftsOf(cluster, one).filter((by) => {
      const string: SparseString = toSparse(wrapExtended(table, cluster, shiftedBy(one, by), budget));
      return found.insert(columnsOf(string)).independent;
    });
  local.forEach(take);
  const added = folded.map(take);
  return { added, more: 2 * n - terms.rank - found.rank };
}

/** Growing with the size (a family of subsystem symmetries), bounded (global), or nothing new. */
function classified(added: readonly number[], cells: readonly number[]): 'subsystem' | 'global' | undefined {
  if (added.every((a) => a === 0)) return undefined;
  const smallest = added[cells.indexOf(Math.min(...cells))] ?? 0;
  const largest = added[cells.indexOf(Math.max(...cells))] ?? 0;
  return largest > smallest && smallest > 0 ? 'subsystem' : 'global';
}

function* search(model: Model, repeat: number, budget: Budget): Generator<Progress, Found> {
  const { orbits, classes, period } = model;
  const dimension = period.length;
  const local = foldedCommutant(orbits, dimension, classes, [], 1, budget);
  const fewest = atMost(() => fewestGenerators(local, classes, period, newBudget(4_000_000)));
  yield { done: 0.3, doing: 'local symmetries' };
  const folded = directionSets(dimension).flatMap((along) =>
    foldedCommutant(orbits, dimension, classes, along, repeat, budget),
  );
  yield { done: 0.6, doing: 'symmetries that repeat' };
  const tori = toriOf(model, repeat);
  const all = tori.map((cluster) => ranks(model, cluster, local, folded, budget));
  const cells = tori.map((cluster) => cluster.unitCells);
  const extended = folded.flatMap((one, k) => {
    const added = all.map((r) => r.added[k] ?? []);
    const kind = classified(
      added.map((shifts) => shifts.length),
      cells,
    );
    if (!kind) return [];
    const most = added.reduce((a, b) => (b.length > a.length ? b : a));
    const shifts = kind === 'global' ? most : most.slice(0, 1);
    return shifts.map((by) => ({ kind, extended: shiftedBy(one, by) }));
  });
  const sizes = tori.map((cluster) => sizeText(cluster.size));
  const unexplained = all.flatMap(({ more }, k) => (more > 0 ? [{ size: sizes[k] ?? '', more }] : []));
  return { repeat, tried: repeat, local, fewest, extended, sizes, unexplained };
}

/** What the run gives, or undefined where its budget does not last. */
function atMost<T>(run: () => T): T | undefined {
  try {
    return run();
  } catch (error) {
    if (error instanceof BudgetSpent) return undefined;
    throw error;
  }
}

/** Repeat lengths tried, in order: the first that explains all strings on the tori that it fits. */
const repeats = [1, 2, 3, 4] as const;

/** Most spins of an enlarged cell: beyond it the algebra takes minutes. */
const mostInCell = 100;

function modelOf(question: Question): Model | string {
  const { statement, values } = question;
  const [subject] = statement.subjects;
  const value = values.find(subject?.name ?? '');
  const { lattice } = values;
  if (!lattice || (value?.what !== 'model' && value?.what !== 'operator'))
    return `${subject?.name ?? 'the subject'} is not a model`;
  const pieces = operatorPieces(value.name, value.operator);
  const orbits = pieces.flatMap((piece) => (piece.kind === 'orbit' ? [piece.orbit] : []));
  if (orbits.length < pieces.length)
    return `${value.name} holds a product over the whole lattice; symmetries are looked for where every term is local`;
  if (orbits.some(({ steps }) => steps.some((m) => m === 0)))
    return `${value.name} holds terms that stand in one place; symmetries are looked for where every term is translated`;
  if (orbits.length === 0) return `${value.name} is a constant: every string commutes with it`;
  const names = new Set([
    ...(value.what === 'model' ? value.species : []),
    ...orbits.flatMap((o) => o.string.factors.map((f) => f.species)),
  ]);
  const species = speciesCells(values, names);
  const classes = species.flatMap(({ name, kind, classes: indices }) =>
    indices.map((index): SpinClass => ({ species: name, kind, index })),
  );
  return { lattice, orbits, classes, species, period: commonPeriod(orbits, lattice.family.dimension) };
}

function* decide(question: Question): Generator<Progress, readonly Finding[]> {
  const name = question.statement.subjects[0]?.name ?? '';
  const words = `the Pauli symmetries of ${name}`;
  const model = modelOf(question);
  if (typeof model === 'string') return [openFinding(words, model)];
  const budget = newBudget(80_000_000, 'operations of finding symmetries');
  let best: Found | undefined;
  try {
    for (const repeat of repeats) {
      if (repeat > 1 && model.classes.length * repeat ** model.period.length > mostInCell) break;
      const found = yield* search(model, repeat, budget);
      const whole = found.unexplained.length === 0 && found.sizes.length > 0;
      best = !best || whole ? found : { ...best, tried: repeat };
      if (whole) break;
    }
  } catch (error) {
    if (!(error instanceof BudgetSpent)) throw error;
    if (!best) return [openFinding(words, error.message)];
  }
  return best ? findings(name, model, best, question.values) : [];
}

/** Least number of generators: those found, with whether fewer are ruled out. */
function findings(name: string, model: Model, found: Found, values: Values): Finding[] {
  const { local, extended, unexplained, sizes } = found;
  const subsystem = extended.filter((e) => e.kind === 'subsystem');
  const global = extended.filter((e) => e.kind === 'global');
  const listed = listing(model, found);
  const figures = {
    local: local.length,
    subsystem: subsystem.length,
    global: global.length,
    sizes,
    found: listed.texts,
    clashes: listed.clashes,
  };
  const counts = `${plural(figures.local, 'local family', 'local families')}, ${plural(figures.subsystem, 'subsystem family', 'subsystem families')}, ${String(figures.global)} global`;
  const value = values.find(name);
  const cautions = [
    ...(value?.what === 'model' && value.seams.length > 0 ? ['found without the seam, which changes signs alone'] : []),
    ...(found.fewest === local.length
      ? []
      : [
          `the ${String(local.length)} local families generate all; that fewer do is ${found.fewest === undefined ? 'not ruled out' : `ruled out below ${String(found.fewest)}`}`,
        ]),
    ...(found.repeat > 1
      ? [
          `what repeats by ${String(found.repeat)} unit cells fits on sizes that are multiples of ${String(found.repeat)}; on others it is not there`,
        ]
      : []),
    ...(model.lattice.periodic.every(Boolean) || values.lattice === undefined
      ? []
      : ['counted on tori; at open edges strings end or are cut, and more or fewer may commute']),
  ];
  const proof: Finding = {
    evidence: listed.proofs
      ? { kind: 'all sizes', proof: listed.proofs }
      : { kind: 'reason', reason: 'the verdict on one string depends on the size' },
    statement: listed.proofs
      ? `every string found commutes with every term of ${name}, on ${sizesWords(listed.proofs)}; the local ones generate all that are local`
      : `the strings found and ${name}`,
    figures: {
      local: figures.local,
      subsystem: figures.subsystem,
      global: figures.global,
      strings: listed.texts.length,
    },
    sources: [source],
  };
  if (unexplained.length > 0) {
    const more = unexplained.map(({ size, more: m }) => `${String(m)} on ${size}`).join(', ');
    const whole = openFinding(
      `${words(name)}: ${counts} found`,
      `beyond what repeats within ${String(found.tried)} unit cells, further strings commute: ${more}`,
      figures,
    );
    return [{ ...whole, cautions, sources: [source] }, proof];
  }
  return [
    {
      evidence: { kind: 'exact on', sizes },
      statement: `${words(name)}: ${counts}; on ${sizes.join(', ')} they generate every Pauli string that commutes with all terms`,
      figures,
      cautions,
      sources: [source],
    },
    proof,
  ];
}

const words = (name: string): string => `the Pauli symmetries of ${name}`;
const plural = (n: number, one: string, many: string): string => `${String(n)} ${n === 1 ? one : many}`;

interface Listing {
  /** Declarations of the operator language. */
  readonly texts: string[];
  /** Pairs of found ones that do not all commute, by number from 0. */
  readonly clashes: [number, number][];
  readonly proofs: AllSizes[] | undefined;
}

function listing(model: Model, found: Found): Listing {
  const { family } = model.lattice;
  const laws = found.local.map((one): Orbit => ({ string: one.string, steps: model.period }));
  const symmetries = found.extended.map((e) => e.extended);
  const texts = [
    ...laws.map((law, k) => lawText(`found${String(k + 1)}`, law.string, law.steps, family)),
    ...symmetries.map(
      (s, k) =>
        `symmetry found${String(laws.length + k + 1)} = ${extendedPhrase(canonicalExtended(s, { open: false }), family)}`,
    ),
  ];
  const proofs: AllSizes[] = [];
  let settled = true;
  for (const orbit of model.orbits) {
    for (const verdict of [
      ...laws.map((law) => commuteOrbits(orbit, law)),
      ...symmetries.map((s) => commuteWithExtended(orbit, s)),
    ]) {
      if (verdict.commutes === true) proofs.push(verdict.evidence);
      else settled = false;
    }
  }
  const size = 12;
  const clashes: [number, number][] = [];
  const clash = (i: number, j: number): boolean => {
    const [a, b] = [laws[i], laws[j]];
    const [s, t] = [symmetries[i - laws.length], symmetries[j - laws.length]];
    const verdict = a
      ? b
        ? commuteOrbits(a, b)
        : commuteWithExtended(a, t ?? { phase: 0, parts: [] })
      : commuteExtended(s ?? { phase: 0, parts: [] }, t ?? { phase: 0, parts: [] });
    return verdict.commutes === 'depends'
      ? !commutesAt(
          verdict.on,
          model.period.map(() => size + 1),
        )
      : !verdict.commutes;
  };
  for (let i = 0; i < texts.length; i++) for (let j = i; j < texts.length; j++) if (clash(i, j)) clashes.push([i, j]);
  return { texts, clashes, proofs: settled ? proofs : undefined };
}

export const structure: Audit = {
  name: 'symmetries',
  help: 'Which Pauli strings commute with every term of a model? Local laws, subsystem symmetries and global ones, found and written down.',
  example: 'audit symmetries of code',
  questions: (statement, values) => [
    { audit: 'symmetries', statement, values, size: undefined, part: '', key: keyOf(statement, values, '', ['spins']) },
  ],
  cost: () => ({ ...cheap, operations: 5e7 }),
  decide,
};
