import './helpers';
import { describe, expect, it } from 'vitest';
import fc from 'fast-check';
import { significantDigits, sixDigits } from '../../kernel-lib/assay/format-number';

const written = (value: number): string => {
  const bytes = new Uint8Array(32);
  return Buffer.from(bytes.subarray(0, significantDigits(value, bytes, 0))).toString('latin1');
};

describe('six significant digits', () => {
  // C standard, printf conversion "%.6g" (ISO C17, 7.21.6.1): style f for -4 <= exponent < 6, trailing zeros removed.
  it.each([
    [0, '0'],
    [1, '1'],
    [-1.5, '-1.5'],
    [0.1, '0.1'],
    [52.1, '52.1'],
    [123456, '123456'],
    [1234567, '1.23457e+06'],
    [0.0001, '0.0001'],
    [0.00001, '1e-05'],
    [999999.5, '1e+06'],
    [99999.96, '100000'],
    [99999.95, '99999.9'],
    [0.9999996, '1'],
    [1e21, '1e+21'],
    [0.512638, '0.512638'],
    [0.70301249, '0.703012'],
    [2 / 3, '0.666667'],
    [NaN, ''],
    [100, '100'],
    [0.00012345678, '0.000123457'],
  ])('%d is written %s', (value, text) => {
    expect(written(value)).toBe(text);
  });

  it('agrees with the conversion of the language for any number', () => {
    const anySize = fc
      .tuple(fc.double({ min: 1, max: 10, noNaN: true }), fc.integer({ min: -8, max: 9 }), fc.boolean())
      .map(([mantissa, power, negative]) => (negative ? -1 : 1) * mantissa * 10 ** power);
    // Few digits and halves at the sixth digit are where rounding goes wrong first.
    const short = fc
      .tuple(fc.integer({ min: -99_999_999, max: 99_999_999 }), fc.integer({ min: 0, max: 9 }))
      .map(([whole, places]) => whole / 10 ** places);
    const halves = fc
      .tuple(fc.integer({ min: 100_000, max: 999_999 }), fc.integer({ min: 1, max: 10 }))
      .map(([whole, places]) => (whole + 0.5) / 10 ** places);
    fc.assert(
      fc.property(fc.oneof(anySize, short, halves), (value) => written(value) === sixDigits(value)),
      { numRuns: 20_000 },
    );
  });
});
