import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import * as ww from 'wedgework';

interface RareEarthCase {
  readonly key: string;
  readonly inputs: {
    readonly REE_ppm: Readonly<Record<string, number>>;
    readonly chondrite: Readonly<Record<string, Readonly<Record<string, number>>>>;
  };
  readonly expected: Readonly<Record<string, Readonly<Record<string, number>> & { readonly normalised: Readonly<Record<string, number>> }>>;
  readonly source_citation: string;
}

const cases = JSON.parse(readFileSync(join(__dirname, '..', 'data', 'tracers', 'isotopes.json'), 'utf8')) as readonly RareEarthCase[];
const reservoirOf: Readonly<Record<string, string>> = { McDonoughSun1995_CI: 'chondrite-ci-1995', SunMcDonough1989_C1: 'chondrite-c1-1989' };

describe('rare earths with published analyses, normalised independently', () => {
  for (const { key, inputs, expected, source_citation: source } of cases.filter((each) => each.key.startsWith('ree-'))) {
    const suite = ww.suiteOf({ columns: Object.entries(inputs.REE_ppm).map(([symbol, value]) => ww.column({ symbol, values: [value] })) });
    for (const [set, answers] of Object.entries(expected)) {
      it(`${key}, ${set} (${source})`, () => {
        const reference = reservoirOf[set];
        const table = ww.pattern(suite, { reference });
        table.normalised.forEach(({ element, values }) => expect(values[0] / answers.normalised[element], element).toBeCloseTo(1, 8));
        const one = (expression: string, formulas = {}) => ww.ratio(suite, expression, { reference, formulas }).values[0];
        expect(one('(La/Yb)N') / answers.LaN_YbN).toBeCloseTo(1, 8);
        expect(one('(La/Sm)N') / answers.LaN_SmN).toBeCloseTo(1, 8);
        expect(one('(Gd/Yb)N') / answers.GdN_YbN).toBeCloseTo(1, 8);
        expect(one('(Dy/Yb)N') / answers.DyN_YbN).toBeCloseTo(1, 8);
        expect(one('Eu/Eu*') / answers.Eu_anom_geomean).toBeCloseTo(1, 8);
        expect(one('Eu/Eu*', { 'Eu/Eu*': 'arithmetic' }) / answers.Eu_anom_arith).toBeCloseTo(1, 8);
      });
    }
  }
});

describe('four real arcs run whole', () => {
  // GEOROC compilation "Convergent Margins", doi:10.25625/PVFZCE, CC BY-SA 4.0: xenoliths, altered rocks and odd values as in the literature
  for (const arc of ['kurile', 'aeolian', 'luzon', 'vanuatu']) {
    it(`${arc}: every sample accounted for, every finite value positive where it must be`, async () => {
      const { suite } = await ww.readAssays(join(__dirname, '..', 'data', 'assay', `${arc}-arc.csv`));
      const { columns, notDetermined } = ww.ratios(suite);
      expect(notDetermined).toEqual([]);
      for (const { symbol, values, states, limits } of columns.values()) {
        expect(values.length).toBe(suite.size);
        const odd = values.findIndex((value, i) => {
          const bounded = states[i] === ww.cellState.belowDetection || states[i] === ww.cellState.aboveRange;
          if (bounded) return !Number.isFinite(limits![i]);
          return Number.isFinite(value) ? value < 0 : states[i] !== ww.cellState.missing;
        });
        expect(odd, `${symbol}: a cell that is neither a positive number, a bound nor missing`).toBe(-1);
      }
      expect(ww.anomalies(suite).columns.size).toBe(ww.namedQuantities().length);
      expect(ww.pattern(suite).names).toHaveLength(suite.size);
      const shapes = ww.rareEarthShapes(suite);
      expect([...shapes.columns.get('misfit')!.values].filter(Number.isFinite).length).toBeGreaterThan(100);
      const { columns: isotopes } = ww.isotopes(suite);
      // εNd written out (CHUR 0.512638), mantle xenoliths with extreme ratios included
      const writtenOut = suite.values('143Nd/144Nd').map((ratio) => 1e4 * (ratio / 0.512638 - 1));
      const off = isotopes.get('epsilon-Nd')!.values.map((value, i) => (Number.isNaN(value) && Number.isNaN(writtenOut[i]) ? 0 : value - writtenOut[i]));
      expect(Math.max(...off.map(Math.abs))).toBeLessThan(1e-8);
      // All four are arcs: their basalts carry slab Ba, and hardly any slab Zr against the width of the array.
      const { groups, elements, shares } = ww.slabShares(suite.withLabels({ all: suite.samples.map(() => 'all') }), { group: 'all' });
      expect(groups[0].median[elements.indexOf('Ba')]).toBeGreaterThan(80);
      expect(Math.abs(groups[0].median[elements.indexOf('Zr')])).toBeLessThan(2 * groups[0].sigma[elements.indexOf('Zr')]);
      for (const { values } of shares.values()) expect(values.some((value) => value > 100)).toBe(false);
    });
  }
});
