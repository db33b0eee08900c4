import type { CallNode, Expression, Word } from '../../grammar/syntax.ts';
import type { Cell } from '../lattice/cells.ts';
import { coordinateNames, linkEnd, rimEntry } from '../lattice/geometry.ts';
import { fail, say } from './problem.ts';
import { atRest, cellWords, classesOfPath } from './sets.ts';
import {
  Aperiodic,
  Unsolved,
  coordinateOf,
  integerOf,
  type Amount,
  type MovingCell,
  type NumberAmount,
  type Scene,
} from './scene.ts';

/** `l.a`, `t.2`, `v.x`: a part of a bound cell, or a coordinate. */
export function partOf(of: Amount, word: Word, scene: Scene): Amount {
  const direction = (coordinateNames as readonly string[]).indexOf(word.text);
  if (of.what === 'pair') {
    if (word.text === 'a') return of.a;
    if (word.text === 'b') return of.b;
    if (direction >= 0 && direction < scene.dimension) return coordinateOf(of.a, direction, scene);
    return fail(say.noPart('A pair', word.text, '.a, .b'), word);
  }
  if (of.what !== 'cell') return fail(say.noPart('This', word.text, ''), word);
  if (direction >= 0 && direction < scene.dimension) return coordinateOf(of, direction, scene);
  if (of.unknown) throw new Unsolved();
  const { cell } = of;
  // a part of a cell is another cell: what is left out with the one need not be left out with the other
  const part = (next: Cell): MovingCell => ({ ...of, cell: next, optional: false });
  if (cell.kind === 'links' && (word.text === 'a' || word.text === 'b'))
    return part(linkEnd(scene.family, cell, word.text));
  if (cell.kind === 'plaquettes' && /^[0-9]+$/u.test(word.text)) {
    const link = rimEntry(scene.family, cell, Number(word.text));
    const length = scene.family.plaquettes[cell.index]?.rim.length ?? 0;
    return link
      ? part(link)
      : fail(say.noPart(`A plaquette with ${length} links`, word.text, `.1 to .${length}`), word);
  }
  const coordinates = coordinateNames.slice(0, scene.dimension).map((c) => `.${c}`);
  const own = cell.kind === 'links' ? ['.a', '.b'] : cell.kind === 'plaquettes' ? ['.1', '.2, …'] : [];
  return fail(say.noPart(sentence(cellWords(cell, scene)), word.text, [...own, ...coordinates].join(', ')), word);
}

const sentence = (words: string): string => words.charAt(0).toUpperCase() + words.slice(1);

/** The entries of `(1, 0)`, or of `(1)` in one dimension. */
function entries(node: Expression, scene: Scene): NumberAmount[] {
  const items = node.type === 'tuple' ? node.items : node.type === 'bracket' ? [node.body] : undefined;
  if (!items) return fail(say.shiftLength(0, scene.dimension), node);
  if (items.length !== scene.dimension) return fail(say.shiftLength(items.length, scene.dimension), node);
  return items.map((item) => {
    const value = scene.amount(item, scene);
    return value.what === 'number' ? value : fail(say.notInteger('An entry of a shift'), item);
  });
}

/** `c + (1, 0)`, `c - (1, 0)`. */
export function shiftCell(cell: MovingCell, node: Expression, sign: 1 | -1, scene: Scene): MovingCell {
  const by = entries(node, scene).map((value) => {
    if (value.along) throw new Aperiodic(node);
    return integerOf(value.value) ?? fail(say.notInteger('An entry of a shift'), node);
  });
  const offset = cell.cell.offset.map((o, d) => o + sign * (by[d] ?? 0));
  return { ...cell, cell: { ...cell.cell, offset }, optional: cell.optional && by.every((b) => b === 0) };
}

/** `vertices(1, 0)`, `vertices.A(1, 0)`: one cell by its unit cell. */
export function namedCell(node: CallNode, scene: Scene): MovingCell {
  const { kind, classes } = classesOfPath(node.path, scene);
  if (classes.length > 1) {
    const labels = classes.map((k) => scene.family[kind][k]?.labels[0] ?? '');
    return fail(say.ambiguousCell(kind, labels), node.path);
  }
  if (node.args.length !== scene.dimension) return fail(say.shiftLength(node.args.length, scene.dimension), node);
  const moves: boolean[] = [];
  const offset = node.args.map((argument, d) => {
    const value = scene.amount(argument, scene);
    const n = value.what === 'number' ? integerOf(value.value) : undefined;
    if (value.what !== 'number' || n === undefined) return fail(say.notInteger('A coordinate'), argument);
    // a coordinate may be that of a moving cell in the same direction: vertices(v.x, 0)
    if (value.along?.slice(scene.dimension).some((k) => k !== 0)) throw new Unsolved();
    if (value.along?.some((k, e) => k !== (e === d ? 1 : 0))) throw new Aperiodic(argument);
    moves.push(value.along !== undefined);
    return n;
  });
  return { ...atRest({ kind, index: classes[0] ?? 0, offset }, scene), moves };
}
