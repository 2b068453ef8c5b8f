import { describe, expect, it } from 'vitest';
import * as ww from 'wedgework';

const { cellState } = ww;

const bhvo1 = {
  La: 15.8,
  Ce: 39,
  Pr: 5.7,
  Nd: 25.2,
  Sm: 6.2,
  Eu: 2.06,
  Gd: 6.4,
  Tb: 0.96,
  Dy: 5.2,
  Ho: 0.99,
  Er: 2.4,
  Tm: 0.33,
  Yb: 2.02,
  Lu: 0.291,
};
const monchiquite = {
  La: 103,
  Ce: 253,
  Pr: 27,
  Nd: 110,
  Sm: 14.2,
  Eu: 2.0,
  Gd: 7.7,
  Tb: 1.1,
  Dy: 5.9,
  Ho: 0.91,
  Er: 1.5,
  Tm: 0.22,
  Yb: 0.9,
  Lu: 0.15,
};
const suiteFrom = (...samples: Readonly<Record<string, number>>[]) =>
  ww.suiteOf({ columns: Object.keys(samples[0]).map((symbol) => ww.column({ symbol, values: samples.map((sample) => sample[symbol]) })) });
const lavas = suiteFrom(bhvo1, monchiquite);
const at = (table: ww.RatioTable, name: string, row = 0) => table.columns.get(name)!.values[row];

describe('ratios', () => {
  it('normalises to C1 chondrite of Sun & McDonough 1989 unless told otherwise', () => {
    const table = ww.ratios(lavas, ['(La/Yb)N', '(La/Sm)N', '(Gd/Yb)N', '(Dy/Yb)N']);
    // BHVO-1: rare earths as printed in an open practical (Imperial College London); ratios computed independently at 40 digits
    expect(at(table, '(La/Yb)N')).toBeCloseTo(5.610561056, 8);
    expect(at(table, '(La/Sm)N')).toBeCloseTo(1.64516129, 7);
    expect(at(table, '(Gd/Yb)N')).toBeCloseTo(2.620992026, 8);
    expect(at(table, '(Dy/Yb)N')).toBeCloseTo(1.722928198, 8);
    // monchiquite of Rock 1987, Geochem. J. 21, fig. 1 caption; ratios computed independently
    expect(at(table, '(La/Yb)N', 1)).toBeCloseTo(82.09095171, 7);
  });

  it('takes another reference by its key, a reservoir, or own values', () => {
    const key = 'chondrite-ci-1995'; // McDonough & Sun 1995
    // BHVO-1 against McDonough & Sun 1995, computed independently
    expect(at(ww.ratios(lavas, ['(La/Yb)N'], { reference: key }), '(La/Yb)N')).toBeCloseTo(5.313531353, 8);
    expect(at(ww.ratios(lavas, ['(La/Yb)N'], { reference: ww.reservoir(key) }), '(La/Yb)N')).toBeCloseTo(5.313531353, 8);
    expect(at(ww.ratios(lavas, ['(La/Yb)N'], { reference: { La: 0.237, Yb: 0.161 } }), '(La/Yb)N')).toBeCloseTo(5.313531353, 8);
  });

  it('knows the anomalies by name, with the geometric mean for Eu and the arithmetic one as an option', () => {
    // computed independently from the printed analyses above
    expect(at(ww.ratios(lavas, ['Eu/Eu*']), 'Eu/Eu*')).toBeCloseTo(0.9997813326, 9);
    expect(at(ww.ratios(lavas, ['Eu/Eu*']), 'Eu/Eu*', 1)).toBeCloseTo(0.5847417402, 9);
    expect(at(ww.ratios(lavas, ['Eu/Eu*'], { formulas: { 'Eu/Eu*': 'arithmetic' } }), 'Eu/Eu*')).toBeCloseTo(0.9911821283, 9);
    expect(at(ww.anomalies(lavas, ['Eu/Eu*'], { reference: 'chondrite-ci-1995' }), 'Eu/Eu*')).toBeCloseTo(0.9968513232, 9);
  });

  it('gives an anomaly its own reference inside a larger expression', () => {
    const suite = suiteFrom({ Th: 2, La: 10, Nb: 1, Sm: 2 });
    const nb = at(ww.ratios(suite, ['Nb/Nb*']), 'Nb/Nb*');
    // primitive mantle of Sun & McDonough 1989: Nb 0.713, Th 0.085, La 0.687
    expect(nb).toBeCloseTo(1 / 0.713 / Math.sqrt((2 / 0.085) * (10 / 0.687)), 10);
    const both = at(ww.ratios(suite, ['(La/Sm)N * Nb/Nb*']), '(La/Sm)N * Nb/Nb*');
    expect(both).toBeCloseTo((10 / 0.237 / (2 / 0.153)) * nb, 10);
  });

  it('converts wt % and ppm before dividing, and finds Ti in TiO2', () => {
    const suite = suiteFrom({ Zr: 100, TiO2: 1, V: 300 });
    const table = ww.ratios(suite, ['10000*Zr/TiO2', 'Ti/V']);
    expect(at(table, '10000*Zr/TiO2')).toBeCloseTo(100, 10); // 100 ppm over 10 000 ppm, times 10 000
    expect(at(table, 'Ti/V')).toBeCloseTo(5995 / 300, 1); // 1 wt % TiO2 holds 5995 ppm Ti (handbook factor 0.5995)
  });

  it('propagates 1σ and carries below-detection operands as bounds', () => {
    const suite = ww.suiteOf({
      columns: [
        ww.column({ symbol: 'Ba', values: [300, 310], sigma: [6, 6.2] }),
        ww.column({
          symbol: 'Th',
          values: [2, NaN],
          sigma: [0.1, NaN],
          states: Uint8Array.of(0, cellState.belowDetection),
          limits: Float64Array.of(NaN, 0.05),
        }),
      ],
    });
    const { values, sigma, states, limits } = ww.ratios(suite, ['Th/Ba']).columns.get('Th/Ba')!;
    expect(sigma![0] / values[0]).toBeCloseTo(Math.hypot(0.02, 0.05), 6);
    expect(values[1]).toBeNaN();
    expect(states[1]).toBe(cellState.belowDetection);
    expect(limits![1]).toBeCloseTo(0.05 / 310, 10);
    const inverse = ww.ratios(suite, ['Ba/Th']).columns.get('Ba/Th')!;
    expect(inverse.states[1]).toBe(cellState.aboveRange);
    expect(inverse.limits![1]).toBeCloseTo(6200, 6);
  });

  it('says what it cannot determine, and leaves the others whole', () => {
    const table = ww.ratios(lavas, ['La/Yb', 'Ba/Th', 'Nb/Nb*']);
    expect(at(table, 'La/Yb')).toBeCloseTo(15.8 / 2.02, 12);
    expect(table.notDetermined.map(({ name }) => name)).toEqual(['Ba/Th', 'Nb/Nb*']);
    expect(table.notDetermined[0].because).toMatch(/needs Ba, Th/);
    expect(at(table, 'Ba/Th')).toBeNaN();
    expect(table.columns.get('Ba/Th')!.states[0]).toBe(cellState.missing);
  });

  it('names its references, their standing and its formulas in the lineage', () => {
    const { lineage } = ww.ratios(lavas, ['(La/Yb)N', 'Eu/Eu*']);
    const last = lineage[lineage.length - 1];
    expect(last.detail.references).toEqual(['chondrite-c1-1989']);
    expect(last.detail.referenceStandings).toContain('from memory');
    expect(last.sources).toContain('sun_mcdonough_1989');
    expect(String((last.detail.formulas as Record<string, string>)['Eu/Eu*'])).toContain('geometric');
    for (const source of last.sources) expect(ww.findSource(source).title).not.toBe('');
  });

  it('refuses what it cannot read, in words that say why', () => {
    expect(() => ww.ratios(lavas, ['La/'])).toThrow(/not a readable expression/);
    expect(() => ww.ratios(lavas, ['La/Qq'])).toThrow(/"Qq" is neither an analyte nor a column/);
    expect(() => ww.ratios(lavas, 'La/Yb' as never)).toThrow(/list of expressions/);
    expect(() => ww.ratios(lavas, ['LaN'], { reference: 'chondrite-x' })).toThrow(/no reservoir "chondrite-x"/);
    expect(() => ww.ratios(lavas, ['Eu/Eu*'], { formulas: { 'Eu/Eu*': 'cubic' } })).toThrow(/no formula "cubic".*geometric/);
    expect(() => ww.ratios(lavas, ['LaN'], { reference: { La: -1 } })).toThrow(/positive number/);
    expect(() => ww.ratio(lavas, 'Ba/Th')).toThrow(/needs Ba, Th/);
    expect(() => ww.anomalies(lavas, ['Xx/Xx*'])).toThrow(/no anomaly/);
    expect(() => ww.anomalies(lavas, 'Eu/Eu*' as never)).toThrow(/list of names/);
    expect(() => ww.ratios({ suite: lavas } as never)).toThrow(/must be a Suite.*add \.suite/);
    expect(() => ww.pattern(3 as never)).toThrow(/pattern: the first argument must be a Suite/);
    expect(() => ww.slabShares(lavas, null as never)).toThrow(/slabShares: options must be an object/);
  });

  it('shows itself as a table, and adds itself to a suite', () => {
    const text = String((ww.ratios(lavas, ['La/Yb']).toMimeBundle() as ww.MimeBundle)['text/plain']);
    expect(text).toContain('7.822');
    expect(ww.withRatios(lavas, ['La/Yb']).where({ 'La/Yb': { from: 10 } }).size).toBe(1);
  });

  it('computes every usual tracer and every formula of the tables on a complete analysis', () => {
    const complete = suiteFrom(
      Object.fromEntries(
        [...ww.reservoir('n-morb-1989').values.values()].filter(({ unit }) => unit !== 'ratio').map(({ analyte, value }) => [analyte, value]),
      ),
    );
    const table = ww.ratios(complete);
    const lacking = table.notDetermined.map(({ name }) => name).filter((name) => name !== 'V/Sc'); // the 1989 table has neither V nor Sc
    expect(lacking).toEqual([]);
    for (const { quantity, variant } of ww.quantityFormulas()) {
      const value = ww.ratio(complete, quantity, { formulas: { [quantity]: variant } }).values[0];
      expect(value, `${quantity} ${variant}`).toBeGreaterThan(0.3);
      expect(value, `${quantity} ${variant}`).toBeLessThan(2.5);
    }
  });

  it('keeps the constancy of oceanic basalts: Nb/U 47 ± 10 and Ce/Pb 25 ± 5 (Hofmann et al. 1986)', () => {
    for (const key of ['n-morb-1989', 'e-morb-1989', 'oib-1989']) {
      const { values } = ww.reservoir(key);
      expect(Math.abs(values.get('Nb')!.value / values.get('U')!.value - 47), key).toBeLessThanOrEqual(10);
      expect(Math.abs(values.get('Ce')!.value / values.get('Pb')!.value - 25), key).toBeLessThanOrEqual(5);
    }
  });
});
