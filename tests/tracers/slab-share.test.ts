import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import * as ww from 'wedgework';

const { cellState } = ww;
const trace = [...ww.slabShareElements, 'Nb', 'Yb'];
const ppm = (key: string, element: string) => ww.referenceComposition(key).valueOf(element) ?? NaN;
const suiteOfRocks = (rocks: readonly ((element: string) => number)[], extra: readonly ww.Column[] = []) =>
  ww.suiteOf({ columns: [...trace.map((symbol) => ww.column({ symbol, values: rocks.map((rock) => rock(symbol)) })), ...extra] });

describe('the oceanic-basalt array', () => {
  it('has the axis that its tabled compositions give', () => {
    const line = ww.mantleArray('Th')!;
    expect(line.slope).toBeCloseTo(1.143, 3); // through N-MORB and OIB of Sun & McDonough 1989 (from memory), computed independently
    // tabled as -1.272 from ratios rounded to three digits (Th/Yb 0.0393), which leaves the last digit open by 0.0006
    expect(Math.abs(line.intercept + 1.272)).toBeLessThan(0.0006);
    // worked by hand from the tabled compositions: E-MORB lies 0.053 and the mean of all MORB 0.136 log units above the line
    expect(line.scatter).toBeCloseTo(Math.sqrt((0.053 ** 2 + 0.136 ** 2) / 2), 2);
  });

  it('holds MORB-like basalts: all of them lie on it within twice its scatter', () => {
    for (const key of ['n-morb-1989', 'e-morb-1989', 'oib-1989', 'all-morb-2013']) {
      for (const element of ['Th', 'La', 'Ce', 'Nd', 'Zr']) {
        const { slope, intercept, scatter } = ww.mantleArray(element)!;
        const y = Math.log10(ppm(key, element) / ppm(key, 'Yb'));
        const miss = y - intercept - slope * Math.log10(ppm(key, 'Nb') / ppm(key, 'Yb'));
        expect(Math.abs(miss), `${key} ${element}`).toBeLessThanOrEqual(2 * scatter);
      }
    }
  });
});

describe('slab shares', () => {
  it('are nil in N-MORB and OIB, and nil within error in E-MORB', () => {
    const suite = suiteOfRocks(['n-morb-1989', 'oib-1989', 'e-morb-1989'].map((key) => (element: string) => ppm(key, element)));
    const { shares } = ww.slabShares(suite, { filter: 'none' });
    for (const [element, { values, sigma }] of shares) {
      expect(values[0], element).toBeCloseTo(0, 9);
      expect(values[1], element).toBeCloseTo(0, 9);
      expect(Math.abs(values[2]), element).toBeLessThan(2 * sigma![2]);
    }
  });

  it('give back a share that was planted', () => {
    fc.assert(
      fc.property(fc.double({ min: 0, max: 0.99, noNaN: true }), (planted) => {
        const rock = (element: string) => ppm('n-morb-1989', element) / (['Nb', 'Yb'].includes(element) ? 1 : 1 - planted);
        const { shares } = ww.slabShares(suiteOfRocks([rock]), { filter: 'none' });
        for (const { values } of shares.values()) expect(values[0]).toBeCloseTo(100 * planted, 8);
      }),
      { numRuns: 20 },
    );
  });

  it('find the sediment in a mixture of N-MORB and GLOSS, as minima: the sediment brings some Nb itself', () => {
    const part = 0.01;
    const rock = (element: string) => (1 - part) * ppm('n-morb-1989', element) + part * ppm('subducting-sediment-1998', element);
    const elements = ['Ba', 'Th', 'Pb', 'La'];
    const { shares } = ww.slabShares(suiteOfRocks([rock]), { filter: 'none', elements });
    for (const element of elements) {
      const truth = (100 * part * ppm('subducting-sediment-1998', element)) / rock(element);
      expect(shares.get(element)!.values[0], element).toBeLessThan(truth);
      expect(shares.get(element)!.values[0], element).toBeGreaterThan(truth - 4);
    }
  });

  it('propagate 1σ to first order', () => {
    const rock = (element: string) => ppm('n-morb-1989', element) * (element === 'Ba' ? 20 : 1);
    const exact = suiteOfRocks([rock]);
    const withSigma = exact.with(
      ['Ba', 'Nb', 'Yb'].map((symbol) =>
        ww.column({ symbol, values: exact.values(symbol), sigma: exact.values(symbol).map((value) => 0.04 * value) }),
      ),
    );
    const { values, sigma } = ww.slabShares(withSigma, { filter: 'none', elements: ['Ba'] }).shares.get('Ba')!;
    const { slope, scatter } = ww.mantleArray('Ba')!;
    // first-order propagation written out: baseline part of Ba is 1/20
    expect(values[0]).toBeCloseTo(95, 9);
    expect(sigma![0]).toBeCloseTo(5 * Math.hypot(0.04 * slope, 0.04 * (1 - slope), 0.04, Math.LN10 * scatter), 9);
  });

  it('count basalts only, unless told otherwise, and say so', () => {
    const rock = (element: string) => ppm('n-morb-1989', element);
    const suite = suiteOfRocks(
      [rock, rock, rock],
      [ww.column({ symbol: 'MgO', values: [7, 2, 6] }), ww.column({ symbol: 'LOI', values: [0.5, 0.5, 9] })],
    );
    const result = ww.slabShares(suite);
    expect([...result.kept]).toEqual([1, 0, 0]);
    expect(result.notes.join(' ')).toMatch(/1 of 3 samples counted.*1 with MgO below 4.*1 with LOI above 4/);
    expect(result.shares.get('Ba')!.values[1]).toBeNaN();
    expect(ww.slabShares(suite, { filter: 'none' }).kept.every((each) => each === 1)).toBe(true);
    expect([...ww.slabShares(suite, { filter: { MgO: { from: 1 } } }).kept]).toEqual([1, 1, 1]);
  });

  it('keep below-detection values as bounds', () => {
    const rock = (element: string) => ppm('n-morb-1989', element);
    const censored = (symbol: string, limit: number) =>
      ww.column({ symbol, values: [NaN], states: Uint8Array.of(cellState.belowDetection), limits: Float64Array.of(limit) });
    const noTh = suiteOfRocks([rock]).with([censored('Th', 0.24)]);
    const th = ww.slabShares(noTh, { filter: 'none' }).shares.get('Th')!;
    expect(th.states[0]).toBe(cellState.belowDetection); // N-MORB Th is 0.12: at most half can be slab-derived
    expect(th.limits![0]).toBeCloseTo(50, 6);
    const noNb = suiteOfRocks([rock]).with([censored('Nb', 2.33)]);
    const ba = ww.slabShares(noNb, { filter: 'none' }).shares.get('Ba')!;
    expect(ba.states[0]).toBe(cellState.aboveRange);
    expect(ba.limits![0]).toBeCloseTo(0, 6);
  });

  it('give medians by group, and refuse what cannot be', () => {
    const rock = (times: number) => (element: string) => ppm('n-morb-1989', element) * (element === 'Ba' ? times : 1);
    const suite = suiteOfRocks([rock(2), rock(4), rock(8), rock(1)]).withLabels({ volcano: ['A', 'A', 'A', 'B'] });
    const { groups, elements } = ww.slabShares(suite, { filter: 'none', group: 'volcano' });
    const ba = elements.indexOf('Ba');
    expect(groups.map(({ name, samples }) => [name, samples])).toEqual([
      ['A', 3],
      ['B', 1],
    ]);
    expect(groups[0].median[ba]).toBeCloseTo(75, 9);
    expect(groups[1].median[ba]).toBeCloseTo(0, 9);
    expect(() => ww.slabShares(suite, { elements: ['Xe'] })).toThrow(/needs Xe/);
    expect(() => ww.slabShares(suite, { elements: ['Nb'] })).toThrow(/no oceanic-basalt array for Nb/);
    expect(() => ww.slabShares(ww.suiteOf({ columns: [ww.column({ symbol: 'Ba', values: [1] })] }))).toThrow(/needs Nb, Yb/);
    expect(() => ww.slabShares(suite, { filter: { MgO: { from: NaN } } })).toThrow(/MgO in filter/);
  });
});
