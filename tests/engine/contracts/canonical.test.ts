import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { canonical, NoCanonicalForm } from '../../../shared/contracts/canonical.ts';

describe('canonical JSON', () => {
  // RFC 8785, section 3.2.2 (input) and 3.2.3 (sorted output).
  it('is that of RFC 8785 for its example', () => {
    const input =
      '{"numbers":[333333333.33333329,1E30,4.50,2e-3,0.000000000000000000000000001],' +
      '"string":"\\u20ac$\\u000F\\u000aA\'\\u0042\\u0022\\u005c\\\\\\"\\/","literals":[null,true,false]}';
    expect(canonical(JSON.parse(input))).toBe(
      '{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27],' +
        '"string":"€$\\u000f\\nA\'B\\"\\\\\\\\\\"/"}',
    );
  });

  // RFC 8785, section 3.2.3: keys in order of UTF-16 code units.
  it('sorts keys as RFC 8785 does', () => {
    const keys = ['\u20ac', '\r', '\ufb33', '1', '\ud83d\ude00', '\u0080', '\u00f6'];
    const text = canonical(Object.fromEntries(keys.map((key) => [key, 0])));
    expect(Object.keys(JSON.parse(text) as object).filter((key) => key !== '1')).toEqual([
      '\r',
      '\u0080',
      '\u00f6',
      '\u20ac',
      '\ud83d\ude00',
      '\ufb33',
    ]);
    expect(text.indexOf('"1"')).toBeGreaterThan(text.indexOf('"\\r"'));
  });

  // RFC 8785, appendix B: bits of the number and its text.
  it.each([
    ['0000000000000000', '0'],
    ['8000000000000000', '0'],
    ['0000000000000001', '5e-324'],
    ['7fefffffffffffff', '1.7976931348623157e+308'],
    ['4340000000000000', '9007199254740992'],
    ['444b1ae4d6e2ef50', '1e+21'],
    ['3eb0c6f7a0b5ed8d', '0.000001'],
    ['41b3de4355555553', '333333333.3333332'],
  ])('writes the number %s as %s', (bits, text) => {
    const view = new DataView(new ArrayBuffer(8));
    view.setBigUint64(0, BigInt(`0x${bits}`));
    expect(canonical(view.getFloat64(0))).toBe(text);
  });

  it('says the same of equal values, whatever the order of their keys', () => {
    fc.assert(
      fc.property(fc.dictionary(fc.string({ unit: 'binary' }), fc.jsonValue({ stringUnit: 'binary' })), (value) => {
        const turned = Object.fromEntries(Object.entries(value).reverse());
        expect(canonical(turned)).toBe(canonical(value));
        expect(canonical(JSON.parse(canonical(value)))).toBe(canonical(value));
      }),
      { seed: 8785 },
    );
  });

  it.each([
    ['NaN', { a: [1, Number.NaN] }, '/a/1'],
    ['an infinity', Number.POSITIVE_INFINITY, ''],
    ['half a surrogate pair', ['\ud800'], '/0'],
    ['undefined in a list', [undefined], '/0'],
    ['a bigint', { n: 1n }, '/n'],
  ])('refuses %s and says where', (_, value, path) => {
    expect(() => canonical(value)).toThrow(NoCanonicalForm);
    expect(() => canonical(value)).toThrow(`"${path}"`);
  });
});
