import type { Coefficient } from '../algebra/numbers/coefficient.ts';
import { type TermParts } from '../algebra/numbers/coefficient.ts';
import { nameSpoken, nameTex } from './names.ts';

/** A coefficient with its sign apart; `body` is empty for one. */
export interface SignedTex {
  readonly sign: '' | '-';
  readonly body: string;
}

const power = ([name, e]: readonly [string, number]): string =>
  e === 1 ? nameTex(name) : `${nameTex(name)}^{${String(e)}}`;

const size = (n: bigint): bigint => (n < 0n ? -n : n);
const unit = (t: TermParts): boolean =>
  size(t.num) === 1n && !t.imaginary && t.radicand === 1n && t.powers.length === 0;

/** Numbers and couplings of one product, above the stroke, without its sign. */
function above(t: TermParts): string {
  const words = [
    ...(size(t.num) === 1n ? [] : [String(size(t.num))]),
    ...(t.imaginary ? ['\\mathrm{i}'] : []),
    ...(t.radicand === 1n ? [] : [`\\sqrt{${String(t.radicand)}}`]),
    ...t.powers.map(power),
  ];
  return words.length === 0 ? '1' : words.join(' ');
}

const fraction = (top: string, under: string): string =>
  under === '1' || under === '' ? top : `\\frac{${top}}{${under}}`;

function sum(terms: readonly TermParts[]): string {
  return terms
    .map((t, k) => `${t.num < 0n ? (k === 0 ? '-' : ' - ') : k === 0 ? '' : ' + '}${fraction(above(t), String(t.den))}`)
    .join('');
}

/** A coefficient as TeX with its sign apart; sums stand in brackets. */
export function coefficientTex(c: Coefficient): SignedTex {
  const { numerator, denominator } = c.parts();
  const [top] = numerator;
  const [under] = denominator;
  if (!top || !under) return { sign: '', body: '0' };
  const whole = denominator.length === 1 && unit(under) && under.den === 1n;
  if (numerator.length === 1) {
    const sign = top.num < 0n ? '-' : '';
    const below = whole
      ? String(top.den)
      : denominator.length === 1
        ? belowOne(top.den, under)
        : `${top.den === 1n ? '' : `${String(top.den)} `}${top.den === 1n ? sum(denominator) : `\\left(${sum(denominator)}\\right)`}`;
    const body = fraction(above(top), below);
    return { sign, body: body === '1' ? '' : body };
  }
  if (whole) return { sign: '', body: `\\left(${sum(numerator)}\\right)` };
  return { sign: '', body: fraction(sum(numerator), sum(denominator)) };
}

const belowOne = (den: bigint, under: TermParts): string =>
  den === 1n ? above(under) : unit(under) ? String(den) : `${String(den)} ${above(under)}`;

/** The whole coefficient as TeX, sign and all; one is `1`. */
export function coefficientText(c: Coefficient): string {
  const { sign, body } = coefficientTex(c);
  return `${sign}${body === '' ? '1' : body.replace(/^\\left\((.*)\\right\)$/, '$1')}`;
}

const spokenPower = ([name, e]: readonly [string, number]): string =>
  e === 1
    ? nameSpoken(name)
    : e === 2
      ? `${nameSpoken(name)} squared`
      : `${nameSpoken(name)} to the power ${String(e)}`;

/** Number and couplings above the stroke. */
function spokenAbove(t: TermParts): string {
  const words = [
    ...(size(t.num) === 1n ? [] : [String(size(t.num))]),
    ...(t.imaginary ? ['i'] : []),
    ...(t.radicand === 1n ? [] : [`root ${String(t.radicand)}`]),
    ...t.powers.map(spokenPower),
  ];
  return words.length === 0 ? '1' : words.join(' ');
}

const spokenTerm = (t: TermParts): string =>
  t.den === 1n ? spokenAbove(t) : `${spokenAbove(t)} over ${String(t.den)}`;

const spokenSum = (terms: readonly TermParts[]): string =>
  terms.map((t, k) => `${t.num < 0n ? 'minus ' : k === 0 ? '' : 'plus '}${spokenTerm(t)}`).join(' ');

/** What a screen reader says for a coefficient, its sign apart; empty for one. */
export function coefficientSpoken(c: Coefficient): { readonly negative: boolean; readonly words: string } {
  const { numerator, denominator } = c.parts();
  const [top] = numerator;
  if (!top) return { negative: false, words: 'zero' };
  const negative = numerator.length === 1 && top.num < 0n;
  const [under] = denominator;
  const couplings =
    denominator.length === 1 && under
      ? unit(under)
        ? ''
        : spokenAbove(under)
      : `the quantity ${spokenSum(denominator)}`;
  const number = numerator.length === 1 && top.den !== 1n ? String(top.den) : '';
  const below = [number, couplings].filter((w) => w !== '').join(' ');
  const head = numerator.length === 1 ? spokenAbove(top) : `the quantity ${spokenSum(numerator)}`;
  const words = below === '' ? head : `${head} over ${below}`;
  return { negative, words: words === '1' ? '' : words };
}
