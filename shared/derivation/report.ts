import type { Claim, Problem, Report, ReportDeclaration, ReportModel } from '../contracts/report.ts';
import { BudgetSpent } from '../limits.ts';
import type { Program } from '../language/evaluate.ts';
import type { Value, Values } from '../language/values.ts';
import type { Lattice } from '../lattice/cells.ts';
import { sizeText } from '../lattice/cluster.ts';
import { engineVersion } from './engine.ts';
import { typesetContext, type TypesetOptions } from './typeset-context.ts';
import { reportDeclaration } from './declarations.ts';
import { reportImages } from './images.ts';
import { reportModel } from './models.ts';
import { suggestionsOf } from './suggest.ts';

export { engineVersion };

const setModels = new WeakMap<Value, { readonly options: TypesetOptions; readonly model: ReportModel }>();
const setDeclarations = new WeakMap<
  Value,
  { readonly options: TypesetOptions; readonly declaration: ReportDeclaration | undefined }
>();

function modelsOf(values: Values, options: TypesetOptions): Report['models'] {
  const models: Report['models'] = {};
  for (const value of values.all.values()) {
    if (value.what !== 'model') continue;
    const known = setModels.get(value);
    const model = known && known.options === options ? known.model : reportModel(value, values, options.context);
    setModels.set(value, { options, model });
    models[value.name] = model;
  }
  return models;
}

function declarationsOf(values: Values, options: TypesetOptions): ReportDeclaration[] {
  return [...values.all.values()].flatMap((value) => {
    const known = setDeclarations.get(value);
    const declaration =
      known && known.options === options ? known.declaration : reportDeclaration(value, options.context);
    setDeclarations.set(value, { options, declaration });
    return declaration ?? [];
  });
}

const latticeOf = (lattice: Lattice, values: Values): NonNullable<Report['lattice']> => ({
  family: lattice.family.name,
  boundary: lattice.boundary,
  periods: lattice.size.periods.map((row) => [...row]),
  geometry: lattice.family,
  species: Object.fromEntries(
    [...values.all.values()].flatMap((value) => (value.what === 'spins' ? [[value.name, value.kind] as const] : [])),
  ),
});

/** The lattice line, set in words: "square lattice, 4 × 4 torus". */
function latticeDeclaration(program: Program): ReportDeclaration[] {
  const { lattice } = program;
  const statement = program.statements.find(({ keyword, ok }) => keyword === 'lattice' && ok);
  if (!lattice || !statement) return [];
  const { name } = lattice.family;
  const size = sizeText(lattice.size).replaceAll(' x ', ' \\times ');
  return [
    {
      name,
      what: 'lattice',
      line: statement.line,
      tex: `\\text{${name} lattice, }${size}\\text{ ${lattice.boundary}}`,
      spoken: `${name} lattice, ${sizeText(lattice.size).replaceAll(' x ', ' by ')}, ${lattice.boundary}`,
      supports: [],
      language: 'both',
    },
  ];
}

const byPlace = (a: { line: number; column?: number }, b: { line: number; column?: number }): number =>
  a.line - b.line || (a.column ?? 0) - (b.column ?? 0);

/** The report of a program and of what its audits came to. */
export function reportOf(program: Program, claims: readonly Claim[], problems: readonly Problem[]): Report {
  const { values, lattice } = program;
  const all = [...program.problems, ...problems];
  let set: Pick<Report, 'models' | 'declarations' | 'images'> = { models: {}, declarations: [] };
  const options = typesetContext(values);
  if (options) {
    try {
      set = {
        models: modelsOf(values, options),
        declarations: [...latticeDeclaration(program), ...declarationsOf(values, options)],
        images: reportImages(values, options.context),
      };
    } catch (error) {
      if (!(error instanceof BudgetSpent)) throw error;
      all.push({
        code: 'limit',
        message: `a limit was reached while setting formulas: ${error.limit}`,
        line: 1,
        column: 1,
        length: 1,
        hint: '',
        severity: 'error',
      });
    }
  }
  return {
    format: 'gaugewright-report/1',
    engine: engineVersion,
    problems: all.sort(byPlace),
    lattice: lattice ? latticeOf(lattice, values) : null,
    ...set,
    claims: [...claims],
    suggestions: suggestionsOf(program, claims),
  };
}
