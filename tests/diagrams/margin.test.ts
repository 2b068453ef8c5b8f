import { beforeAll, describe, expect, it } from 'vitest';
import * as ww from 'wedgework';
import { csv, dataFile } from '../margin/files';
import { syntheticEvents, wavySlab } from '../margin/synthetic';

const { diagrams } = ww;
const caption = (diagram: ww.diagrams.Diagram) => (diagram.spec.title as { text: string[] }).text.join(' ');

let slab: ww.HypocentreSlab;
let suite: ww.Suite;
beforeAll(() => {
  slab = ww.slabFromHypocentres(ww.hypocentresOf(syntheticEvents(wavySlab, { seed: 2, count: 400, crust: 0.1, noise: 5 })), {
    trench: ww.trenchLine([-128, -128], [-42, -47]),
  });
  const places = { A: [-130.1, -44.2], B: [-130.2, -44.9], C: [-130.5, -43.9], D: [-130.8, -44.5], E: [-131.2, -44.3] } as const;
  const names = Object.keys(places).flatMap((name) => Array.from({ length: 8 }, () => name));
  const bare = ww.suiteOf({
    columns: [
      ww.column({ symbol: 'SiO2', values: names.map((_, i) => 56 + (i % 8)) }),
      ww.column({ symbol: 'K2O', values: names.map((name, i) => 0.5 + 0.2 * 'ABCDE'.indexOf(name) + 0.05 * (i % 8)) }),
    ],
    labels: { volcano: names },
  });
  suite = ww.slabBelow(slab, ww.withCoordinates(bare, places));
});

describe('the map of an arc', () => {
  it('draws volcanoes, contours, trench, scale and north without a warning', async () => {
    const map = diagrams.arcMap(slab, suite, { colour: 'SlabDepth', hypocentres: slab.events });
    expect(diagrams.specWarnings(map.spec)).toEqual([]);
    expect(map.counts).toMatchObject({ plotted: 5, notPlotted: 0 });
    const svg = await map.svg();
    for (const text of ['>N<', 'km<', '>100<', '>150<', '>A<', '130° W', '44° S', 'Slab depth (km)']) expect(svg, text).toContain(text);
  });

  it('draws longitude and latitude to one scale at its middle', () => {
    const { spec } = diagrams.arcMap(slab, suite, { window: { x: [-132, -128], y: [-46, -43] } });
    // 4° of longitude at 44.5° S against 3° of latitude
    expect((spec.height as number) / (spec.width as number)).toBeCloseTo(3 / (4 * Math.cos((44.5 * Math.PI) / 180)), 2);
  });

  it('crosses the dateline in one piece', async () => {
    const aleutians = ww.slabFromDepths(await ww.readSlabPoints(dataFile('slab-depth-contours.csv'), { slab: 'alu' }));
    const islands = ww.withCoordinates(ww.suiteOf({ columns: [], labels: { volcano: ['W', 'E'] } }), { W: [178.5, 51.95], E: [-177.4, 51.9] });
    const map = diagrams.arcMap(aleutians, islands);
    expect(map.counts.plotted).toBe(2);
    expect(await map.svg()).toContain('180°');
    const { x } = (map.spec.layer as { encoding: { x: { scale: { domain: number[] } } } }[])[0].encoding;
    expect(x.scale.domain[1] - x.scale.domain[0]).toBeLessThan(25); // not the whole globe
  });

  it('says what is wrong', () => {
    expect(() => diagrams.arcMap({} as never, suite)).toThrow(/slab surface/);
    expect(() => diagrams.arcMap(slab, ww.suiteOf({ columns: [] }))).toThrow(/withCoordinates/);
    expect(() => diagrams.arcMap(slab, suite, { colour: 'Ba' })).toThrow(/needs Ba/);
    expect(() => diagrams.arcMap(slab, suite, { by: 'island' })).toThrow(/no label "island"/);
  });
});

describe('the section', () => {
  it('draws slab, events by kind and volcanoes, with equal scales', () => {
    const section = diagrams.slabSection(slab, suite);
    expect(diagrams.specWarnings(section.spec)).toEqual([]);
    expect(caption(section)).toMatch(/towards 2[67]\d°.*no vertical exaggeration/);
    const { x, y } = (section.spec.layer as { encoding: { x: { scale: { domain: number[] } }; y: { scale: { domain: number[] } } } }[])[0].encoding;
    const perPixel = (axis: { scale: { domain: number[] } }, length: unknown) => (axis.scale.domain[1] - axis.scale.domain[0]) / (length as number);
    expect(perPixel(x, section.spec.width) / perPixel(y, section.spec.height)).toBeCloseTo(1, 2);
    expect(section.counts.plotted).toBe(5);
    expect(JSON.stringify(section.spec)).toContain('shallow crust');
  });
  it('runs through a volcano or a place; refuses where there is no slab', () => {
    expect(caption(diagrams.slabSection(slab, suite, { through: 'D', swath: 20 }))).toMatch(/through D/);
    expect(() => diagrams.slabSection(slab, suite, { through: 'Z' })).toThrow(/There are: A, B, C, D, E/);
    expect(() => diagrams.slabSection(slab, suite, { through: [20, 20] })).toThrow(/no slab below/);
    expect(() => diagrams.slabSection(slab, suite, { swath: -1 })).toThrow(/positive number of km/);
  });
});

describe('the plot of a trend', () => {
  it('shows points, line, interval and the sentence', async () => {
    const plot = diagrams.arcTrendPlot(ww.crossArcTrend(suite, 'K60'));
    expect(diagrams.specWarnings(plot.spec)).toEqual([]);
    expect(plot.counts.plotted).toBe(5);
    const svg = await plot.svg();
    expect(svg).toContain('K₂O at 60 % SiO₂ (wt %)');
    expect(svg).toContain('Slab depth (km)');
    expect(caption(plot)).toMatch(/K₂O at 60 % SiO₂ .*slab depth/);
    expect(() => diagrams.arcTrendPlot({} as never)).toThrow(/crossArcTrend/);
  });
});

describe('contours of a surface', () => {
  it('lie at their depth, and end where the slab ends', () => {
    for (const { depth, pieces } of ww.slabContours(slab, [60, 120])) {
      expect(pieces.length).toBeGreaterThan(0);
      for (const { longitude, latitude } of pieces) {
        const z = slab.depthAt(longitude.slice(1, -1), latitude.slice(1, -1));
        for (const value of z) if (Number.isFinite(value)) expect(Math.abs(value - depth)).toBeLessThan(1.5);
      }
    }
    expect(() => ww.slabContours(slab, ['deep' as never])).toThrow(/list of numbers/);
    expect(() => ww.slabContours(slab, [50], { cells: 2 })).toThrow(/10 to 2000/);
  });
  it('come from a grid as well', async () => {
    const rows: string[] = [];
    for (let x = 10; x <= 14; x += 0.25) for (let y = 0; y <= 4; y += 0.25) rows.push(`${x},${y},${20 + 40 * (x - 10)}`);
    const grid = ww.slabFromDepths(await ww.readSlabPoints(csv('grid.csv', `longitude,latitude,depth\n${rows.join('\n')}\n`)));
    const [{ pieces }] = ww.slabContours(grid, [100]);
    for (const x of pieces.flatMap((piece) => piece.longitude)) expect(Math.abs(x - 12)).toBeLessThan(0.02);
  });
});
