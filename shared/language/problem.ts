import { limits } from '../limits.ts';
import { nearest, type Saying } from './fault.ts';

export { ProblemError, editDistance, fail, nearest, problemAt, type Fault, type Saying } from './fault.ts';

const meant = (near: string | undefined): Pick<Saying, 'hint' | 'fix'> =>
  near === undefined ? { hint: '' } : { hint: `Did you mean "${near}"?`, fix: near };
const plain = (code: string, message: string, hint = ''): Saying => ({ code, message, hint });
const caution = (code: string, message: string, hint = ''): Saying => ({ code, message, hint, severity: 'caution' });
const kinds = ['vertices', 'links', 'plaquettes', 'cubes'];
/** A reason as a sentence. */
const sentence = (text: string): string =>
  `${text.charAt(0).toUpperCase()}${text.slice(1)}${/[.!?]$/u.test(text) ? '' : '.'}`;
const listed = (words: readonly string[]): string =>
  words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} or ${words.at(-1) ?? ''}`;

/**
 * One saying for each thing that can be wrong: its code, its sentence, its hint. Nothing else in `language` writes a sentence.
 * A saying says what was given, what was expected and, where one is near, the way out.
 */
export const say = {
  // ---------------------------------------------------------------- layout and syntax
  indented: () =>
    plain(
      'indent',
      'An indented line continues a statement, and none is open here.',
      'Start the statement in column 1.',
    ),
  keyword: (word: string, known: readonly string[]) => ({
    code: 'keyword',
    message: `"${word}" opens no statement.`,
    ...meant(nearest(word, known)),
    ...(nearest(word, known) === undefined ? { hint: `A statement starts with ${listed(known)}.` } : {}),
  }),
  character: (text: string) => plain('character', `The character "${text}" has no meaning here.`),
  unknownTex: (text: string) =>
    plain('character', `"${text}" is no Greek letter.`, 'Write the name without the backslash.'),
  expected: (found: string, expected: readonly string[], hint = '') =>
    plain(
      'syntax',
      `${found} is not expected here${expected.length > 0 ? `; expected ${listed(expected)}` : ''}.`,
      hint,
    ),
  unfinished: (keyword: string, expected: readonly string[]) =>
    plain(
      'unfinished',
      `This ${keyword} statement ends too early${expected.length > 0 ? `; expected ${listed(expected)}` : ''}.`,
      'Indented lines continue a statement.',
    ),
  unclosed: (open: string, close: string) =>
    plain('bracket', `"${open}" is never closed.`, `Add "${close}" where it ends.`),
  strayClose: (close: string) => plain('bracket', `"${close}" closes no bracket.`),
  wrongClose: (open: string, close: string, wanted: string) =>
    plain('bracket', `"${open}" is closed by "${close}".`, `Write "${wanted}".`),
  reservedName: (word: string) =>
    plain('reserved', `"${word}" is a reserved word and cannot be a name.`, 'Choose another name.'),
  spinWithoutCell: (species: string, operator: string) =>
    plain(
      'spin-without-cell',
      `${species}^${operator} lacks its cell.`,
      `Write ${species}^${operator}[c]; an exponent is an integer or stands in brackets.`,
    ),
  noSpinOperator: (species: string, operator: string) =>
    plain('spin-operator', `There is no operator ${species}^${operator}.`, 'Operators are ^x ^y ^z ^n ^+ ^-.'),
  exponentForm: () => plain('exponent', 'An exponent is an integer or stands in brackets.', 'Put it in brackets.'),
  strayHc: () =>
    plain(
      'hc',
      '"hc" stands only as "+ hc" at the end of a bracket or statement.',
      'Put brackets around the part it closes.',
    ),
  straySign: (sign: string) =>
    plain(
      'sign',
      `A sign "${sign}" cannot stand here.`,
      'A sign stands at the start of an expression, after a bracket, "=", "," or a comparison, and after "*" or "/"; use brackets.',
    ),
  chained: () => plain('chain', 'Comparisons are not chained.', 'Join two comparisons by "and".'),
  notWrittenOut: (name: string) => ({
    code: 'written-out',
    message: name === '' ? 'No model stands here.' : `"${name}" cannot be written out here.`,
    hint: 'Put the caret on the name of a model, where it is declared and evaluated.',
  }),
  equality: () => ({ code: 'equality', message: 'A condition compares with "==".', hint: 'Write "==".', fix: '==' }),
  decimal: () => plain('decimal', 'A decimal has digits on both sides of its dot.', 'Write 0.5, not .5 or 5.'),
  emptySum: (which: string) =>
    plain(
      'empty-body',
      `The body of this ${which} is missing.`,
      'The body follows the bracket; a signed body stands in brackets.',
    ),
  missingBody: (what: string) =>
    plain('missing-lines', `${what} needs its indented lines.`, 'Put one rule on each indented line.'),
  aliasMap: () =>
    plain(
      'map-kind',
      'This is no kind of map.',
      'Write "from … to …", "= gauge P with g on links", "= circuit", "= solve G for s", "= A then B" or "= inverse A".',
    ),
  auditName: () =>
    plain(
      'audit-name',
      'Audits take declared names.',
      'Declare the expression with "operator" or "model" and name it here.',
    ),
  tooLong: (count: number) =>
    plain('limit', `A source holds at most ${limits.sourceCharacters} characters; this one has ${count}.`),
  tooManyStatements: () => plain('limit', `A source holds at most ${limits.statements} statements.`, 'Divide it.'),
  tooManyTokens: (most: number) =>
    plain('limit', `A statement holds at most ${most} words and signs.`, 'Divide it into several operators.'),
  tooLarge: () =>
    plain('limit', 'This statement is too large to be walked through.', 'Name parts of it with "operator".'),
  tooDeep: () =>
    plain('limit', `Brackets, sums and products nest at most ${limits.nesting} deep.`, 'Name a part with "operator".'),
  spent: (limit: string) => plain('limit', `The work for this statement goes past a limit: ${limit}.`),

  // ---------------------------------------------------------------- names
  unknownName: (name: string, near: string | undefined) =>
    name === 'i' && near === undefined
      ? { code: 'unknown-name', message: '"i" is not declared.', hint: 'The imaginary unit is written 1i.', fix: '1i' }
      : { code: 'unknown-name', message: `"${name}" is not declared.`, ...meant(near) },
  imaginary: () => ({
    code: 'unknown-name',
    message: '"i" is not declared.',
    hint: 'The imaginary unit is written 1i.',
    fix: '1i',
  }),
  unbound: (name: string) =>
    plain(
      'unbound',
      `The cell "${name}" is bound nowhere.`,
      `Bind it: sum(${name}: vertices), or name a cell: vertices(…).`,
    ),
  missingFor: (name: string) =>
    plain('missing-for', `The cell "${name}" of this line is bound nowhere.`, `End the line with "for ${name}: …".`),
  later: (name: string, line: number) =>
    plain(
      'used-before',
      `"${name}" is declared only later, in line ${line}.`,
      'Order matters: move the declaration up.',
    ),
  twice: (name: string, line: number) =>
    plain('declared-twice', `"${name}" is already declared in line ${line}.`, 'Choose another name.'),
  hides: (name: string) =>
    plain('hides', `The bound variable "${name}" would hide the declared name "${name}".`, 'Choose another variable.'),
  rebound: (name: string) =>
    plain('hides', `The variable "${name}" is already bound around this.`, 'Choose another variable.'),
  notSpins: (name: string, what: string) =>
    plain('wrong-kind', `"${name}" is ${what}; ${name}^… needs spins.`, 'Declare it with "spins".'),
  noLattice: () =>
    plain(
      'no-lattice',
      'No lattice is declared before this.',
      'Begin with a line such as "lattice square torus 4 x 4".',
    ),
  secondLattice: (line: number) =>
    plain('declared-twice', `The lattice is already declared in line ${line}.`, 'A source has one lattice.'),

  // ---------------------------------------------------------------- lattices and cells
  unknownFamily: (name: string, known: readonly string[]) => ({
    code: 'unknown-lattice',
    message: `There is no lattice "${name}".`,
    ...meant(nearest(name, known)),
    ...(nearest(name, known) === undefined ? { hint: `Built in: ${known.join(', ')}; or "lattice custom".` } : {}),
  }),
  unknownBoundary: (name: string) => ({
    code: 'unknown-boundary',
    message: `"${name}" is no boundary.`,
    hint: 'Write torus, cylinder or open.',
    ...(nearest(name, ['torus', 'cylinder', 'open']) === undefined
      ? {}
      : { fix: nearest(name, ['torus', 'cylinder', 'open']) as string }),
  }),
  badSize: (message: string) => plain('size', message),
  sizeDimension: (given: number, wanted: number) =>
    plain('size', `A size of this lattice has ${wanted} entr${wanted === 1 ? 'y' : 'ies'}, got ${given}.`),
  sizeRows: (given: number, wanted: number) =>
    plain('size', `A size given by its periods needs ${wanted} brackets, got ${given}.`),
  badLattice: (message: string) => plain('lattice', message),
  missingLine: (word: string) => plain('lattice', `"lattice custom" needs a line "${word} …".`),
  repeatedLine: (word: string) => plain('lattice', `"${word}" stands twice in this lattice.`),
  unknownLabel: (kind: string, label: string, known: readonly string[]) => ({
    code: 'unknown-class',
    message: `This lattice has no ${kind}.${label}.`,
    ...meant(nearest(label, known)),
    ...(nearest(label, known) === undefined
      ? { hint: known.length > 0 ? `It has ${known.map((k) => `${kind}.${k}`).join(', ')}.` : '' }
      : {}),
  }),
  noCells: (kind: string, family: string) => plain('no-cells', `The ${family} lattice has no ${kind}.`),
  notCells: (text: string) => ({
    code: 'not-cells',
    message: `"${text}" is no set of cells.`,
    hint: 'Sets are vertices, links, plaquettes, cubes, their classes, and geometry functions such as star(v).',
    ...(nearest(text, kinds) === undefined ? {} : meant(nearest(text, kinds))),
  }),
  notACell: (text: string) =>
    plain('not-a-cell', `"${text}" is no cell.`, 'Name a bound cell such as v, a part such as l.a, or vertices(0, 0).'),
  takes: (name: string, wanted: string, given: string) => plain('wrong-cell', `${name} takes ${wanted}, got ${given}.`),
  speciesCell: (species: string, lives: string, given: string) =>
    plain('wrong-cell', `${species} lives on ${lives}, got ${given}.`),
  argumentCount: (name: string, wanted: string, given: number) =>
    plain('arguments', `${name} takes ${wanted}, got ${given}.`),
  noPart: (of: string, part: string, has: string) =>
    plain('no-part', `${of} has no part "${part}".`, has === '' ? '' : `It has ${has}.`),
  shiftLength: (given: number, wanted: number) =>
    plain('shift', `A shift has one entry for each direction: ${wanted}, got ${given}.`),
  notInteger: (what: string) => plain('integer', `${what} must be an integer.`),
  ambiguousCell: (kind: string, labels: readonly string[]) =>
    plain(
      'which-cell',
      `There are several kinds of ${kind} in a unit cell.`,
      `Name one: ${labels.map((l) => `${kind}.${l}(…)`).join(', ')}.`,
    ),
  geometry: (message: string) => plain('geometry', message),
  setAsOperator: (name: string) =>
    plain('wrong-kind', `"${name}" gives cells, not an operator.`, `Sum or multiply over it: prod(c: ${name}…).`),
  cellAsOperator: (text: string) =>
    plain('wrong-kind', `"${text}" is a cell, not an operator.`, 'Operators stand as s^x[v].'),
  emptySet: () => caution('empty-set', 'No cell obeys this condition, so nothing is left.'),
  period: (m: number) =>
    plain('period', `This condition or coefficient repeats only after ${m} cells; the most is ${limits.period}.`),
  sizeNotDivisible: (steps: readonly number[], size: string) =>
    plain(
      'period-size',
      `This holds for sizes divisible by ${steps.map((m) => Math.max(m, 1)).join(' x ')}; the declared size is ${size}.`,
      'Choose a size that its period divides.',
    ),
  declaredSize: () =>
    caution(
      'declared-size',
      'This does not repeat along the lattice: it is evaluated on the declared size only, and what is said of it holds for that size.',
    ),
  frozenTooLarge: (count: number, most: number) =>
    plain(
      'limit',
      `This does not repeat along the lattice and would be written out cell by cell: ${count} cells, at most ${most}.`,
    ),
  cutFactor: () =>
    plain(
      'open-cut',
      'On an open lattice a product over a cut set (star, rim, neighbours, sides) may only hold factors on the cells of that set.',
      'Split the product, or declare a torus.',
    ),

  // ---------------------------------------------------------------- kinds in expressions
  wrongKind: (given: string, wanted: string, hint = '') =>
    plain('wrong-kind', `Expected ${wanted}, got ${given}.`, hint),
  notDivisor: (what: string) => plain('division', `Only numbers and couplings divide, got ${what}.`),
  zeroDivisor: () => plain('division', 'Division by zero.'),
  exponentInteger: () => plain('exponent', 'An exponent must be an integer.'),
  exponentLimit: (n: string) => plain('exponent', `The exponent ${n} goes past the limit ${limits.exponent}.`),
  exponentNegative: () => plain('exponent', 'An operator has no negative power here.'),
  rootOf: () => plain('sqrt', 'A square root takes a rational number.'),
  notConstant: (what: string) =>
    plain('constant', `${what} must be a constant: numbers, sqrt and couplings with a value.`),
  noValue: (name: string) =>
    plain('constant', `The coupling "${name}" has no value.`, `Give it one: couplings ${name} = 1.`),
  moduloIntegers: () => plain('integer', '"%" takes integers, and a positive number of cells on its right.'),
  coordinateAlone: () =>
    plain(
      'coordinate',
      'A coordinate cannot be a coefficient by itself.',
      'Use it in (-1)^(v.x), in "%" or in "where".',
    ),
  infiniteProduct: () =>
    plain(
      'infinite-product',
      'This multiplies two sums over the whole lattice.',
      'Bind both cells in one sum and tie them together: sum(u: vertices, v: neighbours(u)) ….',
    ),
  infiniteInside: (name: string) =>
    plain(
      'infinite-product',
      `"${name}" runs over the whole lattice inside another such sum or product.`,
      `Tie it to the outer cell: a set such as neighbours(v), or "where ${name}.x == v.x and …".`,
    ),
  wholeInside: (name: string) =>
    plain(
      'infinite-product',
      `"${name}" spans the whole lattice and stands inside a sum or product over it.`,
      'Take it outside.',
    ),
  productBody: () =>
    plain(
      'product-body',
      'A product over the whole lattice takes one Pauli product with a sign as its body.',
      'Write s^x[v], s^z[l.a] s^z[l.b], (-s^x[v]), ….',
    ),
  productOrder: () =>
    plain(
      'product-order',
      'The factors of this product over the whole lattice do not commute, so that their order would matter.',
      'Split it into products that commute.',
    ),
  wholeProduct: () =>
    plain(
      'infinite-product',
      'A sum over the whole lattice cannot be multiplied by this operator.',
      'Multiply inside the sum.',
    ),
  extraFactor: (variable: string) =>
    caution(
      'constant-factor',
      `This factor of the product does not use "${variable}", so it is taken once for each cell.`,
      'If it is meant once, put it before the prod.',
    ),
  hcDoubles: () =>
    caution(
      'hc-doubles',
      'This part is Hermitian already; "+ hc" doubles it.',
      'Leave it outside of the bracket that "+ hc" closes.',
    ),
  notHermitian: (part: string) =>
    plain(
      'not-hermitian',
      `A model must be Hermitian; the offending part is ${part}.`,
      'Add "+ hc" or mend the coefficient.',
    ),
  ketHere: () => plain('wrong-kind', 'Kets such as |01> stand only in the lines of a state map.'),

  // ---------------------------------------------------------------- declarations
  headNeeds: (what: string, name: string) =>
    plain('head', `A ${what} takes a parameter.`, `Write ${what} ${name}(v: vertices) = ….`),
  headNone: (what: string, name: string) =>
    plain('head', `A ${what} takes no parameter.`, `Write ${what} ${name} = ….`),
  lawBody: (what: string) =>
    plain('law-body', `A law is one Pauli product with a sign, got ${what}.`, 'Sums belong to "operator" or "rule".'),
  lawInfinite: () =>
    plain(
      'law-body',
      'A law acts on a few spins around its cell; this one spans the lattice.',
      'Declare it as a symmetry.',
    ),
  lawHermitian: () => plain('law-body', 'A law must be Hermitian; this product carries a factor i.'),
  lawValue: () => plain('law-value', 'A law is +1 or -1.', 'Write "is +1" or "is -1".'),
  symmetryBody: (what: string) =>
    plain(
      'symmetry-body',
      `A symmetry is one product of Pauli operators with a sign, got ${what}.`,
      'Write symmetry P = prod(v: vertices) s^x[v].',
    ),
  ruleBody: () => plain('rule-body', 'A rule is a diagonal operator: s^z, s^n and numbers.'),
  ruleNeedsIs: () =>
    plain('rule-body', 'A rule says what its count is.', 'End it with "is 1", "is <= 1", "is even", ….'),
  ruleBound: () => plain('rule-body', 'The bound of a rule is a real number.'),
  onSite: (name: string) =>
    plain(
      'not-on-site',
      `"${name}" is not an on-site symmetry.`,
      'It must be one Pauli operator on each spin: prod(v: vertices) s^x[v].',
    ),
  twistArguments: () => plain('arguments', 'twist takes a model, a symmetry and a direction.', 'twist(M, P, 1)'),
  twistOpen: (d: number) => plain('twist', `Direction ${d} is open; a seam needs a periodic one.`),
  direction: (given: string, most: number) =>
    plain('direction', `A direction is a number from 1 to ${most}, got ${given}.`),
  notInDomain: (name: string) => plain('domain', `"${name}" is not defined at this cell.`),

  // ---------------------------------------------------------------- maps
  mapRefuses: (map: string, reason: string, symmetry: string | undefined) =>
    plain('map-refuses', `${map}: ${reason}`, symmetry === undefined ? '' : `It is charged under ${symmetry}.`),
  mapRefused: (reason: string) => plain('map-refused', sentence(reason)),
  mapSide: (side: string) =>
    plain(
      'map-side',
      `The ${side} side of a line is one Pauli product with a sign.`,
      'Sums are mapped term by term and need no line.',
    ),
  mapSpecies: (species: string, side: string) =>
    plain('map-species', `"${species}" is not among the species of the ${side} side.`),
  mapShared: (species: string) => plain('map-species', `"${species}" stands on both sides of the map.`),
  gate: (name: string, known: readonly string[]) => ({
    code: 'unknown-gate',
    message: `There is no gate "${name}".`,
    ...meant(nearest(name, known)),
    ...(nearest(name, known) === undefined ? { hint: `Gates: ${known.join(' ')}.` } : {}),
  }),
  gateTargets: (name: string, wanted: number, given: number) =>
    plain('gate', `The gate ${name} acts on ${wanted} spin${wanted === 1 ? '' : 's'}, got ${given}.`),
  gateSame: (name: string) => plain('gate', `The gate ${name} acts on two different spins.`),
  gaugeCells: (species: string, lives: string) =>
    plain('map-species', `"${species}" lives on ${lives}; a gauge field lives on links.`),
  blockOverlap: (side: string) =>
    plain('block-overlap', `The blocks overlap on the ${side} side: a spin would belong to two of them.`),
  stateBits: (given: number, wanted: number) =>
    plain('state-bits', `A state here has ${wanted} bit${wanted === 1 ? '' : 's'}, got ${given}.`),
  stateTwice: (bits: string) => plain('state-twice', `The state |${bits}> is listed twice.`),
  stateImage: () =>
    plain(
      'state-image',
      'The image of a state is a sum of kets with constant amplitudes.',
      'Write (|01> + |10>) / sqrt(2).',
    ),
  twoSpecies: (name: string) => plain('map-species', `"${name}" is listed twice.`),

  // ---------------------------------------------------------------- audits
  unknownAudit: (name: string, known: readonly string[]) => ({
    code: 'unknown-audit',
    message: `There is no audit "${name}".`,
    ...meant(nearest(name, known)),
    ...(nearest(name, known) === undefined ? { hint: `Audits: ${known.join(', ')}.` } : {}),
  }),
  auditSubjects: (audit: string, example: string) =>
    plain('audit-subject', `audit ${audit} lacks what it speaks of.`, `Write ${example}.`),
  auditMany: (audit: string) => plain('audit-subject', `audit ${audit} takes one name.`),
  auditKind: (audit: string, name: string, given: string, wanted: readonly string[]) =>
    plain('wrong-kind', `audit ${audit} takes ${listed(wanted)}; "${name}" is ${given}.`),
  clauseUnknown: (audit: string, clause: string, example: string) =>
    plain('clause', `audit ${audit} has no clause "${clause}".`, `It reads ${example}.`),
  clauseTwice: (clause: string) => plain('clause', `The clause "${clause}" stands twice.`),
  clauseMissing: (audit: string, clause: string, example: string) =>
    plain('clause', `audit ${audit} needs "${clause} …".`, `It reads ${example}.`),
  sectorHere: (audit: string) => plain('sector', `audit ${audit} takes no sector here.`),
  sectorValue: () => plain('sector', 'A label of a sector is +1 or -1.'),
  sectorKind: (name: string, given: string) =>
    plain('sector', `"${name}" is ${given}; a sector is made of laws, symmetries, rules and state maps.`),
  sectorRule: (name: string) => plain('sector', `"${name}" takes no value in a sector.`),
  count: (clause: string, most: number) => plain('clause', `"${clause}" takes a whole number from 1 to ${most}.`),
  rangeEmpty: () => plain('range', 'A range goes up from its first value in positive steps: "0 .. 2 by 0.1".'),
  rangeLong: (most: number) => plain('limit', `A range holds at most ${most} points.`),
  rangeTwice: (name: string) => plain('range', `"${name}" is given twice.`),
} as const;

/** In words: "spins", "a coupling". */
export const whatIsIt: Readonly<Record<string, string>> = {
  spins: 'a species of spins',
  coupling: 'a coupling',
  operator: 'an operator',
  model: 'a model',
  law: 'a law',
  symmetry: 'a symmetry',
  rule: 'a rule',
  reference: 'a reference state',
  map: 'a map',
  number: 'a number',
  local: 'an operator',
  global: 'an operator',
  cell: 'a cell',
  pair: 'a pair of cells',
  kets: 'a state',
  tuple: 'a list in brackets',
};
