import type { Binder, Expression, Head, Statement } from '../../grammar/syntax.ts';
import { Coefficient } from '../algebra/numbers/coefficient.ts';
import { isHermitianExtended } from '../algebra/pauli/extended.ts';
import type { Cell } from '../lattice/cells.ts';
import { collect, isPinned, notHermitian, speciesOfOperator } from '../algebra/pauli/family.ts';
import type { Extended, Family, LocalString, Operator } from '../algebra/pauli/types.ts';
import { asOperator, options, phaseOf, total } from './arithmetic.ts';
import { instances } from './binding.ts';
import { dotted, moveOperator, type DeclaredOperator, type Standing } from './calls.ts';
import { amount } from './expand.ts';
import { speciesNamed } from './named-species.ts';
import { fail, say } from './problem.ts';
import { cellSet } from './sets.ts';
import { settled, textOf, type Amount, type Scene } from './scene.ts';
import type {
  LawFamily,
  LawValue,
  ModelValue,
  OperatorValue,
  Parameter,
  Place,
  RuleValue,
  SymmetryValue,
} from './values.ts';

/** What every declared value carries. */
export interface Heading {
  readonly name: string;
  readonly place: Place;
  readonly text: string;
}
type Of<T extends Statement['type']> = Statement & { readonly type: T };

/** The operator an expression stands for, collected. */
export function operatorOf(node: Expression, scene: Scene): Operator {
  return total([asOperator(amount(node, scene), scene, node)], scene);
}

/** Says which part of an operator is not Hermitian, as text. */
function offending(part: Operator): string {
  const [family] = part.families;
  const body = family
    ? family.string.factors.map((f) => `${f.species}^${f.pauli}[${f.cell.kind}(${f.cell.offset.join(', ')})]`).join(' ')
    : 'a product over the lattice';
  const coefficient = family?.coefficient ?? part.extended[0]?.coefficient ?? Coefficient.one;
  return `${coefficient.toFactorText()} ${body === '' ? '1' : body}`;
}

const unhermitian = (operator: Operator, scene: Scene): Operator | undefined => {
  const rest = notHermitian(operator, options(scene));
  return rest.families.length + rest.extended.length > 0 ? rest : undefined;
};

/** `N(M)` where M is a model: what of the model is an image. */
function imageOf(node: Expression, scene: Scene): ModelValue['image'] {
  const terms = node.type === 'sum' ? node.terms.filter((t) => t.sign !== '-').map((t) => t.term) : [node];
  for (const term of terms) {
    const inner = term.type === 'bracket' ? term.body : term;
    if (inner.type !== 'call' || inner.args.length !== 1) continue;
    const map = scene.values.find(dotted(inner.path));
    const [argument] = inner.args;
    const of = argument?.type === 'name' ? scene.values.find(dotted(argument.path)) : undefined;
    if (map?.what === 'map' && of?.what === 'model') return { map: map.name, of: of.name };
  }
  return undefined;
}

type PlaceOf = (node: { readonly start: number; readonly end: number }) => Place;

export function declareModel(node: Of<'model'>, heading: Heading, scene: Scene, placeOf: PlaceOf): ModelValue {
  if (node.head.parameter) return fail(say.headNone('model', heading.name), node.head.parameter);
  const { body } = node;
  // `+ hc` closes the whole, so that its terms are no pieces of their own
  const terms = body.type === 'sum' && !body.hc ? body.terms : [{ sign: '' as const, term: body }];
  const pieces = terms.map(({ sign, term }) => {
    const piece = operatorOf(term, scene);
    return { place: placeOf(term), operator: sign === '-' ? negate(piece) : piece };
  });
  const operator = total(
    pieces.map((p) => p.operator),
    scene,
  );
  const bad = unhermitian(operator, scene);
  if (bad) {
    const guilty = terms.find((_, k) => unhermitian(pieces[k]?.operator ?? operator, scene));
    return fail(say.notHermitian(offending(bad)), guilty?.term ?? body);
  }
  return {
    ...heading,
    what: 'model',
    operator,
    species: [...new Set([...speciesOfOperator(operator), ...speciesNamed(body, scene)])].sort(),
    image: imageOf(body, scene),
    pieces,
    seams: [...new Map(scene.seams.map((s) => [`${s.direction} ${JSON.stringify(s.symmetry)}`, s])).values()],
  };
}

const negate = (o: Operator): Operator => ({
  families: o.families.map((f) => ({ ...f, coefficient: f.coefficient.neg() })),
  extended: o.extended.map((t) => ({ ...t, coefficient: t.coefficient.neg() })),
});

/** Evaluates something at each representative of a parameter's domain. */
function atParameter<T>(binder: Binder, scene: Scene, body: (scene: Scene) => T): Standing<T>[] {
  const zero = new Array<number>(scene.dimension).fill(0);
  return instances([binder], 'sum', scene, body).flatMap(({ value, steps, needs, anchor }) =>
    anchor ? [{ value, steps: steps ?? zero, needs, anchor }] : [],
  );
}

const parameterOf = (binder: Binder, scene: Scene): Parameter => {
  const [part] = cellSet(binder.domain, scene).parts;
  if (!part || part.at.what === 'pair') return fail(say.notCells(textOf(binder.domain, scene)), binder.domain);
  return { variable: binder.variable.text, kind: part.at.cell.kind };
};

/** An operator, with a parameter or without. */
export function declareOperator(node: Of<'operator'>, heading: Heading, scene: Scene): OperatorValue {
  const binder = node.head.parameter;
  if (!binder) {
    const operator = operatorOf(node.body, scene);
    return { ...heading, what: 'operator', parameter: undefined, operator, at: undefined };
  }
  const parameter = parameterOf(binder, scene);
  const standing = atParameter(binder, scene, (inner) => {
    const operator = operatorOf(node.body, inner);
    if (operator.families.some((f) => !isPinned(f))) fail(say.wholeInside(textOf(node.body, scene)), node.body);
    return operator;
  });
  const at = (cell: Cell): Operator => {
    for (const one of standing) {
      const by = cell.offset.map((c, d) => c - (one.anchor.offset[d] ?? 0));
      const there = by.every((b, d) => (one.steps[d] ? b % one.steps[d] === 0 : b === 0));
      if (one.anchor.kind === cell.kind && one.anchor.index === cell.index && there) return moveOperator(one, by);
    }
    return fail(say.notInDomain(heading.name), node.head);
  };
  const [first] = standing;
  const operator = first ? moveOperator(first, scene.steps) : { families: [], extended: [] };
  const value: DeclaredOperator = { ...heading, what: 'operator', parameter, operator, at, standing };
  return value;
}

const kindOfBody = (operator: Operator): string =>
  operator.families.length + operator.extended.length === 0
    ? 'zero'
    : operator.families.some((f) => !isPinned(f))
      ? 'a sum over the lattice'
      : operator.families.length + operator.extended.length > 1
        ? 'a sum'
        : 'a product with another coefficient';

/** The one signed Pauli product that a pinned operator is, or undefined. */
export function signedProduct(operator: Operator): LocalString | undefined {
  const [family, other] = operator.families;
  if (!family || other || operator.extended.length > 0 || !isPinned(family)) return undefined;
  const phase = phaseOf(family.coefficient, family.string.phase);
  return phase === undefined ? undefined : { phase, factors: family.string.factors };
}

function needsParameter(what: string, head: Head): Binder {
  return head.parameter ?? fail(say.headNeeds(what, head.name.text), head.name);
}

export function declareLaw(node: Of<'law'>, heading: Heading, scene: Scene): LawValue {
  const binder = needsParameter('law', node.head);
  const parameter = parameterOf(binder, scene);
  const families = atParameter(binder, scene, (inner): LocalString & { needs: Family['needs'] } => {
    const operator = collect([operatorOf(node.body, inner)], options(inner));
    if (operator.extended.length > 0) return fail(say.lawInfinite(), node.body);
    const string = signedProduct(operator);
    if (!string || string.factors.length === 0) return fail(say.lawBody(kindOfBody(operator)), node.body);
    if (string.phase % 2 === 1) return fail(say.lawHermitian(), node.body);
    return { ...string, needs: operator.families[0]?.needs ?? [] };
  }).map(({ value: { phase, factors, needs: own }, steps, needs, anchor }): LawFamily => ({
    string: { phase, factors },
    steps,
    needs: [...needs, ...own],
    anchor,
  }));
  return { ...heading, what: 'law', parameter, value: lawValue(node.value, scene), families };
}

function lawValue(node: Expression | undefined, scene: Scene): 1 | -1 {
  if (!node) return 1;
  const value = amount(node, scene);
  const c = value.what === 'number' ? settled(value, scene, node) : undefined;
  if (c?.isOne()) return 1;
  return c?.neg().isOne() ? -1 : fail(say.lawValue(), node);
}

export function declareSymmetry(node: Of<'symmetry'>, heading: Heading, scene: Scene): SymmetryValue {
  if (node.head.parameter) return fail(say.headNone('symmetry', heading.name), node.head.parameter);
  const operator = operatorOf(node.body, scene);
  const extended = asSymmetry(operator);
  if (!extended) return fail(say.symmetryBody(kindOfBody(operator)), node.body);
  if (!isHermitianExtended(extended, options(scene))) return fail(say.lawHermitian(), node.body);
  return { ...heading, what: 'symmetry', extended };
}

/** One product of Pauli operators with a sign, local or not; undefined for anything else. */
export function asSymmetry(operator: Operator): Extended | undefined {
  const string = signedProduct(operator);
  const [family] = operator.families;
  if (string && family && string.factors.length > 0)
    return {
      phase: string.phase,
      parts: [{ string: { phase: 0, factors: string.factors }, steps: family.steps, needs: family.needs }],
    };
  const [term, other] = operator.extended;
  if (!term || other || operator.families.length > 0) return undefined;
  const phase = phaseOf(term.coefficient, term.extended.phase);
  return phase === undefined ? undefined : { phase, parts: term.extended.parts };
}

export function declareRule(node: Of<'rule'>, heading: Heading, scene: Scene): RuleValue {
  const binder = needsParameter('rule', node.head);
  if (!node.relation) return fail(say.ruleNeedsIs(), { start: node.body.end, end: node.body.end + 1 });
  const families = atParameter(binder, scene, (inner) => {
    const operator = operatorOf(node.body, inner);
    const diagonal = operator.families.every(
      (f) => isPinned(f) && f.coefficient.isReal() && f.string.factors.every((x) => x.pauli === 'z'),
    );
    if (!diagonal || operator.extended.length > 0) return fail(say.ruleBody(), node.body);
    return operator;
  }).map(({ value, ...at }) => ({ ...at, operator: value }));
  const bound: Amount | undefined = node.bound && amount(node.bound, scene);
  const c = bound?.what === 'number' ? settled(bound, scene, node) : Coefficient.zero;
  if (bound && (bound.what !== 'number' || !c.isConstant() || !c.isReal()))
    return fail(say.ruleBound(), node.bound ?? node);
  return {
    ...heading,
    what: 'rule',
    parameter: parameterOf(binder, scene),
    families,
    relation: node.relation,
    bound: c,
  };
}
