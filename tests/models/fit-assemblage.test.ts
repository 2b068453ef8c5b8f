import { describe, expect, it } from 'vitest';
import { column, fitAssemblage, suiteOf, wholeRockPath } from 'wedgework';
import { seededDraws } from './planted';

const from = { SiO2: 51, TiO2: 0.9, Al2O3: 17.2, FeOT: 9, MnO: 0.17, MgO: 7.6, CaO: 10.8, Na2O: 2.4, K2O: 0.6, P2O5: 0.15, Sr: 420, Zr: 60, Y: 19 };
const planted = { olivine: 0.16, clinopyroxene: 0.3, plagioclase: 0.5, magnetite: 0.04 };
const compositions = { olivine: 'Fo82', clinopyroxene: 'Wo42En46Fs12', plagioclase: 'An78', magnetite: 'Usp30' };
const symbols = Object.keys(from);
const coefficients = {
  olivine: { Sr: 0.01, Zr: 0.01, Y: 0.01 },
  clinopyroxene: { Sr: 0.1, Zr: 0.1, Y: 0.6 },
  plagioclase: { Sr: 1.8, Zr: 0.03, Y: 0.03 },
  magnetite: { Sr: 0.01, Zr: 0.1, Y: 0.2 },
};

function suite(noise: number, seed: number) {
  const path = wholeRockPath({
    from,
    assemblage: planted,
    compositions,
    coefficients,
    downTo: 0.5,
    meltType: 'basalt',
    analytes: ['Sr', 'Zr', 'Y'],
    steps: 24,
  });
  const random = seededDraws(seed);
  const rows = Array.from({ length: 25 }, (_, i) => i);
  return suiteOf({
    columns: symbols.map((symbol) => column({ symbol, values: rows.map((i) => path.liquid.values(symbol)[i] * (1 + noise * random.normal())) })),
    labels: { sample: rows.map((i) => `S${i}`) },
  });
}

describe('fitAssemblage', () => {
  it('recovers the planted assemblage, F and parent from noiseless lavas', () => {
    const fit = fitAssemblage(suite(0, 1), {
      minerals: compositions,
      parent: 'S0',
      analytes: ['Sr', 'Zr', 'Y'],
      coefficients,
      draws: 0,
      scatter: 0.001,
      relativeError: { oxides: 0.001, elements: 0.01 },
    });
    for (const { phase, share } of fit.assemblage) expect(share, phase).toBeCloseTo(planted[phase as keyof typeof planted], 2);
    fit.samples.forEach(({ F }, i) => expect(F).toBeCloseTo(1 - (0.5 * i) / 24, 2));
    expect(fit.parent.values('MgO')[0]).toBeCloseTo((7.6 * 100) / 99.82, 1);
    expect(fit.parent.values('Sr')[0]).toBeCloseTo(420, 0);
  });

  it('keeps the planted shares within its intervals with noise, An free', () => {
    const fit = fitAssemblage(suite(0.01, 2), {
      minerals: { ...compositions, plagioclase: { between: ['An55', 'An95'] } },
      parent: 'S0',
      analytes: ['Sr', 'Zr', 'Y'],
      coefficients,
      draws: 60,
    });
    for (const { phase, share, sigma } of fit.assemblage)
      expect(Math.abs(share - planted[phase as keyof typeof planted]), phase).toBeLessThan(3 * sigma + 0.02);
    expect(fit.assemblage.find(({ phase }) => phase === 'plagioclase')!.label).toMatch(/^An(7|8)\d\.\d$/);
    expect(fit.assemblage.reduce((sum, { share }) => sum + share, 0)).toBeCloseTo(1, 9);
    for (const { rms } of fit.quantities) expect(rms).toBeLessThan(1.6);
  });

  it('shows what an incomplete assemblage cannot explain', () => {
    const fit = fitAssemblage(suite(0.005, 3), {
      minerals: { olivine: 'Fo82', clinopyroxene: 'Wo42En46Fs12' },
      parent: 'S0',
      draws: 0,
      scatter: 0.005,
    });
    expect(fit.quantities.find(({ analyte }) => analyte === 'Al2O3')!.rms).toBeGreaterThan(3);
  });

  it('refuses bad arguments by name', () => {
    const good = suite(0, 1);
    expect(() => fitAssemblage(good, {} as never)).toThrow(/minerals must name/);
    expect(() => fitAssemblage(good, { minerals: compositions, parent: 'X' })).toThrow(/parent is "X"/);
    expect(() => fitAssemblage(good, { minerals: compositions, analytes: ['Ba'] })).toThrow(/holds no Ba/);
    expect(() => fitAssemblage(good.rows([0, 1]), { minerals: compositions })).toThrow(/needs 4/);
    expect(() => fitAssemblage([] as never, { minerals: compositions })).toThrow(/must be a suite/);
  });
});
