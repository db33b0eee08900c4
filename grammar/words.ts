/** The words of the operator language: what is reserved, what starts a statement, how Greek is typed, what binds tighter. */

/** Never a name. Every other word is a keyword by its position only. */
export const reserved: ReadonlySet<string> = new Set([
  'sum',
  'prod',
  'sqrt',
  'hc',
  'is',
  'for',
  'where',
  'in',
  'and',
  'or',
  'not',
  'of',
  'on',
]);

/** The word in column 1 that opens a statement. */
export const statementKeywords = [
  'lattice',
  'spins',
  'couplings',
  'model',
  'operator',
  'law',
  'symmetry',
  'rule',
  'reference',
  'map',
  'audit',
] as const;
export type StatementKeyword = (typeof statementKeywords)[number];

const greekLetters: readonly (readonly [string, string])[] = [
  ['alpha', 'α'],
  ['beta', 'β'],
  ['gamma', 'γ'],
  ['delta', 'δ'],
  ['epsilon', 'ε'],
  ['zeta', 'ζ'],
  ['eta', 'η'],
  ['theta', 'θ'],
  ['iota', 'ι'],
  ['kappa', 'κ'],
  ['lambda', 'λ'],
  ['mu', 'μ'],
  ['nu', 'ν'],
  ['xi', 'ξ'],
  ['omicron', 'ο'],
  ['pi', 'π'],
  ['rho', 'ρ'],
  ['sigma', 'σ'],
  ['tau', 'τ'],
  ['upsilon', 'υ'],
  ['phi', 'φ'],
  ['chi', 'χ'],
  ['psi', 'ψ'],
  ['omega', 'ω'],
  ['Gamma', 'Γ'],
  ['Delta', 'Δ'],
  ['Theta', 'Θ'],
  ['Lambda', 'Λ'],
  ['Xi', 'Ξ'],
  ['Pi', 'Π'],
  ['Sigma', 'Σ'],
  ['Upsilon', 'Υ'],
  ['Phi', 'Φ'],
  ['Psi', 'Ψ'],
  ['Omega', 'Ω'],
];

/** Letter to name: σ → sigma. Variant forms of a letter have the plain letter's name. */
export const greek: ReadonlyMap<string, string> = new Map([
  ...greekLetters.map(([name, letter]) => [letter, name] as const),
  ['ϵ', 'epsilon'],
  ['ϑ', 'theta'],
  ['ϕ', 'phi'],
  ['ϱ', 'rho'],
  ['ς', 'sigma'],
  ['ϖ', 'pi'],
  ['µ', 'mu'],
]);

/** Names that may be typed with a backslash: `\sigma`, `\varphi`. */
export const greekNames: ReadonlyMap<string, string> = new Map([
  ...greekLetters.map(([name]) => [name, name] as const),
  ...['epsilon', 'theta', 'phi', 'rho', 'sigma', 'pi'].map((name) => [`var${name}`, name] as const),
]);

/** One spelling for each name: `σ`, `\sigma` and `sigma` are `sigma`. */
export function plainName(text: string): string {
  if (text.startsWith('\\')) return greekNames.get(text.slice(1)) ?? text;
  // Most words are plain ASCII; looking for Greek costs more than finding none.
  if (/^[\w]*$/.test(text)) return text;
  return [...text].map((letter) => greek.get(letter) ?? letter).join('');
}

/**
 * THE table of precedence, loosest first. Grammar, printing to text and printing to TeX use this one.
 * Operators of one row stand on one level and associate to the left.
 */
export const precedence = [
  { name: 'or', operators: ['or'] },
  { name: 'and', operators: ['and'] },
  { name: 'not', operators: ['not'] },
  { name: 'comparison', operators: ['==', '!=', '<', '<=', '>', '>=', 'in'] },
  { name: 'sum', operators: ['+', '-'] },
  { name: 'product', operators: ['', '*', '/', '%'] },
  { name: 'power', operators: ['^'] },
  { name: 'atom', operators: [] },
] as const;
export type Level = (typeof precedence)[number]['name'];

/** Height of a level in the table; what is higher binds tighter. */
export const levelOf = (name: Level): number => precedence.findIndex((row) => row.name === name);

/** Pasted forms and what they stand for; `^{z}` is read by the lexer itself. */
export const pasted: ReadonlyMap<string, string> = new Map([
  ['−', '-'],
  ['–', '-'],
  ['×', '*'],
  ['·', '*'],
  ['⋅', '*'],
  ['∗', '*'],
  ['⟩', '>'],
  ['〉', '>'],
  ['⟨', '<'],
  ['≤', '<='],
  ['≥', '>='],
  ['≠', '!='],
  ['⇒', '=>'],
  ['→', '=>'],
  ['↦', '=>'],
  ['…', '..'],
  ['∼', '~'],
]);
