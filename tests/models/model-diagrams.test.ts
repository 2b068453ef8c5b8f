import { describe, expect, it } from 'vitest';
import { column, crystallise, diagrams, fitDescent, massBalance, melt, suiteOf, testTraces } from 'wedgework';
import { daughterOf, plantedParent, seededDraws } from './planted';

const daughter = daughterOf(seededDraws(5));
const { parent, minerals } = plantedParent(daughter, { olivine: ['Fo80', 0.06], clinopyroxene: ['Wo42En46Fs12', 0.12], plagioclase: ['An75', 0.2] });
const balance = massBalance({
  parent: { ...parent, Ba: 200, Sr: 480, Rb: 12, Y: 20 },
  daughter: { ...daughter, Ba: 300, Sr: 470, Rb: 19, Y: 28 },
  minerals,
  draws: 40,
});
const specText = (diagram: { spec: unknown }) => JSON.stringify(diagram.spec);

describe('diagrams of balances and paths', () => {
  it('draw the residuals, one bar an oxide, with what was subtracted in the caption', async () => {
    const drawn = diagrams.balanceResiduals(balance);
    expect(specText(drawn)).toMatch(/parent − fit \(in 1σ\)/);
    expect(specText(drawn)).toMatch(/olivine \(Fo80\)/);
    expect(diagrams.specWarnings(drawn.spec)).toEqual([]);
    expect((await drawn.png()).length).toBeGreaterThan(10_000);
    expect(specText(diagrams.balanceResiduals(massBalance({ parent, daughter, minerals, errors: 'equal' })))).toMatch(/parent − fit \(wt %\)/);
    expect(() => diagrams.balanceResiduals({} as never)).toThrow(/solved mass balance/);
    expect(() => diagrams.balanceResiduals(balance, { width: 10 })).toThrow(/width is 10/);
  });

  it('draw predicted against observed, ordered by bulk D', () => {
    const test = testTraces(balance);
    const drawn = diagrams.predictedObserved(test);
    expect(drawn.counts.plotted).toBe(test.elements.length);
    expect(specText(drawn)).toMatch(/daughter \/ parent/);
    expect(diagrams.specWarnings(drawn.spec)).toEqual([]);
    expect(() => diagrams.predictedObserved({} as never)).toThrow(/result of testTraces/);
  });

  it('draw patterns and crystals along a path', () => {
    const path = crystallise({
      from: { La: 8, Ce: 18, Nd: 11, Sm: 2.8, Eu: 0.95, Yb: 2, Sr: 480 },
      assemblage: { clinopyroxene: 0.4, plagioclase: 0.6 },
      downTo: 0.4,
      analytes: ['La', 'Ce', 'Nd', 'Sm', 'Eu', 'Yb', 'Sr'],
    });
    expect(diagrams.pathPatterns(path, { at: [1, 0.7, 0.4] }).counts.plotted).toBe(3);
    expect(() => diagrams.pathPatterns(path, { at: [0.1] })).toThrow(/the path runs from F = 1 to 0.4/);
    expect(() => diagrams.pathPatterns({} as never)).toThrow(/path of a model/);
    const crystals = diagrams.cumulateComposition(path, { show: ['Sr', 'Eu'] });
    expect(specText(crystals)).toMatch(/all crystals/);
    expect(diagrams.specWarnings(crystals.spec)).toEqual([]);
    expect(() => diagrams.cumulateComposition(path, { show: ['Ba'] })).toThrow(/have no Ba/);
    expect(() => diagrams.cumulateComposition(melt({ source: { Ba: 1 }, mode: { a: 1 }, coefficients: { a: { Ba: 1 } }, upTo: 0.1 }))).toThrow(
      /no account of its crystals/,
    );
  });

  it('draw a suite with its line of descent', () => {
    const D: Record<string, number> = { Rb: 0.02, Ba: 0.2, Zr: 0.1, Sr: 1.2, Ni: 4 };
    const rows = Array.from({ length: 12 }, (_, i) => 1 - 0.055 * i);
    const suite = suiteOf({
      columns: Object.keys(D).map((symbol) =>
        column({ symbol, values: rows.map((F, i) => 100 * F ** (D[symbol] - 1) * (symbol === 'Sr' && i === 6 ? 1.6 : 1)) }),
      ),
      labels: { sample: rows.map((_, i) => `S${i}`) },
    });
    const fit = fitDescent(suite);
    const drawn = diagrams.descentLine(suite, fit, 'Rb', 'Ni');
    expect(specText(drawn)).toMatch(/on the line/);
    expect(specText(drawn)).toMatch(/S6/);
    expect(() => diagrams.descentLine(suite, fit, 'Rb', 'Th')).toThrow(/did not use "Th"/);
  });
});
