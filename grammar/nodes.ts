import type { Token } from './lexer.ts';
import type * as S from './syntax.ts';

/** Small constructors that the grammar's postprocessors call. They build plain nodes and decide nothing. */

export const first = <T>(d: readonly T[]): T => d[0] as T;
export const none = (): undefined => undefined;
const startOf = (one: Token | S.Span): number => ('start' in one ? one.start : one.offset);
const endOf = (one: Token | S.Span): number => ('end' in one ? one.end : one.offset + one.length);

/** From the first of two tokens or nodes to the last. */
export const span = (from: Token | S.Span, to: Token | S.Span): S.Span => ({ start: startOf(from), end: endOf(to) });

export const word = (token: Token): S.Word => ({
  text: token.value,
  start: token.offset,
  end: token.offset + token.length,
});
export const integer = (token: Token): number => Number(token.text);
export const list = <T>(one: T): readonly T[] => [one];
export const more = <T>(all: readonly T[], one: T): readonly T[] => [...all, one];

export const path = (words: readonly S.Word[]): S.Path => ({
  words,
  ...span(words[0] as S.Word, words[words.length - 1] as S.Word),
});
export const name = (p: S.Path): S.NameNode => ({ type: 'name', path: p, start: p.start, end: p.end });
export const call = (p: S.Path, args: readonly S.Expression[], close: Token): S.CallNode => ({
  type: 'call',
  path: p,
  args,
  ...span(p, close),
});
export const number = (token: Token): S.NumberNode => ({ type: 'number', text: token.text, ...span(token, token) });
export const imaginary = (token: Token): S.ImaginaryNode => ({
  type: 'imaginary',
  text: token.text.slice(0, -1),
  ...span(token, token),
});
export const ket = (token: Token): S.KetNode => ({ type: 'ket', bits: token.value, ...span(token, token) });
export const spin = (species: Token, operator: Token, cell: S.Expression, close: Token): S.SpinNode => ({
  type: 'spin',
  species: word(species),
  operator: operator.value as S.SpinOperator,
  cell,
  ...span(species, close),
});
export const bracket = (open: Token, body: S.Expression, close: Token): S.BracketNode => ({
  type: 'bracket',
  body,
  ...span(open, close),
});
export const tuple = (open: Token, items: readonly S.Expression[], close: Token): S.TupleNode => ({
  type: 'tuple',
  items,
  ...span(open, close),
});
export const root = (open: Token, body: S.Expression, close: Token): S.RootNode => ({
  type: 'sqrt',
  body,
  ...span(open, close),
});
export const power = (base: S.Expression, exponent: S.Expression): S.PowerNode => ({
  type: 'power',
  base,
  exponent,
  ...span(base, exponent),
});
/** `-1` as an exponent or an entry: a sign and a number. */
export const signed = (sign: Token, value: S.NumberNode): S.ProductNode => ({
  type: 'product',
  factors: [{ join: '', sign: sign.text as '+' | '-', factor: value }],
  ...span(sign, value),
});

interface Join {
  readonly join: S.Factor['join'];
  readonly sign: S.Factor['sign'];
}
export const join = (operator: Token | undefined, sign: Token | undefined): Join => ({
  join: (operator?.text ?? '') as S.Factor['join'],
  sign: (sign?.text ?? '') as S.Factor['sign'],
});
const startsAt = (factor: S.Factor, sign: Token | undefined): Token | S.Span => sign ?? factor.factor;

export const product = (factors: readonly S.Factor[], sign?: Token): S.Expression => {
  const [head, ...rest] = factors as [S.Factor, ...S.Factor[]];
  if (rest.length === 0 && !sign) return head.factor;
  const opened: S.Factor = { ...head, sign: (sign?.text ?? '') as S.Factor['sign'] };
  const last = rest[rest.length - 1] ?? head;
  return { type: 'product', factors: [opened, ...rest], ...span(startsAt(head, sign), last.factor) };
};
export const big = (which: Token, binders: readonly S.Binder[], body: S.Expression): S.BigNode => ({
  type: 'big',
  which: which.text as 'sum' | 'prod',
  binders,
  body,
  ...span(which, body),
});
export const sum = (terms: readonly S.Term[], hc: Token | undefined): S.Expression => {
  const [head] = terms as [S.Term];
  if (terms.length === 1 && !hc) return head.term;
  const last = terms[terms.length - 1] ?? head;
  return { type: 'sum', terms, hc: hc && span(hc, hc), ...span(head.term, hc ?? last.term) };
};
export const binder = (variable: Token, domain: S.Expression, where: S.Condition | undefined): S.Binder => ({
  variable: word(variable),
  domain,
  where,
  ...span(variable, where ?? domain),
});
export const head = (name: Token, parameter?: S.Binder, close?: Token): S.Head => ({
  name: word(name),
  parameter,
  ...span(name, close ?? name),
});
export const spinPlace = (species: Token, cell: S.Expression, close: Token): S.SpinPlace => ({
  species: word(species),
  cell,
  ...span(species, close),
});
