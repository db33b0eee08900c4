import type { CallNode, Expression, Path, Span } from '../../grammar/syntax.ts';
import { Coefficient } from '../algebra/numbers/coefficient.ts';
import { isPinned, translateOperator } from '../algebra/pauli/family.ts';
import { translateString } from '../algebra/pauli/string.ts';
import type { Extended, Family, Operator, Steps } from '../algebra/pauli/types.ts';
import { shifted, type Cell, type Offset } from '../lattice/cells.ts';
import { asOperator, total } from './arithmetic.ts';
import { fail, say, whatIsIt } from './problem.ts';
import { witnessOf } from './refusal-witness.ts';
import { cellArgument, cellWords, integerArgument } from './sets.ts';
import {
  Aperiodic,
  Refine,
  gcd,
  numberAmount,
  operatorAmount,
  textOf,
  type Amount,
  type MovingCell,
  type NumberAmount,
  type Scene,
} from './scene.ts';
import type { CouplingValue, LawValue, MapValue, OperatorValue, Refusal, Value } from './values.ts';

/** Something pinned that stands at each cell of a parameter's domain: one for each class and residue. */
export interface Standing<T> {
  readonly value: T;
  readonly steps: Steps;
  readonly needs: readonly Cell[];
  readonly anchor: Cell;
}

/** An operator with parameter keeps what it is at each class and residue of its domain. */
export interface DeclaredOperator extends OperatorValue {
  readonly standing?: readonly Standing<Operator>[];
}

export const dotted = (path: Path): string => path.words.map((w) => w.text).join('.');

/** A declared operator that stands somewhere or everywhere may not stand in a moving frame, unless it is a constant. */
function unmoved(operator: Operator, path: Path, scene: Scene, moves = false): Operator {
  const whole = operator.extended.length > 0 || operator.families.some((f) => !isPinned(f));
  if (scene.within && whole) return fail(say.wholeInside(dotted(path)), path);
  if (!moves && scene.frame && operator.families.some((f) => f.string.factors.length > 0)) throw new Aperiodic(path);
  return operator;
}

/** A coupling: a symbol, or its value where only constants make sense. */
export function coupling(value: CouplingValue, place: Span, scene: Scene): NumberAmount {
  if (!scene.constants) return numberAmount(Coefficient.symbol(value.name));
  return value.value ? numberAmount(value.value) : fail(say.noValue(value.name), place);
}

/** What a declared name without brackets stands for in an expression; undefined if it is not declared. */
export function namedValue(path: Path, scene: Scene): Amount | undefined {
  const value = scene.values.find(dotted(path));
  if (!value) return undefined;
  switch (value.what) {
    case 'coupling':
      return coupling(value, path, scene);
    case 'model':
      scene.seams.push(...value.seams);
      return operatorAmount(unmoved(value.operator, path, scene));
    case 'symmetry':
      return operatorAmount(unmoved(asExtendedOperator(value.extended), path, scene));
    case 'operator':
      if (value.parameter) return fail(say.argumentCount(value.name, `a cell of ${value.parameter.kind}`, 0), path);
      return operatorAmount(unmoved(value.operator, path, scene));
    case 'law':
      return fail(say.argumentCount(value.name, `a cell of ${value.parameter.kind}`, 0), path);
    default:
      return fail(
        say.wrongKind(`${whatIsIt[value.what] ?? value.what} "${dotted(path)}"`, 'an operator or a number'),
        path,
      );
  }
}

/** A symmetry as an operator; one that stands on a few spins is pinned. */
function asExtendedOperator(extended: Extended): Operator {
  return { families: [], extended: [{ coefficient: Coefficient.one, extended }] };
}

function onlyCell(node: CallNode, name: string, kind: string, scene: Scene): MovingCell {
  const [argument] = node.args;
  if (!argument || node.args.length !== 1)
    return fail(say.argumentCount(name, `one cell of ${kind}`, node.args.length), node);
  const cell = cellArgument(argument, scene);
  if (cell.cell.kind !== kind) return fail(say.takes(name, kind, cellWords(cell.cell, scene)), argument);
  if (scene.cut) return fail(say.cutFactor(), argument);
  return cell;
}

/**
 * What stands at a cell, and how far its representative must be moved to get there. In a frame the cell moves along,
 * so the frame's steps must be multiples of those with which it repeats.
 */
function standingAt<T>(
  all: readonly Standing<T>[],
  cell: MovingCell,
  scene: Scene,
  node: CallNode,
): { readonly one: Standing<T>; readonly by: Offset } | undefined {
  for (const one of all) {
    if (one.anchor.index !== cell.cell.index) continue;
    one.steps.forEach((m, d) => {
      if (!scene.frame?.[d]) return;
      const step = scene.steps[d] ?? 0;
      if (m === 0) throw new Aperiodic(node);
      if (step % m !== 0) throw new Refine(d, (step / gcd(step, m)) * m);
    });
    const by = cell.cell.offset.map((c, d) => c - (one.anchor.offset[d] ?? 0));
    if (!by.every((b, d) => (one.steps[d] ? b % one.steps[d] === 0 : b === 0))) continue;
    if (scene.frame?.some((moves, d) => moves && !cell.moves[d])) throw new Aperiodic(node);
    return { one, by };
  }
  return undefined;
}

/** A law at a cell: the family of its class and residue, moved there. */
function lawAt(value: LawValue, node: CallNode, scene: Scene): Operator {
  const cell = onlyCell(node, value.name, value.parameter.kind, scene);
  const all = value.families.map(({ string, steps, needs, anchor }) => ({ value: string, steps, needs, anchor }));
  const found = standingAt(all, cell, scene, node);
  if (!found) return fail(say.notInDomain(value.name), node);
  const { one, by } = found;
  const family: Family = {
    coefficient: Coefficient.one,
    string: translateString(one.value, by),
    steps: one.steps.map(() => 0),
    needs: scene.open ? one.needs.map((c) => shifted(c, by)) : [],
  };
  return total([{ families: [family], extended: [] }], scene);
}

function operatorAt(value: DeclaredOperator, node: CallNode, scene: Scene): Operator {
  if (!value.parameter || !value.standing)
    return fail(say.argumentCount(value.name, 'no cell', node.args.length), node);
  const cell = onlyCell(node, value.name, value.parameter.kind, scene);
  const found = standingAt(value.standing, cell, scene, node);
  return found
    ? unmoved(moveOperator(found.one, found.by), node.path, scene, true)
    : fail(say.notInDomain(value.name), node);
}

/** A standing operator moved by unit cells. */
export function moveOperator({ value, needs }: Standing<Operator>, by: Offset): Operator {
  const moved = translateOperator(value, by);
  if (needs.length === 0) return moved;
  const here = needs.map((c) => shifted(c, by));
  return { ...moved, families: moved.families.map((f) => ({ ...f, needs: [...f.needs, ...here] })) };
}

/** Shortest steps along which a map treats all places alike; 0: it does not repeat. */
export function mapPeriod(value: MapValue, dimension: number): number[] {
  const lcm = (a: number, b: number): number => (a === 0 || b === 0 ? 0 : (a / gcd(a, b)) * b);
  const join = (all: readonly (readonly number[])[]): number[] =>
    all.reduce<number[]>((p, steps) => p.map((m, d) => lcm(m, steps[d] ?? 1)), new Array<number>(dimension).fill(1));
  const { declaration } = value;
  switch (declaration.kind) {
    case 'dictionary':
      return join(declaration.rules.filter((r) => r.anchor !== undefined).map((r) => r.steps));
    case 'circuit':
      return join(declaration.layers.flatMap((l) => l.gates.map((g) => g.steps)));
    case 'solve':
      return join(declaration.law.families.map((f) => f.steps));
    case 'states':
      return join(declaration.blocks.map((b) => b.steps));
    case 'gauge':
      return join(declaration.symmetry.extended.parts.map((p) => p.steps));
    case 'then':
      return join([mapPeriod(declaration.first, dimension), mapPeriod(declaration.second, dimension)]);
    case 'inverse':
      return mapPeriod(declaration.of, dimension);
  }
}

function mapped(value: MapValue, node: CallNode, scene: Scene): Operator {
  const [argument] = node.args;
  if (!argument || node.args.length !== 1)
    return fail(say.argumentCount(value.name, 'one operator', node.args.length), node);
  if (scene.frame)
    mapPeriod(value, scene.dimension).forEach((m, d) => {
      if (!scene.frame?.[d]) return;
      if (m === 0) throw new Aperiodic(node);
      const step = scene.steps[d] ?? 1;
      if (step % m !== 0) throw new Refine(d, (step / gcd(step, m)) * m);
    });
  const operator = asOperator(scene.amount(argument, scene), scene, argument);
  const refuse = (refusal: Refusal): never =>
    fail(
      {
        ...say.mapRefuses(value.name, refusal.reason, refusal.symmetry?.text),
        witness: witnessOf(refusal, scene.lattice.family),
      },
      argument,
    );
  const local = value.map.image({ families: operator.families, extended: [] }, scene.budget);
  if (!local.ok) return refuse(local.refusal);
  const parts: Operator[] = [local.value];
  for (const { coefficient, extended } of operator.extended) {
    const image = value.map.imageExtended(extended, scene.budget);
    if (!image.ok) return refuse(image.refusal);
    parts.push({ families: [], extended: [{ coefficient, extended: image.value }] });
  }
  return total(parts, scene);
}

/** True if it is one Pauli operator on each spin it touches, all over the lattice or all over a sublattice of it. */
export const isOnSite = (extended: Extended): boolean =>
  extended.parts.length > 0 &&
  extended.parts.every((p) => p.string.factors.length === 1 && p.steps.every((m) => m > 0));

/** The same, with every translation of the lattice a translation of it: only this can be a seam. */
const isUniform = (extended: Extended): boolean =>
  isOnSite(extended) && extended.parts.every((p) => p.steps.every((m) => m === 1));

function twisted(node: CallNode, scene: Scene): Operator {
  const [modelNode, symmetryNode, directionNode] = node.args;
  const named = (argument: Expression | undefined): Value | undefined =>
    argument?.type === 'name' ? scene.values.find(dotted(argument.path)) : undefined;
  const symmetry = named(symmetryNode);
  if (!modelNode || !symmetryNode || !directionNode || node.args.length !== 3) return fail(say.twistArguments(), node);
  if (symmetry?.what !== 'symmetry')
    return fail(
      say.wrongKind((symmetry && whatIsIt[symmetry.what]) ?? textOf(symmetryNode, scene), 'a symmetry'),
      symmetryNode,
    );
  const model = named(modelNode);
  if (model && model.what !== 'model' && model.what !== 'operator')
    return fail(say.wrongKind(whatIsIt[model.what] ?? model.what, 'a model'), modelNode);
  if (!isUniform(symmetry.extended)) return fail(say.onSite(symmetry.name), symmetryNode);
  const direction = integerArgument(directionNode, scene, 'A direction');
  if (direction < 1 || direction > scene.dimension)
    return fail(say.direction(String(direction), scene.dimension), directionNode);
  if (!scene.lattice.periodic[direction - 1]) return fail(say.twistOpen(direction), directionNode);
  const inner: Scene = { ...scene, seams: [] };
  const operator = asOperator(scene.amount(modelNode, inner), inner, modelNode);
  if (scene.within) return fail(say.wholeInside(textOf(node, scene)), node);
  // P is its own inverse: a second equal seam takes the first away.
  const seam = { symmetry: symmetry.extended, direction };
  const others = inner.seams.filter((s) => JSON.stringify(s) !== JSON.stringify(seam));
  const odd = (inner.seams.length - others.length) % 2 === 0;
  scene.seams.push(...others, ...(odd ? [seam] : []));
  return operator;
}

/** A call of a declared name, or of `twist`; undefined where the name is neither. */
export function applyCall(node: CallNode, scene: Scene): Amount | undefined {
  const value: Value | undefined = scene.values.find(dotted(node.path));
  if (!value) return dotted(node.path) === 'twist' ? operatorAmount(twisted(node, scene)) : undefined;
  switch (value.what) {
    case 'law':
      return operatorAmount(lawAt(value, node, scene));
    case 'operator':
      return operatorAmount(operatorAt(value, node, scene));
    case 'map':
      return operatorAmount(mapped(value, node, scene));
    default:
      return fail(
        say.wrongKind(`${whatIsIt[value.what] ?? value.what} "${dotted(node.path)}"`, 'something that takes brackets'),
        node.path,
      );
  }
}
