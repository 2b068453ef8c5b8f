import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  apatiteSolubility,
  crystallise,
  MissingCoefficientsError,
  solidSolution,
  wholeRockPath,
  zirconSolubility,
  type WholeRockOptions,
} from 'wedgework';
import { zirconM } from '../../kernel-lib/models/saturation';

const basalt = {
  SiO2: 50.8,
  TiO2: 1.0,
  Al2O3: 17.2,
  FeOT: 9.4,
  MnO: 0.17,
  MgO: 7.2,
  CaO: 10.6,
  Na2O: 2.7,
  K2O: 0.7,
  P2O5: 0.23,
  Sr: 450,
  Ba: 220,
  Rb: 14,
  Zr: 70,
  Y: 20,
};
const oxides = ['SiO2', 'TiO2', 'Al2O3', 'FeOT', 'MnO', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5'];
const compositions = { olivine: 'Fo80', clinopyroxene: 'Wo42En46Fs12', plagioclase: 'An75', magnetite: 'Usp30' };
const gabbro = { olivine: 0.2, clinopyroxene: 0.3, plagioclase: 0.5 };
const plain: WholeRockOptions = {
  from: basalt,
  assemblage: gabbro,
  downTo: 0.6,
  compositions,
  meltType: 'basalt',
  analytes: ['Sr', 'Ba', 'Rb', 'Zr', 'Y'],
};
const own = (value: number) =>
  Object.fromEntries(
    [...Object.keys(compositions), 'apatite', 'zircon'].map((mineral) => [mineral, { Sr: value, Ba: value, Rb: value, Zr: value, Y: value }]),
  );
const last = (values: Float64Array) => values[values.length - 1];

describe('wholeRockPath', () => {
  it('subtracts minerals exactly and carries traces as Rayleigh does', () => {
    const path = wholeRockPath(plain);
    const sum = oxides.reduce((total, oxide) => total + (basalt as Record<string, number>)[oxide], 0);
    for (const oxide of oxides) {
      const removed = (['olivine', 'clinopyroxene', 'plagioclase'] as const).reduce((total, mineral) => {
        const composition = solidSolution(mineral, compositions[mineral])!;
        return total + gabbro[mineral] * (composition.get(oxide === 'FeOT' ? 'FeO' : oxide) ?? 0);
      }, 0);
      const parent = (100 * (basalt as Record<string, number>)[oxide]) / sum;
      // Bryan et al. 1969: the same balance, parent = F·daughter + Σ minerals
      expect(last(path.liquid.values(oxide)), oxide).toBeCloseTo((parent - 0.4 * removed) / 0.6, 9);
    }
    const traces = crystallise({ from: { Sr: 450, Ba: 220 }, assemblage: gabbro, downTo: 0.6, analytes: ['Sr', 'Ba'] });
    expect(last(path.liquid.values('Sr')) / last(traces.liquid.values('Sr'))).toBeCloseTo(1, 10);
    expect(last(path.liquid.values('Ba')) / last(traces.liquid.values('Ba'))).toBeCloseTo(1, 10);
  });

  it('agrees with numerical integration where the coefficients change with silica', () => {
    const stages = [
      { assemblage: gabbro, downTo: 0.7 },
      { assemblage: { clinopyroxene: 0.3, plagioclase: 0.6, magnetite: 0.1 }, downTo: 0.35 },
    ];
    const path = wholeRockPath({ from: basalt, stages, compositions, borrow: 'nearest', analytes: ['Sr', 'Zr'], steps: 400 });
    const sets = path.liquid.label('coefficient set');
    expect(sets[0]).toBe('basalt');
    expect(new Set(sets).size).toBeGreaterThan(1);
    expect(path.notes.join(' ')).toMatch(/Coefficient sets in force: basalt from F = 1, andesite from F = 0\.\d+/);
    const value = (mineral: string, analyte: string, set: string) =>
      path.coefficients.filter((each) => each.mineral === mineral && each.analyte === analyte).find((each) => each.meltType === set)?.value;
    // Euler steps on the element's mass, 50 to a step of the path.
    for (const analyte of ['Sr', 'Zr'] as const) {
      let mass = basalt[analyte];
      for (let i = 0; i < path.F.length - 1; i++) {
        const { assemblage } = path.F[i] > 0.7 + 1e-9 ? stages[0] : stages[1];
        let D = 0;
        for (const [mineral, share] of Object.entries(assemblage))
          D +=
            share *
            (value(mineral, analyte, sets[i]) ??
              value(mineral, analyte, 'basalt') ??
              value(mineral, analyte, 'andesite') ??
              value(mineral, analyte, 'dacite'))!;
        const dF = (path.F[i] - path.F[i + 1]) / 50;
        for (let s = 0; s < 50; s++) mass -= (dF * D * mass) / (path.F[i] - s * dF);
      }
      expect(last(path.liquid.values(analyte)) / (mass / last(path.F))).toBeCloseTo(1, 3);
    }
  });

  it('conserves mass at every step, stages, apatite, zircon and exchange at work', () => {
    const conditions = { temperature: { from: 1150, to: 760 }, pressure: 2000, water: 2, redox: 0.2 } as const;
    fc.assert(
      fc.property(
        fc.double({ min: 0.2, max: 0.6, noNaN: true }),
        fc.double({ min: 0, max: 3, noNaN: true }),
        fc.double({ min: 0.05, max: 0.3, noNaN: true }),
        (downTo, D, olivine) => {
          const path = wholeRockPath({
            from: { ...basalt, Zr: 160, P2O5: 0.4 },
            compositions: { ...compositions, olivine: 'exchange' },
            coefficients: own(D),
            conditions,
            accessories: { apatite: true, zircon: true },
            analytes: ['Sr', 'Zr'],
            steps: 60,
            stages: [
              { assemblage: { olivine, clinopyroxene: 0.4 - olivine, plagioclase: 0.6 }, downTo: (1 + downTo) / 2 },
              { assemblage: { clinopyroxene: 0.3, plagioclase: 0.6, magnetite: 0.1 }, downTo },
            ],
          });
          for (const symbol of [...oxides, 'Sr', 'Zr']) {
            const [liquid, solid, cumulate] = [path.liquid.values(symbol), path.solid!.values(symbol), path.cumulate!.values(symbol)];
            let inCrystals = 0;
            for (let i = 1; i < path.F.length; i++) {
              inCrystals += (path.F[i - 1] - path.F[i]) * solid[i - 1];
              expect(Math.abs(path.F[i] * liquid[i] + inCrystals - liquid[0])).toBeLessThan(1e-9 * (1 + liquid[0]));
              expect(Math.abs((1 - path.F[i]) * cumulate[i] - inCrystals)).toBeLessThan(1e-9 * (1 + liquid[0]));
              expect(liquid[i]).toBeGreaterThanOrEqual(0);
            }
          }
          for (let i = 0; i < path.F.length; i++) expect(oxides.reduce((sum, oxide) => sum + path.liquid.values(oxide)[i], 0)).toBeCloseTo(100, 8);
        },
      ),
      { seed: 6, numRuns: 15 },
    );
  });

  it('keeps olivine in exchange at every step', () => {
    const path = wholeRockPath({
      ...plain,
      assemblage: { olivine: 1 },
      downTo: 0.9,
      compositions: { olivine: 'exchange' },
      conditions: { temperature: 1150, redox: 0.15 },
      analytes: [],
    });
    const [Fo, MgO, FeO] = ['Fo', 'MgO', 'FeOT'].map((symbol) => path.liquid.values(symbol));
    Fo.forEach((value, i) => {
      const Kd = ((100 - value) / value / ((FeO[i] * 0.85) / 71.844)) * (MgO[i] / 40.304);
      expect(Kd).toBeCloseTo(0.3, 6); // Roeder & Emslie 1970
      if (i > 0) expect(value).toBeLessThan(Fo[i - 1]);
    });
    expect(path.solid!.values('MgO')[0]).toBeCloseTo(solidSolution('olivine', `Fo${Fo[0]}`)!.get('MgO')!, 6);
  });

  it('adds apatite and zircon at saturation, and keeps the liquid there', () => {
    const from = { ...basalt, Zr: 150, P2O5: 0.5 };
    const path = wholeRockPath({
      ...plain,
      from,
      downTo: 0.15,
      assemblage: { clinopyroxene: 0.3, plagioclase: 0.6, magnetite: 0.1 },
      coefficients: own(0.1),
      analytes: ['Zr', 'Sr'],
      accessories: { apatite: true, zircon: 'boehnke-2013' },
      conditions: { temperature: { from: 1100, to: 720 }, pressure: 1000 },
      steps: 200,
    });
    expect(path.notes.join(' ')).toMatch(/Apatite joins at F = 0\.\d+.*Zircon joins at F = 0\.\d+/);
    const [silica, phosphorus, zirconium, temperature] = ['SiO2', 'P2O5', 'Zr', 'temperature'].map((symbol) => path.liquid.values(symbol));
    const i = path.F.length - 1;
    expect(path.liquid.label('assemblage')[i]).toMatch(/apatite \+ zircon$/);
    expect(phosphorus[i] / apatiteSolubility(silica[i], temperature[i])).toBeCloseTo(1, 1);
    const M = zirconM(oxides.map((oxide) => path.liquid.values(oxide)[i]));
    expect(zirconium[i] / zirconSolubility(M, temperature[i])).toBeCloseTo(1, 1);
  });

  it('changes nothing in the traces at D = 1, and starts at the parent', () => {
    const path = wholeRockPath({ ...plain, coefficients: own(1) });
    for (const symbol of ['Sr', 'Ba'] as const) for (const value of path.liquid.values(symbol)) expect(value).toBeCloseTo(basalt[symbol], 8);
    expect(path.liquid.values('Sr')[0]).toBe(450);
  });

  it('ends where an oxide is used up, and says so', () => {
    const path = wholeRockPath({ ...plain, assemblage: { olivine: 1 }, downTo: 0.5, analytes: [] });
    expect(path.notes.join(' ')).toMatch(/path ends at F = 0\.8\d+: MgO would be used up/);
    expect(last(path.F)).toBeGreaterThan(0.8);
  });

  it('lists every coefficient that is missing over the whole path', () => {
    const run = () =>
      wholeRockPath({
        ...plain,
        meltType: 'by silica',
        analytes: ['Rb', 'Y'],
        stages: undefined,
        assemblage: { clinopyroxene: 0.3, plagioclase: 0.6, magnetite: 0.1 },
        downTo: 0.35,
      });
    expect(run).toThrow(MissingCoefficientsError);
    expect(run).toThrow(/magnetite: Rb/);
    expect(wholeRockPath({ ...plain, meltType: 'by silica', analytes: ['Rb', 'Y'], borrow: 'nearest' }).coefficients.length).toBeGreaterThan(5);
  });

  it('gives properties, water up to saturation, and flags', () => {
    const path = wholeRockPath({
      ...plain,
      downTo: 0.7,
      conditions: { temperature: 'liquid', pressure: 1000, water: 2.5, redox: { buffer: 'NNO' } },
      analytes: [],
    });
    expect(path.notes.join(' ')).toMatch(/Water reaches saturation/);
    expect(last(path.liquid.values('temperature'))).toBeLessThan(path.liquid.values('temperature')[0]);
    expect(last(path.liquid.values('viscosity'))).toBeGreaterThan(path.liquid.values('viscosity')[0]);
    expect(path.liquid.label('liquid range')[0]).toMatch(/extrapolated/);
  });

  it('refuses bad arguments by name', () => {
    expect(() => wholeRockPath({ ...plain, compositions: {} })).toThrow(/composition of olivine is not given/);
    expect(() => wholeRockPath({ ...plain, compositions: { ...compositions, plagioclase: 'exchange' } })).toThrow(/"exchange" is for olivine/);
    expect(() => wholeRockPath({ ...plain, accessories: { apatite: true } })).toThrow(/need conditions/);
    expect(() => wholeRockPath({ ...plain, downTo: 1 })).toThrow(/downTo is 1/);
    expect(() => wholeRockPath({ ...plain, stages: [] })).toThrow(/either assemblage/);
    expect(() => wholeRockPath({ ...plain, conditions: { temperature: 'hot' as never } })).toThrow(/conditions.temperature/);
    expect(() => wholeRockPath({ ...plain, from: { Ba: 3 } })).toThrow(/from lacks an oxide/);
  });
});
