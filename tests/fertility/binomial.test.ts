import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { proportionInterval } from 'wedgework';

/** [met, asked, exact low, exact high, Wilson low, Wilson high]: scipy 1.17.1, stats.binomtest(…).proportion_ci(0.95). */
const cases = [
  [0, 10, 0, 0.308497, 0, 0.277533],
  [5, 10, 0.187086, 0.812914, 0.236593, 0.763407],
  [7, 10, 0.347547, 0.93326, 0.396778, 0.892209],
  [1, 2, 0.012579, 0.987421, 0.094531, 0.905469],
  [7, 7, 0.590384, 1, 0.64567, 1],
  [45, 150, 0.22797, 0.380121, 0.232408, 0.37758],
  [0, 3, 0, 0.707598, 0, 0.561497],
] as const;

describe('proportionInterval', () => {
  it.each(cases)('%i of %i', (met, asked, exactLow, exactHigh, wilsonLow, wilsonHigh) => {
    const exact = proportionInterval(met, asked, { method: 'clopper-pearson' });
    expect(exact.low).toBeCloseTo(exactLow, 5);
    expect(exact.high).toBeCloseTo(exactHigh, 5);
    const wilson = proportionInterval(met, asked);
    expect(wilson.low).toBeCloseTo(wilsonLow, 5);
    expect(wilson.high).toBeCloseTo(wilsonHigh, 5);
  });

  it('takes another confidence', () => {
    // scipy 1.17.1: binomtest(3, 20).proportion_ci(0.9)
    expect(proportionInterval(3, 20, { method: 'clopper-pearson', confidence: 0.9 }).high).toBeCloseTo(0.3436638, 6);
    expect(proportionInterval(3, 20, { confidence: 0.9 }).low).toBeCloseTo(0.0615824, 6);
  });

  it('says nothing from nothing', () => {
    expect(proportionInterval(0, 0)).toEqual({ low: 0, high: 1 });
  });

  it('holds the share, narrows with more samples, and mirrors', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 400 }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.constantFrom('wilson' as const, 'clopper-pearson' as const),
        (asked, part, method) => {
          const met = Math.round(part * asked);
          const { low, high } = proportionInterval(met, asked, { method });
          const mirrored = proportionInterval(asked - met, asked, { method });
          const more = proportionInterval(10 * met, 10 * asked, { method });
          expect(low).toBeLessThanOrEqual(met / asked + 1e-12);
          expect(high).toBeGreaterThanOrEqual(met / asked - 1e-12);
          expect(mirrored.low).toBeCloseTo(1 - high, 6);
          expect(more.high - more.low).toBeLessThan(high - low + 1e-9);
        },
      ),
      { numRuns: 150 },
    );
  });

  it('refuses counts that are not counts', () => {
    expect(() => proportionInterval(3, 2)).toThrow('met must be a whole number from 0 to asked (2)');
    expect(() => proportionInterval(1, 2.5)).toThrow('asked must be a whole number');
    expect(() => proportionInterval(1, 2, { confidence: 95 })).toThrow('between 0 and 1');
    expect(() => proportionInterval(1, 2, { method: 'wald' as never })).toThrow('"wilson" or "clopper-pearson"');
  });
});
