import { describe, expect, it } from 'vitest';
import * as ww from 'wedgework';
import { madeSuite } from './made-suite.mjs';
import { captionOf, panelsOf, rowsOf, unitsOf, type Spec } from './reading-specs';

const { diagrams, cellState } = ww;
const units = (diagram: ww.diagrams.Diagram) => unitsOf(panelsOf(diagram.spec)[0]);
const markers = (diagram: ww.diagrams.Diagram): Spec => units(diagram).find(({ params }) => params !== undefined)!;

describe('samples on a diagram', () => {
  it('are counted, with the reason for each that is not there', () => {
    const suite = ww.suiteOf({
      columns: [ww.column({ symbol: 'Ba', values: [100, 200, NaN, 400, 500] }), ww.column({ symbol: 'Th', values: [1, 2, 3, NaN, 5] })],
    });
    const diagram = diagrams.xy(suite, 'Th', 'Ba/Th', { window: { x: [0.5, 4], y: [0, 150] } });
    expect(diagram.counts).toEqual({ plotted: 2, notPlotted: 3, reasons: { 'without Ba': 1, 'without Th': 1, 'outside the window': 1 } });
    expect(captionOf(diagram.spec)).toContain('2 samples plotted; 3 not plotted');
    expect(diagram.description).toContain('2 samples plotted');
  });

  it('that are zero or negative cannot stand on a log axis, and that is said', () => {
    const suite = ww.suiteOf({ columns: [ww.column({ symbol: 'Ba', values: [100, 200, 0] }), ww.column({ symbol: 'Th', values: [1, 2, 3] })] });
    expect(diagrams.xy(suite, 'Th', 'Ba', { scale: 'log' }).counts.reasons).toEqual({ 'not positive, which a log axis cannot show': 1 });
  });

  it('below detection are arrows at their limit, pointing to where the value lies', () => {
    const limited = (limits: number[]) =>
      ww.column({
        symbol: 'Nb',
        values: [3, NaN],
        states: Uint8Array.of(cellState.measured, cellState.belowDetection),
        limits: Float64Array.from(limits),
      });
    const suite = ww.suiteOf({ columns: [limited([NaN, 0.8]), ww.column({ symbol: 'Yb', values: [2, 2] })] });
    const down = diagrams.xy(suite, 'Yb', 'Nb/Yb');
    const arrow = units(down).find((unit) => rowsOf(unit).some(({ d }) => d !== undefined))!;
    expect(rowsOf(arrow)).toMatchObject([{ x: 2, y: 0.4 }]);
    // Arrow shapes are drawn from -1 to 1 around the limit; a down-arrow reaches farther below (positive y) than above.
    const ys = [...String(arrow.mark.shape).matchAll(/[ML](-?[\d.]+),(-?[\d.]+)/g)].map(([, , y]) => Number(y));
    expect(Math.max(...ys)).toBeGreaterThan(-Math.min(...ys));
    expect(down.counts.plotted).toBe(2);
    expect(captionOf(down.spec)).toContain('Arrows');
    // Yb/Nb is then above a bound: the arrow points up.
    const up = units(diagrams.xy(suite, 'Yb', 'Yb/Nb')).find((unit) => rowsOf(unit).some(({ d }) => d !== undefined))!;
    expect(rowsOf(up)).toMatchObject([{ y: 2.5 }]);
    const upYs = [...String(up.mark.shape).matchAll(/[ML](-?[\d.]+),(-?[\d.]+)/g)].map(([, , y]) => Number(y));
    expect(-Math.min(...upYs)).toBeGreaterThan(Math.max(...upYs));
  });

  it('that are altered are open, by label, by another label, or as the user says', () => {
    const suite = ww.suiteOf({
      columns: [ww.column({ symbol: 'SiO2', values: [50, 55, 60] }), ww.column({ symbol: 'MgO', values: [8, 5, 3] })],
      labels: { alteration: ['', 'sericite', 'fresh'], weathered: ['yes', '', ''] },
    });
    const open = (options: ww.diagrams.XyOptions) => rowsOf(markers(diagrams.xy(suite, 'SiO2', 'MgO', options))).map(({ o }) => o !== undefined);
    expect(open({})).toEqual([false, true, false]);
    expect(open({ altered: 'weathered' })).toEqual([true, false, false]);
    expect(open({ altered: [false, false, true] })).toEqual([false, false, true]);
    expect(captionOf(diagrams.xy(suite, 'SiO2', 'MgO').spec)).toContain('Open symbols');
  });

  it('of different groups differ in colour or shape, up to 42 groups', () => {
    const names = Array.from({ length: 42 }, (_, i) => `cone ${i}`);
    const { colours, shapes } = diagrams.groupScale('cone', names) as unknown as { colours: { range: string[] }; shapes: { range: string[] } };
    expect(new Set(names.map((_, i) => `${colours.range[i]} ${shapes.range[i]}`)).size).toBe(42);
  });

  it('of many groups are pooled beyond the largest, and the caption says so', () => {
    const labels = Array.from({ length: 60 }, (_, i) => (i < 30 ? `big ${i % 10}` : `small ${i}`));
    const suite = ww.suiteOf({
      columns: [
        ww.column({ symbol: 'SiO2', values: labels.map((_, i) => 50 + i / 4) }),
        ww.column({ symbol: 'MgO', values: labels.map((_, i) => 9 - i / 10) }),
      ],
      labels: { cone: labels },
    });
    const diagram = diagrams.xy(suite, 'SiO2', 'MgO', { group: 'cone' });
    const domain = markers(diagram).encoding.fill.scale.domain as string[];
    expect(domain).toHaveLength(14);
    expect(domain.at(-1)).toMatch(/^other \(27\)$/);
    expect(captionOf(diagram.spec)).toContain('27 smallest groups');
  });

  it('beyond some 5,000 become bins that count every one of them, in a small specification', () => {
    const suite = madeSuite(ww, { samples: 10_000, groups: 4 });
    const diagram = diagrams.xy(suite, 'SiO2', 'MgO', { group: 'volcano' });
    const bins = markers(diagram);
    expect(bins.mark.type).toBe('rect');
    expect(rowsOf(bins).reduce((sum, { n }) => sum + n, 0)).toBe(10_000);
    expect(diagram.counts.plotted).toBe(10_000);
    expect(JSON.stringify(diagram.spec).length).toBeLessThan(200_000);
    expect(bins.encoding.color.legend.title).toBe('samples in bin');
    expect(captionOf(diagram.spec)).toContain('number of samples in a bin');
  });

  it('show name, group, values and verdict on hovering', () => {
    const diagram = diagrams.tas(madeSuite(ww, { samples: 20, groups: 2 }), { group: 'volcano' });
    expect(markers(diagram).encoding.tooltip.map(({ title }: Spec) => title)).toEqual([
      'sample',
      'volcano',
      'verdict',
      'SiO₂ (wt %, volatile-free)',
      'Na₂O + K₂O (wt %, volatile-free)',
    ]);
    expect(rowsOf(markers(diagram))[0]).toMatchObject({ t0: 'KE-1', t1: 'Ketu', t2: expect.stringMatching(/basalt|andesite|dacite/) });
    expect(markers(diagram).params.map(({ name }: Spec) => name)).toEqual(['zoom0', 'pick0']);
  });

  it('keep their place in the specification to six digits', () => {
    const suite = ww.suiteOf({ columns: [ww.column({ symbol: 'SiO2', values: [51.234567891] }), ww.column({ symbol: 'MgO', values: [7.1] })] });
    expect(rowsOf(markers(diagrams.xy(suite, 'SiO2', 'MgO')))[0].x).toBe(51.2346);
  });

  it('say so when errors are asked for and none is known', () => {
    const suite = ww.suiteOf({ columns: [ww.column({ symbol: 'SiO2', values: [50, 60] }), ww.column({ symbol: 'MgO', values: [8, 3] })] });
    expect(captionOf(diagrams.xy(suite, 'SiO2', 'MgO', { errors: 'bars' }).spec)).toContain('No 1σ is known');
  });

  it('with a limit on one axis and nothing on the other are not drawn', () => {
    const states = Uint8Array.of(cellState.belowDetection, cellState.measured);
    const suite = ww.suiteOf({
      columns: [ww.column({ symbol: 'Nb', values: [NaN, 3], states, limits: Float64Array.of(1, NaN) }), ww.column({ symbol: 'Yb', values: [NaN, 2] })],
    });
    const diagram = diagrams.xy(suite, 'Yb', 'Nb');
    expect(diagram.counts).toEqual({ plotted: 1, notPlotted: 1, reasons: { 'without Yb': 1 } });
    expect(captionOf(diagram.spec)).not.toContain('Arrows');
  });

  it('draws errors where they are known', () => {
    const suite = ww.suiteOf({
      columns: [ww.column({ symbol: 'SiO2', values: [50, 60], sigma: [0.5, NaN] }), ww.column({ symbol: 'MgO', values: [8, 3], sigma: [0.2, 0.1] })],
    });
    const bars = units(diagrams.xy(suite, 'SiO2', 'MgO', { errors: 'bars' }))[0];
    expect(rowsOf(bars)).toMatchObject([
      { x: 49.5, x2: 50.5, y: 8 },
      { y: 7.8, y2: 8.2 },
      { y: 2.9, y2: 3.1 },
    ]);
    const ellipse = units(diagrams.xy(suite, 'SiO2', 'MgO', { errors: 'ellipses' }))[0];
    // Every point of the ellipse lies one σ from its middle.
    for (const { x, y } of rowsOf(ellipse)) expect(((x - 50) / 0.5) ** 2 + ((y - 8) / 0.2) ** 2).toBeCloseTo(1, 3);
  });
});

describe('bad arguments', () => {
  const suite = madeSuite(ww, { samples: 12, groups: 2 });
  const bad: [string, () => unknown, RegExp][] = [
    ['no suite', () => diagrams.tas(undefined as never), /tas: the first argument must be a Suite/],
    ['unknown group', () => diagrams.tas(suite, { group: 'island' }), /no label "island".*sample, volcano/],
    ['bad window', () => diagrams.tas(suite, { window: { x: [60, 50] } }), /window must be "data", "whole"/],
    ['bad window word', () => diagrams.xy(suite, 'SiO2', 'MgO', { window: 'all' as never }), /window must be/],
    ['bad errors', () => diagrams.xy(suite, 'SiO2', 'MgO', { errors: 'box' as never }), /errors must be "none", "bars" or "ellipses", not "box"/],
    ['flags of another length', () => diagrams.xy(suite, 'SiO2', 'MgO', { altered: [true] }), /altered has 1 entries, the suite has 12/],
    ['bad scale', () => diagrams.xy(suite, 'SiO2', 'MgO', { scale: 'ln' as never }), /scale of x must be "linear" or "log", not "ln"/],
    ['missing analyte', () => diagrams.xy(suite, 'SiO2', 'Re'), /needs Re, which this suite does not hold/],
    ['unknown scheme', () => diagrams.scheme(suite, 'no-such'), /no scheme "no-such"/],
    ['no axis at all', () => diagrams.tas(suite.only(['MgO'])), /tas: no sample has what the axes of "tas" need/],
    ['other axes', () => diagrams.tas(suite, { also: ['afm'] }), /"afm" has other axes/],
    ['unknown reference', () => diagrams.spider(suite, { reference: 'moon' }), /no reservoir "moon"/],
    ['groups without a label', () => diagrams.rareEarths(suite, { curves: 'groups' }), /needs a label to group by/],
    ['nothing to show', () => diagrams.harker(suite, { show: ['Re'] }), /holds none of Re/],
    ['bad path', () => diagrams.tas(suite, { paths: [{}] as never }), /each of paths must be/],
    ['tiny frame', () => diagrams.tas(suite, { width: 3 }), /width must be 80 to 4000 pixels, not 3/],
  ];
  it.each(bad)('%s: one clear error', (_, draw, message) => {
    expect(draw).toThrow(message);
  });

  it('refuses too many ellipses with advice', async () => {
    const many = madeSuite(ww, { samples: 700, groups: 1 });
    expect(() => diagrams.xy(many, 'SiO2', 'MgO', { errors: 'ellipses' })).toThrow(/choose errors: "bars"/);
  });
});

describe('Harker panels and patterns', () => {
  it('leave out what the suite lacks, and say so', () => {
    const suite = madeSuite(ww, { samples: 20, groups: 2 });
    const diagram = diagrams.harker(suite, { show: ['MgO', 'Re', 'K2O'] });
    expect(panelsOf(diagram.spec)).toHaveLength(2);
    expect(captionOf(diagram.spec)).toContain('No panel for Re');
  });

  it('bridge a missing element by a dotted line, and draw limits as arrows', () => {
    const values: Record<string, number[]> = { La: [10], Ce: [22], Pr: [NaN], Nd: [14], Sm: [3.3] };
    const suite = ww.suiteOf({
      columns: [
        ...Object.entries(values).map(([symbol, each]) => ww.column({ symbol, values: each })),
        ww.column({ symbol: 'Eu', values: [NaN], states: Uint8Array.of(cellState.belowDetection), limits: Float64Array.of(0.58) }),
      ],
    });
    const all = units(diagrams.rareEarths(suite));
    const bridge = all.find(({ mark }) => mark.type === 'line' && mark.strokeDash !== undefined)!;
    const at = (element: string, value: number) => [
      ww.rareEarths.indexOf(element as 'La'),
      Number((value / ww.reservoir('chondrite-c1-1989').values.get(element)!.value).toPrecision(6)),
    ];
    expect(rowsOf(bridge).map(({ x, y }) => [x, y])).toEqual([at('Ce', 22), at('Nd', 14)]);
    const arrow = all.find(({ mark }) => mark.type === 'point' && String(mark.shape).startsWith('M'))!;
    expect(rowsOf(arrow).map(({ x, y }) => [x, y])).toEqual([at('Eu', 0.58)]);
  });

  it('draw a model path on their own axes, with ticks at round F', () => {
    const F = Float64Array.of(1, 0.8, 0.6, 0.5);
    const liquid = ww.suiteOf({
      columns: [ww.column({ symbol: 'Yb', values: [2, 2.4, 3, 3.5] }), ww.column({ symbol: 'Sr', values: [400, 370, 330, 300] })],
    });
    const path = {
      process: 'Rayleigh crystallisation',
      F,
      meaning: 'liquid left',
      liquid,
      coefficients: [],
      notes: [],
      lineage: [],
      toMimeBundle: () => ({}),
    };
    const diagram = diagrams.xy(madeSuite(ww, { samples: 10, groups: 1 }), 'Yb', 'Sr', { paths: [path] });
    const dots = units(diagram).find((unit) => unit.mark.type === 'point' && rowsOf(unit).some(({ name }) => name === '0.8'))!;
    expect(rowsOf(dots).map(({ name }) => name)).toEqual(['0.5', '0.6', '0.7', '0.8', '0.9']);
    expect(rowsOf(dots).find(({ name }) => name === '0.8')).toMatchObject({ x: 2.4, y: 370 });
    // Halfway between two steps: straight in between.
    expect(rowsOf(dots).find(({ name }) => name === '0.7')).toMatchObject({ x: 2.7, y: 350 });
    expect(captionOf(diagram.spec)).toContain('F, liquid left');
  });
});
