import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { classify, column, findScheme, schemes, suiteOf, verdictOf, volatileFree, type MimeBundle } from 'wedgework';
import { checkTiling } from '../../kernel-lib/classify/scheme-check';
import { rock, suiteFrom } from './suites';

const tas = findScheme('tas');

/** Silica and alkalis exactly where they are asked, as a suite that needs no recasting. */
const placed = (points: readonly (readonly [number, number])[]) =>
  suiteOf({
    columns: [
      column({ symbol: 'SiO2', values: points.map(([x]) => x) }),
      column({ symbol: 'Na2O', values: points.map(([, y]) => y) }),
      column({ symbol: 'K2O', values: points.map(() => 0) }),
      column({ symbol: 'SumAsGiven', values: points.map(() => 100), unit: 'wt%' }),
    ],
  });
const symbolAt = (x: number, y: number) => verdictOf(classify(placed([[x, y]]), 'tas'), 'tas').symbols[0];

describe('TAS', () => {
  it('has the 15 fields of Le Bas et al. 1986, each with a point inside', () => {
    const inside: Record<string, [number, number]> = {
      Pc: [43, 1],
      B: [48, 3],
      O1: [54, 3],
      O2: [60, 4],
      O3: [66, 5],
      R: [75, 8],
      S1: [48.7, 5.8],
      S2: [53, 7],
      S3: [58, 9],
      T: [65, 11],
      U1: [43.5, 6],
      U2: [49, 9.5],
      U3: [53, 11.7],
      Ph: [57, 14.5],
      F: [40, 8],
    };
    expect(Object.keys(inside).sort()).toEqual(tas.fields.map(({ symbol }) => symbol).sort());
    for (const [symbol, [x, y]] of Object.entries(inside)) expect(symbolAt(x, y)).toBe(symbol);
    for (const { symbol, label } of tas.fields) expect(symbolAt(label.x, label.y), `the name of ${symbol}`).toBe(symbol);
  });

  it('tiles: a random point of the frame has exactly one field', () => {
    const point = fc.tuple(fc.double({ min: 30, max: 99.99, noNaN: true }), fc.double({ min: 0, max: 15.99, noNaN: true }));
    fc.assert(
      fc.property(fc.array(point, { minLength: 200, maxLength: 200 }), (points) => {
        const { symbols } = verdictOf(classify(placed(points), 'tas'), 'tas');
        return points.every(([x, y], i) => {
          const inside = tas.fields.filter(({ vertices }) => evenOdd(vertices, x, y));
          return inside.length === 1 && symbols[i] === inside[0].symbol;
        });
      }),
      { numRuns: 40, seed: 3 },
    );
  });

  it('gives a point on a boundary to the field of higher silica, and on a level one to the upper field', () => {
    expect(symbolAt(52, 3)).toBe('O1');
    expect(symbolAt(51.999999, 3)).toBe('B');
    expect(symbolAt(57, 2)).toBe('O2');
    expect(symbolAt(63, 0)).toBe('O3');
    expect(symbolAt(41, 2)).toBe('Pc');
    expect(symbolAt(45, 3)).toBe('B');
    expect(symbolAt(43, 3)).toBe('U1');
    expect(symbolAt(48, 5)).toBe('S1');
    // (54.5, 5.45) lies on the line from (52, 5) to (57, 5.9): the field of higher silica is the one below it.
    expect(symbolAt(54.5, 5.45)).toBe('O1');
    for (const [x, y] of [
      [52, 5],
      [57, 5.9],
      [49.4, 7.3],
      [69, 8],
      [77, 0],
      [45, 9.4],
      [61, 13.5],
    ]) {
      const verdict = verdictOf(classify(placed([[x, y]]), 'tas'), 'tas');
      expect(verdict.field[0], `${x}, ${y}`).toBeGreaterThanOrEqual(0);
      expect(verdict.distance[0]).toBe(0);
    }
  });

  it('measures distance to real boundaries only', () => {
    const { distance } = verdictOf(
      classify(
        placed([
          [54, 0.1],
          [75, 15.9],
          [54, 4],
        ]),
        'tas',
      ),
      'tas',
    );
    expect(distance[0]).toBeCloseTo(2, 12);
    expect(distance[1]).toBeCloseTo(Math.hypot(75 - 69, 15.9 - 13), 12);
    expect(distance[2]).toBeCloseTo(Math.abs(5 + 0.18 * 2 - 4) / Math.hypot(0.18, 1), 12);
  });

  it('says why there is no field', () => {
    const suite = suiteFrom([rock({}), rock({ K2O: NaN }), rock({ FeOT: NaN }), rock({ SiO2: 20 })]);
    const { remarks, symbols } = verdictOf(classify(suite, 'tas'), 'tas');
    expect(symbols).toEqual(['O1', '', '', '']);
    expect(remarks[1]).toBe('needs K2O');
    expect(remarks[2]).toBe('needs FeOT');
    expect(remarks[3]).toMatch(/outside the range of the scheme: SiO₂ is not within 30–100/);
    expect(verdictOf(classify(suiteFrom([{ SiO2: 50 }]), 'tas'), 'tas').remarks[0]).toBe('needs Na2O, K2O');
    const below = suiteOf({
      columns: [...suiteFrom([rock({})]).columns.values()].map((each) =>
        each.symbol === 'K2O' ? column({ symbol: 'K2O', values: [NaN], states: Uint8Array.of(1), limits: Float64Array.of(0.01) }) : each,
      ),
    });
    expect(verdictOf(classify(below, 'tas'), 'tas').remarks[0]).toBe('K2O below detection');
  });
});

describe('lines', () => {
  const symbol = (key: string, cells: Record<string, number>) => verdictOf(classify(suiteFrom([rock(cells)]), key), key);
  it('divide by K2O and flag what lies beyond the published ends (Le Maitre et al. 2002: 48–68 % SiO2)', () => {
    // The lines at 60 % SiO2: 0.84 and 2.34 % K2O.
    expect(['low', 'medium', 'high'].map((_, k) => symbol('potassium-silica', { SiO2: 60, K2O: [0.8, 0.9, 2.4][k] }).symbols[0])).toEqual([
      'low',
      'medium',
      'high',
    ]);
    expect(symbol('potassium-silica', { SiO2: 60, K2O: 1 }).remarks[0]).toBe('');
    expect(symbol('potassium-silica', { SiO2: 72, K2O: 1, CaO: 2, FeOT: 2, MgO: 1 }).remarks[0]).toMatch(/beyond the published range .* 48–68/);
  });

  it('the shoshonite line ends at 63 % SiO2 (Peccerillo & Taylor 1976), the others at 70', () => {
    expect(symbol('potassium-silica-1976', { SiO2: 66, K2O: 4, CaO: 3, FeOT: 3, MgO: 1 }).remarks[0]).toMatch(/48–63/);
    expect(symbol('potassium-silica-1976', { SiO2: 66, K2O: 1, CaO: 3, FeOT: 3, MgO: 1 }).remarks[0]).toBe('');
  });

  it('the line of Miyashiro (1974): SiO2 = 6.4 FeO*/MgO + 42.8', () => {
    expect(symbol('iron-enrichment', { SiO2: 55.7, FeOT: 8, MgO: 4 }).symbols[0]).toBe('CA');
    expect(symbol('iron-enrichment', { SiO2: 55.5, FeOT: 8, MgO: 4 }).symbols[0]).toBe('TH');
  });

  it('AFM gives no answer beyond the ends of the curve (5 and 50 % MgO of the three: Irvine & Baragar 1971)', () => {
    expect(symbol('afm', { Na2O: 6, K2O: 3, FeOT: 2, MgO: 0.5 }).remarks[0]).toMatch(/MgO is not within 5–50/);
    expect(symbol('afm', { Na2O: 1, K2O: 0.5, FeOT: 8, MgO: 12 }).remarks[0]).toMatch(/MgO is not within 5–50/);
    expect(symbol('afm', { Na2O: 3, K2O: 1, FeOT: 10, MgO: 4 }).symbols[0]).toBe('TH');
    expect(symbol('afm', { Na2O: 4, K2O: 2, FeOT: 6, MgO: 4 }).symbols[0]).toBe('CA');
    expect(symbol('afm-kuno', { Na2O: 8, K2O: 3, FeOT: 4, MgO: 1 }).symbols[0]).not.toBe('');
  });

  it('the Frost et al. curves pass zero at the silica values of Peacock (51, 56, 61; within 0.03, as their authors say)', () => {
    const at = (SiO2: number) => verdictOf(classify(suiteFrom([rock({ SiO2, Na2O: 3, K2O: 2, CaO: 5 })]), 'alkali-lime'), 'alkali-lime').symbols[0];
    expect([at(50.9), at(51.1), at(55.9), at(56.1), at(60.9), at(61.1)]).toEqual(['A', 'AC', 'AC', 'CA', 'CA', 'C']);
  });
});

describe('thresholds, criteria, points', () => {
  it('bounds are inclusive below', () => {
    const { symbols, distance } = verdictOf(
      classify(suiteFrom([{ Zr: 27.9, Y: 10 }, { Zr: 28, Y: 10 }, { Zr: 45, Y: 10 }, { Y: 10 }]), 'affinity-zr-y'),
      'affinity-zr-y',
    );
    expect(symbols).toEqual(['TH', 'TR', 'CA', '']);
    expect(distance[0]).toBeCloseTo(Math.log10(28 / 27.9), 12);
  });

  it('criteria: met, failed with what fails, or not known', () => {
    // Defant & Drummond 1990: SiO2 ≥ 56, Al2O3 ≥ 15, Sr ≥ 400, Y ≤ 18, Yb ≤ 1.9 ppm.
    const adakite = { ...rock({ SiO2: 64, FeOT: 4, MgO: 2, CaO: 5, Na2O: 4.5, K2O: 1.5 }), Sr: 800, Y: 9, Yb: 0.9 };
    const verdict = verdictOf(
      classify(suiteFrom([adakite, { ...adakite, Y: 19 }, { ...adakite, Yb: NaN }, { ...adakite, Yb: NaN, Y: 19 }]), 'adakite-1990'),
      'adakite-1990',
    );
    expect(verdict.symbols).toEqual(['yes', 'no', '', 'no']);
    expect(verdict.remarks[1]).toBe('fails Y ≤ 18');
    expect(verdict.remarks[2]).toBe('needs Yb');
  });

  it('a below-detection value meets an upper limit above its own', () => {
    const cells = { ...rock({ SiO2: 64, FeOT: 4, MgO: 2, CaO: 5, Na2O: 4.5, K2O: 1.5 }), Sr: 800, Y: 9 };
    const base = [...suiteFrom([cells]).columns.values()];
    const withYb = (limit: number) =>
      suiteOf({ columns: [...base, column({ symbol: 'Yb', values: [NaN], states: Uint8Array.of(1), limits: Float64Array.of(limit) })] });
    expect(verdictOf(classify(withYb(1), 'adakite-1990'), 'adakite-1990').symbols[0]).toBe('yes');
    expect(verdictOf(classify(withYb(3), 'adakite-1990'), 'adakite-1990').symbols[0]).toBe('');
  });

  it('a scheme of points places without naming', () => {
    const { field, x, remarks } = verdictOf(classify(suiteFrom([{ Nb: 2, Yb: 2, Th: 1 }]), 'th-nb'), 'th-nb');
    expect(field[0]).toBe(-1);
    expect(x!.values[0]).toBe(1);
    expect(remarks[0]).toMatch(/no recovered boundary/);
    // Ratios of Sun & McDonough 1989 and the axis through N-MORB and OIB: log Th/Yb = −1.272 + 1.143 log Nb/Yb (computed from them).
    const [[xa, ya], [xb, yb]] = findScheme('th-nb').lines[0].points.map(([a, b]) => [Math.log10(a), Math.log10(b)]);
    expect((yb - ya) / (xb - xa)).toBeCloseTo(1.143, 3);
    expect(ya - ((yb - ya) / (xb - xa)) * xa).toBeCloseTo(-1.272, 2);
    const byName = Object.fromEntries(findScheme('ti-nb').points.map(({ name, at }) => [name, at]));
    expect(byName['N-MORB'][1]).toBeCloseTo(0.416, 3);
    expect(byName.OIB[1]).toBeCloseTo(1.328, 2);
    expect(byName['primitive mantle'][1]).toBeCloseTo(0.44, 3);
  });

  it('Ti/V 10, 20, 50, 100 (Shervais 1982)', () => {
    const at = (ratio: number) => verdictOf(classify(suiteFrom([{ Ti: 6000, V: 6000 / ratio }]), 'ti-v'), 'ti-v').symbols[0];
    expect([9, 11, 19, 21, 49, 51, 99, 101].map(at)).toEqual(['<10', '10-20', '10-20', '20-50', '20-50', '50-100', '50-100', '>100']);
  });

  it('granites: straight lines in logarithms (Pearce et al. 1984)', () => {
    const at = (key: string, cells: Record<string, number>) => verdictOf(classify(suiteFrom([cells]), key), key).symbols[0];
    expect(at('granite-rb-ynb', { Rb: 100, Y: 15, Nb: 5 })).toBe('VAG');
    expect(at('granite-rb-ynb', { Rb: 400, Y: 15, Nb: 5 })).toBe('syn-COLG');
    expect(at('granite-rb-ynb', { Rb: 150, Y: 80, Nb: 60 })).toBe('WPG');
    expect(at('granite-rb-ynb', { Rb: 5, Y: 90, Nb: 10 })).toBe('ORG');
    // The middle of the line from (2, 80) to (55, 300) on log axes.
    const [x, y] = [Math.sqrt(2 * 55), Math.sqrt(80 * 300)];
    expect(at('granite-rb-ynb', { Rb: y * 1.001, Y: x, Nb: 0 })).toBe('syn-COLG');
    expect(at('granite-rb-ynb', { Rb: y * 0.999, Y: x, Nb: 0 })).toBe('VAG');
    expect(at('granite-nb-y', { Y: 20, Nb: 10 })).toBe('VAG+syn-COLG');
    expect(at('granite-nb-y', { Y: 90, Nb: 100 })).toBe('WPG');
    expect(at('granite-nb-y', { Y: 200, Nb: 5 })).toBe('ORG');
  });

  it('alumina saturation (Shand 1943) in molar proportions', () => {
    const at = (cells: Record<string, number>) => verdictOf(classify(suiteFrom([cells]), 'alumina-saturation'), 'alumina-saturation').symbols[0];
    const moles = (al: number, ca: number, na: number) => ({ Al2O3: al * 101.961, CaO: ca * 56.077, Na2O: na * 61.979, K2O: 0 });
    expect(at(moles(1.05, 0.5, 0.5))).toBe('P');
    expect(at(moles(0.95, 0.5, 0.5))).toBe('M');
    expect(at(moles(0.95, 0.2, 1))).toBe('PA');
  });
});

describe('built-in schemes', () => {
  it('have fields with an area, inside their frame, that do not overlap', () => {
    for (const scheme of schemes.list().schemes) {
      checkTiling(scheme, (why) => {
        throw new Error(`${scheme.key}: ${why}`);
      });
    }
  });
});

describe('classify', () => {
  it('takes a suite that was recast before as it is', () => {
    const suite = suiteFrom(
      [{ ...rock({}), LOI: 3 }, rock({ SiO2: 61, MgO: 2 })].map((row) => Object.fromEntries(Object.entries(row).map(([k, v]) => [k, v * 0.97]))),
    );
    const [one, two] = [suite, volatileFree(suite, { iron: 'measured' })].map((each) => verdictOf(classify(each, 'tas'), 'tas'));
    two.distance.forEach((distance, i) => expect(distance).toBeCloseTo(one.distance[i], 10));
  });

  it('refuses what it does not know, and says what there is', () => {
    const suite = suiteFrom([rock({})]);
    expect(() => classify(suite, 'tass')).toThrow(/There is no scheme "tass". Known: .*tas/);
    expect(() => classify(suite, [])).toThrow(/name at least one scheme/);
    expect(() => classify(suite, 'tas', { iron: 'ferric' as never })).toThrow(/iron must be one of measured/);
    expect(() => classify(suite, 'tas', { probability: 'maybe' as never })).toThrow(/"analytic", "sampled" or "none"/);
    expect(() => classify(suite, 'tas', { draws: 1.5 })).toThrow(/draws/);
    expect(() => classify(suite, 'tas', { uncertainty: { SiO2: { relative: -1 } } })).toThrow(/uncertainty of SiO2/);
    expect(() => verdictOf(classify(suite, 'tas'), 'afm')).toThrow(/was not asked/);
  });

  it('records what it did, and shows a table with every text escaped', () => {
    const verdicts = classify(suiteFrom([rock({})], { labels: { sample: ['<b>A</b>'] } }), ['tas', 'afm']);
    const last = verdicts.lineage.at(-1)!;
    expect(last.what).toBe('classify');
    expect(last.sources).toEqual(expect.arrayContaining(['le_bas_1986', 'irvine_baragar_1971']));
    expect(last.tables).toEqual(['schemes/tas.json', 'schemes/afm.json']);
    expect(String((verdicts.toMimeBundle() as MimeBundle)['text/html'])).toContain('&lt;b&gt;A');
  });

  it('an empty suite gives empty verdicts', () => {
    expect(verdictOf(classify(suiteFrom([]), 'tas'), 'tas').symbols).toEqual([]);
  });

  it('every built-in scheme can be listed, and asked of a rock with everything', () => {
    const { schemes: all } = schemes.list();
    expect(all.length).toBeGreaterThan(38);
    const everything = {
      ...rock({}),
      FeO: 4,
      Fe2O3: 3,
      Ba: 300,
      Rb: 20,
      Sr: 450,
      Y: 16,
      Zr: 80,
      Nb: 3,
      La: 9,
      Yb: 1.7,
      Th: 2,
      V: 220,
      Ni: 40,
      Cr: 80,
      Ti: 5000,
      Sc: 30,
      '87Sr/86Sr': 0.7035,
    };
    const verdicts = classify(suiteFrom([everything]), all);
    for (const [key, { field, remarks }] of verdicts.schemes) if (field[0] < 0) expect(remarks[0], key).toMatch(/no recovered boundary|outside/);
    expect(String((schemes.list().toMimeBundle() as MimeBundle)['text/plain'])).toContain('from memory');
  });
});

/** Independent even-odd rule, for points off the boundaries. */
function evenOdd(vertices: readonly (readonly [number, number])[], x: number, y: number): boolean {
  let inside = false;
  for (let i = 0, j = vertices.length - 1; i < vertices.length; j = i++) {
    const [xi, yi] = vertices[i];
    const [xj, yj] = vertices[j];
    if (yi > y !== yj > y && x < ((xj - xi) * (y - yi)) / (yj - yi) + xi) inside = !inside;
  }
  return inside;
}
