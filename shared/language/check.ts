import type {
  Binder,
  Condition,
  Expression,
  MapExpression,
  Path,
  Rule,
  SpinPlace,
  Statement,
  SubjectNode,
  Word,
} from '../../grammar/syntax.ts';
import { cellKinds } from '../lattice/cells.ts';
import { geometryTable } from '../lattice/geometry.ts';
import { nearest, say, type Fault, type Saying } from './problem.ts';

/** What a name is at some point of the source. */
export interface Scope {
  /** 'value': declared and evaluated; 'broken': declared, but not evaluated. */
  state(name: string): 'value' | 'broken' | undefined;
  /** Whether `N.word` is a law that the map N declares. */
  hasPart(name: string, part: string): boolean;
  /** Line of the first later declaration of a name. */
  later(name: string): number | undefined;
  readonly names: Iterable<string>;
  /** Words that an audit measures (`gap`), which need no declaration there. */
  measured(audit: string): readonly string[];
}

/** What a statement needs, and what is wrong with its names. */
export interface Checked {
  readonly faults: readonly Fault[];
  /** Declared names that its value depends on. */
  readonly uses: ReadonlySet<string>;
}

const setWords: readonly string[] = [...cellKinds, ...geometryTable.map((f) => f.name)];
const isSetWord = (word: string): boolean => setWords.includes(word);
const partLike = /^(?:[abxyz]|[0-9]+)$/u;

/** Where a name stands, which decides what it can mean. */
type Position = 'operator' | 'cell' | 'set';

class Checker {
  readonly faults: Fault[] = [];
  readonly uses = new Set<string>();
  private readonly scope: Scope;
  /** A line of a map without `for`: an unbound cell lacks it. */
  private lacksFor = false;

  constructor(scope: Scope) {
    this.scope = scope;
  }

  fault(saying: Saying, place: { readonly start: number; readonly end: number }): void {
    this.faults.push({ ...saying, start: place.start, end: place.end });
  }

  private unknown(word: Word, path: Path, position: Position, bound: ReadonlySet<string>): void {
    const line = this.scope.later(word.text);
    if (line !== undefined) return this.fault(say.later(word.text, line), word);
    const cellLike = position === 'cell' || (path.words.length > 1 && partLike.test(path.words[1]?.text ?? ''));
    const known = position === 'set' ? setWords : cellLike ? bound : [...this.scope.names, ...bound, 'twist'];
    const near = nearest(word.text, known);
    if (word.text === 'i' && !cellLike) return this.fault(say.imaginary(), word);
    if (cellLike && near === undefined)
      return this.fault(this.lacksFor ? say.missingFor(word.text) : say.unbound(word.text), word);
    this.fault(say.unknownName(word.text, near), word);
  }

  /** A declared name, possibly `N.gauss`. */
  use(path: Path, position: Position = 'operator', bound: ReadonlySet<string> = new Set()): void {
    const [first, second] = path.words;
    if (!first) return;
    const state = this.scope.state(first.text);
    if (state === undefined) return this.unknown(first, path, position, bound);
    this.uses.add(first.text);
    if (state === 'value' && second && !this.scope.hasPart(first.text, second.text))
      this.fault(say.unknownName(path.words.map((w) => w.text).join('.'), undefined), path);
  }

  word(word: Word): void {
    this.use({ words: [word], start: word.start, end: word.end });
  }

  /** Checks binders in order; returns the variables bound inside. */
  binders(binders: readonly Binder[], bound: ReadonlySet<string>): ReadonlySet<string> {
    return binders.reduce<ReadonlySet<string>>((outer, binder) => {
      const { text } = binder.variable;
      this.expression(binder.domain, outer, 'set');
      if (outer.has(text)) this.fault(say.rebound(text), binder.variable);
      else if (this.scope.state(text) !== undefined) this.fault(say.hides(text), binder.variable);
      const inner = new Set([...outer, text]);
      if (binder.where) this.condition(binder.where, inner);
      return inner;
    }, bound);
  }

  private condition(node: Condition, bound: ReadonlySet<string>): void {
    switch (node.type) {
      case 'compare':
        this.expression(node.left, bound, 'cell');
        this.expression(node.right, bound, 'cell');
        return;
      case 'in':
        this.expression(node.left, bound, 'cell');
        this.expression(node.set, bound, 'set');
        return;
      case 'and':
      case 'or':
        this.condition(node.left, bound);
        this.condition(node.right, bound);
        return;
      default:
        this.condition(node.body, bound);
    }
  }

  private factorsUse(body: Expression, variables: ReadonlySet<string>): void {
    const factors = body.type === 'product' ? body.factors.map((f) => f.factor) : [body];
    const [variable] = variables;
    for (const factor of factors) if (!mentions(factor, variables)) this.fault(say.extraFactor(variable ?? ''), factor);
  }

  expression(node: Expression, bound: ReadonlySet<string>, position: Position = 'operator'): void {
    switch (node.type) {
      case 'number':
      case 'imaginary':
      case 'ket':
        return;
      case 'bracket':
      case 'sqrt':
        return this.expression(node.body, bound, position);
      case 'tuple':
        return node.items.forEach((item) => this.expression(item, bound, 'cell'));
      case 'power':
        this.expression(node.base, bound, position);
        return this.expression(node.exponent, bound, 'cell');
      case 'product':
        return node.factors.forEach((f) => this.expression(f.factor, bound, position));
      case 'sum':
        return node.terms.forEach((t) => this.expression(t.term, bound, position));
      case 'spin':
        this.word(node.species);
        return this.expression(node.cell, bound, 'cell');
      case 'name': {
        const word = node.path.words[0]?.text ?? '';
        if (bound.has(word)) return;
        if (position === 'set' && isSetWord(word)) return;
        if (this.scope.state(word) === undefined && isSetWord(word)) return;
        return this.use(node.path, position, bound);
      }
      case 'call': {
        const word = node.path.words[0]?.text ?? '';
        const geometric = isSetWord(word) && (position === 'set' || this.scope.state(word) === undefined);
        const builtIn = geometric || (word === 'twist' && this.scope.state(word) === undefined);
        if (!builtIn && !bound.has(word)) this.use(node.path, position, bound);
        const inner = geometric ? 'cell' : 'operator';
        return node.args.forEach((argument) => this.expression(argument, bound, inner));
      }
      case 'big': {
        const inner = this.binders(node.binders, bound);
        this.expression(node.body, inner, position);
        if (node.which === 'prod') this.factorsUse(node.body, new Set(node.binders.map((b) => b.variable.text)));
      }
    }
  }

  private places(places: readonly SpinPlace[], bound: ReadonlySet<string>): void {
    for (const place of places) {
      this.word(place.species);
      this.expression(place.cell, bound, 'cell');
    }
  }

  private rule(rule: Rule): void {
    const bound = this.binders(rule.binders, new Set());
    this.lacksFor = rule.binders.length === 0;
    if (rule.type === 'gate') this.places(rule.targets, bound);
    else {
      this.expression(rule.left, bound);
      this.expression(rule.right, bound);
    }
    this.lacksFor = false;
  }

  private map(node: MapExpression): void {
    if (node.type === 'map') this.use(node.path);
    else if (node.type === 'inverse') this.map(node.of);
    else {
      this.map(node.first);
      this.map(node.second);
    }
  }

  private couplings(items: readonly { readonly name: Word; readonly value: Expression | undefined }[]): void {
    const before = new Set<string>();
    for (const { name, value } of items) {
      if (value) this.expression(value, before);
      before.add(name.text);
    }
  }

  private subject(node: SubjectNode): void {
    this.use(node.path);
    node.sector.forEach((label) => this.use(label.path));
  }

  private audit(node: Statement & { readonly type: 'audit' }): void {
    const words = this.scope.measured(node.audit.text);
    node.subjects.forEach((one) => {
      const word = one.path.words[0]?.text ?? '';
      if (one.path.words.length > 1 || !words.includes(word)) {
        const near = words.length > 0 && this.scope.state(word) === undefined ? nearest(word, words) : undefined;
        if (near !== undefined) return this.fault(say.unknownName(word, near), one.path);
        this.subject(one);
      }
    });
    for (const clause of node.clauses) {
      if ('subject' in clause) this.subject(clause.subject);
      else if (clause.name === 'with') clause.paths.forEach((path) => this.use(path));
      else if (clause.name === 'from') this.use(clause.path);
      else if (clause.name === 'over') clause.ranges.forEach((range) => this.word(range.coupling));
    }
  }

  statement(node: Statement): void {
    const nothing: ReadonlySet<string> = new Set();
    switch (node.type) {
      case 'lattice':
      case 'custom lattice':
        return;
      case 'spins':
        return;
      case 'couplings':
        // a value may use the couplings before it, also those of its own line
        return this.couplings(node.items);
      case 'model':
      case 'operator':
      case 'symmetry':
      case 'law':
      case 'rule': {
        const bound = this.binders(node.head.parameter ? [node.head.parameter] : [], nothing);
        return this.expression(node.body, bound);
      }
      case 'reference':
        return node.paths.forEach((path) => this.use(path));
      case 'dictionary':
        [...node.from, ...node.to].forEach((word) => this.word(word));
        return node.rules.forEach((rule) => this.rule(rule));
      case 'circuit':
        return node.rules.forEach((rule) => this.rule(rule));
      case 'gauge':
        this.use(node.symmetry);
        return this.word(node.gauge);
      case 'solve':
        this.use(node.law);
        return this.word(node.species);
      case 'states': {
        const bound = this.binders([node.binder], nothing);
        this.places(node.from, bound);
        this.places(node.to, bound);
        return node.rules.forEach((rule) => this.expression(rule.image, nothing));
      }
      case 'composition':
        return this.map(node.map);
      case 'audit':
        return this.audit(node);
    }
  }
}

/** Whether an expression mentions one of the variables. */
export function mentions(node: Expression, names: ReadonlySet<string>): boolean {
  switch (node.type) {
    case 'number':
    case 'imaginary':
    case 'ket':
      return false;
    case 'bracket':
    case 'sqrt':
      return mentions(node.body, names);
    case 'tuple':
      return node.items.some((item) => mentions(item, names));
    case 'power':
      return mentions(node.base, names) || mentions(node.exponent, names);
    case 'product':
      return node.factors.some((f) => mentions(f.factor, names));
    case 'sum':
      return node.terms.some((t) => mentions(t.term, names));
    case 'spin':
      return mentions(node.cell, names);
    case 'name':
      return names.has(node.path.words[0]?.text ?? '');
    case 'call':
      return node.args.some((argument) => mentions(argument, names));
    case 'big':
      return (
        node.binders.some((b) => mentions(b.domain, names) || conditionMentions(b.where, names)) ||
        mentions(node.body, names)
      );
  }
}

function conditionMentions(node: Condition | undefined, names: ReadonlySet<string>): boolean {
  if (!node) return false;
  if (node.type === 'compare') return mentions(node.left, names) || mentions(node.right, names);
  if (node.type === 'in') return mentions(node.left, names) || mentions(node.set, names);
  if (node.type === 'not' || node.type === 'group') return conditionMentions(node.body, names);
  return conditionMentions(node.left, names) || conditionMentions(node.right, names);
}

/** Names and bound variables of a statement, judged without evaluating anything. */
export function check(node: Statement, scope: Scope): Checked {
  const checker = new Checker(scope);
  checker.statement(node);
  return { faults: checker.faults, uses: checker.uses };
}
