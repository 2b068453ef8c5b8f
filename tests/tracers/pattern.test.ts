import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import * as ww from 'wedgework';
import { censoredQuantiles } from '../../kernel-lib/tracers/censored-quantiles';

const { cellState } = ww;
const rareEarthsOf = (key: string) => ww.rareEarths.map((symbol) => ww.column({ symbol, values: [ww.reservoir(key).values.get(symbol)!.value] }));

describe('pattern', () => {
  it('is flat at 1 for the reference itself', () => {
    for (const key of ['chondrite-c1-1989', 'primitive-mantle-1989', 'silicate-earth-1995']) {
      const table = ww.pattern(ww.suiteOf({ columns: rareEarthsOf(key) }), { reference: key });
      expect(table.elements).toEqual([...ww.rareEarths]);
      for (const { values } of table.normalised) expect(values[0]).toBeCloseTo(1, 12);
    }
  });

  it('gives N-MORB the pattern that its own tables give', () => {
    const table = ww.pattern(ww.suiteOf({ columns: rareEarthsOf('n-morb-1989') }));
    // Sun & McDonough 1989 table 1: N-MORB La 2.5, Yb 3.05 over C1 0.237, 0.170 (values from memory)
    expect(table.normalised[0].values[0]).toBeCloseTo(2.5 / 0.237, 10);
    expect(table.normalised[12].values[0]).toBeCloseTo(3.05 / 0.17, 10);
    expect(table.referenceName).toContain('Sun & McDonough 1989');
  });

  it('keeps below-detection cells as normalised limits, and finds K and Ti in their oxides', () => {
    const suite = ww.suiteOf({
      columns: [
        ww.column({ symbol: 'Nb', values: [NaN], states: Uint8Array.of(cellState.belowDetection), limits: Float64Array.of(0.5) }),
        ww.column({ symbol: 'K2O', values: [1] }),
        ww.column({ symbol: 'TiO2', values: [1] }),
      ],
    });
    const table = ww.pattern(suite, { order: 'mantle-incompatibility-1989' });
    expect(table.elements).toEqual(['Nb', 'K', 'Ti']);
    expect(table.absent).toContain('Ba');
    const [nb, k, ti] = table.normalised;
    expect(nb.states[0]).toBe(cellState.belowDetection);
    expect(nb.values[0]).toBeNaN();
    expect(nb.limits[0]).toBeCloseTo(0.5 / 0.713, 12);
    expect(k.values[0]).toBeCloseTo(8302 / 250, 1); // 1 wt % K2O holds 8302 ppm K (handbook factor 0.8302)
    expect(ti.values[0]).toBeCloseTo(5995 / 1300, 1);
  });

  it('takes the plotting values of Cs and Pb unless told otherwise, and says so', () => {
    const suite = ww.suiteOf({ columns: [ww.column({ symbol: 'Cs', values: [0.0079] }), ww.column({ symbol: 'Pb', values: [0.185] })] });
    const plotting = ww.pattern(suite, { order: ['Cs', 'Pb'] });
    expect(plotting.normalised.map(({ divisor }) => divisor)).toEqual([0.0079, 0.071]);
    expect(plotting.notes.join(' ')).toContain('recommended for plotting');
    const table = ww.pattern(suite, { order: ['Cs', 'Pb'], caesiumAndLead: 'table' });
    expect(table.normalised.map(({ divisor }) => divisor)).toEqual([0.032, 0.185]);
  });

  it('gives groups their median and band, bounded where detection limits reach in', () => {
    const suite = ww.suiteOf({
      columns: [
        ww.column({ symbol: 'La', values: [1, 2, 3, 4, 5, 7], states: new Uint8Array(6) }),
        ww.column({
          symbol: 'Ta',
          values: [NaN, NaN, 0.2, 0.1, 0.3, 0.2],
          states: Uint8Array.of(1, 1, 0, 0, 0, 0),
          limits: Float64Array.of(0.1, 0.1, NaN, NaN, NaN, NaN),
        }),
      ],
      labels: { volcano: ['A', 'A', 'A', 'B', 'B', 'B'] },
    });
    const table = ww.pattern(suite, { order: ['La', 'Ta'], reference: { La: 1, Ta: 0.1 }, group: 'volcano' });
    expect(table.names).toEqual(['A', 'B']);
    const [la, ta] = table.normalised;
    expect([...la.values]).toEqual([2, 5]);
    expect([...la.low!]).toEqual([1.5, 4.5]);
    expect([...la.high!]).toEqual([2.5, 6]);
    expect([...ta.states]).toEqual([cellState.belowDetection, cellState.derived]);
    expect(ta.limits[0]).toBeCloseTo(1, 12);
    expect(ta.low![0]).toBeNaN();
    expect([...ta.counts!]).toEqual([3, 3]);
  });

  it('has quantiles that bracket the truth whatever the censored cells were', () => {
    fc.assert(
      fc.property(
        fc.array(fc.record({ value: fc.double({ min: 0.01, max: 100, noNaN: true }), censored: fc.boolean() }), { minLength: 1, maxLength: 30 }),
        (cells) => {
          const truth = Float64Array.from(cells, ({ value }) => value);
          const rows = cells.map((_, i) => i);
          const whole = ww.column({ symbol: 'Ba', values: truth });
          const seen = ww.column({
            symbol: 'Ba',
            values: cells.map(({ value, censored }) => (censored ? NaN : value)),
            states: Uint8Array.from(cells, ({ censored }) => (censored ? cellState.belowDetection : cellState.measured)),
            limits: Float64Array.from(cells, ({ value, censored }) => (censored ? value * 1.5 : NaN)),
          });
          const exact = censoredQuantiles(whole, rows, [0.25, 0.5, 0.75]).quantiles;
          const bounded = censoredQuantiles(seen, rows, [0.25, 0.5, 0.75]).quantiles;
          exact.forEach(({ low, high }, q) => {
            expect(low).toBe(high);
            expect(bounded[q].low).toBeLessThanOrEqual(low);
            expect(bounded[q].high).toBeGreaterThanOrEqual(high);
          });
        },
      ),
    );
  });

  it('bridges rare earths that no sample has, and refuses bad options', () => {
    const suite = ww.suiteOf({ columns: [ww.column({ symbol: 'La', values: [10] }), ww.column({ symbol: 'Yb', values: [2] })] });
    expect(ww.pattern(suite).elements).toHaveLength(14);
    expect(ww.pattern(suite, { absent: 'leave-out' }).elements).toEqual(['La', 'Yb']);
    expect(() => ww.pattern(suite, { order: 'backwards' })).toThrow(/no element order "backwards"/);
    expect(() => ww.pattern(suite, { order: ['Zz'] })).toThrow(/"Zz" in order/);
    expect(() => ww.pattern(suite, { order: [] })).toThrow(/at least one/);
    expect(() => ww.pattern(suite, { band: [0.9, 0.1] })).toThrow(/two quantiles/);
    expect(() => ww.pattern(suite, { group: 'volcano' })).toThrow(/no label "volcano"/);
    expect(() => ww.pattern(suite, { absent: 'zero' as never })).toThrow(/absent must be/);
    expect(() => ww.pattern(suite, { caesiumAndLead: 'other' as never })).toThrow(/caesiumAndLead/);
  });
});
