import { describe, expect, it } from 'vitest';
import { assimilate, column, fitDescent, suiteOf, type Suite } from 'wedgework';
import { seededDraws } from './planted';

const D: Record<string, number> = { Rb: 0.02, Ba: 0.15, Th: 0.03, Zr: 0.12, La: 0.15, Sm: 0.35, Yb: 0.45, Y: 0.5, Sr: 1.1, V: 1.8, Sc: 2.2, Ni: 4.5 };
const parent: Record<string, number> = { Rb: 12, Ba: 220, Th: 1.4, Zr: 70, La: 9, Sm: 2.8, Yb: 2, Y: 20, Sr: 480, V: 260, Sc: 34, Ni: 70 };
const felsic: Record<string, number> = { Rb: 95, Ba: 800, Th: 9, Zr: 190, La: 32, Sm: 5.5, Yb: 2.6, Y: 26, Sr: 190, V: 25, Sc: 7, Ni: 4 };
const elements = Object.keys(D);

function suite(rows: Record<string, number>[], noise: number, seed: number): Suite {
  const random = seededDraws(seed);
  return suiteOf({
    columns: Object.keys(rows[0]).map((symbol) =>
      column({
        symbol,
        values: rows.map((row) => row[symbol] * (symbol.includes('/') ? 1 + 1e-5 * random.normal() : Math.exp(noise * random.normal()))),
      }),
    ),
    labels: { sample: rows.map((_, i) => `S${i + 1}`) },
  });
}
const line = (count: number) =>
  Array.from({ length: count }, (_, i) => Object.fromEntries(elements.map((e) => [e, parent[e] * (1 - (0.75 * i) / (count - 1)) ** (D[e] - 1)])));
const mixed = (count: number) =>
  Array.from({ length: count }, (_, i) => Object.fromEntries(elements.map((e) => [e, parent[e] + (i / (count - 1)) * (felsic[e] - parent[e])])));
const errors = { relativeError: 0.03, scatter: 0 };

describe('fitDescent', () => {
  it('finds the planted D, F and parent', () => {
    const fit = fitDescent(suite(line(30), 0.03, 1), { ...errors, incompatible: 'Rb', incompatibleD: 0.02 });
    for (const { element, D: found, DSigma, parent: start, parentSigma } of fit.elements) {
      expect(Math.abs(found - D[element]), element).toBeLessThan(3.5 * DSigma + 1e-9);
      expect(DSigma).toBeLessThan(0.15);
      expect(Math.abs(Math.log(start / parent[element])), element).toBeLessThan(4 * parentSigma + 0.05);
    }
    for (const [i, { F, FSigma }] of fit.samples.entries()) expect(Math.abs(F - (1 - (0.75 * i) / 29))).toBeLessThan(4 * FSigma + 0.03);
    expect(fit.samples.every(({ belongs }) => belongs)).toBe(true);
    expect(fit.preferred).toBe('crystallisation');
  });

  it('flags the samples that cannot belong, with the element that excludes each', () => {
    const rows = line(30);
    rows[4].Sr *= 1.6;
    rows[11].Ba *= 0.6;
    rows[20].Ni *= 3;
    const fit = fitDescent(suite(rows, 0.03, 2), errors);
    const flagged = fit.samples
      .filter(({ belongs }) => !belongs)
      .map(({ sample, excludedBy, off }) => `${sample} ${excludedBy} ${off > 0 ? 'high' : 'low'}`);
    expect(flagged).toEqual(['S5 Sr high', 'S12 Ba low', 'S21 Ni high']);
    expect(fit.preferred).toBe('crystallisation');
  });

  it('seldom flags a sample of a suite that is in line', () => {
    let alarms = 0;
    for (let seed = 0; seed < 20; seed++)
      alarms += fitDescent(suite(line(20), 0.03, 100 + seed), errors).samples.some(({ belongs }) => !belongs) ? 1 : 0;
    expect(alarms).toBeLessThanOrEqual(2);
  });

  it('estimates the scatter of the lavas, and prefers nothing where most samples are unexplained', () => {
    const scattered = suite(line(30), 0.12, 8);
    const estimated = fitDescent(scattered, { relativeError: 0.02, scatter: 'estimate' });
    expect(estimated.scatter).toBeGreaterThan(0.09);
    expect(estimated.scatter).toBeLessThan(0.15);
    expect(estimated.preferred).toBe('crystallisation');
    const strict = fitDescent(scattered, { relativeError: 0.02, scatter: 0 });
    expect(strict.preferred).toBe('none of these');
    expect(strict.why).toMatch(/^None of these/);
    expect(fitDescent(suite(line(20), 0.02, 9), { relativeError: 0.05, scatter: 'estimate' }).scatter).toBe(0);
  });

  it('prefers the process that made the suite', () => {
    const [crystallised, blended] = [fitDescent(suite(line(24), 0.03, 3), errors), fitDescent(suite(mixed(24), 0.03, 4), errors)];
    expect(crystallised.preferred).toBe('crystallisation');
    expect(crystallised.rivals[1].difference).toBeGreaterThan(10);
    expect(Math.abs(crystallised.companion.bend)).toBeGreaterThan(3);
    expect(blended.preferred).toBe('mixing');
    expect(blended.rivals[1].difference).toBeGreaterThan(10);
    expect(Math.abs(blended.companion.bend)).toBeLessThan(3);
    expect(blended.why).toMatch(/^Mixing is preferred/);
  });

  it('tells assimilation from its rivals by isotopes, and finds its rate', () => {
    const path = assimilate({
      from: { ...parent, '87Sr/86Sr': 0.7036 },
      assimilant: { ...felsic, '87Sr/86Sr': 0.713 },
      r: 0.3,
      assemblage: { bulk: 1 },
      coefficients: { bulk: D },
      downTo: 0.4,
      steps: 23,
    });
    const rows = Array.from({ length: 24 }, (_, i) =>
      Object.fromEntries([...elements, '87Sr/86Sr'].map((symbol) => [symbol, path.liquid.values(symbol)[i]])),
    );
    const fit = fitDescent(suite(rows, 0.02, 5), { relativeError: 0.02, scatter: 0, assimilant: { ...felsic, '87Sr/86Sr': 0.713 } });
    expect(fit.preferred).toBe('assimilation');
    expect(fit.r).toBeGreaterThan(0.15);
    expect(fit.r).toBeLessThan(0.5);
    expect(
      fitDescent(
        suite(
          line(24).map((row) => ({ ...row, '87Sr/86Sr': 0.7036 })),
          0.02,
          6,
        ),
        { relativeError: 0.02, scatter: 0, assimilant: { ...felsic, '87Sr/86Sr': 0.713 } },
      ).preferred,
    ).toBe('crystallisation');
  });

  it('works around gaps, and says what it cannot do', () => {
    const gappy = suite(line(20), 0.03, 7);
    const withGaps = gappy.with(
      ['Th', 'Sc'].map((symbol) => column({ symbol, values: gappy.values(symbol).map((value, i) => (i % 7 === 0 ? NaN : value)) })),
    );
    expect(fitDescent(withGaps, errors).preferred).toBe('crystallisation');
    expect(fitDescent(withGaps).notes.join(' ')).toMatch(/give the assimilant/);
    expect(() => fitDescent(withGaps, { analytes: ['Ba', 'Sr'] })).toThrow(/needs 4/);
    expect(() => fitDescent(withGaps, { analytes: ['Ba', 'Sr', 'Rb', 'Cs'] })).toThrow(/no usable value of Cs/);
    expect(() => fitDescent(withGaps, { incompatible: 'U' })).toThrow(/not among the elements used/);
    expect(() => fitDescent(withGaps, { parent: 'nobody' })).toThrow(/not among the samples/);
    expect(() => fitDescent(withGaps.rows([0, 1, 2]))).toThrow(/needs 5/);
    expect(() => fitDescent(withGaps, { assimilant: { Ba: 700 } })).toThrow(/assimilant has no usable/);
    expect(() => fitDescent({} as never)).toThrow(/must be a suite/);
  });
});
