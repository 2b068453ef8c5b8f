import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import * as ww from 'wedgework';
import { logTicks } from '../../kernel-lib/diagrams/axes';
import { textWidth, wrapText } from '../../kernel-lib/diagrams/font';
import { fromPixels, toPixels, windowAround, type Frame } from '../../kernel-lib/diagrams/frame';
import { clipPolygon, isInside, polygonArea, segmentMeetsBox } from '../../kernel-lib/diagrams/geometry';
import { LabelPlacer, waysToBreak } from '../../kernel-lib/diagrams/place-labels';

const { diagrams } = ww;

describe('texts', () => {
  it.each([
    ['SiO2', 'SiO₂'],
    ['Al2O3', 'Al₂O₃'],
    ['FeOT', 'FeO*'],
    ['FeO*/MgO', 'FeO*/MgO'],
    ['Na2O+K2O', 'Na₂O + K₂O'],
    ['10000*Zr/TiO2', '10000 × Zr/TiO₂'],
    ['(La/Sm)N', '(La/Sm)ɴ'],
    ['LaN/YbN', 'Laɴ/Ybɴ'],
    ['87Sr/86Sr', '⁸⁷Sr/⁸⁶Sr'],
    ['epsilon-Nd', 'εNd'],
    ['[Mg-number]', 'Mg-number'],
    ['Na2O - 2', 'Na₂O − 2'],
    ['H2O+', 'H₂O⁺'],
    ['log10(Ba/Th)', 'log₁₀(Ba/Th)'],
    ['Ba^2', 'Ba²'],
  ])('%s is set as %s', (expression, printed) => {
    expect(diagrams.expressionText(expression)).toBe(printed);
  });

  it('axis titles carry unit and basis', () => {
    expect(diagrams.axisTitle('SiO2', 'wt%', 'volatile-free')).toBe('SiO₂ (wt %, volatile-free)');
    expect(diagrams.axisTitle('Ba/Th')).toBe('Ba/Th');
    expect(diagrams.axisTitle('Ba', 'ppm')).toBe('Ba (ppm)');
  });

  it('are as wide as the font file says', () => {
    // Advance widths of Source Sans 3 Regular 3.052: A 544, i 246 of 1000 units (its hmtx table)
    expect(textWidth('A', { size: 1000 })).toBe(544);
    expect(textWidth('Ai', { size: 10 })).toBeCloseTo(7.9, 6);
  });

  it('wrap without losing a word', () => {
    fc.assert(
      fc.property(
        fc.array(fc.stringMatching(/^[a-z]{1,12}$/), { minLength: 1, maxLength: 30 }),
        fc.integer({ min: 40, max: 400 }),
        (words, width) => {
          const lines = wrapText(words.join(' '), width, { size: 11 });
          expect(lines.join(' ').split(' ')).toEqual(words);
          for (const line of lines) expect(line.includes(' ') ? textWidth(line, { size: 11 }) <= width : true).toBe(true);
        },
      ),
      { numRuns: 100 },
    );
  });

  it('names break at spaces and slashes into lines of even width', () => {
    expect(waysToBreak('basaltic trachyandesite', { size: 11 })).toEqual([['basaltic trachyandesite'], ['basaltic', 'trachyandesite']]);
    expect(waysToBreak('trachyte / trachydacite', { size: 11 })[1]).toEqual(['trachyte /', 'trachydacite']);
  });
});

describe('frames and axes', () => {
  const finite = (from: number, to: number) => fc.double({ min: from, max: to, noNaN: true });

  it('lead from data to pixels and back', () => {
    fc.assert(
      fc.property(finite(0.01, 100), finite(0.01, 100), fc.constantFrom('linear' as const, 'log' as const), fc.boolean(), (x, y, scale, reversed) => {
        const frame: Frame = {
          width: 400,
          height: 300,
          x: { title: '', scale, window: [0.005, 200], reversed },
          y: { title: '', window: [-10, 120] },
        };
        const [bx, by] = fromPixels(frame, toPixels(frame, [x, y]));
        expect(bx).toBeCloseTo(x, 6);
        expect(by).toBeCloseTo(y, 6);
      }),
    );
  });

  it('windows hold every value, rise, and keep concentrations from going negative', () => {
    fc.assert(
      fc.property(fc.array(finite(0, 1e5), { minLength: 1, maxLength: 20 }), (values) => {
        const [low, high] = windowAround([values]);
        expect(low).toBeLessThanOrEqual(Math.min(...values));
        expect(high).toBeGreaterThanOrEqual(Math.max(...values));
        expect(low).toBeLessThan(high);
        expect(low).toBeGreaterThanOrEqual(0);
      }),
    );
    fc.assert(
      fc.property(fc.array(finite(1e-6, 1e6), { minLength: 1, maxLength: 20 }), (values) => {
        const [low, high] = windowAround([values], { scale: 'log' });
        expect(low).toBeLessThanOrEqual(Math.min(...values));
        expect(high).toBeGreaterThanOrEqual(Math.max(...values));
        expect(low).toBeGreaterThan(0);
        expect(high / low).toBeGreaterThanOrEqual(2);
      }),
    );
    expect(windowAround([[NaN]], { whole: [40, 80] })).toEqual([40, 80]);
    // All values beyond the limits of a scheme: its usual window, not one that runs backwards.
    expect(windowAround([[20, 22]], { within: [30, 100], whole: [40, 80] })).toEqual([40, 80]);
  });

  it('log axes carry their decades, and more where a decade is long', () => {
    expect(logTicks([0.05, 2000], 300).labelled).toEqual([0.1, 1, 10, 100, 1000]);
    expect(logTicks([1, 10], 300).labelled).toEqual([1, 2, 5, 10]);
    expect(logTicks([1, 10], 300).all).toEqual([1, 2, 3, 4, 5, 6, 7, 8, 9, 10]);
  });
});

describe('plane geometry', () => {
  const square = [
    [0, 0],
    [10, 0],
    [10, 10],
    [0, 10],
  ] as const;
  it('clips a polygon to a box: area never grows, a box inside leaves the box', () => {
    expect(polygonArea(clipPolygon(square, { left: 2, right: 5, top: 1, bottom: 4 }))).toBe(9);
    expect(clipPolygon(square, { left: 20, right: 30, top: 0, bottom: 5 })).toEqual([]);
    const point = fc.tuple(fc.integer({ min: -20, max: 20 }), fc.integer({ min: -20, max: 20 }));
    fc.assert(
      fc.property(point, point, point, (a, b, c) => {
        const clipped = clipPolygon([a, b, c], { left: -5, right: 5, top: -5, bottom: 5 });
        expect(polygonArea(clipped)).toBeLessThanOrEqual(Math.min(100, polygonArea([a, b, c])) + 1e-9);
        for (const [x, y] of clipped) expect(Math.max(Math.abs(x), Math.abs(y))).toBeLessThanOrEqual(5 + 1e-9);
      }),
    );
  });

  it('knows inside from outside, and what a segment meets', () => {
    expect(isInside([5, 5], square)).toBe(true);
    expect(isInside([15, 5], square)).toBe(false);
    expect(segmentMeetsBox([-5, 5], [15, 5], { left: 0, right: 10, top: 0, bottom: 10 })).toBe(true);
    expect(segmentMeetsBox([-5, 5], [-1, 50], { left: 0, right: 10, top: 0, bottom: 10 })).toBe(false);
  });

  it('puts the corners of a triangle at its corners and the middle in the middle', () => {
    expect(diagrams.ternaryPoint(100, 0)).toEqual([0, 0]);
    expect(diagrams.ternaryPoint(0, 0)).toEqual([100, 0]);
    expect(diagrams.ternaryPoint(0, 100)[0]).toBe(50);
    // An equilateral triangle of side 100: height 50·√3; the centre is a third of it up
    expect(diagrams.ternaryPoint(0, 100)[1]).toBeCloseTo(50 * Math.sqrt(3), 10);
    expect(diagrams.ternaryPoint(100 / 3, 100 / 3)[1]).toBeCloseTo((50 * Math.sqrt(3)) / 3, 10);
  });

  it('places labels clear of lines and of each other, or not at all', () => {
    const placer = new LabelPlacer({ left: 0, right: 200, top: 0, bottom: 100 });
    placer.avoidLine([
      [0, 50],
      [200, 50],
    ]);
    const polygon = [
      [0, 0],
      [200, 0],
      [200, 100],
      [0, 100],
    ] as const;
    const first = placer.placeInside(polygon, [['andesite']], { size: 12 })!;
    const second = placer.placeInside(polygon, [['dacite']], { size: 12 })!;
    for (const { box } of [first, second]) expect(box.bottom < 50 || box.top > 50).toBe(true);
    expect(
      first.box.right < second.box.left ||
        second.box.right < first.box.left ||
        first.box.bottom < second.box.top ||
        second.box.bottom < first.box.top,
    ).toBe(true);
    expect(
      placer.placeInside(
        [
          [0, 0],
          [20, 0],
          [20, 8],
          [0, 8],
        ],
        [['rhyolite']],
        { size: 12 },
      ),
    ).toBeUndefined();
  });
});
