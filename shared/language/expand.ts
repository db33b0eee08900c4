import type { BigNode, CallNode, Expression, NameNode, ProductNode, SumNode } from '../../grammar/syntax.ts';
import { Coefficient } from '../algebra/numbers/coefficient.ts';
import { isOrderFree } from '../algebra/pauli/extended.ts';
import { collect, isPinned, notHermitian, spread } from '../algebra/pauli/family.ts';
import type { Operator, ProductPart } from '../algebra/pauli/types.ts';
import { geometryFunction } from '../lattice/geometry.ts';
import {
  add,
  adjoint,
  amountWords,
  asOperator,
  divide,
  multiply,
  negated,
  options,
  phaseOf,
  power,
  remainder,
  total,
} from './arithmetic.ts';
import { instances, type Instance } from './binding.ts';
import { applyCall, coupling, namedValue } from './calls.ts';
import { namedCell, partOf, shiftCell } from './cells.ts';
import { fail, say } from './problem.ts';
import { isKind } from './sets.ts';
import { spin } from './spins.ts';
import {
  integerAmount,
  numberAmount,
  operatorAmount,
  settled,
  textOf,
  type Amount,
  type MovingCell,
  type Scene,
} from './scene.ts';

/** What an expression stands for in a scene. Throws ProblemError at the offending node. */
export function amount(node: Expression, scene: Scene): Amount {
  scene.budget.spend();
  switch (node.type) {
    case 'number':
      return numberAmount(Coefficient.fromDecimal(node.text));
    case 'imaginary':
      return numberAmount(Coefficient.fromDecimal(node.text).mul(Coefficient.i));
    case 'ket':
      return { what: 'kets', amplitudes: new Map([[node.bits, Coefficient.one]]) };
    case 'bracket':
      return amount(node.body, scene);
    case 'tuple':
      return { what: 'tuple', items: node.items.map((item) => amount(item, scene)) };
    case 'sqrt':
      return root(amount(node.body, scene), node, scene);
    case 'power':
      return powerOf(node.base, node.exponent, scene);
    case 'name':
      return name(node, scene);
    case 'call':
      return call(node, scene);
    case 'spin':
      return spin(node, scene);
    case 'product':
      return product(node, scene);
    case 'sum':
      return sum(node, scene);
    case 'big':
      return node.which === 'sum' ? bigSum(node, scene) : bigProduct(node, scene);
  }
}

function root(of: Amount, node: Expression, scene: Scene): Amount {
  if (of.what !== 'number') return fail(say.rootOf(), node);
  const c = Coefficient.sqrt(settled(of, scene, node));
  return c ? numberAmount(c) : fail(say.rootOf(), node);
}

function name(node: NameNode, scene: Scene): Amount {
  const [first, ...rest] = node.path.words;
  const bound = first && scene.bound.get(first.text);
  if (bound) return rest.reduce<Amount>((at, word) => partOf(at, word, scene), bound);
  const value = namedValue(node.path, scene);
  if (value) return value;
  const word = first?.text ?? '';
  if (isKind(word) || geometryFunction(word)) return fail(say.setAsOperator(textOf(node, scene)), node);
  return fail(say.unknownName(word, undefined), node);
}

/** The node as `J (…)` with J a coupling, or undefined. */
function couplingCall(node: Expression, scene: Scene): CallNode | undefined {
  if (node.type !== 'call' || node.path.words.length !== 1) return undefined;
  const word = node.path.words[0]?.text ?? '';
  return !scene.bound.has(word) && scene.values.find(word)?.what === 'coupling' ? node : undefined;
}

/** `J (…)` as the two factors it is. */
function couplingFactors(node: CallNode, scene: Scene): [Amount, Amount] {
  const [argument] = node.args;
  const word = node.path.words[0]?.text ?? '';
  if (!argument || node.args.length !== 1) return fail(say.argumentCount(word, 'one factor', node.args.length), node);
  const value = scene.values.find(word);
  if (value?.what !== 'coupling') return fail(say.unknownName(word, undefined), node.path);
  return [coupling(value, node.path, scene), amount(argument, scene)];
}

function call(node: CallNode, scene: Scene): Amount {
  if (couplingCall(node, scene)) {
    const [factor, argument] = couplingFactors(node, scene);
    return multiply(factor, argument, scene, node);
  }
  const word = node.path.words[0]?.text ?? '';
  const declared = applyCall(node, scene);
  if (declared) return declared;
  if (isKind(word)) return namedCell(node, scene);
  if (geometryFunction(word)) return fail(say.setAsOperator(textOf(node, scene)), node);
  return fail(say.unknownName(word, undefined), node);
}

function powerOf(baseNode: Expression, exponentNode: Expression, scene: Scene): Amount {
  const exponent = amount(exponentNode, scene);
  const scaled = couplingCall(baseNode, scene);
  if (scaled) {
    const [factor, argument] = couplingFactors(scaled, scene);
    return multiply(factor, power(argument, exponent, scene, exponentNode), scene, baseNode);
  }
  return power(amount(baseNode, scene), exponent, scene, exponentNode);
}

// ------------------------------------------------------------------ products and sums

/** A factor; `J (…)` and `J (…)^2` are two, so that they too are read left to right. */
function factorAmounts(factor: Expression, scene: Scene): Amount[] {
  const scaled = couplingCall(factor.type === 'power' ? factor.base : factor, scene);
  if (!scaled) return [amount(factor, scene)];
  const [scale, argument] = couplingFactors(scaled, scene);
  if (factor.type !== 'power') return [scale, argument];
  return [scale, power(argument, amount(factor.exponent, scene), scene, factor)];
}

function product(node: ProductNode, scene: Scene): Amount {
  let result: Amount | undefined;
  for (const { join, sign, factor } of node.factors) {
    const parts = factorAmounts(factor, scene);
    for (const [k, part] of parts.entries()) {
      const signed = sign === '-' && k === 0 ? negated(part, scene, factor) : part;
      const how = k === 0 ? join : '';
      if (result === undefined) result = signed;
      else if (how === '/') result = divide(result, signed, scene, factor);
      else if (how === '%') result = remainder(result, signed, scene, factor);
      else result = multiply(result, signed, scene, factor);
    }
  }
  return result ?? integerAmount(1);
}

function sum(node: SumNode, scene: Scene): Amount {
  const [head, ...rest] = node.terms;
  if (!head) return integerAmount(0);
  const first = amount(head.term, scene);
  if (first.what === 'cell')
    return rest.reduce<MovingCell>(
      (cell, { sign, term }) => shiftCell(cell, term, sign === '-' ? -1 : 1, scene),
      first,
    );
  const parts: Amount[] = [first];
  for (const { sign, term } of rest) {
    const part = amount(term, scene);
    parts.push(sign === '-' ? negated(part, scene, term) : part);
  }
  const whole = addAll(parts, node, scene);
  if (!node.hc) return whole;
  noteDoubled(node, parts, scene);
  return add(whole, adjoint(whole, scene, node), 1, scene, node);
}

/** A sum with its places: numbers and kets two by two, operators collected once. */
function addAll(parts: readonly Amount[], node: SumNode, scene: Scene): Amount {
  if (parts.every((p) => p.what === 'number') || parts.some((p) => p.what === 'kets'))
    return parts
      .slice(1)
      .reduce((a, b, k) => add(a, b, 1, scene, node.terms[k + 1]?.term ?? node), parts[0] ?? integerAmount(0));
  return operatorAmount(
    total(
      parts.map((p, k) => asOperator(p, scene, node.terms[k]?.term ?? node)),
      scene,
    ),
  );
}

/** The addends of an expression, each with the brackets and sums around it, so that each can be looked at alone. */
function addends(node: Expression): { readonly node: Expression; readonly at: Expression }[] {
  if (node.type === 'bracket') return addends(node.body);
  if (node.type === 'sum' && !node.hc) return node.terms.flatMap((t) => addends(t.term));
  if (node.type === 'big' && node.which === 'sum')
    return addends(node.body).map((one) => ({ node: { ...node, body: one.node }, at: one.at }));
  const last = node.type === 'product' ? node.factors.at(-1) : undefined;
  if (node.type === 'product' && last && (last.factor.type === 'bracket' || last.factor.type === 'big')) {
    const parts = addends(last.factor);
    if (parts.length > 1)
      return parts.map((one) => ({
        node: { ...node, factors: [...node.factors.slice(0, -1), { ...last, factor: one.node }] },
        at: one.at,
      }));
  }
  return [{ node, at: node }];
}

/** Cautions for Hermitian parts before `+ hc`: whole terms, else single addends inside them. */
function noteDoubled(sum: SumNode, parts: readonly Amount[], scene: Scene): void {
  const quiet: Scene = { ...scene, note: () => undefined, seams: [] };
  sum.terms.forEach(({ term }, k) => {
    const part = parts[k];
    const doubled = (at: Expression): void => scene.note({ ...say.hcDoubles(), start: at.start, end: at.end });
    if (!part || part.what === 'number' || part.what === 'kets') return;
    if (isHermitian(part, scene)) return doubled(term);
    const inner = addends(term);
    if (inner.length > 1) for (const one of inner) if (isHermitian(amount(one.node, quiet), quiet)) doubled(one.at);
  });
}

function isHermitian(part: Amount, scene: Scene): boolean {
  if (part.what === 'number') return part.value.isReal() && !part.value.isZero();
  if (part.what !== 'operator') return false;
  const whole = collect([part.operator], options(scene));
  if (whole.families.length + whole.extended.length === 0) return false;
  const rest = notHermitian(whole, options(scene));
  return rest.families.length + rest.extended.length === 0;
}

const isWhole = (operator: Operator): boolean =>
  operator.extended.length > 0 || operator.families.some((f) => !isPinned(f));

function bigSum(node: BigNode, scene: Scene): Amount {
  const found = instances(node.binders, 'sum', scene, (inner) => amount(node.body, inner));
  if (found.every((one) => one.value.what === 'number' && one.steps === undefined && one.needs.length === 0))
    return found.reduce<Amount>((a, one) => add(a, one.value, 1, scene, node.body), integerAmount(0));
  const parts = found.map(({ value, steps, needs }) => {
    const operator = asOperator(value, scene, node.body);
    if (steps?.some((m) => m > 0) && isWhole(operator))
      return fail(say.wholeInside(textOf(node.body, scene)), node.body);
    const pinned = operator.families.map((f) => ({ ...f, needs: [...f.needs, ...needs] }));
    const here: Operator = { families: pinned, extended: operator.extended };
    return steps ? spread(here, steps) : here;
  });
  return operatorAmount(total(parts, scene));
}

/** One Pauli product with a sign or a power of i, as the part it contributes over the whole lattice. */
function productPart(one: Instance<Amount>, node: BigNode, scene: Scene): ProductPart {
  const operator = asOperator(one.value, scene, node.body);
  const whole = collect([operator], options(scene));
  const [family, other] = whole.families;
  const phase = family && phaseOf(family.coefficient, family.string.phase);
  if (
    !family ||
    other ||
    whole.extended.length > 0 ||
    !isPinned(family) ||
    phase === undefined ||
    family.string.factors.length === 0
  )
    return fail(say.productBody(), node.body);
  return {
    string: { phase, factors: family.string.factors },
    steps: one.steps ?? family.steps,
    needs: scene.open ? [...family.needs, ...one.needs] : [],
  };
}

function bigProduct(node: BigNode, scene: Scene): Amount {
  const found = instances(node.binders, 'prod', scene, (inner) => amount(node.body, inner));
  const moving = found.filter((one) => one.steps?.some((m) => m > 0));
  const pinned = found.filter((one) => !moving.includes(one));
  let result: Amount = integerAmount(1);
  for (const { value, needs, cut } of pinned) {
    if (cut && scene.open && (value.what !== 'operator' || value.operator.families.length !== 1))
      return fail(say.cutFactor(), node.body);
    const needing: Amount =
      scene.open && value.what === 'operator' && needs.length > 0
        ? operatorAmount({
            ...value.operator,
            families: value.operator.families.map((f) => ({ ...f, needs: [...f.needs, ...needs] })),
          })
        : value;
    if (amountWords(needing) === 'a cell') return fail(say.cellAsOperator(textOf(node.body, scene)), node.body);
    result = multiply(result, needing, scene, node.body);
  }
  if (moving.length === 0) return result;
  const parts = moving.map((one) => productPart(one, node, scene));
  const extended = { phase: 0 as const, parts };
  if (!isOrderFree(extended, scene.budget)) return fail(say.productOrder(), node.body);
  const whole: Operator = { families: [], extended: [{ coefficient: Coefficient.one, extended }] };
  return multiply(operatorAmount(total([whole], scene)), result, scene, node);
}
