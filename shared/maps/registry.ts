import type { MapDeclaration, OperatorMap, Values } from '../language/values.ts';
import type { Budget } from '../limits.ts';
import { circuitMap } from './circuit.ts';
import { composedMap, invertedMap } from './compose.ts';
import type { Context } from './context.ts';
import { dictionaryMap } from './dictionary/dictionary.ts';
import { gaugingMap } from './gauging.ts';
import { MapRefused } from './refusals.ts';
import { solvingMap } from './solving.ts';
import { stateMap } from './states/state-map.ts';

export { MapRefused } from './refusals.ts';

type Kinds = MapDeclaration['kind'];
type Builder<K extends Kinds> = (
  declaration: Extract<MapDeclaration, { kind: K }>,
  context: Context,
  budget: Budget,
) => OperatorMap;

/** One row a kind of map: a kind without a builder does not compile. */
const builders: { readonly [K in Kinds]: Builder<K> } = {
  dictionary: dictionaryMap,
  gauge: gaugingMap,
  circuit: circuitMap,
  solve: solvingMap,
  states: stateMap,
  then: composedMap,
  inverse: invertedMap,
};

/**
 * The map that a declaration stands for, on the lattice and names declared before it. Throws MapRefused where it cannot be one
 * (no lattice, a symmetry that is not on-site, a law without its own spin, no inverse), BudgetSpent.
 */
export function buildMap(declaration: MapDeclaration, values: Values, budget: Budget, name = 'the map'): OperatorMap {
  const { lattice } = values;
  if (!lattice) throw new MapRefused('a map needs a lattice declared before it');
  const context: Context = { values, lattice, family: lattice.family, open: lattice.periodic.some((p) => !p), name };
  // one row fits the declaration of its own kind; the pairing is beyond the type system
  const build: (declaration: never, context: Context, budget: Budget) => OperatorMap = builders[declaration.kind];
  return build(declaration as never, context, budget);
}
