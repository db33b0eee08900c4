import type { Expression, SpinNode } from '../../grammar/syntax.ts';
import { Coefficient } from '../algebra/numbers/coefficient.ts';
import { newString } from '../algebra/pauli/string.ts';
import type { Factor, Family } from '../algebra/pauli/types.ts';
import { fail, say, whatIsIt } from './problem.ts';
import { cellArgument, cellWords } from './sets.ts';
import { Aperiodic, operatorAmount, textOf, type Amount, type MovingCell, type Scene } from './scene.ts';

/** Fails or asks for another way where a cell does not go along with the frame it stands in. */
function demandMoving(cell: MovingCell, scene: Scene, place: Expression): void {
  if (cell.unknown) fail(say.notACell(textOf(place, scene)), place);
  if (scene.frame?.some((moves, d) => moves && !cell.moves[d])) throw new Aperiodic(place);
}

const pauliTerms: Readonly<
  Record<'x' | 'y' | 'z' | 'n' | '+' | '-', readonly (readonly [Coefficient, 'x' | 'y' | 'z' | undefined])[]>
> = (() => {
  const half = Coefficient.rational(1, 2);
  const i = half.mul(Coefficient.i);
  return {
    x: [[Coefficient.one, 'x']],
    y: [[Coefficient.one, 'y']],
    z: [[Coefficient.one, 'z']],
    n: [
      [half, undefined],
      [half.neg(), 'z'],
    ],
    '+': [
      [half, 'x'],
      [i, 'y'],
    ],
    '-': [
      [half, 'x'],
      [i.neg(), 'y'],
    ],
  };
})();

/** The spin a species has on a cell; fails where it does not live there. */
export function siteOf(
  species: { readonly text: string; readonly start: number; readonly end: number },
  cellNode: Expression,
  scene: Scene,
): MovingCell {
  const value = scene.values.find(species.text);
  if (value?.what !== 'spins')
    return fail(
      value ? say.notSpins(species.text, whatIsIt[value.what] ?? value.what) : say.unknownName(species.text, undefined),
      species,
    );
  const cell = cellArgument(cellNode, scene);
  if (cell.cell.kind !== value.kind || !value.classes.includes(cell.cell.index)) {
    const classes = scene.family[value.kind];
    const all = value.classes.length === classes.length;
    const lives = all
      ? value.kind
      : value.classes.map((k) => `${value.kind}.${classes[k]?.labels[0] ?? ''}`).join(', ');
    return fail(say.speciesCell(species.text, lives, cellWords(cell.cell, scene)), cellNode);
  }
  demandMoving(cell, scene, cellNode);
  if (scene.cut && !cell.optional) return fail(say.cutFactor(), cellNode);
  return cell;
}

/** `s^x[v]` and the like: the Pauli matrices it is made of, on the spin it names. */
export function spin(node: SpinNode, scene: Scene): Amount {
  const at = siteOf(node.species, node.cell, scene);
  const site = {
    species: node.species.text,
    cell: at.cell,
    ...(at.optional && scene.open ? { optional: true as const } : {}),
  };
  const steps = new Array<number>(scene.dimension).fill(0);
  const families = pauliTerms[node.operator].map(([coefficient, pauli]): Family => {
    const factors: Factor[] = pauli ? [{ ...site, pauli }] : [];
    // a constant that came from a spin is there only where the spin is
    return { coefficient, string: newString(factors), steps, needs: scene.open && !pauli ? [at.cell] : [] };
  });
  return operatorAmount({ families, extended: [] });
}
