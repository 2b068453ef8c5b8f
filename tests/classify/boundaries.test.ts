import { describe, expect, it } from 'vitest';
import { findScheme, type Scheme } from 'wedgework';
import { polylineAt } from '../../kernel-lib/classify/geometry';

/** y of a scheme's nth published line at x. */
const at = (scheme: Scheme, x: number, line = 0) => polylineAt(scheme.lines.filter(({ published }) => published)[line].points, x);

// The printed equations of lines that the scheme files hold as points, or the other way round.
describe('boundaries against their printed equations', () => {
  it('Le Maitre et al. 2002: K2O = 0.045 SiO2 − 1.86 and 0.095 SiO2 − 3.36', () => {
    const scheme = findScheme('potassium-silica');
    for (const silica of [48, 55, 60, 68]) {
      expect(at(scheme, silica, 0)).toBeCloseTo(0.045 * silica - 1.86, 10);
      expect(at(scheme, silica, 1)).toBeCloseTo(0.095 * silica - 3.36, 10);
    }
  });

  it('Miyashiro 1974: FeO*/MgO = 0.1562 SiO2 − 6.685, the rounded form of SiO2 = 6.4 FeO*/MgO + 42.8', () => {
    for (const silica of [48, 58, 70]) {
      expect(at(findScheme('iron-enrichment'), silica)).toBeCloseTo((silica - 42.8) / 6.4, 10);
      expect(at(findScheme('iron-enrichment'), silica)).toBeCloseTo(0.1562 * silica - 6.685, 2);
    }
  });

  it('Macdonald & Katsura 1964: alkalis = 0.37 SiO2 − 14.43; Macdonald 1968: 0.364 SiO2 − 14.13', () => {
    for (const silica of [42, 47, 52]) {
      // The line through the two printed points has a slope of 0.3721.
      expect(Math.abs(at(findScheme('alkalinity-1964'), silica) - (0.37 * silica - 14.43))).toBeLessThan(0.12);
      expect(Math.abs(at(findScheme('alkalinity-1968'), silica) - (0.364 * silica - 14.13))).toBeLessThan(0.02);
    }
  });

  it('Irvine & Baragar 1971: polynomial and point list differ by −0.25 to +0.47 % SiO2 at the points', () => {
    const [points, polynomial] = ['alkalinity', 'alkalinity-polynomial'].map(
      (key) => findScheme(key).lines.find(({ published }) => published)!.points,
    );
    const silicaAt = (line: typeof points, alkalis: number) =>
      polylineAt(
        line.map(([x, y]) => [y, x] as const),
        alkalis,
      );
    const apart = points.filter(([, alkalis]) => alkalis <= 10).map(([silica, alkalis]) => silicaAt(polynomial, alkalis) - silica);
    expect(Math.min(...apart)).toBeCloseTo(-0.25, 2);
    expect(Math.max(...apart)).toBeCloseTo(0.47, 2);
  });

  it('Frost et al. 2001 and 2008: the two total-iron lines nearly coincide between 50 and 75 % SiO2', () => {
    for (const silica of [50, 60, 75])
      expect(Math.abs(at(findScheme('fe-number'), silica) - at(findScheme('fe-number-2001'), silica))).toBeLessThan(0.01);
    expect(at(findScheme('fe-number'), 60)).toBeCloseTo(0.46 + 0.005 * 60, 10);
  });

  it('AFM vertices sum to 100 % and run from 5 to 50 % MgO (Irvine & Baragar 1971)', () => {
    const { points } = findScheme('afm').lines.find(({ published }) => published)!;
    expect(points[0]).toEqual([5, 36.2]);
    expect(points.at(-1)).toEqual([50, 35]);
  });
});
