import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { column, crustalThickness, crustCalibrations, suiteOf, thicknessFromRatios, type Suite } from 'wedgework';
import { dataFile } from './files';
import { random } from './synthetic';

interface Grid {
  readonly Sr_Y?: number;
  readonly LaN_YbN?: number;
  readonly Chapman2015_km?: number;
  readonly Profeta2015_km?: number;
  readonly Hu2017_collision_km: number;
}

describe('calibrations over a grid of ratios', () => {
  // Computed independently from the published formulas (constants from memory): H = 1.11 Sr/Y + 8.05; 21.277 ln(1.0204 (La/Yb)N); Hu et al. 2017:
  // 0.67 Sr/Y + 28.21; 27.78 ln(0.34 (La/Yb)N).
  const grid = (JSON.parse(readFileSync(dataFile('crust.json'), 'utf8')) as { expected: Grid[] }[])[0].expected;
  test.each(grid)('%j', ({ Sr_Y, LaN_YbN, Chapman2015_km, Profeta2015_km, Hu2017_collision_km }) => {
    if (Sr_Y !== undefined) {
      expect(thicknessFromRatios('arc-sr-y-2015', { 'Sr/Y': Sr_Y })).toBeCloseTo(Chapman2015_km!, 9);
      expect(thicknessFromRatios('collision-sr-y-2017', { 'Sr/Y': Sr_Y })).toBeCloseTo(Hu2017_collision_km, 9);
    } else {
      expect(thicknessFromRatios('arc-la-yb-2015', { '(La/Yb)N': LaN_YbN! })).toBeCloseTo(Profeta2015_km!, 9);
      expect(thicknessFromRatios('collision-la-yb-2017', { '(La/Yb)N': LaN_YbN! })).toBeCloseTo(Hu2017_collision_km, 9);
    }
  });

  test('the printed inverse of the linear calibration is its forward form turned round, to 0.2 km', () => {
    // Forward: Sr/Y = 0.90 H − 7.25 (Profeta et al. 2015; from memory)
    for (const ratio of [5, 20, 40, 60])
      expect(Math.abs(thicknessFromRatios('arc-sr-y-2015', { 'Sr/Y': ratio }) - (ratio + 7.25) / 0.9)).toBeLessThan(0.2);
  });

  test('errors', () => {
    expect(() => thicknessFromRatios('moho', {})).toThrow(/Known: arc-sr-y-2015/);
    expect(() => thicknessFromRatios('arc-sr-y-2015', { 'Sr/Y': -1 })).toThrow(/above zero/);
    for (const calibration of crustCalibrations().values()) expect(calibration.standing).toBe('from memory');
  });
});

/** A suite of `good` intermediate samples with Sr/Y near 25 and (La/Yb)N near 6, then rows that each filter step takes out. */
function suite(good = 20): Suite {
  const { normal } = random(9);
  const rows = [
    ...Array.from({ length: good }, () => ({
      SiO2: 60,
      MgO: 2.5,
      Rb: 40,
      Sr: 400 * Math.exp(0.05 * normal()),
      Y: 16,
      La: 15 * Math.exp(0.05 * normal()),
      Yb: 1.75,
    })),
    { SiO2: 50, MgO: 2.5, Rb: 40, Sr: 900, Y: 10, La: 15, Yb: 1 },
    { SiO2: 60, MgO: 5, Rb: 40, Sr: 900, Y: 10, La: 15, Yb: 1 },
    { SiO2: 60, MgO: 2.5, Rb: 200, Sr: 400, Y: 10, La: 15, Yb: 1 },
    { SiO2: 60, MgO: 2.5, Rb: 40, Sr: 400, Y: NaN, La: 15, Yb: NaN },
    { SiO2: 60, MgO: 2.5, Rb: 200, Sr: 2500, Y: 8, La: 90, Yb: 0.6 },
  ];
  return suiteOf({
    columns: (['SiO2', 'MgO', 'Rb', 'Sr', 'Y', 'La', 'Yb'] as const).map((symbol) => column({ symbol, values: rows.map((row) => row[symbol]) })),
    labels: { volcano: rows.map((_, i) => (i % 2 === 0 ? 'A' : 'B')) },
  });
}

describe('thickness from a suite', () => {
  test('the filter is applied and counted step by step; the median of what is left is used', () => {
    const { estimates } = crustalThickness(suite());
    const strontium = estimates.find(({ calibration }) => calibration === 'arc-sr-y-2015')!;
    expect(strontium.counts.map(({ left }) => left).slice(0, 5)).toEqual([25, 24, 23, 22, 21]);
    expect(strontium.counts.at(-1)!.left).toBeLessThanOrEqual(20);
    expect(Math.abs(strontium.ratios['Sr/Y'] - 25)).toBeLessThan(1.5);
    expect(strontium.thickness).toBeCloseTo(1.11 * strontium.ratios['Sr/Y'] + 8.05, 9);
    expect(strontium.interval[0]).toBeLessThan(strontium.thickness);
    expect(strontium.interval[1]).toBeGreaterThan(strontium.thickness);
    expect(strontium.calibrationError).toBe(10);
  });

  test('(La/Yb)N is normalised to the chondrite that the calibration names', () => {
    const lanthanum = crustalThickness(suite()).estimates.find(({ calibration }) => calibration === 'arc-la-yb-2015')!;
    // McDonough & Sun 1995: La 0.237, Yb 0.161 ppm
    expect(lanthanum.ratios['(La/Yb)N']).toBeGreaterThan((15 / 1.75 / (0.237 / 0.161)) * 0.95);
    expect(lanthanum.ratios['(La/Yb)N']).toBeLessThan((15 / 1.75 / (0.237 / 0.161)) * 1.05);
  });

  test('calibrations that disagree are pointed out, and the published cautions are shown', () => {
    const all = crustalThickness(suite(), { calibrations: [...crustCalibrations().keys()] });
    expect(all.warnings.join('\n')).toMatch(/the calibrations disagree by \d+ km, from .* take none of them alone/);
    expect(all.warnings.join('\n')).toMatch(/over-estimate at high ratios over thick crust.*Sundell et al. 2021/);
    expect(all.warnings.join('\n')).toMatch(/not a?r?cs|collisional belts, not arcs/);
    expect(all.warnings.join('\n')).toMatch(/volatile-free/);
    const shown = String((all.toMimeBundle() as Record<string, string>)['text/markdown']);
    expect(shown).toMatch(/diverges/);
  });

  test('what a suite lacks is said, and the rest still given', () => {
    const { estimates } = crustalThickness(suite(), { calibrations: ['arc-sr-y-2015', 'basalt-ce-y-2008'] });
    expect(estimates[1].note).toMatch(/needs Ce|needs 5 samples/);
    expect(estimates[0].thickness).toBeGreaterThan(30);
    expect(crustalThickness(suite(3)).estimates[0].note).toMatch(/needs 5 samples after the filter/);
  });

  test('by volcano; the same seed gives the same interval', () => {
    const one = crustalThickness(suite(), { by: 'volcano', seed: 3 });
    expect(new Set(one.estimates.map(({ group }) => group))).toEqual(new Set(['A', 'B']));
    expect(crustalThickness(suite(), { by: 'volcano', seed: 3 }).estimates).toEqual(one.estimates);
    expect(() => crustalThickness(suite(), { calibrations: ['moho'] })).toThrow(/no calibration "moho"/);
    expect(() => crustalThickness(suite(), { minimum: 1 })).toThrow(/3 samples or more/);
  });
});
