import type { Coefficient } from '../algebra/numbers/coefficient.ts';
import { phaseCoefficient } from '../algebra/pauli/collect.ts';
import { bodyKey } from '../algebra/pauli/string.ts';
import type { Family, Operator, Pauli, Steps } from '../algebra/pauli/types.ts';
import type { Cell, Offset } from '../lattice/cells.ts';
import { coefficientSpoken, coefficientTex } from './coefficients.ts';
import { labelsOf, type Style, type TypesetContext } from './context.ts';
import { extendedSpoken, extendedTex } from './extended.ts';
import { classesTex, conditionsSpoken, conditionsTex, labelTex, residueOf, uniqueOffsets } from './ranges.ts';
import { fullShells, placed, shellShape, type Placed, type Shape, type ShiftedCell } from './shapes.ts';
import {
  anchorLetter,
  endLetters,
  hasEnds,
  pairTex,
  placeTex,
  shapeSpoken,
  shapeTex,
  usesAnchor,
} from './shape-tex.ts';

/** Families of one shape and coefficient, to be written as one sum. */
export interface Gathered {
  /** Numbers of the members: families first, then the extended terms, as they stand in the operator. */
  readonly members: readonly number[];
  readonly coefficient: Coefficient;
  /** The sum without its coefficient. */
  tex(style: Style): string;
  readonly spoken: string;
}

interface Bucket {
  readonly shape: Shape;
  readonly coefficient: Coefficient;
  readonly steps: Steps;
  readonly members: { readonly number: number; readonly index: number; readonly residue: Offset }[];
}

/** What stands under the sum sign: `v`, `l\in 1`, `\langle a,b\rangle`, `p\in\mathrm{triangle}`, with conditions. */
function underSum(bucket: Bucket, context: TypesetContext): string {
  const { shape } = bucket;
  const letter = anchorLetter(shape);
  const extra = conditionsTex(letter, bucket.steps, residuesOf(bucket));
  const link = usesAnchor(shape) || extra !== '' ? 'l=' : '';
  const pair = pairTex(endLetters(context.species.keys()), shape.shell);
  const variable = hasEnds(shape) ? `${shape.shell === undefined ? link : ''}${pair}` : letter;
  const range = rangeTex(bucket, context);
  return `${variable}${range}${extra === '' ? '' : `:\\,${extra}`}`;
}

const residuesOf = (bucket: Bucket): Offset[] => uniqueOffsets(bucket.members.map((m) => m.residue));

const indicesOf = (bucket: Bucket): number[] => [...new Set(bucket.members.map((m) => m.index))].sort((a, b) => a - b);

/** All classes that could stand under the sum: those of the kind that carry every species of the shape standing on the anchor itself. */
function domain(shape: Shape, context: TypesetContext): readonly number[] {
  if (shape.anchor === 'cell') return [0];
  const all = context.family[shape.anchor].map((_, k) => k);
  return all.filter((k) =>
    shape.groups.every((g) => g.spot.at !== 'self' || (context.species.get(g.species)?.classes.includes(k) ?? true)),
  );
}

function rangeTex(bucket: Bucket, context: TypesetContext): string {
  const { shape } = bucket;
  return shape.anchor === 'cell'
    ? ''
    : classesTex(context, shape.anchor, indicesOf(bucket), domain(shape, context).length);
}

const isPinned = (steps: Steps): boolean => steps.every((m) => m === 0);

/** Where a pinned term stands: `0`, `(1,0)`, with the class where the kind has several. */
function anchorPlace(bucket: Bucket, context: TypesetContext): string {
  const [member] = bucket.members;
  const where = member?.residue ?? [];
  const text = placeTex(where);
  const { anchor } = bucket.shape;
  if (anchor === 'cell' || context.family[anchor].length === 1) return text;
  const [label = ''] = labelsOf(context.family, anchor, [member?.index ?? 0]);
  return `${text},${labelTex(label)}`;
}

function bucketTex(bucket: Bucket, context: TypesetContext, style: Style): string {
  if (isPinned(bucket.steps)) return pinnedTex(bucket, context, style);
  return `\\sum_{${underSum(bucket, context)}}${shapeTex(bucket.shape, style, { species: context.species.keys() })}`;
}

/** A term that stands still is written with the places of its factors, or at the place of its anchor. */
function pinnedTex(bucket: Bucket, context: TypesetContext, style: Style): string {
  const { shape, members } = bucket;
  const base = members[0]?.residue ?? [];
  const groups = shape.groups.map((g) => {
    const moved = (c: ShiftedCell): ShiftedCell => ({ ...c, by: c.by.map((o, d) => o + (base[d] ?? 0)) });
    if (g.spot.at === 'run') return { ...g, spot: { ...g.spot, cell: moved(g.spot.cell) } };
    return g.spot.at === 'shifts' ? { ...g, spot: { ...g.spot, cells: g.spot.cells.map(moved) } } : g;
  });
  return shapeTex({ ...shape, groups }, style, { still: { at: anchorPlace(bucket, context) } });
}

function bucketSpoken(bucket: Bucket, context: TypesetContext): string {
  const { shape } = bucket;
  const body = shapeSpoken(shape);
  if (isPinned(bucket.steps)) return `${body} at unit cell ${(bucket.members[0]?.residue ?? []).join(' ')}`;
  const indices = indicesOf(bucket);
  const kind =
    shape.shell !== undefined
      ? `pairs of neighbours of order ${String(shape.shell)}`
      : shape.anchor === 'cell'
        ? 'unit cells'
        : shape.anchor;
  const which =
    shape.anchor === 'cell' || indices.length >= domain(shape, context).length
      ? ''
      : ` of class ${labelsOf(context.family, shape.anchor, indices).join(' and ')}`;
  return `the sum over ${kind}${which}${conditionsSpoken(bucket.steps, residuesOf(bucket))} of ${body}`;
}

/** Constants: for each unit cell with the number of cells N, or once. */
const constantTex = (family: Family): string => (family.steps.some((m) => m > 0) ? 'N' : '');

/** Two-body families that together fill a shell of vertex pairs with one coefficient, by their numbers. */
function shellsOf(operator: Operator, context: TypesetContext): Map<number, Placed> {
  const groups = new Map<string, { number: number; pair: readonly [Cell, Cell]; species: string; pauli: Pauli }[]>();
  operator.families.forEach(({ string, steps, coefficient }, number) => {
    const [f, g, ...more] = string.factors;
    if (!f || !g || more.length > 0 || f.species !== g.species || f.pauli !== g.pauli) return;
    if (f.cell.kind !== 'vertices' || steps.some((m) => m !== 1)) return;
    const key = `${f.species}^${f.pauli} ${String(string.phase)} ${coefficient.key()}`;
    const group = groups.get(key) ?? [];
    groups.set(key, group);
    group.push({ number, pair: [f.cell, g.cell], species: f.species, pauli: f.pauli });
  });
  const found = new Map<number, Placed>();
  for (const group of groups.values())
    fullShells(
      group.map((m) => m.pair),
      context.family,
    ).forEach((shell, k) => {
      const m = group[k];
      if (shell !== undefined && m)
        found.set(m.number, {
          shape: shellShape(m.species, m.pauli, shell),
          index: 0,
          offset: m.pair[0].offset,
          sign: 1,
        });
    });
  return found;
}

/**
 * Gathers the families of an operator into sums, in the order of the operator: one sum for each shape, coefficient and steps, over all
 * classes of cells that take part. Extended strings and constants stand by themselves, constants last.
 */
export function gather(operator: Operator, context: TypesetContext): Gathered[] {
  const known = gathered.get(operator);
  if (known?.context === context) return [...known.sums];
  const sums = gatherAnew(operator, context);
  gathered.set(operator, { context, sums });
  return [...sums];
}

/** Sums of an operator as last gathered: page, formula to paste and spoken form ask one after another. */
const gathered = new WeakMap<Operator, { readonly context: TypesetContext; readonly sums: readonly Gathered[] }>();

function gatherAnew(operator: Operator, context: TypesetContext): Gathered[] {
  const buckets = new Map<string, Bucket>();
  const constants: { family: Family; number: number }[] = [];
  const shells = shellsOf(operator, context);
  operator.families.forEach((family, number) => {
    if (family.string.factors.length === 0) {
      constants.push({ family, number });
      return;
    }
    const place = shells.get(number) ?? placed(family.string, family.steps, context);
    let coefficient = family.coefficient.mul(phaseCoefficient(family.string.phase));
    if (place.sign < 0) coefficient = coefficient.neg();
    const pinned = isPinned(family.steps);
    // a term that stands still is a sum by itself
    const key = `${place.shape.key}|${coefficient.key()}|${family.steps.join(',')}|${pinned ? `${String(place.index)}@${place.offset.join(',')}` : ''}`;
    const bucket = buckets.get(key) ?? { shape: place.shape, coefficient, steps: family.steps, members: [] };
    buckets.set(key, bucket);
    bucket.members.push({ number, index: place.index, residue: residueOf(place.offset, family.steps) });
  });
  const sums = [...buckets.values()]
    .flatMap((b) => splitUneven(b))
    .map((bucket): Gathered => ({
      members: bucket.members.map((m) => m.number),
      coefficient: bucket.coefficient,
      tex: (style) => bucketTex(bucket, context, style),
      spoken: bucketSpoken(bucket, context),
    }));
  const strings = operator.extended.map((term, k): Gathered => ({
    members: [operator.families.length + k],
    coefficient: term.coefficient,
    tex: (style) => extendedTex(term.extended, context, style),
    spoken: extendedSpoken(term.extended, context),
  }));
  const rest = constants.map(({ family, number }): Gathered => ({
    members: [number],
    coefficient: family.coefficient.mul(phaseCoefficient(family.string.phase)),
    tex: () => constantTex(family),
    spoken: family.steps.some((m) => m > 0) ? 'for each unit cell' : '',
  }));
  return [...sums, ...strings, ...rest];
}

/** Classes that stand on different residues cannot share one sum: one bucket for each set of residues. */
function splitUneven(bucket: Bucket): Bucket[] {
  if (bucket.steps.every((m) => m === 1)) return [bucket];
  const byIndex = new Map<number, string[]>();
  for (const m of bucket.members) byIndex.set(m.index, [...(byIndex.get(m.index) ?? []), m.residue.join(',')]);
  const signature = (index: number) => [...(byIndex.get(index) ?? [])].sort().join(' ');
  const out = new Map<string, Bucket>();
  for (const m of bucket.members) {
    const key = signature(m.index);
    const own = out.get(key) ?? { ...bucket, members: [] };
    out.set(key, own);
    own.members.push(m);
  }
  return [...out.values()];
}

/** A gathered sum with its coefficient: the sign apart, as it joins others. */
export function gatheredTex(g: Gathered, style: Style): { readonly sign: '+' | '-'; readonly tex: string } {
  const { sign, body } = coefficientTex(g.coefficient);
  const sum = g.tex(style);
  const tex =
    body === '' ? (sum === '' ? '1' : sum) : `${body}${sum === '' ? '' : sum.startsWith('\\') ? sum : ` ${sum}`}`;
  return { sign: sign === '-' ? '-' : '+', tex };
}

/** Spoken form of a gathered sum with its coefficient. */
export function gatheredSpoken(g: Gathered): string {
  const { negative, words } = coefficientSpoken(g.coefficient);
  const body = [words, g.spoken]
    .filter((w) => w !== '')
    .join(g.spoken.startsWith('the ') && words !== '' ? ' times ' : ' ');
  return `${negative ? 'minus' : 'plus'} ${body === '' ? '1' : body}`;
}

/** Sums joined by their signs; 0 for none. */
export function sumTex(sums: readonly Gathered[], style: Style): string {
  if (sums.length === 0) return '0';
  return sums
    .map((g, k) => {
      const { sign, tex } = gatheredTex(g, style);
      return k === 0 ? `${sign === '-' ? '-' : ''}${tex}` : ` ${sign} ${tex}`;
    })
    .join('');
}

/** An operator as a theorist would write it. */
export const operatorTex = (operator: Operator, context: TypesetContext, style: Style = 'plain'): string =>
  sumTex(gather(operator, context), style);

/** An operator as a screen reader says it. */
export function operatorSpoken(operator: Operator, context: TypesetContext): string {
  const words = gather(operator, context).map(gatheredSpoken).join(', ');
  return words.replace(/^plus /, '') || 'zero';
}

/** Numbers the gathered sums in the order in which the pieces of a source name them; sums that no piece names come last. */
export function inSourceOrder(operator: Operator, sums: readonly Gathered[], pieces: readonly Operator[]): Gathered[] {
  const at = new Map<string, number>();
  pieces.forEach((piece, k) => {
    for (const f of piece.families) if (!at.has(bodyKey(f.string))) at.set(bodyKey(f.string), k);
  });
  const rank = (g: Gathered): number =>
    Math.min(
      ...g.members.map(
        (m) => at.get(bodyKey(operator.families[m]?.string ?? { phase: 0, factors: [] })) ?? pieces.length,
      ),
    );
  return [...sums].sort((a, b) => rank(a) - rank(b));
}
