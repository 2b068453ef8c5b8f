import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { keepByThompson, thompsonTau } from '../../kernel-lib/margin/crustal-thickness';
import { huberLine, kendall, medianOf, studentT, theilSen } from '../../kernel-lib/margin/regression';

describe('robust lines', () => {
  const x = [1, 2, 3, 4, 10, 12, 18];
  // Sen 1968, section 6: yields of a straight-line example; slope 4, the median of the pairs' slopes (65/19 … as printed)
  const y = [9, 15, 19, 20, 45, 55, 78];
  test('Theil–Sen on the example of Sen (1968): slope 4', () => {
    expect(theilSen(x, y).slope).toBeCloseTo(4, 9);
  });
  test('both find a line through points, whatever one wild point says', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -5, max: 5, noNaN: true }),
        fc.double({ min: -9, max: 9, noNaN: true }),
        fc.double({ min: -1000, max: 1000, noNaN: true }),
        (slope, intercept, wild) => {
          const xs = [0, 1, 2, 3, 4, 5, 6, 7, 8];
          const ys = xs.map((v) => intercept + slope * v);
          ys[4] += wild;
          for (const line of [theilSen(xs, ys), huberLine(xs, ys)]) {
            expect(line.slope).toBeCloseTo(slope, 6);
            expect(line.intercept).toBeCloseTo(intercept, 6);
          }
        },
      ),
    );
  });
  test('no line where x does not vary', () => {
    expect(theilSen([1, 1, 1], [1, 2, 3]).slope).toBeNaN();
  });
});

describe('order', () => {
  test('exact probabilities, by counting orders (Kendall 1938): n = 4, S = 6: 2/24; n = 5, S = 10: 2/120; n = 5, S = 8: 10/120', () => {
    expect(kendall([1, 2, 3, 4], [1, 2, 3, 4], 1)).toEqual({ tau: 1, p: expect.closeTo(2 / 24, 12) });
    expect(kendall([1, 2, 3, 4, 5], [5, 4, 3, 2, 1], 1).p).toBeCloseTo(2 / 120, 12);
    expect(kendall([1, 2, 3, 4, 5], [1, 2, 3, 5, 4], 1).p).toBeCloseTo(10 / 120, 12);
    // n = 10, S = 23: 0.023 one-sided (Kendall, Rank Correlation Methods, appendix table 1; from memory)
    expect(Math.abs(kendall([1, 2, 3, 4, 5, 6, 7, 8, 9, 10], [10, 2, 1, 4, 3, 5, 6, 7, 8, 9], 1).p / 2 - 0.023)).toBeLessThan(0.0005);
  });
  test('with ties, permutations give nearly the exact probability without them', () => {
    const x = [1, 2, 3, 4, 5, 6, 7];
    const exact = kendall(x, [1, 3, 2, 4, 6, 5, 7], 1).p;
    const tied = kendall([...x, 8, 8], [1, 3, 2, 4, 6, 5, 7, 8, 9], 1).p;
    expect(tied).toBeLessThan(exact);
    expect(kendall([...x, 8, 8], [1, 3, 2, 4, 6, 5, 7, 8, 9], 1).p).toBe(tied);
  });
});

describe('outliers', () => {
  test("Student's t against handbook tables (two-sided 5 %)", () => {
    for (const [freedom, t] of [
      [1, 12.706],
      [2, 4.303],
      [3, 3.182],
      [5, 2.571],
      [10, 2.228],
      [30, 2.042],
      [120, 1.98],
    ])
      expect(studentT(0.05, freedom)).toBeCloseTo(t, 3);
  });
  test('modified Thompson τ against its printed table', () => {
    // Table of modified Thompson τ (Wheeler & Ganji, Introduction to Engineering Experimentation); from memory
    for (const [n, tau] of [
      [3, 1.1511],
      [4, 1.425],
      [5, 1.5712],
      [6, 1.6563],
      [7, 1.711],
      [8, 1.7491],
      [9, 1.777],
      [10, 1.7984],
    ])
      expect(Math.abs(thompsonTau(n) - tau)).toBeLessThan(2e-4);
  });
  test('the far value is taken out, and no more', () => {
    const values = [18, 18.2, 18.1, 18, 17.9, 18.1, 18.2, 18, 18.1, 21];
    expect(
      keepByThompson(
        values.map((_, i) => i),
        (i) => values[i],
      ),
    ).toEqual([0, 1, 2, 3, 4, 5, 6, 7, 8]);
    expect(keepByThompson([0, 1, 2, 3, 4], (i) => [1, 2, 3, 4, 5][i])).toHaveLength(5);
  });
  test('median and missing values', () => {
    expect(medianOf([3, NaN, 1, 2])).toBe(2);
    expect(medianOf([])).toBeNaN();
  });
});
