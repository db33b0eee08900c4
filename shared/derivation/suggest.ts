import { canonicalExtended, extendedKey } from '../algebra/pauli/extended.ts';
import { commutePieces, operatorPieces, piecesOf } from '../audits/pieces.ts';
import type { Claim, Suggestion } from '../contracts/report.ts';
import { evaluateSource, type Program } from '../language/evaluate.ts';
import type {
  LawValue,
  MapDeclaration,
  ModelValue,
  SpeciesValue,
  SymmetryValue,
  Value,
  Values,
} from '../language/values.ts';
import { BudgetSpent, newBudget } from '../limits.ts';
import { cellKey, shifted } from '../lattice/cells.ts';
import { lawsOf } from '../maps/context.ts';
import { buildMap, MapRefused } from '../maps/registry.ts';
import { mod } from '../maps/steps.ts';

/** Steps that a model offers, as statements of the language: laws that were found, the gauged form, laws that can be solved. */

/** Operations to see whether one map takes one model. */
const operationsPerMap = 400_000;
/** Models beyond this number get no offers: a notebook of scans would drown in them. */
const mostModels = 24;

interface Found {
  /** The declaration as text. */
  readonly text: string;
  readonly value: SymmetryValue | LawValue;
}

/** A name that is not taken: `gauged`, `gauged2`, … */
function freeName(wish: string, values: Values, taken: ReadonlySet<string>): string {
  const free = (name: string): boolean => !values.all.has(name) && !taken.has(name);
  for (let k = 1; ; k++) {
    const name = k === 1 ? wish : `${wish}${String(k)}`;
    if (free(name)) return name;
  }
}

/** What audits of symmetries found for a model, renamed so that nothing is declared twice. */
function foundTexts(model: ModelValue, claims: readonly Claim[], values: Values): string[] {
  const claim = claims.find(
    (one) => one.audit === 'symmetries' && one.subject === model.name && 'found' in one.figures,
  );
  const texts = claim?.figures['found'];
  if (!Array.isArray(texts)) return [];
  const taken = new Set<string>();
  return texts.flatMap((text: unknown) => {
    const parts = typeof text === 'string' ? /^(law|symmetry) ([^\s(]+)(.*)$/su.exec(text) : null;
    if (!parts) return [];
    const name = freeName(parts[2] ?? '', values, taken);
    taken.add(name);
    return [`${parts[1] ?? ''} ${name}${parts[3] ?? ''}`];
  });
}

let last: { readonly program: Program; readonly key: string; readonly found: readonly Found[] } | undefined;

/** Found declarations with their values, evaluated behind the source. */
function evaluated(program: Program, texts: readonly string[]): readonly Found[] {
  if (texts.length === 0) return [];
  const key = texts.join('\n');
  if (last?.program === program && last.key === key) return last.found;
  const { values } = evaluateSource(`${program.source}\n${key}\n`, { buildMap }, program);
  const found = texts.flatMap((text): Found[] => {
    const value = values.all.get(/^\S+ ([^\s(]+)/u.exec(text)?.[1] ?? '');
    return value?.what === 'law' || value?.what === 'symmetry' ? [{ text, value }] : [];
  });
  last = { program, key, found };
  return found;
}

/** What a law or symmetry says, whatever its name and wherever its strings were put. */
function contentOf(value: SymmetryValue | LawValue): string {
  if (value.what === 'symmetry') return extendedKey(canonicalExtended(value.extended, { open: false }));
  const families = value.families.map(({ string, steps }) => {
    const home = (string.factors[0]?.cell.offset ?? []).map((c, d) => -c + (steps[d] ? mod(c, steps[d]) : c));
    const factors = string.factors.map((f) => `${f.species}^${f.pauli}${cellKey(shifted(f.cell, home))}`);
    return `${String(string.phase)} ${steps.join()} ${factors.join(' ')}`;
  });
  return `${String(value.value)} ${families.sort().join('; ')}`;
}

const contents = new WeakMap<Value, string>();

function sameLaw(a: SymmetryValue | LawValue, b: SymmetryValue | LawValue): boolean {
  const [p, q] = [a, b].map((value) => {
    const content = contents.get(value) ?? contentOf(value);
    contents.set(value, content);
    return content;
  });
  return a.what === b.what && p === q;
}

const fits = new WeakMap<ModelValue, WeakMap<Value, Map<string, boolean>>>();

/** Whether a map of this declaration takes the model; remembered for the two. */
function takes(model: ModelValue, by: Value, key: string, declaration: MapDeclaration, values: Values): boolean {
  const own = fits.get(model) ?? new WeakMap<Value, Map<string, boolean>>();
  fits.set(model, own);
  const known = own.get(by) ?? new Map<string, boolean>();
  own.set(by, known);
  const before = known.get(key);
  if (before !== undefined) return before;
  let answer = false;
  try {
    const budget = newBudget(operationsPerMap);
    answer = buildMap(declaration, values, budget).image(model.operator, budget).ok;
  } catch (error) {
    if (!(error instanceof MapRefused || error instanceof BudgetSpent)) throw error;
  }
  known.set(key, answer);
  return answer;
}

const commutes = (model: ModelValue, by: SymmetryValue | LawValue): boolean => {
  try {
    const budget = newBudget(operationsPerMap);
    return operatorPieces(model.name, model.operator).every((term) =>
      (piecesOf(by) ?? []).every((piece) => commutePieces(term, piece, budget).commutes === true),
    );
  } catch (error) {
    if (error instanceof BudgetSpent) return false;
    throw error;
  }
};

/** A field on links for a model: a declared species that it does not hold, else a new one with its declaration. */
function fieldFor(
  model: ModelValue,
  values: Values,
): { readonly species: SpeciesValue; readonly declared: boolean } | undefined {
  const classes = values.lattice?.family.links.map((_, index) => index) ?? [];
  const declared = [...values.all.values()].find(
    (value): value is SpeciesValue =>
      value.what === 'spins' &&
      value.kind === 'links' &&
      value.classes.length === classes.length &&
      !model.species.includes(value.name),
  );
  if (declared) return { species: declared, declared: true };
  if (classes.length === 0) return undefined;
  const name = freeName('g', values, new Set());
  return {
    species: { what: 'spins', name, kind: 'links', classes, place: model.place, text: `spins ${name} on links` },
    declared: false,
  };
}

const mapsOf = (values: Values): MapDeclaration[] =>
  [...values.all.values()].flatMap((value) => (value.what === 'map' ? [value.declaration] : []));

function gaugings(model: ModelValue, found: readonly Found[], values: Values): Suggestion[] {
  const field = fieldFor(model, values);
  if (!field) return [];
  const declared = [...values.all.values()].flatMap((value) =>
    value.what === 'symmetry' ? [{ text: '', value }] : [],
  );
  const used = mapsOf(values).flatMap((map) => (map.kind === 'gauge' ? [map.symmetry] : []));
  const all = [...declared, ...found].flatMap(({ text, value }) =>
    value.what === 'symmetry' ? [{ text, value }] : [],
  );
  return all.flatMap(({ text, value }, k): Suggestion[] => {
    if (used.some((one) => sameLaw(one, value)) || all.slice(0, k).some((one) => sameLaw(one.value, value))) return [];
    if (!value.extended.parts.some((part) => part.string.factors.some((f) => model.species.includes(f.species))))
      return [];
    if (!commutes(model, value)) return [];
    const declaration: MapDeclaration = { kind: 'gauge', symmetry: value, gauge: field.species };
    if (!takes(model, value, field.species.name, declaration, values)) return [];
    const taken = new Set<string>();
    const map = freeName('gauged', values, taken);
    taken.add(map);
    const image = freeName(`${model.name}Gauged`, values, taken);
    return [
      {
        line: model.place.line,
        model: model.name,
        what: 'gauge',
        words: `every term of ${model.name} commutes with the on-site symmetry ${value.name}, so it can be gauged with ${field.species.name} on links`,
        statements: [
          ...(text === '' ? [] : [text]),
          ...(field.declared ? [] : [field.species.text]),
          `map ${map} = gauge ${value.name} with ${field.species.name} on links`,
          `model ${image} = ${map}(${model.name})`,
          `audit commute ${image} with ${map}.gauss`,
        ],
      },
    ];
  });
}

/** Species of which every cell of a law holds one spin. */
function ownSpecies(law: LawValue, values: Values): SpeciesValue[] {
  const [first] = law.families;
  const names = [...new Set(first?.string.factors.map((f) => f.species) ?? [])];
  return names.flatMap((name) => {
    const value = values.find(name);
    const once = law.families.every((f) => f.string.factors.filter((x) => x.species === name).length === 1);
    return once && value?.what === 'spins' ? [value] : [];
  });
}

function solvings(model: ModelValue, found: readonly Found[], values: Values): Suggestion[] {
  const declared = lawsOf(values).map((value) => ({ text: '', value }));
  const used = mapsOf(values).flatMap((map) => (map.kind === 'solve' ? [map.law] : []));
  const all = [...declared, ...found].flatMap(({ text, value }) => (value.what === 'law' ? [{ text, value }] : []));
  return all.flatMap(({ text, value }, k): Suggestion[] => {
    if (used.some((one) => sameLaw(one, value)) || all.slice(0, k).some((one) => sameLaw(one.value, value))) return [];
    return ownSpecies(value, values).flatMap((species): Suggestion[] => {
      if (!model.species.includes(species.name) || !commutes(model, value)) return [];
      if (!takes(model, value, species.name, { kind: 'solve', law: value, species }, values)) return [];
      const taken = new Set<string>();
      const map = freeName('solved', values, taken);
      taken.add(map);
      const image = freeName(`${model.name}Solved`, values, taken);
      return [
        {
          line: model.place.line,
          model: model.name,
          what: 'solve',
          words: `every term of ${model.name} commutes with ${value.name}, and each cell of it holds its own ${species.name}: it can be used up to remove ${species.name}`,
          statements: [
            ...(text === '' ? [] : [text]),
            `map ${map} = solve ${value.name} for ${species.name}`,
            `model ${image} = ${map}(${model.name})`,
          ],
        },
      ];
    });
  });
}

/** Found laws and symmetries that are not declared yet, one statement each. */
function declarations(model: ModelValue, found: readonly Found[], values: Values): Suggestion[] {
  const symmetries = [...values.all.values()].flatMap((value) => (value.what === 'symmetry' ? [value] : []));
  const declared = [...symmetries, ...lawsOf(values)];
  return found.flatMap(({ text, value }): Suggestion[] =>
    declared.some((other) => sameLaw(other, value))
      ? []
      : [
          {
            line: model.place.line,
            model: model.name,
            what: 'declare',
            words: `${value.what === 'law' ? 'a local law' : 'a symmetry'} of ${model.name}, found by audit symmetries`,
            statements: [text],
          },
        ],
  );
}

/**
 * What the models of a program offer. Each suggestion holds whole statements that can be added at the end of the source: for a model with a global
 * on-site Z2 symmetry, declared or found, its gauged form; for one that obeys laws with spins of their own, solving them; and what was found.
 */
export function suggestionsOf(program: Program, claims: readonly Claim[]): Suggestion[] {
  const { values } = program;
  const models = [...values.all.values()].flatMap((value) => (value.what === 'model' ? [value] : []));
  return models.slice(0, mostModels).flatMap((model) => {
    if (model.seams.length > 0) return [];
    const found = evaluated(program, foundTexts(model, claims, values));
    return [
      ...declarations(model, found, values),
      ...gaugings(model, found, values),
      ...solvings(model, found, values),
    ];
  });
}
