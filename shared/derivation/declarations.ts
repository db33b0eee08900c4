import type { Extended, LocalString } from '../algebra/pauli/types.ts';
import type { ReportDeclaration } from '../contracts/report.ts';
import type { DictionaryRule, MapValue, Value, Values } from '../language/values.ts';
import type { CellKind } from '../lattice/cells.ts';
import { coefficientText } from '../typeset/coefficients.ts';
import { letters, type TypesetContext } from '../typeset/context.ts';
import { lawSpoken, lawTex, namedOperatorTex, sideTex, symmetryTex } from '../typeset/declarations.ts';
import { extendedSpoken } from '../typeset/extended.ts';
import { nameSpoken, nameTex } from '../typeset/names.ts';
import { operatorSpoken, operatorTex } from '../typeset/operators.ts';
import { orbitOf, supportsOf } from './models.ts';

/** Everything declared that is not a model, set in type, with the supports that the plate draws. */

type Declared = Omit<ReportDeclaration, 'name' | 'line'>;

const relations = { '==': '=', '<=': '\\le', '>=': '\\ge', even: '\\text{ even}', odd: '\\text{ odd}' } as const;

/** A page: gauge where a species stands on links or other cells than vertices. */
function languageOf(species: Iterable<string>, context: TypesetContext): ReportDeclaration['language'] {
  const kinds: (CellKind | undefined)[] = [...species].map((name) => context.species.get(name)?.kind);
  if (kinds.length === 0) return 'both';
  const links = kinds.filter((kind) => kind !== 'vertices').length;
  return links === 0 ? 'spin' : 'gauge';
}

const factorsOf = (side: LocalString | Extended): LocalString['factors'] =>
  'parts' in side ? side.parts.flatMap((part) => part.string.factors) : side.factors;

const speciesOf = (sides: readonly (LocalString | Extended)[]): Set<string> =>
  new Set(sides.flatMap((side) => factorsOf(side).map((factor) => factor.species)));

function ruleOf(rule: DictionaryRule, context: TypesetContext): NonNullable<ReportDeclaration['rules']>[number] {
  return {
    left: sideTex(rule.left, context, 'page'),
    right: sideTex(rule.right, context, 'page'),
    leftOrbit: orbitOf(factorsOf(rule.left), context),
    rightOrbit: orbitOf(factorsOf(rule.right), context),
  };
}

/** Rules of a dictionary, one for each line and form that its classes have. */
function dictionaryRules(
  rules: readonly DictionaryRule[],
  context: TypesetContext,
): NonNullable<ReportDeclaration['rules']> {
  const all = new Map<string, NonNullable<ReportDeclaration['rules']>[number]>();
  for (const rule of rules) {
    const set = ruleOf(rule, context);
    const key = `${String(rule.rule)}|${set.left}|${set.right}`;
    if (!all.has(key)) all.set(key, set);
  }
  return [...all.values()];
}

function mapDeclared(value: MapValue, context: TypesetContext): Declared {
  const { declaration } = value;
  const name = nameTex(value.name);
  const both = { what: 'map' as const, supports: [], language: 'both' as const };
  switch (declaration.kind) {
    case 'dictionary': {
      const rules = dictionaryRules(declaration.rules, context);
      const tex = rules.map((rule) => `${rule.left} \\mapsto ${rule.right}`).join(',\\quad ');
      return {
        ...both,
        tex: `${name}:\\ ${tex}`,
        spoken: `map ${nameSpoken(value.name)}, a dictionary of ${String(rules.length)} rules`,
        rules,
      };
    }
    case 'gauge': {
      const { symmetry, gauge } = declaration;
      return {
        ...both,
        tex: `${name}:\\ \\text{gauge } ${nameTex(symmetry.name)} \\text{ with } ${nameTex(gauge.name)} \\text{ on links}`,
        spoken: `map ${nameSpoken(value.name)}, gauges ${nameSpoken(symmetry.name)} with ${nameSpoken(gauge.name)} on links`,
      };
    }
    case 'circuit': {
      const gates = declaration.layers.map((layer) => `\\mathrm{${layer.gate}}`).join(',\\ ');
      const words = declaration.layers.map((layer) => layer.gate).join(', ');
      return {
        ...both,
        tex: `${name}:\\ \\text{circuit } ${gates}`,
        spoken: `map ${nameSpoken(value.name)}, a circuit of ${words}`,
      };
    }
    case 'solve':
      return {
        ...both,
        tex: `${name}:\\ \\text{solve } ${nameTex(declaration.law.name)} \\text{ for } ${nameTex(declaration.species.name)}`,
        spoken: `map ${nameSpoken(value.name)}, solves ${nameSpoken(declaration.law.name)} for ${nameSpoken(declaration.species.name)}`,
      };
    case 'states': {
      const rules = declaration.rules.map((rule) => {
        const right = [...rule.amplitudes]
          .map(([bits, amplitude]) => {
            const text = coefficientText(amplitude);
            return `${text === '1' ? '' : text === '-1' ? '-' : `${text}\\,`}|${bits}\\rangle`;
          })
          .join(' + ')
          .replaceAll('+ -', '- ');
        return { left: `|${rule.bits}\\rangle`, right, leftOrbit: [], rightOrbit: [] };
      });
      const tex = rules.map((rule) => `${rule.left} \\mapsto ${rule.right}`).join(',\\quad ');
      return {
        ...both,
        tex: `${name}:\\ ${tex}`,
        spoken: `map ${nameSpoken(value.name)}, a state map of ${String(rules.length)} states`,
        rules,
      };
    }
    case 'then':
      return {
        ...both,
        tex: `${name} = ${nameTex(declaration.second.name)} \\circ ${nameTex(declaration.first.name)}`,
        spoken: `map ${nameSpoken(value.name)}, ${nameSpoken(declaration.first.name)} then ${nameSpoken(declaration.second.name)}`,
      };
    case 'inverse':
      return {
        ...both,
        tex: `${name} = ${nameTex(declaration.of.name)}^{-1}`,
        spoken: `map ${nameSpoken(value.name)}, the inverse of ${nameSpoken(declaration.of.name)}`,
      };
  }
}

function declared(value: Value, context: TypesetContext): Declared | undefined {
  switch (value.what) {
    case 'model':
      return undefined;
    case 'spins': {
      const tex = `${nameTex(value.name)} \\text{ on ${value.kind}}`;
      const language = value.kind === 'vertices' ? 'spin' : 'gauge';
      return { what: 'spins', tex, spoken: `spins ${nameSpoken(value.name)} on ${value.kind}`, supports: [], language };
    }
    case 'coupling': {
      const right = value.value ? ` = ${coefficientText(value.value)}` : '';
      return {
        what: 'couplings',
        tex: `${nameTex(value.name)}${right}`,
        spoken: `coupling ${nameSpoken(value.name)}`,
        supports: [],
        language: 'both',
      };
    }
    case 'law': {
      const strings = value.families.map((family) => family.string);
      return {
        what: 'law',
        tex: lawTex(value, context, 'page'),
        spoken: lawSpoken(value, context),
        supports: value.families.map((family) => ({
          orbit: orbitOf(family.string.factors, context),
          steps: [...family.steps],
        })),
        language: languageOf(speciesOf(strings), context),
      };
    }
    case 'symmetry':
      return {
        what: 'symmetry',
        tex: symmetryTex(value.name, value.extended, context, 'page'),
        spoken: `${nameSpoken(value.name)} is ${extendedSpoken(value.extended, context)}`,
        supports: supportsOf(value.extended, context),
        language: languageOf(speciesOf([value.extended]), context),
      };
    case 'operator': {
      const { operator } = value;
      const strings = [...operator.families.map((f) => f.string), ...operator.extended.map((term) => term.extended)];
      const head = value.parameter ? `_{${letters[value.parameter.kind]}}` : '';
      const tex = namedOperatorTex(value.name, operator, context, 'page').replace(
        nameTex(value.name),
        `${nameTex(value.name)}${head}`,
      );
      return {
        what: 'operator',
        tex,
        spoken: `${nameSpoken(value.name)} is ${operatorSpoken(operator, context)}`,
        supports: [
          ...operator.families.map((f) => ({ orbit: orbitOf(f.string.factors, context), steps: [...f.steps] })),
          ...operator.extended.flatMap((term) => supportsOf(term.extended, context)),
        ],
        language: languageOf(speciesOf(strings), context),
      };
    }
    case 'rule': {
      const [first] = value.families;
      const bound = value.relation === 'even' || value.relation === 'odd' ? '' : ` ${coefficientText(value.bound)}`;
      const body = first ? operatorTex(first.operator, context, 'page') : '0';
      return {
        what: 'rule',
        tex: `${nameTex(value.name)}_{${letters[value.parameter.kind]}}:\\ ${body} ${relations[value.relation]}${bound}`,
        spoken: `rule ${nameSpoken(value.name)}`,
        supports: value.families.flatMap((family) =>
          family.operator.families
            .filter((f) => f.string.factors.length > 0)
            .map((f) => ({ orbit: orbitOf(f.string.factors, context), steps: [...family.steps] })),
        ),
        language: languageOf(
          speciesOf(value.families.flatMap((f) => f.operator.families.map((g) => g.string))),
          context,
        ),
      };
    }
    case 'reference': {
      const words =
        value.state.kind === 'uniform'
          ? `uniform over ${value.state.rules.join(', ')}`
          : `stabilizer state of ${value.state.laws.join(', ')}`;
      return {
        what: 'reference',
        tex: `${nameTex(value.name)}:\\ \\text{${words}}`,
        spoken: `reference ${nameSpoken(value.name)}, ${words}`,
        supports: [],
        language: 'both',
      };
    }
    case 'map':
      return mapDeclared(value, context);
  }
}

/** One declaration as the report has it; undefined for models, which have a place of their own. */
export function reportDeclaration(value: Value, context: TypesetContext): ReportDeclaration | undefined {
  const set = declared(value, context);
  return set && { name: value.name, line: value.place.line, ...set };
}

export const declarationsOf = (values: Values, context: TypesetContext): ReportDeclaration[] =>
  [...values.all.values()].flatMap((value) => reportDeclaration(value, context) ?? []);
