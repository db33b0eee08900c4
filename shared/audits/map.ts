import type { MapDeclaration, MapValue, Values } from '../language/values.ts';
import type { Size } from '../lattice/cells.ts';
import type { Audit, Finding } from './audit.ts';
import { newBudget } from '../limits.ts';
import { gradeOf } from './grades.ts';
import { dictionaryFindings } from './map-dictionary.ts';
import { linesOrWhy, type Declared } from './map-generators.ts';
import {
  automorphismFindings,
  circuitFindings,
  gaugeFindings,
  restoreFindings,
  solveFindings,
  stateFindings,
} from './map-kinds.ts';
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

/** Claims that a map inherits from a part, with the part's name. */
const partFindings = (whole: MapValue, part: MapValue, values: Values, sizes: readonly Size[]): Finding[] =>
  decide(part, values, sizes).map((finding) => ({
    ...finding,
    statement: `${whole.name} follows from ${part.name}: ${finding.statement}`,
  }));

/** Whether a map is made of circuits alone. */
const isCircuit = ({ declaration }: MapValue): boolean =>
  declaration.kind === 'then'
    ? isCircuit(declaration.first) && isCircuit(declaration.second)
    : declaration.kind === 'inverse'
      ? isCircuit(declaration.of)
      : declaration.kind === 'circuit';

/** What the parts of a composition come to, in one sentence. */
function partsWords(parts: readonly MapValue[], values: Values, sizes: readonly Size[]): string {
  const words = parts.map((part) => {
    const grades = [...new Set(decide(part, values, sizes).map((finding) => gradeOf(finding.evidence)))];
    return `${part.name} is ${grades.join(' and ')}`;
  });
  return `Taken apart: ${words.join(', ')}.`;
}

/** A composition is decided as a whole, on strings that generate what it acts on; where these have no single image its claims follow from its parts. */
function thenFindings(
  value: MapValue,
  { first, second }: Declared<'then'>,
  values: Values,
  sizes: readonly Size[],
): readonly Finding[] {
  const lines = linesOrWhy(value, values, newBudget());
  if (typeof lines === 'string')
    return [...partFindings(value, first, values, sizes), ...partFindings(value, second, values, sizes)];
  const parts = partsWords([first, second], values, sizes);
  if (isCircuit(value)) return automorphismFindings(value.name, lines.rules, { figures: {}, cautions: [parts] });
  const carried = [...value.map.laws.values()].map((law) => `${law.name} = ${law.value === 1 ? '+1' : '-1'}`);
  const laws = carried.length === 0 ? [] : [`Its images obey ${carried.join(', ')}.`];
  return dictionaryFindings(value, lines, values, sizes).map((finding, k) =>
    k > 0 ? finding : { ...finding, cautions: [...(finding.cautions ?? []), parts, ...laws] },
  );
}

function inverseFindings(
  value: MapValue,
  { of }: Declared<'inverse'>,
  values: Values,
  sizes: readonly Size[],
): readonly Finding[] {
  if (of.declaration.kind === 'solve') return restoreFindings(value, of.declaration, values, sizes);
  const lines = linesOrWhy(value, values, newBudget());
  if (typeof lines === 'string') return partFindings(value, of, values, sizes);
  return isCircuit(value)
    ? automorphismFindings(value.name, lines.rules, { figures: {} })
    : dictionaryFindings(value, lines, values, sizes);
}

const findingsOf: FindingsOf = {
  dictionary: dictionaryFindings,
  gauge: gaugeFindings,
  circuit: circuitFindings,
  solve: solveFindings,
  states: stateFindings,
  then: thenFindings,
  inverse: inverseFindings,
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
