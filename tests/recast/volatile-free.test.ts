import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cellState, column, suiteOf, totalIron, volatileFree, withMagnesiumNumber, withTotalIron, type Suite } from 'wedgework';

const majors = ['SiO2', 'TiO2', 'Al2O3', 'MnO', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5'];
const suiteFrom = (cells: Record<string, number[]>): Suite => suiteOf({ columns: Object.entries(cells).map(([symbol, values]) => column({ symbol, values })) });
const basalt = { SiO2: [49.5], TiO2: [0.9], Al2O3: [16], FeOT: [9], MnO: [0.16], MgO: [8], CaO: [10.8], Na2O: [2.2], K2O: [0.4], P2O5: [0.1], LOI: [2.1] };

describe('totalIron', () => {
  // Rows: total as FeO; total as Fe2O3; both measured; ferric alone; ferrous alone; none.
  const suite = suiteFrom({
    FeOT: [9, NaN, NaN, NaN, NaN, NaN],
    Fe2O3T: [NaN, 10, NaN, NaN, NaN, NaN],
    FeO: [1, 1, 8.34, NaN, 7, NaN],
    Fe2O3: [1, 1, 1.53, 10, NaN, NaN],
  });
  const { column: iron, counts } = totalIron(suite);

  it('decides row by row', () => {
    const factor = 2 * 71.844 / 159.687; // FeO and Fe2O3 from IUPAC 2021 weights
    [9, 10 * factor, 8.34 + 1.53 * factor, 10 * factor, 7].forEach((value, i) => expect(iron.values[i]).toBeCloseTo(value, 6));
    expect(iron.values[5]).toBeNaN();
    // USGS certificate, Diabase W-2: Fe2O3 1.53 and FeO 8.34 against total Fe2O3 10.83 ± 0.2.
    expect(iron.values[2] / factor).toBeCloseTo(10.8, 1);
  });

  it('counts each way', () => {
    expect(counts).toEqual({ reportedTotal: 2, summed: 1, ferricAlone: 1, ferrousAlone: 1, none: 1 });
    expect(withTotalIron(suite).lineage.at(-1)!.detail).toEqual(counts);
  });

  it('keeps the limit of a total below detection', () => {
    const below = suiteOf({ columns: [column({ symbol: 'Fe2O3T', values: [NaN], states: Uint8Array.of(cellState.belowDetection), limits: Float64Array.of(0.1) })] });
    const { column: result } = totalIron(below);
    expect(result.states[0]).toBe(cellState.belowDetection);
    expect(result.limits![0]).toBeCloseTo(0.08998, 5);
  });
});

describe('volatileFree', () => {
  it('recasts to 100 % and keeps the sum it had', () => {
    const dry = volatileFree(suiteFrom(basalt));
    const sum = 49.5 + 0.9 + 16 + 9 + 0.16 + 8 + 10.8 + 2.2 + 0.4 + 0.1;
    expect(dry.values('SumAsGiven')[0]).toBeCloseTo(sum, 10);
    expect(dry.values('SiO2')[0]).toBeCloseTo((49.5 * 100) / sum, 10);
    expect(dry.values('LOI')[0]).toBe(2.1);
  });

  it('closes to 100 for any analysis, either way of iron', () => {
    const percent = fc.double({ min: 0.01, max: 70, noNaN: true });
    fc.assert(
      fc.property(fc.array(percent, { minLength: 10, maxLength: 10 }), fc.constantFrom('total-as-FeO' as const, 'total-as-Fe2O3' as const), (values, iron) => {
        const dry = volatileFree(suiteFrom(Object.fromEntries([...majors, 'FeOT'].map((oxide, i) => [oxide, [values[i]]]))), { iron });
        const symbols = [...majors, iron === 'total-as-FeO' ? 'FeOT' : 'Fe2O3T'];
        expect(symbols.reduce((sum, symbol) => sum + dry.values(symbol)[0], 0)).toBeCloseTo(100, 8);
      }),
    );
  });

  it('does nothing the second time', () => {
    const once = volatileFree(suiteFrom(basalt));
    expect(volatileFree(once).values('MgO')[0]).toBeCloseTo(once.values('MgO')[0], 12);
  });

  it('keeps measured FeO and Fe2O3 apart when asked to', () => {
    const { FeOT: _, ...rest } = basalt;
    const dry = volatileFree(suiteFrom({ ...rest, FeO: [7], Fe2O3: [2] }), { iron: 'measured' });
    expect(dry.values('FeO')[0] / dry.values('Fe2O3')[0]).toBeCloseTo(3.5, 10);
    expect([...majors, 'FeO', 'Fe2O3'].reduce((sum, symbol) => sum + dry.values(symbol)[0], 0)).toBeCloseTo(100, 10);
    expect(dry.column('FeOT').states[0]).toBe(cellState.missing);
  });

  it('gives no sum where an oxide that it needs is missing, and says how many', () => {
    const { K2O: _, ...rest } = basalt;
    const dry = volatileFree(suiteFrom({ ...rest, K2O: [NaN] }));
    expect(dry.column('SiO2').states[0]).toBe(cellState.missing);
    expect(dry.values('SiO2')[0]).toBeNaN();
    expect(dry.lineage.at(-1)!.detail).toMatchObject({ notRecast: 1 });
    expect(volatileFree(suiteFrom(rest)).values('SiO2')[0]).toBeNaN();
  });

  it('counts a sum without a minor oxide as incomplete', () => {
    expect(volatileFree(suiteFrom({ ...basalt, P2O5: [NaN] })).lineage.at(-1)!.detail).toMatchObject({ notRecast: 0, incompleteSums: 1 });
  });

  it('recasts the limit of an oxide below detection, and does not count it', () => {
    const suite = suiteFrom(basalt).with([column({ symbol: 'P2O5', values: [NaN], states: Uint8Array.of(cellState.belowDetection), limits: Float64Array.of(0.05) })]);
    const dry = volatileFree(suite);
    expect(dry.column('P2O5').states[0]).toBe(cellState.belowDetection);
    expect(dry.column('P2O5').limits![0]).toBeCloseTo((0.05 * 100) / (97.06 - 0.1), 3);
    expect(dry.lineage.at(-1)!.detail).toMatchObject({ incompleteSums: 0 });
  });

  it('propagates 1σ before closing: perturbing the analysis gives the same spread', () => {
    const error = 0.3;
    const withSigma = suiteOf({ columns: Object.entries(basalt).map(([symbol, values]) => column({ symbol, values, sigma: symbol === 'LOI' ? [NaN] : [error] })) });
    const analytic = volatileFree(withSigma).column('SiO2').sigma![0];
    let variance = 0;
    for (const oxide of [...majors, 'FeOT']) {
      const up = volatileFree(suiteFrom({ ...basalt, [oxide]: [basalt[oxide as 'SiO2'][0] + error / 100] })).values('SiO2')[0];
      const down = volatileFree(suiteFrom({ ...basalt, [oxide]: [basalt[oxide as 'SiO2'][0] - error / 100] })).values('SiO2')[0];
      variance += ((up - down) * 50) ** 2;
    }
    expect(analytic).toBeCloseTo(Math.sqrt(variance), 5);
  });

  it('refuses an unknown way of iron', () => {
    expect(() => volatileFree(suiteFrom(basalt), { iron: 'FeO' as never })).toThrow('iron must be');
  });
});

describe('withMagnesiumNumber', () => {
  it('is molar, all iron as ferrous by default', () => {
    const mg = 8 / 40.304;
    const fe = 9 / 71.844;
    expect(withMagnesiumNumber(suiteFrom(basalt)).values('Mg-number')[0]).toBeCloseTo((100 * mg) / (mg + fe), 8);
  });

  it('needs MgO, and FeO when asked for the measured one', () => {
    expect(() => withMagnesiumNumber(suiteFrom({ SiO2: [50] }))).toThrow('no column "MgO"');
    expect(() => withMagnesiumNumber(suiteFrom(basalt), { iron: 'measured' })).toThrow('no column "FeO"');
  });
});
