/** One product of a sum: rational × (i) × sqrt(radicand) × powers of couplings. */
export interface TermParts {
  readonly num: bigint;
  readonly den: bigint;
  readonly imaginary: boolean;
  readonly radicand: bigint;
  readonly powers: readonly (readonly [name: string, exponent: number])[];
}

interface Parts {
  readonly numerator: readonly TermParts[];
  readonly denominator: readonly TermParts[];
}

const power = ([name, e]: readonly [string, number]): string => (e === 1 ? name : `${name}^${String(e)}`);

/** Factors above and below the stroke of one product, without its sign. */
function factors(t: TermParts): { above: string[]; below: string[] } {
  const size = t.num < 0n ? -t.num : t.num;
  const above: string[] = [];
  if (t.imaginary) above.push('1i');
  if (t.radicand !== 1n) above.push(`sqrt(${String(t.radicand)})`);
  above.push(...t.powers.map(power));
  if (size !== 1n || above.length === 0) above.unshift(String(size));
  return { above, below: t.den === 1n ? [] : [String(t.den)] };
}

/** above/below, a rational in front: "3/5*J", "sqrt(2)/2", "J^2/(16*K^3)". */
function fraction(above: readonly string[], below: readonly string[]): string {
  const [first = '1', ...rest] = above;
  const [under] = below;
  if (under === undefined) return above.join('*');
  const integer = /^\d+$/;
  if (below.length === 1 && integer.test(under)) {
    if (integer.test(first)) return [`${first}/${under}`, ...rest].join('*');
    if (above.length === 1 && first.startsWith('sqrt')) return `${first}/${under}`;
    return [`1/${under}`, ...above].join('*');
  }
  return `${above.join('*')}/${below.length === 1 ? under : `(${below.join('*')})`}`;
}

function sum(terms: readonly TermParts[]): string {
  return terms
    .map((t, k) => {
      const { above, below } = factors(t);
      const sign = t.num < 0n ? (k === 0 ? '-' : ' - ') : k === 0 ? '' : ' + ';
      return sign + fraction(above, below);
    })
    .join('');
}

const isOne = (terms: readonly TermParts[]): boolean => {
  const [t] = terms;
  return (
    terms.length === 1 &&
    t !== undefined &&
    t.num === 1n &&
    t.den === 1n &&
    !t.imaginary &&
    t.radicand === 1n &&
    t.powers.length === 0
  );
};

/** Text of a coefficient in the operator language. */
export function coefficientText({ numerator, denominator }: Parts): string {
  const [top] = numerator;
  const [under] = denominator;
  if (!top || !under) return '0';
  if (isOne(denominator)) return sum(numerator);
  if (denominator.length > 1) {
    const above = numerator.length > 1 ? `(${sum(numerator)})` : sum(numerator);
    return `${above}/(${sum(denominator)})`;
  }
  // a monic denominator of one term is a product of couplings
  const powers = under.powers.map(power);
  if (numerator.length === 1) {
    const { above, below } = factors(top);
    return (top.num < 0n ? '-' : '') + fraction(above, [...below, ...powers]);
  }
  return `(${sum(numerator)})/${powers.length === 1 ? (powers[0] ?? '') : `(${powers.join('*')})`}`;
}

/** True where the text is a sum. */
export const needsBracket = ({ numerator, denominator }: Parts): boolean => numerator.length > 1 && isOne(denominator);
