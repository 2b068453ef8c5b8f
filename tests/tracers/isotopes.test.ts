import { describe, expect, it } from 'vitest';
import * as ww from 'wedgework';

const suiteWith = (columns: Readonly<Record<string, ArrayLike<number>>>) =>
  ww.suiteOf({ columns: Object.entries(columns).map(([symbol, values]) => ww.column({ symbol, values })) });

describe('isotopes', () => {
  it('gives the printed εNd of a 3.2 Ga rock', () => {
    // Imperial College London, practicals in an open book: initial 0.508713, CHUR 0.512638 and 0.1967, decay 6.54e-12: CHUR 0.508478, εNd 4.62
    const suite = suiteWith({ '143Nd/144Nd': [0.508713], '147Sm/144Nd': [0] });
    const table = ww.isotopes(suite, { age: 3200, chur: { neodymium: 'chur-1980' } });
    expect(table.columns.get('143Nd/144Nd(i)')!.values[0]).toBe(0.508713);
    expect(table.columns.get('epsilon-Nd')!.values[0]).toBeCloseTo(4.62, 2);
    expect(table.columns.get('epsilon-Nd')!.values[0]).toBeCloseTo(4.6199655316176, 9); // computed independently, unrounded CHUR
  });

  it('gives present-day εNd of a mixing series', () => {
    // Langmuir et al. 1978 mixture, εNd against 0.512638, computed independently
    const { columns } = ww.isotopes(suiteWith({ '143Nd/144Nd': [0.51305, 0.512634375, 0.5121] }));
    const expected = [8.0368603185874, -0.070712666638056, -10.494735076214];
    expected.forEach((value, i) => expect(columns.get('epsilon-Nd')!.values[i]).toBeCloseTo(value, 8));
  });

  it('is nil in CHUR at every age, and takes either CHUR', () => {
    for (const age of [0, 50, 2500]) {
      const suite = suiteWith({ '143Nd/144Nd': [0.51263], '147Sm/144Nd': [0.196], '176Hf/177Hf': [0.282785], '176Lu/177Hf': [0.0336] });
      const { columns } = ww.isotopes(suite, { age, chur: { neodymium: 'chur-2008' } }); // Bouvier et al. 2008
      expect(columns.get('epsilon-Nd')!.values[0]).toBeCloseTo(0, 9);
      expect(columns.get('epsilon-Hf')!.values[0]).toBeCloseTo(0, 9);
    }
  });

  it('takes the parent ratio from concentrations where it was not measured', () => {
    // Sm/Nd 0.3253 by weight is 147Sm/144Nd 0.1967 (CHUR, Jacobsen & Wasserburg 1980: 0.1967 to four digits)
    const suite = suiteWith({ '143Nd/144Nd': [0.512638], Sm: [0.3253], Nd: [1], '87Sr/86Sr': [0.7045], Rb: [10], Sr: [300] });
    const { columns } = ww.isotopes(suite, { age: 1000 });
    expect(columns.get('epsilon-Nd')!.values[0]).toBeCloseTo(0, 1);
    // 87Rb/86Sr = 0.03333·(2.69295 + 0.28304·0.7045) = 0.09641; e^(λt) − 1 = 0.014301 with 1.42e-11
    expect(columns.get('87Sr/86Sr(i)')!.values[0]).toBeCloseTo(0.7045 - 0.09641 * 0.014301, 6);
    const newer = ww.isotopes(suite, { age: 1000, decay: { '87Sr/86Sr': 'lambda-87Rb-v15' } }).columns.get('87Sr/86Sr(i)')!.values[0];
    expect(newer).toBeGreaterThan(columns.get('87Sr/86Sr(i)')!.values[0]);
  });

  it('measures Pb against the Northern Hemisphere Reference Line (Hart 1984, constants from memory)', () => {
    const on = (base: number, slope: number, intercept: number) => slope * base + intercept;
    const base = [18, 19];
    const suite = suiteWith({
      '206Pb/204Pb': base,
      '207Pb/204Pb': [on(18, 0.1084, 13.491), on(19, 0.1084, 13.491) + 0.05],
      '208Pb/204Pb': base.map((x) => on(x, 1.209, 15.627) + 0.5),
    });
    const { columns } = ww.isotopes(suite);
    expect([...columns.get('delta-7/4')!.values].map((value) => Math.round(1e6 * value) / 1e6)).toEqual([0, 5]);
    for (const value of columns.get('delta-8/4')!.values) expect(value).toBeCloseTo(50, 6);
  });

  it('carries 1σ, says what is lacking, and refuses nonsense', () => {
    const suite = ww.suiteOf({ columns: [ww.column({ symbol: '143Nd/144Nd', values: [0.513], sigma: [0.00001] })] });
    const table = ww.isotopes(suite);
    expect(table.columns.get('epsilon-Nd')!.sigma![0]).toBeCloseTo(0.195, 3); // 10⁴ · 10⁻⁵ / 0.512638
    expect(table.notDetermined.map(({ name }) => name)).toEqual(['87Sr/86Sr(i)', '176Hf/177Hf(i)', 'epsilon-Hf', 'delta-7/4', 'delta-8/4']);
    expect(ww.isotopes(suite, { age: 10 }).notDetermined.find(({ name }) => name === 'epsilon-Nd')?.because).toMatch(/147Sm\/144Nd, or Sm and Nd/);
    expect(() => ww.isotopes(suite, { age: -1 })).toThrow(/age is -1/);
    expect(() => ww.isotopes(suite, { age: 'years' })).toThrow(/no column "years"/);
    expect(() => ww.isotopes(suite, { chur: { neodymium: 'n-morb-1989' } })).toThrow(/choose another reservoir/);
    expect(() => ww.isotopes(suite, { decay: { '143Nd/144Nd': 'nhrl-207-slope' } })).toThrow(/not a decay constant/);
    expect(ww.withIsotopes(suite).has('epsilon-Nd')).toBe(true);
  });
});

describe('unmix', () => {
  const A = { Sr: 600, '87Sr/86Sr': 0.7033, Nd: 15, '143Nd/144Nd': 0.51305 };
  const B = { Sr: 150, '87Sr/86Sr': 0.715, Nd: 35, '143Nd/144Nd': 0.5121 };
  // fraction of B, 87Sr/86Sr, 143Nd/144Nd: Langmuir et al. 1978 mixing, computed independently
  const series = [
    [0, 0.7033, 0.51305],
    [0.1, 0.70361621621622, 0.51285441176471],
    [0.25, 0.7042, 0.512634375],
    [0.5, 0.70564, 0.512385],
    [0.75, 0.70831428571429, 0.51221875],
    [0.9, 0.7114, 0.51214318181818],
    [1, 0.715, 0.5121],
  ];
  const suite = suiteWith({ '87Sr/86Sr': series.map((row) => row[1]), '143Nd/144Nd': series.map((row) => row[2]) });
  const two = [
    { name: 'A', composition: A },
    { name: 'B', composition: B },
  ];

  it('gives back the fractions of a published kind of mixture', async () => {
    const result = await ww.unmix(suite, two, { draws: 50 });
    series.forEach(([fraction], i) => {
      expect(result.shares.get('B')![i]).toBeCloseTo(fraction, 4);
      expect(result.shares.get('A')![i] + result.shares.get('B')![i]).toBeCloseTo(1, 12);
      expect(result.chiSquare[i]).toBeLessThan(1e-3);
      expect(result.low.get('B')![i]).toBeLessThanOrEqual(fraction + 1e-4);
      expect(result.high.get('B')![i]).toBeGreaterThanOrEqual(fraction - 1e-4);
    });
  });

  it('solves three components, and one ratio for two', async () => {
    const C = { Sr: 300, '87Sr/86Sr': 0.7045, Nd: 20, '143Nd/144Nd': 0.5129, Pb: 5, '206Pb/204Pb': 19.5 };
    const [f, g] = [0.3, 0.2];
    const parts = [
      [1 - f - g, { ...A, Pb: 1, '206Pb/204Pb': 18 }],
      [f, { ...B, Pb: 20, '206Pb/204Pb': 18.9 }],
      [g, C],
    ] as const;
    const mixed = (ratio: keyof typeof C, element: keyof typeof C) =>
      parts.reduce((sum, [share, part]) => sum + share * part[element] * part[ratio], 0) /
      parts.reduce((sum, [share, part]) => sum + share * part[element], 0);
    const rock = suiteWith({
      '87Sr/86Sr': [mixed('87Sr/86Sr', 'Sr')],
      '143Nd/144Nd': [mixed('143Nd/144Nd', 'Nd')],
      '206Pb/204Pb': [mixed('206Pb/204Pb', 'Pb')],
    });
    const three = await ww.unmix(
      rock,
      parts.map(([, composition], j) => ({ name: 'ABC'[j], composition })),
      { draws: 50 },
    );
    expect(three.shares.get('B')![0]).toBeCloseTo(f, 3);
    expect(three.shares.get('C')![0]).toBeCloseTo(g, 3);
    const one = await ww.unmix(suite, two, { draws: 50, ratios: ['87Sr/86Sr'] });
    expect(one.shares.get('B')![3]).toBeCloseTo(0.5, 4);
  });

  it('recovers sediment planted in mantle, within its interval, with end members that are not exactly known', async () => {
    const [mantle, sediment] = ['depleted-mantle-2005', 'subducting-sediment-1998'].map((key) => ww.referenceComposition(key));
    const part = 0.01;
    const at = (ratio: string, element: string) => {
      const [m, s] = [(1 - part) * mantle.valueOf(element)!, part * sediment.valueOf(element)!];
      return (m * mantle.valueOf(ratio)! + s * sediment.valueOf(ratio)!) / (m + s);
    };
    const rock = suiteWith({
      '87Sr/86Sr': [at('87Sr/86Sr', 'Sr')],
      '143Nd/144Nd': [at('143Nd/144Nd', 'Nd')],
      '206Pb/204Pb': [at('206Pb/204Pb', 'Pb')],
    });
    const known = { name: 'mantle', composition: 'depleted-mantle-2005' };
    const exact = await ww.unmix(rock, [known, { name: 'sediment', composition: 'subducting-sediment-1998' }]);
    expect(exact.shares.get('sediment')![0]).toBeCloseTo(part, 4);
    const vague = await ww.unmix(rock, [known, { name: 'sediment', composition: 'subducting-sediment-1998', sigma: { Nd: 5, Sr: 60, Pb: 4 } }]);
    const width = (of: ww.MixingShares) => of.high.get('sediment')![0] - of.low.get('sediment')![0];
    expect(width(vague)).toBeGreaterThan(2 * width(exact));
    expect(vague.lineage[0].sources).toContain('plank_langmuir_1998');
  });

  it('shows a sample that is no such mixture, and refuses what cannot be solved', async () => {
    const odd = await ww.unmix(suiteWith({ '87Sr/86Sr': [0.71], '143Nd/144Nd': [0.513] }), two, { draws: 50 });
    expect(odd.chiSquare[0]).toBeGreaterThan(100);
    await expect(ww.unmix(suite, [two[0]])).rejects.toThrow(/two to four/);
    await expect(ww.unmix(suite, [...two, { name: 'C', composition: { Sr: 1, '87Sr/86Sr': 0.71 } }])).rejects.toThrow(/need 2 isotope ratios/);
    await expect(ww.unmix(suite, [two[0], { ...two[1], name: 'A' }])).rejects.toThrow(/name of its own/);
    await expect(ww.unmix(suite, [two[0], { name: 'x', composition: { '87Sr/86Sr': 0.71 } }], { ratios: ['87Sr/86Sr'] })).rejects.toThrow(
      /"x" has no Sr/,
    );
    await expect(ww.unmix(suite, two, { ratios: ['Sr'] })).rejects.toThrow(/not an isotope ratio/);
  });
});
