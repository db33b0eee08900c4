import type { AuditStatement, Values } from '../language/values.ts';
import { sizeText } from '../lattice/cluster.ts';
import type { Size } from '../lattice/cells.ts';
import { groundMean } from '../spectra/observe.ts';
import type { Spectrum } from '../spectra/solve.ts';
import type { Audit, Finding, Means, Progress, Question } from './audit.ts';
import { standing } from './grades.ts';
import { groundCost, groundOf, meanTerms, measured } from './ground.ts';
import { couplingValues, failureFinding, openFinding, sizesOf } from './numeric.ts';
import { keyOf } from './question.ts';
import { isLoop } from './expect.ts';
import { asPart } from './progress.ts';
import { overlapOf, referenceOf, type Reference } from './references.ts';
import { finiteSubject, subjectWords, type FiniteSubject } from './sector.ts';
import { sideNotes } from './spectrum.ts';

/** Points of one scan, and points put in between at each minimum of a gap. */
const mostPoints = 4_000;
const refinements = 6;

/** The grid: all combinations, the last range fastest. Values as numbers, in the order of the ranges. */
function gridOf(statement: AuditStatement): number[][] {
  return statement.over.reduce<number[][]>(
    (heads, { points }) => heads.flatMap((head) => points.map((p) => [...head, p.toFloat(new Map()).re])),
    [[]],
  );
}

const pointCount = (statement: AuditStatement): number =>
  statement.over.reduce((product, { points }) => product * points.length, 1);

const gapOf = ({ multiplets }: Spectrum): number | null => {
  const [ground, next] = multiplets;
  return ground && next ? next.energy - ground.energy : null;
};

/** What is measured at a point, given its ground space and that of the neighbour before it. */
type Measure = (
  ground: Spectrum,
  couplings: ReadonlyMap<string, number>,
  before: Spectrum | undefined,
) => number | null;

interface Scan {
  readonly subject: FiniteSubject;
  readonly vectors: boolean;
  /** Whether a measure needs the ground space of the point before. */
  readonly neighbours: boolean;
  readonly measure: Measure;
  readonly loops: boolean;
  readonly reference: Reference | undefined;
}

function* prepared(question: Question, size: Size, means: Means): Generator<Progress, Scan> {
  const { statement, values } = question;
  const [side] = statement.subjects;
  if (!side) throw new Error('a scan has a subject');
  const subject = finiteSubject(values, side, size);
  const plain = { subject, loops: false, neighbours: false, reference: undefined };
  switch (statement.quantity) {
    case 'gap':
      return { ...plain, vectors: false, measure: gapOf };
    case 'energy':
      return { ...plain, vectors: false, measure: (ground) => ground.energies[0] ?? null };
    case 'overlap': {
      if (statement.reference === undefined)
        return {
          ...plain,
          vectors: true,
          neighbours: true,
          measure: (ground, _, before) => (before ? overlapOf(before, ground) : null),
        };
      const at = couplingValues(values);
      const reference = yield* referenceOf(values, statement.reference, side, subject, at, means);
      return {
        ...plain,
        subject: reference.subject,
        vectors: true,
        measure: (ground) => reference.overlap(ground),
        reference,
      };
    }
    default: {
      const name = statement.quantity ?? '';
      const operator = measured(values, name, subject);
      return {
        ...plain,
        vectors: true,
        loops: isLoop(subject, operator),
        measure: (ground, couplings) => {
          const { terms, constant } = meanTerms(name, operator, couplings);
          return groundMean(ground, terms, constant);
        },
      };
    }
  }
}

interface Series {
  readonly points: number[][];
  readonly values: (number | null)[];
  largest: number;
  notes: readonly string[];
}

/** Where a scan stood when it was broken off: the points of the grid so far, then those that refine it. */
interface Checkpoint {
  readonly grid: Series;
  readonly refined?: Series;
}

interface Along {
  readonly points: readonly number[][];
  /** Length of a row of neighbours. */
  readonly row: number;
  /** What an earlier run has measured already. */
  readonly from: Series | undefined;
  /** The checkpoint that a series makes. */
  readonly checkpoint: (series: Series) => Checkpoint;
}

/** Measures at the points in order. */
function* measuredAlong(
  question: Question,
  scan: Scan,
  { points, row, from, checkpoint }: Along,
  means: Means,
): Generator<Progress, Series> {
  const { statement, values } = question;
  const base = couplingValues(values);
  const series: Series = {
    points: [...(from?.points ?? [])],
    values: [...(from?.values ?? [])],
    largest: from?.largest ?? 0,
    notes: from?.notes ?? [],
  };
  const known = series.points.length;
  // An overlap of neighbours needs the ground state of the point before, which no checkpoint holds.
  const first = scan.neighbours && known % row !== 0 ? known - 1 : known;
  let before: Spectrum | undefined;
  try {
    for (const [k, point] of points.entries()) {
      if (k < first) continue;
      const couplings = new Map(base);
      statement.over.forEach(({ coupling }, d) => couplings.set(coupling, point[d] ?? 0));
      if (k % row === 0) {
        before?.space?.free();
        before = undefined;
      }
      const done = k / points.length;
      const doing = `${scan.subject.name}, point ${String(k + 1)} of ${String(points.length)}`;
      yield { done, doing, ...(k > known ? { checkpoint: checkpoint(series) } : {}) };
      const solving = groundOf(values, scan.subject, couplings, scan.vectors, means, doing);
      const ground = yield* asPart(solving, done, 1 / points.length);
      const previous = before;
      before = ground;
      try {
        if (k < known) continue;
        series.values.push(scan.measure(ground, couplings, previous));
      } finally {
        previous?.space?.free();
      }
      series.points.push(point);
      series.largest = Math.max(series.largest, ...ground.residuals);
      series.notes = sideNotes(scan.subject.name, scan.subject.model.notes, ground);
    }
  } finally {
    before?.space?.free();
  }
  return series;
}

/** Points between the neighbours of each inner minimum of a gap along the one range that moves. */
function nearMinima(points: readonly number[][], values: readonly (number | null)[], moving: number): number[][] {
  const more: number[][] = [];
  for (let k = 1; k + 1 < values.length; k++) {
    const [a, b, c] = [values[k - 1], values[k], values[k + 1]];
    if (a == null || b == null || c == null || b > a || b > c || (b === a && b === c)) continue;
    const [low, high] = [points[k - 1]?.[moving] ?? 0, points[k + 1]?.[moving] ?? 0];
    for (let j = 1; j <= refinements; j++) {
      const at = low + ((high - low) * j) / (refinements + 1);
      const point = points[k] ?? [];
      if (Math.abs(at - (point[moving] ?? 0)) > 1e-12 * Math.abs(high - low))
        more.push(point.map((x, d) => (d === moving ? at : x)));
    }
  }
  return more;
}

function* decide(question: Question, means: Means): Generator<Progress, readonly Finding[]> {
  const { statement, values, size } = question;
  const [side] = statement.subjects;
  if (!side || !size) return [];
  const at = sizeText(size);
  const names = statement.over.map(({ coupling }) => coupling);
  const quantity = statement.quantity ?? '';
  const words = `${quantity}${statement.reference === undefined ? '' : ` with ${statement.reference}`} of ${subjectWords(values, side)} over ${names.join(', ')} on ${at}`;
  const count = pointCount(statement);
  if (count > mostPoints)
    return [openFinding(words, `${String(count)} points; a scan has at most ${String(mostPoints)}`, { size: at })];
  const unknown = names.find((name) => values.find(name)?.what !== 'coupling');
  if (unknown !== undefined) return [openFinding(words, `${unknown} is not a coupling`)];
  let scan: Scan | undefined;
  try {
    scan = yield* prepared(question, size, means);
    const grid = gridOf(statement);
    const row = statement.over.at(-1)?.points.length ?? 1;
    const from = means.from as Checkpoint | undefined;
    const gridAlong: Along = { points: grid, row, from: from?.grid, checkpoint: (grid) => ({ grid }) };
    const series = yield* measuredAlong(question, scan, gridAlong, means);
    const moving = statement.over.findIndex(({ points }) => points.length > 1);
    const single = statement.over.filter(({ points }) => points.length > 1).length === 1;
    const extra = quantity === 'gap' && single ? nearMinima(series.points, series.values, moving) : [];
    const near: Along = {
      points: extra,
      row: extra.length,
      from: from?.refined,
      checkpoint: (refined) => ({ grid: series, refined }),
    };
    const refined = extra.length > 0 ? yield* measuredAlong(question, scan, near, means) : undefined;
    return [finding(words, at, names, series, refined, scan, quantity)];
  } catch (error) {
    return [failureFinding(words, values, error)];
  } finally {
    scan?.reference?.free();
  }
}

function finding(
  words: string,
  at: string,
  names: readonly string[],
  series: Series,
  refined: Series | undefined,
  scan: Scan,
  quantity: string,
): Finding {
  const all = [...series.values, ...(refined?.values ?? [])];
  const points = [...series.points, ...(refined?.points ?? [])];
  const known = all.flatMap((value, k) => (value === null ? [] : [{ value, point: points[k] ?? [] }]));
  const least = known.reduce<(typeof known)[number] | undefined>(
    (a, b) => (a && a.value <= b.value ? a : b),
    undefined,
  );
  const most = known.reduce<(typeof known)[number] | undefined>((a, b) => (a && a.value >= b.value ? a : b), undefined);
  const place = (point: readonly number[]): string =>
    names.map((name, d) => `${name} = ${String(Number((point[d] ?? 0).toPrecision(6)))}`).join(', ');
  const range =
    least && most
      ? `: between ${least.value.toPrecision(6)} (${place(least.point)}) and ${most.value.toPrecision(6)} (${place(most.point)})`
      : '';
  return {
    evidence: {
      kind: 'residuals',
      tolerance: series.largest,
      largest: Math.max(series.largest, refined?.largest ?? 0),
      sizes: [at],
    },
    statement: `${words}${range}`,
    figures: {
      size: at,
      quantity,
      couplings: names,
      points: series.points,
      values: series.values,
      ...(refined ? { refined: { points: refined.points, values: refined.values } } : {}),
    },
    cautions: [
      ...(quantity === 'overlap' && !scan.reference
        ? ['each value is the overlap with the point before it; the first of a row has none']
        : []),
      ...(scan.loops ? [standing.loops] : []),
      standing.cluster,
      ...series.notes,
    ],
  };
}

/** Couplings of the first point, for an estimate of the cost. */
function firstPoint(statement: AuditStatement, values: Values): Map<string, number> {
  const couplings = couplingValues(values);
  for (const { coupling, points } of statement.over) {
    const middle = points[points.length >> 1];
    if (middle) couplings.set(coupling, middle.toFloat(new Map()).re);
  }
  return couplings;
}

export const scan: Audit = {
  name: 'scan',
  help: 'How do a gap, an energy, an overlap of ground states or the mean of an operator change with the couplings? One claim for each size.',
  example: 'audit scan gap of M [flip = +1] over h = 0 .. 2 by 0.1 on 8',
  questions: (statement, values) =>
    sizesOf(statement.sizes, values).map((size) => ({
      audit: 'scan',
      statement,
      values,
      size,
      part: '',
      key: keyOf(statement, values, '', ['coupling', 'spins', 'law', 'symmetry', 'rule'], size),
    })),
  cost({ statement, values, size }) {
    const [side] = statement.subjects;
    if (!side || !size) return { operations: 0, bytes: 0, words: '' };
    const one = groundCost(values, () => finiteSubject(values, side, size), firstPoint(statement, values));
    const count = pointCount(statement);
    return {
      operations: one.operations * count,
      bytes: 2 * one.bytes,
      words: `${String(count)} points of ${one.words}`,
    };
  },
  decide,
};
