import type {
  Binder,
  Clause,
  Condition,
  CustomCell,
  CustomLine,
  Expression,
  Factor,
  Head,
  LabelNode,
  MapExpression,
  Path,
  RangeNode,
  Rule,
  SizeItem,
  SpinPlace,
  Statement,
  SubjectNode,
  Word,
} from '../../grammar/syntax.ts';
import { levelOf, type Level } from '../../grammar/words.ts';
import { BudgetSpent, newBudget, type Budget } from '../limits.ts';
import { parseStatement } from './parse.ts';
import { layoutOf, type Layout } from './source.ts';

/** Syntax back to text: `parse(print(t))` is t again. Brackets that the table of precedence demands are put in. */

const levels: Readonly<Record<Expression['type'], Level>> = {
  number: 'atom',
  imaginary: 'atom',
  name: 'atom',
  call: 'atom',
  spin: 'atom',
  ket: 'atom',
  bracket: 'atom',
  tuple: 'atom',
  sqrt: 'atom',
  power: 'power',
  product: 'product',
  big: 'product',
  sum: 'sum',
};

const pathText = (path: Path): string => path.words.map((w) => w.text).join('.');
const list = <T>(items: readonly T[], text: (item: T) => string): string => items.map(text).join(', ');

/** An expression in brackets where it binds looser than `least`. */
const within = (node: Expression, least: Level): string =>
  levelOf(levels[node.type]) < levelOf(least) ? `(${printExpression(node)})` : printExpression(node);

const isPlain = (node: Expression | undefined): boolean => node?.type === 'number' || node?.type === 'name';

function factorText(one: Factor, before: Factor | undefined, isLast: boolean): string {
  const { factor } = one;
  const open = factor.type === 'big' && isLast;
  const text = open ? printExpression(factor) : within(factor, 'power');
  const sign = one.sign === '' ? '' : before ? one.sign : `${one.sign} `;
  if (!before) return `${sign}${text}`;
  if (one.join === '') return ` ${text}`;
  return one.join === '/' && isPlain(before.factor) && isPlain(factor) && sign === ''
    ? `/${text}`
    : ` ${one.join} ${sign}${text}`;
}

/** One expression on one line. */
export function printExpression(node: Expression): string {
  switch (node.type) {
    case 'number':
      return node.text;
    case 'imaginary':
      return `${node.text}i`;
    case 'name':
      return pathText(node.path);
    case 'call':
      return `${pathText(node.path)}(${list(node.args, printExpression)})`;
    case 'spin':
      return `${node.species.text}^${node.operator}[${printExpression(node.cell)}]`;
    case 'ket':
      return `|${node.bits}>`;
    case 'bracket':
      return `(${printExpression(node.body)})`;
    case 'tuple':
      return `(${list(node.items, printExpression)})`;
    case 'sqrt':
      return `sqrt(${printExpression(node.body)})`;
    case 'power':
      return `${within(node.base, 'atom')}^${exponentText(node.exponent)}`;
    case 'product':
      return node.factors.map((f, k) => factorText(f, node.factors[k - 1], k === node.factors.length - 1)).join('');
    case 'big':
      return `${node.which}(${list(node.binders, binderText)}) ${bodyText(node.body)}`;
    case 'sum':
      return [...node.terms.map((t, k) => termText(t.sign, t.term, k)), ...(node.hc ? ['+ hc'] : [])].join(' ');
  }
}

const exponentText = (node: Expression): string =>
  node.type === 'product' && node.factors.length === 1 && node.factors[0]?.factor.type === 'number'
    ? `${node.factors[0].sign}${node.factors[0].factor.text}`
    : node.type === 'number'
      ? node.text
      : within(node, 'atom');

/** A body has no sign of its own. */
const bodyText = (node: Expression): string =>
  node.type === 'product' && node.factors[0]?.sign !== '' ? `(${printExpression(node)})` : within(node, 'product');

const termText = (sign: string, term: Expression, k: number): string => {
  const text = k > 0 ? bodyText(term) : within(term, 'product');
  return k > 0 ? `${sign} ${text}` : text;
};

const binderText = (b: Binder): string =>
  `${b.variable.text}: ${printExpression(b.domain)}${b.where ? ` where ${printCondition(b.where)}` : ''}`;

const conditionLevels = {
  or: 'or',
  and: 'and',
  not: 'not',
  compare: 'comparison',
  in: 'comparison',
  group: 'atom',
} as const;
const conditionWithin = (node: Condition, least: Level): string =>
  levelOf(conditionLevels[node.type]) < levelOf(least) ? `(${printCondition(node)})` : printCondition(node);

export function printCondition(node: Condition): string {
  switch (node.type) {
    case 'group':
      return `(${printCondition(node.body)})`;
    case 'not':
      return `not ${conditionWithin(node.body, 'not')}`;
    case 'and':
      return `${conditionWithin(node.left, 'and')} and ${conditionWithin(node.right, 'not')}`;
    case 'or':
      return `${conditionWithin(node.left, 'or')} or ${conditionWithin(node.right, 'and')}`;
    case 'in':
      return `${printExpression(node.left)} ${node.negated ? 'not in' : 'in'} ${printExpression(node.set)}`;
    case 'compare':
      return `${printExpression(node.left)} ${node.operator} ${printExpression(node.right)}`;
  }
}

const wordText = (w: Word): string => w.text;
const headText = (h: Head): string => (h.parameter ? `${h.name.text}(${binderText(h.parameter)})` : h.name.text);
const sizeText = (item: SizeItem): string =>
  item.type === 'counts' ? item.counts.join(' x ') : `(${item.row.join(', ')})`;
const placeText = (p: SpinPlace): string => `${p.species.text}[${printExpression(p.cell)}]`;
const forText = (binders: readonly Binder[]): string => (binders.length > 0 ? ` for ${list(binders, binderText)}` : '');
const cellText = (c: CustomCell): string => (c.shift ? `${c.label.text} + (${c.shift.join(', ')})` : c.label.text);
const signed = (n: number): string => (n > 0 ? `+${String(n)}` : String(n));
const labelText = (l: LabelNode): string =>
  l.value === undefined ? pathText(l.path) : `${pathText(l.path)} = ${signed(l.value)}`;
const subjectText = (s: SubjectNode): string =>
  s.sector.length > 0 ? `${pathText(s.path)} [${list(s.sector, labelText)}]` : pathText(s.path);
const rangeText = (r: RangeNode): string =>
  `${r.coupling.text} = ${printExpression(r.from)}${r.to && r.by ? ` .. ${printExpression(r.to)} by ${printExpression(r.by)}` : ''}`;

function clauseText(c: Clause): string {
  switch (c.name) {
    case 'with':
      return `with ${list(c.paths, pathText)}`;
    case 'on':
      return `on ${list(c.sizes, sizeText)}`;
    case 'over':
      return `over ${list(c.ranges, rangeText)}`;
    case 'from':
      return `from ${pathText(c.path)}`;
    case 'levels':
    case 'order':
      return `${c.name} ${c.number.text}`;
    default:
      return `${c.name} ${subjectText(c.subject)}`;
  }
}

function customText(line: CustomLine): string {
  switch (line.type) {
    case 'cell':
      return `cell ${list(line.vectors, (v) => `(${list(v, printExpression)})`)}`;
    case 'vertex':
      return `vertex ${line.label.text} at (${list(line.position, printExpression)})`;
    case 'link':
      return `link ${line.label ? `${line.label.text}: ` : ''}${cellText(line.a)} -- ${cellText(line.b)}`;
    case 'size':
      return `size ${list(line.size, sizeText)}${line.boundary ? ` ${line.boundary.text}` : ''}`;
    default:
      return `${line.type} ${line.label ? `${line.label.text}: ` : ''}${list(line.parts, cellText)}`;
  }
}

const ruleText = (r: Rule): string =>
  r.type === 'gate'
    ? `${r.gate.text} ${r.targets.map(placeText).join(' ')}${forText(r.binders)}`
    : `${printExpression(r.left)} => ${printExpression(r.right)}${forText(r.binders)}`;

function mapText(m: MapExpression): string {
  if (m.type === 'map') return pathText(m.path);
  if (m.type === 'then') return `${mapText(m.first)} then ${mapText(m.second)}`;
  return m.of.type === 'then' ? `inverse (${mapText(m.of)})` : `inverse ${mapText(m.of)}`;
}

const bodied = (header: string, lines: readonly string[]): string => [header, ...lines.map((l) => `  ${l}`)].join('\n');

/** Longest line that is not broken. */
const width = 100;

/** `KEYWORD HEAD = BODY`, a sum that is too long with one term a line. */
function definition(header: string, body: Expression, tail = ''): string {
  const line = `${header} = ${printExpression(body)}${tail}`;
  if (line.length <= width || body.type !== 'sum') return line;
  const terms = body.terms.map((t, k) => termText(t.sign, t.term, k));
  return bodied(`${header} =`, [...terms, ...(body.hc ? ['+ hc'] : [])]) + tail;
}

/** One statement in its plain layout. */
export function printStatement(node: Statement): string {
  switch (node.type) {
    case 'lattice':
      return [
        'lattice',
        node.family.text,
        ...(node.boundary ? [node.boundary.text] : []),
        list(node.size, sizeText),
      ].join(' ');
    case 'custom lattice':
      return bodied('lattice custom', node.lines.map(customText));
    case 'spins':
      return `spins ${list(node.names, wordText)} on ${pathText(node.cells)}`;
    case 'couplings':
      return `couplings ${list(node.items, (i) => (i.value ? `${i.name.text} = ${printExpression(i.value)}` : i.name.text))}`;
    case 'model':
    case 'operator':
    case 'symmetry':
      return definition(`${node.type} ${headText(node.head)}`, node.body);
    case 'law':
      return definition(
        `law ${headText(node.head)}`,
        node.body,
        node.value ? ` is ${printExpression(node.value).replace(' ', '')}` : '',
      );
    case 'rule': {
      const bound = node.bound ? printExpression(node.bound) : '';
      const relation = node.relation === '==' ? bound : [node.relation ?? '', bound].join(' ').trim();
      return definition(`rule ${headText(node.head)}`, node.body, node.relation ? ` is ${relation}` : '');
    }
    case 'reference':
      return node.kind === 'uniform'
        ? `reference ${node.name.text} = uniform over [${list(node.paths, pathText)}]`
        : `reference ${node.name.text} = stabilizer state of ${list(node.paths, pathText)}`;
    case 'dictionary':
      return bodied(
        `map ${node.name.text} from ${list(node.from, wordText)} to ${list(node.to, wordText)}`,
        node.rules.map(ruleText),
      );
    case 'gauge':
      return `map ${node.name.text} = gauge ${pathText(node.symmetry)} with ${node.gauge.text} on ${pathText(node.cells)}`;
    case 'circuit':
      return bodied(`map ${node.name.text} = circuit`, node.rules.map(ruleText));
    case 'solve':
      return `map ${node.name.text} = solve ${pathText(node.law)} for ${node.species.text}`;
    case 'states':
      return bodied(
        `map ${node.name.text} on ${binderText(node.binder)} from ${node.from.map(placeText).join(' ')} to ${node.to.map(placeText).join(' ')}`,
        node.rules.map((r) => `|${r.bits.bits}> => ${printExpression(r.image)}`),
      );
    case 'composition':
      return `map ${node.name.text} = ${mapText(node.map)}`;
    case 'audit':
      return [
        'audit',
        node.audit.text,
        ...(node.subjects.length > 0 ? [list(node.subjects, subjectText)] : []),
        ...node.clauses.map(clauseText),
      ].join(' ');
  }
}

/**
 * A source in its plain layout. Comments and blank lines stay where they are; a statement that does not parse or that
 * holds a comment stays as it was written.
 */
export function formatSource(source: string): string {
  const lines = source.split(/\r\n|\n|\r/u);
  const { statements } = layoutOf(source);
  const budget = newBudget(printSteps, 'steps of one printing');
  let next = 0;
  const out: string[] = [];
  const asWritten = (to: number): void => {
    for (; next < to; next++) out.push((lines[next] ?? '').trimEnd());
  };
  for (const layout of statements) {
    asWritten(layout.line - 1);
    const node = layout.text.includes('#') ? undefined : readable(layout, budget);
    if (node) {
      out.push(printStatement(node));
      next = layout.line - 1 + layout.lines;
    } else asWritten(layout.line - 1 + layout.lines);
  }
  asWritten(lines.length);
  return out.join('\n');
}

/** Steps of parsing that one printing may take; past them statements stay as they were written. */
const printSteps = 1_000_000;

function readable(layout: Layout, budget: Budget): Statement | undefined {
  if (budget.left < 0) return undefined;
  try {
    const parsed = parseStatement(layout, budget);
    return 'node' in parsed ? parsed.node : undefined;
  } catch (error) {
    if (error instanceof BudgetSpent) return undefined;
    throw error;
  }
}
