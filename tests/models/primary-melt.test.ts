import { describe, expect, it } from 'vitest';
import { primaryMelt, wholeRockPath } from 'wedgework';

const primary = { SiO2: 48.6, TiO2: 0.75, Al2O3: 14.6, FeOT: 8.6, MnO: 0.16, MgO: 13.4, CaO: 10.9, Na2O: 2.1, K2O: 0.6, P2O5: 0.18, Ba: 180 };
const oxides = ['SiO2', 'TiO2', 'Al2O3', 'FeOT', 'MnO', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5'];

describe('primaryMelt', () => {
  it('undoes olivine fractionation', () => {
    // Forward: 12 % of olivine leaves in exchange equilibrium, all iron ferrous. Backward: olivine is added to the Fo that the primary melt has.
    const down = wholeRockPath({
      from: primary,
      assemblage: { olivine: 1 },
      downTo: 0.88,
      compositions: { olivine: 'exchange' },
      conditions: { temperature: 1250, redox: 0 },
      analytes: ['Ba'],
      coefficients: { olivine: { Ba: 0 } },
      steps: 400,
    });
    const evolved = Object.fromEntries([...oxides, 'Ba'].map((symbol) => [symbol, down.liquid.values(symbol).at(-1)!]));
    const back = primaryMelt({
      from: evolved,
      until: { Fo: down.liquid.values('Fo')[0] },
      redox: 0,
      analytes: ['Ba'],
      coefficients: { olivine: { Ba: 0 } },
    });
    for (const oxide of oxides) expect(back.melt.values(oxide)[0], oxide).toBeCloseTo(down.liquid.values(oxide)[0], 1);
    expect(back.olivineAdded).toBeCloseTo(100 * (1 / 0.88 - 1), 1);
    expect(back.melt.values('Ba')[0]).toBeCloseTo(180, 0);
  });

  it('needs less olivine when more iron is ferric, and cools with water', () => {
    const from = { ...primary, MgO: 7.5 };
    const [reduced, oxidised] = [0.1, 0.3].map((redox) => primaryMelt({ from, until: { Fo: 90 }, redox, pressure: 15000 }));
    expect(oxidised.olivineAdded).toBeLessThan(reduced.olivineAdded);
    expect(oxidised.ferricShare).toBeLessThan(0.3); // olivine brings ferrous iron
    expect(primaryMelt({ from, until: { Fo: 90 }, redox: 0.2, water: 3 }).temperature).toBeLessThan(
      primaryMelt({ from, until: { Fo: 90 }, redox: 0.2 }).temperature - 40,
    );
    const buffered = primaryMelt({ from, until: { magnesiumNumber: 72 }, redox: { buffer: 'NNO', offset: 1 } });
    expect(buffered.magnesiumNumber).toBeCloseTo(72, 6);
    expect(buffered.ferricShare).toBeGreaterThan(0.15);
  });

  it('reaches the target exactly, and is Fo = 1/(1 + Kd·Fe²⁺/Mg)', () => {
    const { Fo, magnesiumNumber } = primaryMelt({ from: primary, until: { Fo: 92.5 }, redox: 0.15, Kd: 0.32 });
    expect(Fo).toBeCloseTo(92.5, 9);
    const mg = magnesiumNumber / 100;
    expect(1 / (1 + 0.32 * ((1 - mg) / mg))).toBeCloseTo(0.925, 5);
  });

  it('says when it cannot, and refuses bad arguments by name', () => {
    expect(() => primaryMelt({ from: primary, until: { Fo: 60 }, redox: 0.2 })).toThrow(/already past/);
    expect(() => primaryMelt({ from: { ...primary, MgO: 2 }, until: { Fo: 90 }, redox: 0.1, most: 20 })).toThrow(/too evolved/);
    expect(primaryMelt({ from: { ...primary, MgO: 6 }, until: { Fo: 88 }, redox: 0.2 }).notes.join()).toMatch(/more than olivine/);
    expect(() => primaryMelt({ from: primary, until: {} as never, redox: 0.2 })).toThrow(/until must be/);
    expect(() => primaryMelt({ from: primary, until: { Fo: 90 } } as never)).toThrow(/redox must be/);
    expect(() => primaryMelt({ from: primary, until: { Fo: 90 }, redox: 0.2, analytes: ['Ba'], coefficients: {}, meltType: 'dacite' })).toThrow(/Ba/);
  });
});
