import './helpers';
import { describe, expect, it } from 'vitest';
import fc from 'fast-check';
import { cellState, censoredSummary, column, substitute, suiteOf, type Suite } from 'wedgework';
import { normalQuantile } from '../../kernel-lib/assay/quality/censored';

/** Cells as a laboratory writes them: a number, or `<limit`. */
function ofCells(cells: readonly (number | string)[]): Suite {
  const values = Float64Array.from(cells, (cell) => (typeof cell === 'number' ? cell : NaN));
  const states = Uint8Array.from(cells, (cell) => (typeof cell === 'number' ? cellState.measured : cellState.belowDetection));
  const limits = Float64Array.from(cells, (cell) => (typeof cell === 'number' ? NaN : Number(cell.slice(1))));
  return suiteOf({ columns: [column({ symbol: 'Ta', values, states, limits })], labels: { sample: cells.map((_, i) => `S-${i + 1}`) } });
}

describe('substitute', () => {
  const suite = ofCells(['<0.4', 2, 3]);

  it.each([
    ['half-limit', 0.2],
    ['limit', 0.4],
    ['zero', 0],
    ['limit-over-root-two', 0.4 / Math.SQRT2],
  ] as const)('by %s gives %d, derived, with its limit and in the lineage', (rule, value) => {
    const { columns, lineage } = substitute(suite, ['Ta'], rule);
    const ta = columns.get('Ta')!;
    expect(ta.values[0]).toBeCloseTo(value, 12);
    expect([...ta.states]).toEqual([cellState.derived, cellState.measured, cellState.measured]);
    expect(ta.limits![0]).toBe(0.4);
    expect(lineage.at(-1)).toMatchObject({ what: 'substitute', detail: { rule, cells: { Ta: 1 } } });
  });

  it('changes nothing in the suite it was given, and leaves cells without a limit alone', () => {
    const unknown = suite.with([column({ symbol: 'Ta', values: [NaN, 2, 3], states: Uint8Array.from([1, 0, 0]) })]);
    expect(substitute(unknown, ['Ta'], 'limit').values('Ta')[0]).toBeNaN();
    expect(suite.values('Ta')[0]).toBeNaN();
  });

  it('refuses an unknown rule, column, or too few measured cells in words', () => {
    expect(() => substitute(suite, ['Ta'], 'half' as never)).toThrow(/rule must be "half-limit"/);
    expect(() => substitute(suite, ['Tb'], 'limit')).toThrow(/no column "Tb"/);
    expect(() => substitute(suite, [], 'limit')).toThrow(/list of column names/);
    expect(() => substitute(suite, ['Ta'], 'order-statistics')).toThrow(/five measured values/);
  });
});

describe('Kaplan–Meier', () => {
  it('agrees with the product-limit estimate worked by hand', () => {
    // From the top: 8 of 6 at risk → 5/6; 5 of 5 → 4/6; <4 drops out; 3 of 3 at risk → 2/3·(1 − 1/3) = 4/9; 2 of 2 → 2/9; <1 remains.
    const summary = censoredSummary(ofCells([8, 5, '<4', 3, 2, '<1']), 'Ta', 'kaplan-meier');
    const weights = [
      [8, 1 / 6],
      [5, 1 / 6],
      [3, 2 / 9],
      [2, 2 / 9],
      [1, 2 / 9],
    ];
    expect(summary.mean).toBeCloseTo(
      weights.reduce((sum, [value, weight]) => sum + value * weight, 0),
      12,
    );
    expect(summary.median).toBe(3);
    expect(summary).toMatchObject({ n: 6, below: 2 });
    expect(summary.note).toContain('22 %');
  });

  it('is the ordinary mean where nothing is below detection', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: 0.1, max: 100, noNaN: true }), { minLength: 3, maxLength: 30 }), (values) => {
        const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
        const { mean: found, standardDeviation } = censoredSummary(ofCells(values), 'Ta');
        expect(found).toBeCloseTo(mean, 8);
        expect(standardDeviation).toBeCloseTo(Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1)), 6);
      }),
    );
  });
});

describe('regression on order statistics', () => {
  it('recovers a lognormal distribution of which a third is below two detection limits', () => {
    // exp of the normal quantiles at (i − ½)/n: ln x has mean 1 and standard deviation 0.8
    const n = 300;
    const truth = Array.from({ length: n }, (_, i) => Math.exp(1 + 0.8 * normalQuantile((i + 0.5) / n)));
    const cells = truth.map((value, i) => (i % 2 === 0 ? (value < 1.8 ? '<1.8' : value) : value < 2.2 ? '<2.2' : value));
    const { mean, median, below } = censoredSummary(ofCells(cells), 'Ta', 'order-statistics');
    expect(below).toBeGreaterThan(80);
    expect(median / Math.exp(1)).toBeCloseTo(1, 1);
    expect(mean / Math.exp(1 + 0.8 ** 2 / 2)).toBeCloseTo(1, 1);
    const filled = substitute(ofCells(cells), ['Ta'], 'order-statistics').values('Ta');
    const meanLog = filled.reduce((sum, value) => sum + Math.log(value), 0) / n;
    expect(meanLog).toBeCloseTo(1, 1);
  });

  it('has plotting positions by hand for one limit (Helsel & Cohn 1988)', () => {
    // 3 below <2 and 5 above: probability of exceeding the limit 5/8; measured at 3/8 + 5/8·k/6; below at 3/8·k/4
    const values = [3, 4, 5, 7, 11];
    const cells = ['<2', '<2', '<2', ...values];
    const x = values.map((_, k) => normalQuantile(3 / 8 + ((5 / 8) * (k + 1)) / 6));
    const y = values.map(Math.log);
    const mx = x.reduce((sum, each) => sum + each, 0) / 5;
    const my = y.reduce((sum, each) => sum + each, 0) / 5;
    const slope = x.reduce((sum, each, i) => sum + (each - mx) * (y[i] - my), 0) / x.reduce((sum, each) => sum + (each - mx) ** 2, 0);
    const filled = substitute(ofCells(cells), ['Ta'], 'order-statistics').values('Ta');
    [1, 2, 3].forEach((k) => expect(filled[k - 1]).toBeCloseTo(Math.exp(my + slope * (normalQuantile((3 / 8) * (k / 4)) - mx)), 10));
  });

  it('has the quantiles of the normal distribution', () => {
    // Standard tables
    expect(normalQuantile(0.975)).toBeCloseTo(1.959964, 6);
    expect(normalQuantile(0.5)).toBeCloseTo(0, 12);
    expect(normalQuantile(0.01)).toBeCloseTo(-2.326348, 6);
  });
});
