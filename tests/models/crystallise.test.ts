import fc from 'fast-check';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { column, crystallise, evaluate, MissingCoefficientsError, suiteOf } from 'wedgework';

const cases = JSON.parse(readFileSync(join(__dirname, '../data/models/closed-forms.json'), 'utf8')) as {
  key: string;
  inputs: any;
  expected: any;
  computed_independently?: any;
}[];
const byKey = (key: string) => cases.find((each) => each.key === key)!;
const bulk = (D: number, element = 'Ba') => ({ assemblage: { bulk: 1 }, coefficients: { bulk: { [element]: D } } });
const last = (values: Float64Array) => values[values.length - 1];

describe('crystallise', () => {
  it('agrees with the closed forms over a grid of D and F', () => {
    // Computed independently at 40 digits from Neumann 1954, Gast 1968, Shaw 1970.
    for (const row of byKey('model-grid-rayleigh-batch').expected) {
      const rayleigh = crystallise({ from: { Ba: 100 }, ...bulk(row.D), downTo: row.F, steps: 3 });
      const equilibrium = crystallise({ from: { Ba: 100 }, ...bulk(row.D), downTo: row.F, steps: 3, mode: 'equilibrium' });
      expect(last(rayleigh.liquid.values('Ba')) / 100 / row.rayleigh).toBeCloseTo(1, 10);
      expect(last(rayleigh.solid!.values('Ba')) / 100 / row.inst_cumulate).toBeCloseTo(1, 10);
      expect(last(rayleigh.cumulate!.values('Ba')) / 100 / row.mean_cumulate).toBeCloseTo(1, 10);
      expect(last(equilibrium.liquid.values('Ba')) / 100 / row.equilibrium).toBeCloseTo(1, 10);
    }
  });

  it('gives the printed liquid and cumulate of a worked example', () => {
    // Imperial College London, High-Temperature Geochemistry practicals: printed to 3 significant figures.
    const { inputs, expected } = byKey('model-imperial-rayleigh-35pct');
    const of = (short: 'ol' | 'plag') => Object.fromEntries(['Nd', 'Sm', 'Ni'].map((element) => [element, inputs.KD[element][short]]));
    const path = crystallise({
      from: inputs.parent_unrounded,
      assemblage: { olivine: inputs.crystals_wt.ol, plagioclase: inputs.crystals_wt.plag },
      coefficients: { olivine: of('ol'), plagioclase: of('plag') },
      downTo: inputs.F_melt_remaining,
    });
    for (const element of ['Nd', 'Sm', 'Ni']) {
      expect(Number(last(path.liquid.values(element)).toPrecision(3))).toBe(expected.residual_melt_ppm[element]);
      expect(Number(last(path.cumulate!.values(element)).toPrecision(3))).toBe(expected.mean_solid_ppm[element]);
    }
  });

  it('shows every coefficient with mineral, melt type, source and standing', () => {
    const path = crystallise({
      from: { Sr: 520, Ba: 210, Ni: 90 },
      assemblage: { olivine: 0.15, clinopyroxene: 0.35, plagioclase: 0.5 },
      downTo: 0.4,
    });
    expect(path.coefficients).toHaveLength(9);
    expect(path.coefficients.find(({ mineral, analyte }) => mineral === 'plagioclase' && analyte === 'Sr')).toMatchObject({
      meltType: 'basalt',
      value: 1.83,
      source: 'arth_1976',
      standing: 'from memory', // Arth 1976
    });
    expect(path.lineage.at(-1)!.sources).toContain('arth_1976');
    expect(String(path.toMimeBundle instanceof Function && (path.toMimeBundle() as any)['text/plain'])).toMatch(/Arth 1976, from memory/);
  });

  it('lets any expression work on the liquid', () => {
    const path = crystallise({
      from: { Ba: 210, Th: 2.1 },
      ...{ assemblage: { bulk: 1 }, coefficients: { bulk: { Ba: 0.2, Th: 0.2 } } },
      downTo: 0.3,
    });
    for (const ratio of evaluate(path.liquid, 'Ba/Th').values) expect(ratio).toBeCloseTo(100, 9);
  });

  it('stops with the list of what is missing and where to supply it', () => {
    const run = () => crystallise({ from: { Ba: 210, Cs: 1.2, Sr: 500 }, assemblage: { olivine: 0.2, plagioclase: 0.8 }, downTo: 0.5 });
    expect(run).toThrow(MissingCoefficientsError);
    try {
      run();
    } catch (error) {
      const { missing, covered, message } = error as MissingCoefficientsError;
      expect(missing.map(({ mineral, analyte }) => `${mineral} ${analyte}`)).toEqual(['olivine Cs', 'plagioclase Cs']);
      expect(covered).toEqual(['Ba', 'Sr']);
      expect(message).toMatch(/options\.coefficients/);
    }
    const covered = crystallise({
      from: { Ba: 210, Cs: 1.2, Sr: 500 },
      assemblage: { olivine: 0.2, plagioclase: 0.8 },
      downTo: 0.5,
      analytes: 'covered',
    });
    expect(covered.liquid.has('Cs')).toBe(false);
    expect(covered.notes.join(' ')).toMatch(/Cs/);
  });

  it('keeps a closed system’s isotope ratios', () => {
    const path = crystallise({ from: { Sr: 400, '87Sr/86Sr': 0.7036 }, ...bulk(1.4, 'Sr'), downTo: 0.5 });
    expect(new Set(path.liquid.values('87Sr/86Sr'))).toEqual(new Set([0.7036]));
  });

  it('refuses bad arguments by name', () => {
    const good = { from: { Ba: 10 }, ...bulk(0.1), downTo: 0.5 };
    expect(() => crystallise({ ...good, downTo: 1.2 })).toThrow(/downTo is 1.2/);
    expect(() => crystallise({ ...good, mode: 'batch' as never })).toThrow(/mode must be/);
    expect(() => crystallise({ ...good, assemblage: { olivine: 0.2, plagioclase: 0.3 } })).toThrow(/sum to 0.5/);
    expect(() => crystallise({ ...good, assemblage: { unobtainium: 1 } })).toThrow(/no coefficients for "unobtainium"/);
    expect(() => crystallise({ ...good, meltType: 'komatiite' as never })).toThrow(/meltType "komatiite"/);
    expect(() => crystallise({ ...good, from: suiteOf({ columns: [column({ symbol: 'Ba', values: [1, 2] })] }) })).toThrow(/2 rows/);
    expect(() => crystallise({ ...good, from: { SiO2: 50 } })).toThrow(/no element in ppm/);
    expect(() => crystallise({ ...good, steps: 0 })).toThrow(/steps is 0/);
    expect(() => crystallise({ ...good, coefficients: { bulk: { Ba: -1 } } })).toThrow(/bulk\.Ba is -1/);
  });

  const amount = fc.double({ min: 1e-3, max: 1e4, noNaN: true });
  const coefficient = fc.double({ min: 0, max: 20, noNaN: true });
  const liquidLeft = fc.double({ min: 0.01, max: 0.999, noNaN: true });

  it('conserves mass at every step, starts at the parent, and does nothing at D = 1', () => {
    fc.assert(
      fc.property(amount, coefficient, liquidLeft, fc.constantFrom('rayleigh' as const, 'equilibrium' as const), (start, D, downTo, mode) => {
        const path = crystallise({ from: { Ba: start }, ...bulk(D), downTo, mode, steps: 7 });
        const [liquid, cumulate] = [path.liquid.values('Ba'), path.cumulate!.values('Ba')];
        path.F.forEach((F, i) => expect((F * liquid[i] + (1 - F) * cumulate[i]) / start).toBeCloseTo(1, 9));
        expect(liquid[0]).toBeCloseTo(start, 9);
        const same = crystallise({ from: { Ba: start }, ...bulk(1), downTo, mode, steps: 3 }).liquid.values('Ba');
        same.forEach((value) => expect(value / start).toBeCloseTo(1, 12));
      }),
      { seed: 6, numRuns: 200 },
    );
  });

  it('agrees with numerical integration of the mass balance', () => {
    // Rayleigh: an increment of mass dF leaves with D times the liquid's concentration; the crystals so far are what left.
    for (const D of [0.05, 0.8, 1.7, 6]) {
      const steps = 200_000;
      let [mass, left] = [1, 0];
      for (let i = 0; i < steps; i++) {
        const F = 1 - (0.6 * i) / steps;
        const out = (0.6 / steps) * D * (mass / F) * (1 - (0.3 / steps) * (D - 1) * (1 / F));
        mass -= out;
        left += out;
      }
      const path = crystallise({ from: { Ba: 1 }, ...bulk(D), downTo: 0.4, steps: 1 });
      expect(last(path.liquid.values('Ba')) / (mass / 0.4)).toBeCloseTo(1, 4);
      expect(last(path.cumulate!.values('Ba')) / (left / 0.6)).toBeCloseTo(1, 4);
    }
  });

  it('agrees between Rayleigh and equilibrium to first order as F goes to 1', () => {
    for (const D of [0, 0.1, 0.5, 2, 8]) {
      const gap = (removed: number) => {
        const end = (mode: 'rayleigh' | 'equilibrium') =>
          last(crystallise({ from: { Ba: 1 }, ...bulk(D), downTo: 1 - removed, mode, steps: 1 }).liquid.values('Ba'));
        return Math.abs(end('rayleigh') - end('equilibrium'));
      };
      // A difference of second order falls fourfold when the crystallised fraction is halved.
      if (D > 0) expect(gap(0.002) / gap(0.001)).toBeCloseTo(4, 1);
      expect(gap(0.001)).toBeLessThan(1e-4);
    }
  });
});
