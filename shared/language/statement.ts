import type { Expression, Path, Span, Statement } from '../../grammar/syntax.ts';
import type { Coefficient } from '../algebra/numbers/coefficient.ts';
import type { Lattice } from '../lattice/cells.ts';
import { BudgetSpent, type Budget } from '../limits.ts';
import { classesOfPath } from './sets.ts';
import { declareAudit } from './declare-audits.ts';
import { declareLattice } from './declare-lattice.ts';
import { declareMap, type Build } from './declare-maps.ts';
import {
  declareLaw,
  declareModel,
  declareOperator,
  declareRule,
  declareSymmetry,
  type Heading,
} from './declare-operators.ts';
import { dotted } from './calls.ts';
import { amount } from './expand.ts';
import { auditForms, type AuditForm } from './forms.ts';
import { newValues } from './names.ts';
import { ProblemError, fail, say, type Fault } from './problem.ts';
import { Aperiodic, Refine, Unsolved, settled, type Scene } from './scene.ts';
import type { AuditStatement, MapDeclaration, OperatorMap, Place, ReferenceValue, Value, Values } from './values.ts';

/** What the evaluation of statements is given from outside: no arrow runs up from the language. */
export interface EvaluationContext {
  /** The map of a declaration, given by `maps/registry`. Throws an error named MapRefused whose message says why there is none. */
  readonly buildMap: (declaration: MapDeclaration, values: Values, budget: Budget, name: string) => OperatorMap;
  /** Forms of the audits; those of the language where none are given. */
  readonly forms?: readonly AuditForm[];
}

/** What one statement gives: values, an audit, a lattice, and faults placed in its own text. */
export interface Outcome {
  readonly values: readonly Value[];
  readonly lattice: Lattice | undefined;
  readonly audit: AuditStatement | undefined;
  readonly faults: readonly Fault[];
}

/** A place in the statement's own text, its first line counted as line 1; `shift` moves it to its line of the source. */
export function placeIn(text: string, line: number, { start, end }: Span): Place {
  const before = text.slice(0, start);
  const newlines = before.split('\n').length - 1;
  return { line: line + newlines, column: start - before.lastIndexOf('\n'), length: end - start };
}

function newScene(values: Values, text: string, budget: Budget, note: (fault: Fault) => void, place: Span): Scene {
  const { lattice } = values;
  if (!lattice) return fail(say.noLattice(), place);
  return sceneOn(lattice, values, text, budget, note);
}

const sceneOn = (
  lattice: Lattice,
  values: Values,
  text: string,
  budget: Budget,
  note: (fault: Fault) => void,
): Scene => ({
  lattice,
  family: lattice.family,
  open: lattice.periodic.some((p) => !p),
  dimension: lattice.family.dimension,
  values,
  bound: new Map(),
  frame: undefined,
  steps: new Array<number>(lattice.family.dimension).fill(0),
  within: false,
  cut: false,
  constants: false,
  budget,
  text,
  note,
  seams: [],
  amount,
});

/** A lattice without cells, on which constants are evaluated before any lattice stands. */
const nowhere: Lattice = {
  family: { name: 'none', dimension: 1, vectors: [[1]], vertices: [], links: [], plaquettes: [], cubes: [] },
  boundary: 'torus',
  periodic: [true],
  size: { periods: [[1]] },
};

/**
 * Evaluates one parsed statement against the values before it. Never throws: what goes wrong is a fault, a spent budget
 * included. `line` is where the statement begins in the source.
 */
export function evaluateStatement(
  node: Statement,
  text: string,
  line: number,
  values: Values,
  context: EvaluationContext,
  budget: Budget,
): Outcome {
  const cautions = new Map<string, Fault>();
  const note = (fault: Fault): void => {
    cautions.set(`${fault.code} ${fault.start}`, fault);
  };
  const outcome = (given: Partial<Outcome>): Outcome => ({
    values: [],
    lattice: undefined,
    audit: undefined,
    ...given,
    faults: [...(given.faults ?? []), ...cautions.values()],
  });
  const place = { start: node.start, end: node.end };
  try {
    return outcome(new Evaluation(node, text, line, values, context, budget, note).run());
  } catch (error) {
    if (error instanceof ProblemError) return outcome({ faults: [{ ...error.saying, ...(error.place ?? place) }] });
    if (error instanceof BudgetSpent) return outcome({ faults: [{ ...say.spent(error.limit), ...place }] });
    if (error instanceof Aperiodic)
      return outcome({ faults: [{ ...say.coordinateAlone(), ...(error.place ?? place) }] });
    if (error instanceof Unsolved || error instanceof Refine)
      return outcome({ faults: [{ ...say.coordinateAlone(), ...place }] });
    throw error;
  }
}

class Evaluation {
  private readonly node: Statement;
  private readonly text: string;
  private readonly line: number;
  private readonly values: Values;
  private readonly context: EvaluationContext;
  private readonly budget: Budget;
  private readonly note: (fault: Fault) => void;

  constructor(
    node: Statement,
    text: string,
    line: number,
    values: Values,
    context: EvaluationContext,
    budget: Budget,
    note: (fault: Fault) => void,
  ) {
    this.node = node;
    this.text = text;
    this.line = line;
    this.values = values;
    this.context = context;
    this.budget = budget;
    this.note = note;
  }

  private readonly placeOf = (span: Span): Place => placeIn(this.text, this.line, span);

  private scene(place: Span): Scene {
    return newScene(this.values, this.text, this.budget, this.note, place);
  }

  private heading(word: Span & { readonly text: string }): Heading {
    return { name: word.text, place: this.placeOf(word), text: this.text };
  }

  /** A constant: numbers, roots and couplings whose values are put in. */
  private readonly constant = (node: Expression): Coefficient => {
    const lattice = this.values.lattice ?? nowhere;
    const scene: Scene = { ...sceneOn(lattice, this.values, this.text, this.budget, this.note), constants: true };
    const value = amount(node, scene);
    return value.what === 'number' ? settled(value, scene, node) : fail(say.notConstant('This'), node);
  };

  private readonly build: Build = (declaration, place) => {
    const name = 'name' in this.node ? this.node.name.text : 'the map';
    try {
      return this.context.buildMap(declaration, this.values, this.budget, name);
    } catch (error) {
      if (error instanceof Error && error.name === 'MapRefused') return fail(say.mapRefused(error.message), place);
      throw error;
    }
  };

  private readonly named = (path: Path): Value =>
    this.values.find(dotted(path)) ?? fail(say.unknownName(dotted(path), undefined), path);

  private couplings(node: Statement & { type: 'couplings' }): Value[] {
    // couplings of one line may use those before them
    const known = new Map(this.values.all);
    return node.items.map((item) => {
      const scene = { values: newValues(this.values.lattice, known) };
      let value: Coefficient | undefined;
      if (item.value) {
        const inner = new Evaluation(
          this.node,
          this.text,
          this.line,
          scene.values,
          this.context,
          this.budget,
          this.note,
        );
        value = inner.constant(item.value);
        if (!value.isReal()) fail(say.notConstant(`The value of "${item.name.text}"`), item.value);
      }
      const coupling: Value = { ...this.heading(item.name), what: 'coupling', value };
      known.set(coupling.name, coupling);
      return coupling;
    });
  }

  run(): Partial<Outcome> {
    const { node } = this;
    switch (node.type) {
      case 'lattice':
      case 'custom lattice':
        return { lattice: declareLattice(node, this.constant) };
      case 'spins': {
        const scene = this.scene(node);
        const { kind, classes } = classesOfPath(node.cells, scene);
        return { values: node.names.map((word) => ({ ...this.heading(word), what: 'spins', kind, classes })) };
      }
      case 'couplings':
        return { values: this.couplings(node) };
      case 'model':
        return { values: [declareModel(node, this.heading(node.head.name), this.scene(node), this.placeOf)] };
      case 'operator':
        return { values: [declareOperator(node, this.heading(node.head.name), this.scene(node))] };
      case 'law':
        return { values: [declareLaw(node, this.heading(node.head.name), this.scene(node))] };
      case 'symmetry':
        return { values: [declareSymmetry(node, this.heading(node.head.name), this.scene(node))] };
      case 'rule':
        return { values: [declareRule(node, this.heading(node.head.name), this.scene(node))] };
      case 'reference':
        return { values: [this.reference(node)] };
      case 'audit':
        return {
          audit: declareAudit(node, {
            values: this.values,
            forms: this.context.forms ?? auditForms,
            constant: this.constant,
            named: this.named,
            placeOf: this.placeOf,
            text: this.text,
          }),
        };
      default:
        return { values: [declareMap(node, this.heading(node.name), this.scene(node), this.placeOf, this.build)] };
    }
  }

  private reference(node: Statement & { type: 'reference' }): ReferenceValue {
    const wanted: readonly Value['what'][] = node.kind === 'uniform' ? ['rule'] : ['law', 'symmetry'];
    const names = node.paths.map((path) => {
      const value = this.named(path);
      if (!wanted.includes(value.what))
        fail(say.wrongKind(`"${dotted(path)}"`, node.kind === 'uniform' ? 'a rule' : 'a law or symmetry'), path);
      return dotted(path);
    });
    const heading = this.heading(node.name);
    return node.kind === 'uniform'
      ? { ...heading, what: 'reference', state: { kind: 'uniform', rules: names } }
      : { ...heading, what: 'reference', state: { kind: 'stabilizer', laws: names } };
  }
}
