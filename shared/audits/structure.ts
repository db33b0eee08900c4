import {
  commuteExtended,
  commuteOrbits,
  commuteWithExtended,
  commutesAt,
  type AllSizes,
  type Orbit,
} from '../algebra/pauli/commutation.ts';
import { commonPeriod } from '../algebra/pauli/commutant.ts';
import type { SpinClass } from '../algebra/pauli/vector.ts';
import { lcmOf } from '../algebra/pauli/collect.ts';
import { canonicalExtended } from '../algebra/pauli/extended.ts';
import type { Extended } from '../algebra/pauli/types.ts';
import type { Values } from '../language/values.ts';
import { isStraight } from '../lattice/cluster.ts';
import { BudgetSpent, newBudget } from '../limits.ts';
import { extendedPhrase } from '../maps/phrases.ts';
import type { Audit, Finding, Progress, Question } from './audit.ts';
import { lawText } from './found-text.ts';
import { openFinding } from './numeric.ts';
import { operatorPieces, sizesWords } from './pieces.ts';
import { cheap, keyOf } from './question.ts';
import { speciesCells } from './sector.ts';
import { search, type Found, type Model } from './symmetry-search.ts';

const source = 'Local symmetries as syzygies over Laurent polynomials: J. Haah, Commun. Math. Phys. 324, 351 (2013).';

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

/** Two claims: what there is, complete on tori; and that what was found commutes at every size. */
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
    ...(listed.clashesOn === undefined
      ? []
      : [`whether some of them commute with each other depends on the size; compared on ${listed.clashesOn}`]),
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
  /** The size on which they were compared, where that matters. */
  readonly clashesOn: string | undefined;
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
  const clashes: [number, number][] = [];
  let depends = false;
  const extents = sampleSize(model, found);
  const none: Extended = { phase: 0, parts: [] };
  const clash = (i: number, j: number): boolean => {
    const [a, b] = [laws[i], laws[j]];
    const [s = none, t = none] = [symmetries[i - laws.length], symmetries[j - laws.length]];
    const verdict = a ? (b ? commuteOrbits(a, b) : commuteWithExtended(a, t)) : commuteExtended(s, t);
    if (verdict.commutes !== 'depends') return !verdict.commutes;
    depends = true;
    return !commutesAt(verdict.on, extents);
  };
  for (let i = 0; i < texts.length; i++) for (let j = i; j < texts.length; j++) if (clash(i, j)) clashes.push([i, j]);
  return {
    texts,
    clashes,
    clashesOn: depends ? extents.join(' x ') : undefined,
    proofs: settled ? proofs : undefined,
  };
}

/** The size at which pairs are compared whose verdict depends on it: the declared one where everything fits on it. */
function sampleSize({ lattice, period }: Model, { repeat }: Found): number[] {
  const unit = period.map((m) => lcmOf(m, repeat));
  const declared = lattice.size.periods.map((row, d) => row[d] ?? 1);
  const fits = isStraight(lattice.size) && declared.every((l, d) => l % (unit[d] ?? 1) === 0);
  return fits ? declared : unit.map((m) => 3 * m);
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
