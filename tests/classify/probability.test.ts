import { describe, expect, it } from 'vitest';
import { classify, column, findScheme, probabilityText, suiteOf, verdictOf, volatileFree, type Suite } from 'wedgework';
import { fieldMasses, normalBelow, owenT } from '../../kernel-lib/classify/gaussian';
import { flattenFields, outlineEdges } from '../../kernel-lib/classify/geometry';
import { seededRandom } from '../../kernel-lib/chemistry';
import { rock, suiteFrom, type Cells } from './suites';

const keys = ['tas', 'potassium-silica-1976', 'iron-enrichment', 'afm', 'alkalinity', 'alkali-lime', 'alumina-saturation'];

/** Rocks strewn over the silica range, close to boundaries of one scheme or another. */
function strewn(count: number, seed: number): Cells[] {
  const { uniform } = seededRandom(seed, 'test');
  return Array.from({ length: count }, () =>
    rock({
      SiO2: 47 + 26 * uniform(),
      TiO2: 0.3 + uniform(),
      FeOT: 3 + 6 * uniform(),
      MgO: 1 + 5 * uniform(),
      CaO: 3 + 5 * uniform(),
      Na2O: 2 + 3 * uniform(),
      K2O: 0.3 + 3 * uniform(),
    }),
  );
}

const sigma = { SiO2: 0.5, TiO2: 0.02, Al2O3: 0.2, FeOT: 0.15, MgO: 0.1, CaO: 0.1, Na2O: 0.12, K2O: 0.06, P2O5: 0.02, MnO: 0.01 };

describe('gaussian', () => {
  it('normal distribution function', () => {
    // Abramowitz & Stegun, table 26.1
    for (const [x, p] of [
      [0, 0.5],
      [1, 0.841344746068543],
      [1.96, 0.97500210485178],
      [-2, 0.0227501319481792],
      [3, 0.99865010196837],
    ])
      expect(normalBelow(x)).toBeCloseTo(p, 13);
    expect(normalBelow(-9)).toBeGreaterThan(0);
    expect([normalBelow(40), normalBelow(-40)]).toEqual([1, 0]);
  });

  it("Owen's function", () => {
    // Test values of Patefield & Tandy 2000 (Journal of Statistical Software 5), from memory
    for (const [h, a, value] of [
      [0.0625, 0.25, 3.8911930234701366e-2],
      [2, 0.5, 8.6250779855215071e-3],
      [1, 0.9999975, 6.6741808978228592e-2],
      [4.78125, 0.0625, 1.0632974804687463e-7],
    ]) {
      expect(owenT(h, a)).toBeCloseTo(value, 11);
    }
    // T(h, 1) = Φ(h)(1 − Φ(h))/2 and T(0, a) = atan(a)/2π (Owen 1956)
    for (const h of [0.1, 0.7, 1.5, 3]) expect(owenT(h, 1)).toBeCloseTo((normalBelow(h) * (1 - normalBelow(h))) / 2, 11);
    for (const a of [-3, 0.2, 5]) expect(owenT(0, a)).toBeCloseTo(Math.atan(a) / (2 * Math.PI), 11);
    // Beyond a = 1 it is found by a transformation: against the trapezium rule on the definition.
    for (const [h, a] of [
      [0.8, 2],
      [0.3, 5],
      [2, 3],
    ]) {
      const steps = 20000;
      let sum = 0;
      for (let i = 0; i <= steps; i++) {
        const square = 1 + ((a * i) / steps) ** 2;
        sum += ((i === 0 || i === steps ? 0.5 : 1) * Math.exp((-h * h * square) / 2)) / square;
      }
      expect(owenT(h, a)).toBeCloseTo((sum * a) / steps / (2 * Math.PI), 8);
    }
  });

  it('mass of half planes, quadrants and rectangles of a correlated normal', () => {
    const big = 1e4;
    const fields = [
      [
        [0, -big],
        [big, -big],
        [big, big],
        [0, big],
      ],
      [
        [0, 0],
        [big, 0],
        [big, big],
        [0, big],
      ],
      [
        [-1, -2],
        [1.5, -2],
        [1.5, 0.5],
        [-1, 0.5],
      ],
    ] as [number, number][][];
    const flat = flattenFields(fields.map((vertices) => outlineEdges(vertices, () => true)));
    const out = new Float64Array(3);
    for (const rho of [-0.9, 0, 0.5, 0.99]) {
      fieldMasses(flat, 0, 0, 1, rho, 1, out);
      expect(out[0]).toBeCloseTo(0.5, 10);
      // Sheppard 1898: a quadrant holds 1/4 + asin(ρ)/2π
      expect(out[1]).toBeCloseTo(0.25 + Math.asin(rho) / (2 * Math.PI), 9);
    }
    fieldMasses(flat, 0, 0, 1, 0, 1, out);
    expect(out[2]).toBeCloseTo((normalBelow(1.5) - normalBelow(-1)) * (normalBelow(0.5) - normalBelow(-2)), 10);
    fieldMasses(flat, 0.3, 0, 1, 0, 0, out);
    expect(out[0]).toBeCloseTo(normalBelow(0.3), 6);
  });
});

describe('probabilities', () => {
  const suite = suiteFrom(strewn(60, 4), { sigma });

  it('sum to one with what lies in no field, and the named field is the likeliest near no corner', () => {
    for (const { probability } of classify(suite, keys).schemes.values()) {
      for (let i = 0; i < suite.size; i++) {
        const sum = probability!.values.reduce((all, each) => all + each[i], probability!.none[i]);
        expect(sum).toBeCloseTo(1, 9);
      }
    }
  });

  it('analytic and sampled agree within sampling error', () => {
    const draws = 1500;
    const [analytic, sampled] = (['analytic', 'sampled'] as const).map((probability) => classify(suite, keys, { probability, draws, seed: 7 }));
    let worst = 0;
    let compared = 0;
    for (const key of keys) {
      const [a, b] = [analytic, sampled].map((each) => verdictOf(each, key).probability!);
      a.values.forEach((each, k) => {
        for (let i = 0; i < suite.size; i++) {
          if (each[i] < 0.01 || each[i] > 0.99) continue;
          worst = Math.max(worst, Math.abs(each[i] - b.values[k][i]) / Math.sqrt((each[i] * (1 - each[i])) / draws));
          compared++;
        }
      });
    }
    expect(compared).toBeGreaterThan(100);
    // Largest of some hundred normal deviates; first-order propagation adds a little.
    expect(worst).toBeLessThan(4.5);
  });

  it('are 50/50 on a boundary with symmetric errors', () => {
    const on = suiteOf({ columns: [column({ symbol: 'Zr', values: [28], sigma: [0] }), column({ symbol: 'Y', values: [10], sigma: [0.01] })] });
    const { values } = verdictOf(classify(on, 'affinity-zr-y'), 'affinity-zr-y').probability!;
    expect(values[0][0]).toBeCloseTo(0.5, 9);
    expect(values[1][0]).toBeCloseTo(0.5, 9);
    // SiO2 exactly 57 % of a sum of 100, alkalis far from other boundaries.
    const half = verdictOf(classify(suiteFrom([rock({ SiO2: 57, Na2O: 2.5, K2O: 0.5 })], { sigma: { SiO2: 0.3 } }), 'tas'), 'tas').probability!;
    const at = (symbol: string) => half.values[findScheme('tas').fields.findIndex((field) => field.symbol === symbol)][0];
    expect(at('O1')).toBeCloseTo(0.5, 6);
    expect(at('O2')).toBeCloseTo(0.5, 6);
  });

  it('respect closure: an error of silica alone moves the sum too', () => {
    // σ of recast silica = σ·(1 − SiO2/100): at 60 %, 0.4 of the analytical error; alkalis shrink as silica grows.
    const cells = rock({ SiO2: 60, Na2O: 3, K2O: 1.5 });
    const raw = suiteFrom([cells], { sigma: { SiO2: 1 } });
    const { values } = verdictOf(classify(raw, 'tas'), 'tas').probability!;
    const o1 = values[findScheme('tas').fields.findIndex(({ symbol }) => symbol === 'O1')][0];
    expect(o1).toBeCloseTo(normalBelow(-3 / 0.4), 9);
    const wide = verdictOf(classify(suiteFrom([rock({ SiO2: 57.5, Na2O: 2.5, K2O: 0.5 })], { sigma: { SiO2: 1 } }), 'tas'), 'tas').probability!;
    expect(wide.values[findScheme('tas').fields.findIndex(({ symbol }) => symbol === 'O1')][0]).toBeCloseTo(normalBelow(-0.5 / 0.425), 5);
  });

  it('are the same for the analysis and for the suite that was recast from it', () => {
    const rows = strewn(20, 9).map((row) => Object.fromEntries(Object.entries(row).map(([symbol, value]) => [symbol, value * 0.973])));
    const raw = suiteFrom(rows, { sigma });
    const dry = volatileFree(raw, { iron: 'measured' });
    for (const key of keys) {
      const [a, b] = [raw, dry].map((each) => verdictOf(classify(each, key), key).probability!);
      a.values.forEach((each, k) => each.forEach((share, i) => expect(b.values[k][i]).toBeCloseTo(share, 8)));
    }
  });

  it('calibration: of claims of about 70 %, some 70 % are true', () => {
    const truth = suiteFrom(strewn(4000, 21));
    const { normal } = seededRandom(5, 'test');
    const perturbed: Suite = suiteOf({
      columns: [...truth.columns.values()].map(({ symbol, values }) => {
        const s = sigma[symbol as keyof typeof sigma];
        return column({ symbol, values: values.map((value) => Math.max(0, value + s * normal())), sigma: values.map(() => s) });
      }),
    });
    const real = verdictOf(classify(truth, 'tas'), 'tas').field;
    const { field, probability } = verdictOf(classify(perturbed, 'tas'), 'tas');
    for (const [low, high] of [
      [0.55, 0.65],
      [0.65, 0.75],
      [0.75, 0.85],
      [0.85, 0.95],
    ]) {
      let [claims, right, claimed] = [0, 0, 0];
      field.forEach((k, i) => {
        const share = k < 0 ? NaN : probability!.values[k][i];
        if (!(share >= low && share < high)) return;
        claims++;
        claimed += share;
        if (k === real[i]) right++;
      });
      expect(claims).toBeGreaterThan(100);
      // Four standard errors of the count.
      expect(Math.abs(right / claims - claimed / claims)).toBeLessThan(4 * Math.sqrt(0.25 / claims));
    }
  });

  it('criteria are sampled', () => {
    const adakite = { ...rock({ SiO2: 64, FeOT: 4, MgO: 2, CaO: 5, Na2O: 4.5, K2O: 1.5 }), Sr: 800, Y: 18, Yb: 0.9 };
    const options = { probability: 'sampled', uncertainty: { Y: { absolute: 1 } }, draws: 2000 } as const;
    const { values } = verdictOf(classify(suiteFrom([adakite]), 'adakite-1990', options), 'adakite-1990').probability!;
    expect(Math.abs(values[0][0] - 0.5)).toBeLessThan(0.05);
    expect(values[0][0] + values[1][0]).toBeCloseTo(1, 12);
  });

  it('take 1σ by hand, say what was taken as exact, and need none', () => {
    const bare = suiteFrom([rock({ SiO2: 57.1, Na2O: 2.5, K2O: 0.5 })]);
    expect(verdictOf(classify(bare, 'tas'), 'tas').probability).toBeUndefined();
    const verdicts = classify(bare, 'tas', { uncertainty: { SiO2: { relative: 0.01 } } });
    expect(probabilityText(verdictOf(verdicts, 'tas'), 0)).toMatch(/^andesite 6\d %, basaltic andesite 3\d %$/);
    expect(verdicts.lineage.at(-1)!.detail).toMatchObject({ probability: 'analytic', uncertain: ['SiO2'] });
    expect(verdicts.lineage.at(-1)!.detail.takenAsExact).toContain('K2O');
    expect(verdictOf(classify(bare, 'tas', { probability: 'none', uncertainty: { SiO2: { relative: 0.01 } } }), 'tas').probability).toBeUndefined();
  });

  it('take 1σ of another form of an analyte, and refuse one of what is not there', () => {
    const measured = suiteFrom([{ ...rock({ SiO2: 55.6, MgO: 4, FeOT: 8 }), FeO: 6, Fe2O3: 2.22 }]);
    const withIron = classify(measured, 'iron-enrichment', { uncertainty: { FeOT: { relative: 0.05 } } });
    // The sum is made of measured FeO and Fe2O3: an error of total iron reaches them.
    expect(withIron.lineage.at(-1)!.detail.uncertain).toEqual(['FeOT', 'FeO', 'Fe2O3']);
    expect(verdictOf(withIron, 'iron-enrichment').probability!.values[0][0]).toBeGreaterThan(0.1);
    expect(() => classify(measured, 'tas', { uncertainty: { Si02: { relative: 0.01 } } })).toThrow(/holds no Si02/);
    expect(() => classify(measured, 'tas', { uncertainty: { Ti: { absolute: 3 } } })).toThrow(/holds TiO2, for which 3 would mean something else/);
  });

  it('the same seed gives the same numbers, another seed others', () => {
    const few = suiteFrom(strewn(5, 2), { sigma });
    const run = (seed: number) => [
      ...verdictOf(classify(few, 'potassium-silica', { probability: 'sampled', draws: 500, seed }), 'potassium-silica').probability!.values[1],
    ];
    expect(run(3)).toEqual(run(3));
    expect(run(3)).not.toEqual(run(4));
  });
});
