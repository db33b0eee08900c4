import type { CallNode, Expression, Path } from '../../grammar/syntax.ts';
import { cellKinds, isLatticeProblem, type Cell, type CellKind, type Offset } from '../lattice/cells.ts';
import { geometryFunction, type GeometryFunction } from '../lattice/geometry.ts';
import { fail, say, whatIsIt } from './problem.ts';
import { integerOf, settled, textOf, type Bound, type MovingCell, type Scene } from './scene.ts';

/** One class of a set: a representative, and the directions along which it repeats (steps 0 or 1; all 0: one cell). */
export interface SetPart {
  readonly at: Bound;
  readonly steps: readonly number[];
}

/** What a binder runs over. `cut`: an open boundary cuts the set. `needs`: cells named on the way that must exist. */
export interface CellSet {
  readonly parts: readonly SetPart[];
  readonly cut: boolean;
  readonly needs: readonly Cell[];
}

export const isKind = (word: string): word is CellKind => (cellKinds as readonly string[]).includes(word);

const oneOf: Readonly<Record<CellKind, string>> = {
  vertices: 'a vertex',
  links: 'a link',
  plaquettes: 'a plaquette',
  cubes: 'a cube',
};

/** "a vertex", "a plaquette of plaquettes.triangle": a cell in words. */
export function cellWords(cell: Cell, scene: Scene): string {
  const one = oneOf[cell.kind];
  const classes = scene.family[cell.kind];
  return classes.length > 1 ? `${one} of ${cell.kind}.${classes[cell.index]?.labels[0] ?? ''}` : one;
}

/** Classes that `kind` or `kind.label` names, ascending. */
export function classesOfPath(path: Path, scene: Pick<Scene, 'family'>): { kind: CellKind; classes: number[] } {
  const [first, label, extra] = path.words;
  const kind = first?.text ?? '';
  if (!isKind(kind)) return fail(say.notCells(path.words.map((w) => w.text).join('.')), path);
  const all = scene.family[kind];
  if (all.length === 0) return fail(say.noCells(kind, scene.family.name), path);
  if (extra) return fail(say.noPart(`${kind}.${label?.text ?? ''}`, extra.text, ''), extra);
  if (!label) return { kind, classes: all.map((_, k) => k) };
  const classes = all.flatMap((c, k) => (c.labels.includes(label.text) ? [k] : []));
  if (classes.length === 0)
    return fail(say.unknownLabel(kind, label.text, [...new Set(all.flatMap((c) => c.labels))]), label);
  return { kind, classes };
}

export const still = (scene: Scene): boolean[] => new Array<boolean>(scene.dimension).fill(false);
export const atRest = (cell: Cell, scene: Scene): MovingCell => ({
  what: 'cell',
  cell,
  moves: still(scene),
  optional: false,
});

const zeros = (n: number): number[] => new Array<number>(n).fill(0);
const ones = (n: number): number[] => new Array<number>(n).fill(1);

/** The one argument of a geometry function. */
function onlyArgument(node: CallNode, fn: GeometryFunction): Expression {
  const wanted = fn.form === 'around' ? 'one cell' : fn.form === 'winding' ? 'a direction' : 'a number';
  const [argument] = node.args;
  if (!argument || node.args.length !== 1) return fail(say.argumentCount(fn.name, wanted, node.args.length), node);
  return argument;
}

/** An integer written as an argument. */
export function integerArgument(node: Expression, scene: Scene, what: string): number {
  const amount = scene.amount(node, scene);
  if (amount.what !== 'number')
    return fail(say.wrongKind(whatIsIt[amount.what] ?? amount.what, 'a whole number'), node);
  const n = integerOf(settled(amount, scene, node));
  return n ?? fail(say.notInteger(what), node);
}

/** An expression that stands for one cell. */
export function cellArgument(node: Expression, scene: Scene): MovingCell {
  const amount = scene.amount(node, scene);
  return amount.what === 'cell' ? amount : fail(say.notACell(textOf(node, scene)), node);
}

const isBoundName = (node: Expression, scene: Scene): boolean =>
  node.type === 'name' && node.path.words.length === 1 && scene.bound.has(node.path.words[0]?.text ?? '');

function geometrySet(node: CallNode, fn: GeometryFunction, scene: Scene): CellSet {
  const argument = onlyArgument(node, fn);
  if (!fn.dimensions.includes(scene.dimension))
    return fail(say.geometry(`${fn.name} has a meaning in ${fn.dimensions.join(' or ')} dimensions only.`), node);
  if (fn.form === 'around') {
    const around = cellArgument(argument, scene);
    if (!fn.takes.includes(around.cell.kind)) {
      const wanted = fn.takes.map((k) => oneOf[k]).join(' or ');
      return fail(say.takes(fn.name, wanted, cellWords(around.cell, scene)), argument);
    }
    const cells = fn.cells(scene.family, around.cell);
    scene.budget.spend(cells.length);
    return {
      parts: cells.map((cell) => ({ at: { ...around, cell, optional: false }, steps: zeros(scene.dimension) })),
      cut: fn.optional,
      needs: isBoundName(argument, scene) ? [] : [around.cell],
    };
  }
  const n = integerArgument(argument, scene, fn.form === 'winding' ? 'A direction' : 'The shell');
  if (fn.form === 'pairs') {
    const pairs = fn.pairs(scene.family, n);
    if (isLatticeProblem(pairs)) return fail(say.geometry(`${pairs.message}.`), argument);
    const parts = pairs.map(({ a, b }) => ({
      at: { what: 'pair' as const, a: atRest(a, scene), b: atRest(b, scene) },
      steps: ones(scene.dimension),
    }));
    return { parts, cut: false, needs: [] };
  }
  const cells = fn.cells(scene.family, n);
  if (isLatticeProblem(cells)) return fail(say.geometry(`${cells.message}.`), argument);
  return { parts: cells.map(({ cell, steps }) => ({ at: atRest(cell, scene), steps })), cut: fn.optional, needs: [] };
}

/**
 * The cells that an expression names as a set: kinds and classes, geometry functions. In this position these words
 * have their geometric meaning, whatever else is declared by the same name.
 */
export function cellSet(node: Expression, scene: Scene): CellSet {
  if (node.type === 'bracket') return cellSet(node.body, scene);
  if (node.type === 'name') {
    if (!isKind(node.path.words[0]?.text ?? '')) return fail(say.notCells(textOf(node, scene)), node);
    const { kind, classes } = classesOfPath(node.path, scene);
    const offset: Offset = zeros(scene.dimension);
    return {
      parts: classes.map((index) => ({ at: atRest({ kind, index, offset }, scene), steps: ones(scene.dimension) })),
      cut: false,
      needs: [],
    };
  }
  if (node.type === 'call') {
    const fn = node.path.words.length === 1 ? geometryFunction(node.path.words[0]?.text ?? '') : undefined;
    if (fn) return geometrySet(node, fn, scene);
  }
  return fail(say.notCells(textOf(node, scene)), node);
}
