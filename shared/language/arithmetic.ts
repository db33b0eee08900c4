import type { Span } from '../../grammar/syntax.ts';
import { Coefficient } from '../algebra/numbers/coefficient.ts';
import { phaseCoefficient } from '../algebra/pauli/collect.ts';
import {
  addOperators,
  adjointOperator,
  collect,
  constantOperator,
  isPinned,
  multiplyOperators,
  scaleOperator,
  zeroOperator,
  type CollectOptions,
} from '../algebra/pauli/family.ts';
import { multiplyStrings } from '../algebra/pauli/string.ts';
import type { Operator } from '../algebra/pauli/types.ts';
import { limits } from '../limits.ts';
import { fail, say, whatIsIt } from './problem.ts';
import {
  Aperiodic,
  integerOf,
  modulo,
  numberAmount,
  operatorAmount,
  settled,
  type Amount,
  type KetsAmount,
  type NumberAmount,
  type Scene,
} from './scene.ts';

export const options = (scene: Scene): CollectOptions => ({ open: scene.open, budget: scene.budget });

/** What an amount is, in words, for a problem. */
export const amountWords = (amount: Amount): string =>
  amount.what === 'operator' ? 'an operator' : (whatIsIt[amount.what] ?? amount.what);

const sumOfAlong = (
  a: readonly number[] | undefined,
  b: readonly number[] | undefined,
  sign: number,
): number[] | undefined =>
  a || b
    ? Array.from({ length: Math.max(a?.length ?? 0, b?.length ?? 0) }, (_, k) => (a?.[k] ?? 0) + sign * (b?.[k] ?? 0))
    : undefined;

const addKets = (a: KetsAmount, b: KetsAmount, sign: Coefficient, place: Span): KetsAmount => {
  const all = new Map(a.amplitudes);
  const [bits] = a.amplitudes.keys();
  for (const [key, c] of b.amplitudes) {
    if (bits !== undefined && bits.length !== key.length) fail(say.stateBits(key.length, bits.length), place);
    const total = (all.get(key) ?? Coefficient.zero).add(c.mul(sign));
    if (total.isZero()) all.delete(key);
    else all.set(key, total);
  }
  return { what: 'kets', amplitudes: all };
};

/** A number as an operator that stands once; one that depends on where the frame stands is no coefficient. */
export const asOperator = (amount: Amount, scene: Scene, place: Span): Operator =>
  amount.what === 'operator'
    ? amount.operator
    : amount.what === 'number'
      ? constant(settled(amount, scene, place), scene)
      : fail(amount.what === 'kets' ? say.ketHere() : say.wrongKind(amountWords(amount), 'an operator'), place);

const constant = (c: Coefficient, scene: Scene): Operator =>
  c.isZero() ? zeroOperator : constantOperator(c, scene.dimension);

/** a + b or a − b. */
export function add(a: Amount, b: Amount, sign: 1 | -1, scene: Scene, place: Span): Amount {
  scene.budget.spend();
  if (a.what === 'number' && b.what === 'number') {
    scene.budget.spend(a.value.size + b.value.size);
    return numberAmount(sign === 1 ? a.value.add(b.value) : a.value.sub(b.value), sumOfAlong(a.along, b.along, sign));
  }
  const factor = Coefficient.rational(sign);
  if (a.what === 'kets' && b.what === 'kets') return addKets(a, b, factor, place);
  return operatorAmount(
    addOperators(asOperator(a, scene, place), scaleOperator(asOperator(b, scene, place), factor), options(scene)),
  );
}

/** Steps that collecting one family costs beside those that `collect` counts itself. */
const familyCost = 4;

/** Sum of operators, collected once. */
export function total(operators: readonly Operator[], scene: Scene): Operator {
  scene.budget.spend(familyCost * operators.reduce((n, o) => n + o.families.length, 0));
  return collect(operators, options(scene));
}

/** An operator times a number; spends what the coefficients cost. */
function scaled(operator: Operator, c: Coefficient, scene: Scene): Operator {
  const terms = [...operator.families, ...operator.extended];
  scene.budget.spend(c.size * terms.reduce((n, t) => n + t.coefficient.size, 0));
  return scaleOperator(operator, c);
}

function scaleNumber(a: NumberAmount, b: NumberAmount, scene: Scene, place: Span): NumberAmount {
  scene.budget.spend(a.value.size * b.value.size);
  if (!a.along && !b.along) return numberAmount(a.value.mul(b.value));
  const [moving, fixed] = a.along ? [a, b] : [b, a];
  const k = fixed.along ? undefined : integerOf(fixed.value);
  if (k === undefined) {
    settled(moving, scene, place);
    throw new Aperiodic(place);
  }
  return numberAmount(
    moving.value.mul(fixed.value),
    moving.along?.map((x) => x * k),
  );
}

/** a·b in this order. */
export function multiply(a: Amount, b: Amount, scene: Scene, place: Span): Amount {
  scene.budget.spend();
  if (a.what === 'number' && b.what === 'number') return scaleNumber(a, b, scene, place);
  for (const [number, other] of [
    [a, b],
    [b, a],
  ] as const) {
    if (number.what !== 'number') continue;
    const c = settled(number, scene, place);
    if (other.what === 'operator') return operatorAmount(scaled(other.operator, c, scene));
    if (other.what === 'kets')
      return { what: 'kets', amplitudes: new Map([...other.amplitudes].map(([bits, x]) => [bits, x.mul(c)])) };
  }
  const [left, right] = [asOperator(a, scene, place), asOperator(b, scene, place)];
  const [f, f2] = left.families;
  const [g, g2] = right.families;
  // the commonest product, one string by one string, needs no collecting
  if (
    f &&
    g &&
    !f2 &&
    !g2 &&
    !scene.open &&
    left.extended.length + right.extended.length === 0 &&
    isPinned(f) &&
    isPinned(g)
  ) {
    scene.budget.spend(f.string.factors.length + g.string.factors.length);
    const string = multiplyStrings(f.string, g.string);
    return operatorAmount({
      families: [{ ...f, coefficient: f.coefficient.mul(g.coefficient), string }],
      extended: [],
    });
  }
  scene.budget.spend(familyCost * left.families.length * right.families.length);
  const product = multiplyOperators(left, right, options(scene));
  if (product) return operatorAmount(product);
  const spans = (o: Operator): boolean => o.families.some((f) => !isPinned(f));
  return fail(spans(left) && spans(right) ? say.infiniteProduct() : say.wholeProduct(), place);
}

export function divide(a: Amount, b: Amount, scene: Scene, place: Span): Amount {
  if (b.what !== 'number') return fail(say.notDivisor(amountWords(b)), place);
  const divisor = settled(b, scene, place);
  const inverse = Coefficient.one.div(divisor);
  return inverse ? multiply(a, numberAmount(inverse), scene, place) : fail(say.zeroDivisor(), place);
}

/** a % b, never negative. */
export function remainder(a: Amount, b: Amount, scene: Scene, place: Span): Amount {
  if (a.what !== 'number' || b.what !== 'number') return fail(say.moduloIntegers(), place);
  const m = integerOf(settled(b, scene, place));
  if (m === undefined || m < 1) return fail(say.moduloIntegers(), place);
  const rest = modulo(a, m, scene);
  return rest === undefined ? fail(say.moduloIntegers(), place) : numberAmount(Coefficient.rational(rest));
}

/** Smallest n ≤ 8 with c^n = 1, or undefined. */
function rootOrder(c: Coefficient): number | undefined {
  let power = c;
  for (let n = 1; n <= 8; n++) {
    if (power.isOne()) return n;
    power = power.mul(c);
  }
  return undefined;
}

function numberPower(base: NumberAmount, exponent: NumberAmount, scene: Scene, place: Span): Amount {
  const c = settled(base, scene, place);
  if (integerOf(exponent.value) === undefined) return fail(say.exponentInteger(), place);
  const order = c.isConstant() ? rootOrder(c) : undefined;
  if (order !== undefined) {
    const n = modulo(exponent, order, scene) ?? 0;
    return numberAmount(c.pow(n) ?? Coefficient.one);
  }
  const n = integerOf(settled(exponent, scene, place)) ?? 0;
  if (Math.abs(n) > limits.exponent) return fail(say.exponentLimit(String(n)), place);
  const power = c.pow(n);
  return power ? numberAmount(power) : fail(say.zeroDivisor(), place);
}

/** base^exponent; roots of unity take any integer, also one that depends on a coordinate: (-1)^(v.x). */
export function power(base: Amount, exponent: Amount, scene: Scene, place: Span): Amount {
  if (exponent.what !== 'number') return fail(say.exponentInteger(), place);
  if (base.what === 'number') return numberPower(base, exponent, scene, place);
  const n = integerOf(settled(exponent, scene, place));
  if (n === undefined) return fail(say.exponentInteger(), place);
  if (n < 0) return fail(say.exponentNegative(), place);
  if (n > limits.exponent) return fail(say.exponentLimit(String(n)), place);
  let result: Amount = numberAmount(Coefficient.one);
  for (let k = 0; k < n; k++) result = multiply(result, base, scene, place);
  return result;
}

export function negated(a: Amount, scene: Scene, place: Span): Amount {
  return a.what === 'number'
    ? numberAmount(
        a.value.neg(),
        a.along?.map((k) => -k),
      )
    : multiply(numberAmount(Coefficient.one.neg()), a, scene, place);
}

export function adjoint(a: Amount, scene: Scene, place: Span): Amount {
  if (a.what === 'number') return numberAmount(a.value.conj(), a.along);
  return operatorAmount(adjointOperator(asOperator(a, scene, place)));
}

/** The sign or power of i that a coefficient with a string's phase is, as k of i^k; undefined for any other number. */
export function phaseOf(c: Coefficient, phase: number): 0 | 1 | 2 | 3 | undefined {
  const whole = c.mul(phaseCoefficient(phase));
  const k = [0, 1, 2, 3].find((n) => whole.equals(phaseCoefficient(n)));
  return k as 0 | 1 | 2 | 3 | undefined;
}
