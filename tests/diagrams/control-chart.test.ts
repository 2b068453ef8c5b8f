import { describe, expect, it } from 'vitest';
import { audit, column, diagrams, suiteOf } from 'wedgework';
import { captionOf, panelsOf, unitsOf } from './reading-specs';

// Ten runs of BHVO-2 with SiO2 and Ba about the values of Jochum et al. 2016 (49.6 wt %, 130.9 ppm); the last Ba is far off.
const factors = [1.002, 0.998, 1.001, 0.999, 1, 1.003, 0.997, 1.001, 0.999, 1];
const runs = suiteOf({
  columns: [
    column({ symbol: 'SiO2', values: factors.map((factor) => 49.6 * factor) }),
    column({ symbol: 'Al2O3', values: factors.map((factor) => 13.44 * factor) }),
    column({ symbol: 'Ba', values: factors.map((factor, i) => 130.9 * factor * (i === 9 ? 1.08 : 1)) }),
  ],
  labels: { sample: factors.map(() => 'BHVO-2') },
});
const checked = audit(runs);

describe('controlChart', () => {
  const made = diagrams.controlChart(checked, ['SiO2', 'Ba']);

  it('has a panel an analyte, each run at its recovery in the order of analysis', () => {
    const [silica, barium] = panelsOf(made.spec);
    const points = (panel: (typeof silica)) => unitsOf(panel).find(({ mark }) => mark.type === 'point')!.data.values as { x: number; y: number }[];
    expect(points(silica).map(({ x }) => x)).toEqual(factors.map((_, i) => i + 1));
    points(silica).forEach(({ y }, i) => expect(y).toBeCloseTo(100 * factors[i], 2));
    expect(points(barium)[9].y).toBeCloseTo(108, 2);
    expect(made.counts.plotted).toBe(20);
    expect(captionOf(made.spec)).toContain('20 runs plotted');
    expect(diagrams.specWarnings(made.spec)).toEqual([]);
  });

  it('draws the certified value, the mean, and limits of two and three standard deviations', () => {
    // Shewhart chart, common practice: limits at the mean ± 2 s and ± 3 s.
    const [silica] = panelsOf(made.spec);
    const levels = unitsOf(silica).filter(({ mark }) => mark.type === 'line').flatMap(({ data }) => (data.values as { y: number | null }[]).map(({ y }) => y)).filter((y) => y !== null);
    const values = factors.map((factor) => 100 * factor);
    const mean = values.reduce((sum, value) => sum + value, 0) / 10;
    const spread = Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / 9);
    for (const at of [100, mean, mean - 3 * spread, mean - 2 * spread, mean + 2 * spread, mean + 3 * spread]) {
      expect(levels.some((level) => Math.abs(level - at) < 0.01), String(at)).toBe(true);
    }
  });

  it('says what there is when it is asked for something else', () => {
    expect(() => diagrams.controlChart(checked, ['U'])).toThrow('BHVO-2 has no runs of "U". It has: SiO2');
    expect(() => diagrams.controlChart(checked, ['SiO2'], { material: 'AGV-2' })).toThrow('There are: BHVO-2');
    expect(() => diagrams.controlChart(checked, [])).toThrow('a list of 1 to 24 symbols');
    expect(() => diagrams.controlChart({} as never, ['SiO2'])).toThrow('what audit() returned');
    expect(() => diagrams.controlChart(audit(runs.withLabels({ sample: factors.map((_, i) => `S-${i}`) })), ['SiO2'])).toThrow('no reference material');
  });
});
