import type { MapDeclaration, MapValue, Values } from '../language/values.ts';
import type { Size } from '../lattice/cells.ts';
import type { Audit, Finding } from './audit.ts';
import { dictionaryFindings } from './map-dictionary.ts';
import { circuitFindings, gaugeFindings, solveFindings, stateFindings } from './map-kinds.ts';
import { openFinding } from './numeric.ts';
import { cheap, keyOf } from './question.ts';

/** What is claimed of a map, by its kind. */
type FindingsOf = {
  readonly [K in MapDeclaration['kind']]: (
    value: MapValue,
    declaration: Extract<MapDeclaration, { kind: K }>,
    values: Values,
    /** Sizes that the line asks for; empty: the declared one and small ones. */
    sizes: readonly Size[],
  ) => readonly Finding[];
};

/** Claims that a composed map or an inverse inherits from a part, with the part's name. */
const partFindings = (whole: MapValue, part: MapValue, values: Values, sizes: readonly Size[]): Finding[] =>
  decide(part, values, sizes).map((finding) => ({
    ...finding,
    statement: `${whole.name} follows from ${part.name}: ${finding.statement}`,
  }));

const findingsOf: FindingsOf = {
  dictionary: dictionaryFindings,
  gauge: gaugeFindings,
  circuit: circuitFindings,
  solve: solveFindings,
  states: stateFindings,
  then: (value, { first, second }, values, sizes) => [
    ...partFindings(value, first, values, sizes),
    ...partFindings(value, second, values, sizes),
  ],
  inverse: (value, { of }, values, sizes) => partFindings(value, of, values, sizes),
};

function decide(value: MapValue, values: Values, sizes: readonly Size[]): readonly Finding[] {
  const { declaration } = value;
  // One entry of the table fits the declaration of its own kind; TypeScript cannot follow the pairing.
  const find = findingsOf[declaration.kind] as (
    value: MapValue,
    declaration: MapDeclaration,
    values: Values,
    sizes: readonly Size[],
  ) => readonly Finding[];
  return find(value, declaration, values, sizes);
}

export const map: Audit = {
  name: 'map',
  help: 'Does a map hold? Commutation kept for every size; product relations and their signs, sectors and dimensions for each size.',
  example: 'audit map bonds',
  questions: (statement, values) => [
    {
      audit: 'map',
      statement,
      values,
      size: undefined,
      part: '',
      key: keyOf(statement, values, '', ['law', 'symmetry']),
    },
  ],
  cost: () => cheap,
  // eslint-disable-next-line require-yield -- symbolic and exact, answered in one go
  *decide({ statement, values }) {
    return statement.subjects.flatMap((subject) => {
      const value = values.find(subject.name);
      return value?.what === 'map'
        ? decide(value, values, statement.sizes)
        : [openFinding(subject.name, `${subject.name} is not a map`)];
    });
  },
};
