import { describe, expect, test } from 'vitest';
import {
  atComposition,
  column,
  crossArcTrend,
  slabBelow,
  slabFromDepths,
  slabPoints,
  suiteOf,
  volcanoesAbove,
  withCoordinates,
  type Suite,
} from 'wedgework';
import { random } from './synthetic';

/** Volcanoes of an invented arc: K2O at 60 % SiO2 rises by `rise` wt % per 100 km of slab depth; `each` samples a volcano. */
function arc(options: { rise: number; depths?: readonly number[]; each?: number; seed?: number; wild?: number }): Suite {
  const { rise, depths = [95, 100, 110, 125, 140, 155, 170], each = 14, seed = 4, wild = 0 } = options;
  const { uniform, normal } = random(seed);
  const rows = depths.flatMap((depth, v) => Array.from({ length: each }, (_, k) => ({ v, depth, silica: 54 + 12 * uniform(), k })));
  const potash = rows.map(({ depth, silica, k }) => 0.8 + (rise * (depth - 100)) / 100 + 0.07 * (silica - 60) + 0.06 * normal() + (k < wild ? 3 : 0));
  return suiteOf({
    columns: [
      column({ symbol: 'SiO2', values: rows.map(({ silica }) => silica) }),
      column({ symbol: 'K2O', values: potash }),
      column({ symbol: 'SumAsGiven', values: rows.map(() => 99) }),
      column({ symbol: 'SlabDepth', values: rows.map(({ depth }) => depth), unit: 'km', kind: 'quantity', sigma: rows.map(() => 10) }),
      column({ symbol: 'Ba', values: rows.map(({ depth }) => 200 + depth + 20 * normal()) }),
      column({ symbol: 'Th', values: rows.map(() => 2) }),
    ],
    labels: { volcano: rows.map(({ v }) => `V${v}`) },
  });
}

describe('one value a volcano', () => {
  test('K60: the line at 60 % SiO2 within its window, with its error, and robust against one sample in seven being altered', () => {
    for (const wild of [0, 2]) {
      const { groups, unit } = atComposition(arc({ rise: 1, wild }), 'K60');
      expect(unit).toBe('wt%');
      expect(groups).toHaveLength(7);
      for (const [i, depth] of [95, 100, 110, 125, 140, 155, 170].entries()) {
        expect(Math.abs(groups[i].value - (0.8 + (depth - 100) / 100))).toBeLessThan(0.12);
        expect(groups[i].sigma).toBeGreaterThan(0);
        expect(groups[i].used).toBeLessThanOrEqual(groups[i].of);
      }
    }
  });

  test('the errors are honest: values lie within 2σ of the truth for most volcanoes', () => {
    let inside = 0;
    for (let seed = 1; seed <= 10; seed++)
      atComposition(arc({ rise: 0, seed }), 'K57.5').groups.forEach(
        ({ value, sigma }) => (inside += Math.abs(value - (0.8 - 0.07 * 2.5)) < 2 * sigma ? 1 : 0),
      );
    expect(inside / 70).toBeGreaterThan(0.85);
  });

  test('Na6.0 and Ca6.0: soda and lime at 6 % MgO', () => {
    const magnesia = [4.2, 4.8, 5.3, 5.9, 6.4, 7.1, 7.7];
    const suite = suiteOf({
      columns: [
        column({ symbol: 'MgO', values: magnesia }),
        column({ symbol: 'Na2O', values: magnesia.map((value) => 2.6 - 0.2 * (value - 6)) }),
        column({ symbol: 'CaO', values: magnesia.map((value) => 10.4 + 0.5 * (value - 6)) }),
      ],
      labels: { volcano: magnesia.map(() => 'A') },
    });
    expect(atComposition(suite, 'Na6.0').groups[0].value).toBeCloseTo(2.6, 9);
    expect(atComposition(suite, 'Ca6.0').groups[0].value).toBeCloseTo(10.4, 9);
    expect(atComposition(suite, 'Na6.0').lineage.at(-1)!.sources).toContain('plank_langmuir_1988');
    expect(atComposition(suite, 'Na6.0').notes.join()).toMatch(/not on a volatile-free basis/);
  });

  test('too few samples or too little silica give no value, with the reason', () => {
    const few = atComposition(arc({ rise: 1, each: 3 }), 'K60');
    expect(few.groups.every(({ value, note }) => Number.isNaN(value) && note.includes('needs 5 samples'))).toBe(true);
    const narrow = atComposition(arc({ rise: 1 }), { of: 'K2O', at: { index: 'SiO2', value: 75, window: [70, 80] } });
    expect(narrow.groups[0].note).toMatch(/needs 5 samples with SiO2 70–80/);
    const beyond = atComposition(arc({ rise: 1 }), { of: 'K2O', at: { index: 'SiO2', value: 68, window: [54, 72] } });
    expect(beyond.groups[0].note).toMatch(/extrapolated by/);
    const far = atComposition(arc({ rise: 1 }), { of: 'K2O', at: { index: 'SiO2', value: 75, window: [54, 76] } });
    expect(far.groups[0].note).toMatch(/is too far from 75/);
    expect(far.groups[0].value).toBeNaN();
  });

  test('bad options say what is allowed', () => {
    const suite = arc({ rise: 1 });
    expect(() => atComposition(suite, 'K70' as never)).toThrow(/There are: K60, K57.5, K55, Na6.0, Ca6.0/);
    expect(() => atComposition(suite, { of: 'K2O', method: 'ols' as never })).toThrow(/"theil-sen" or "huber"/);
    expect(() => atComposition(suite, { of: 'K2O', by: 'island' })).toThrow(/no label "island"/);
    expect(() => atComposition(suite, { of: 'Rb' })).toThrow(/needs Rb/);
    expect(() => atComposition(suite, { of: 'K2O', at: { index: 'SiO2', value: 60, window: [65, 55] } })).toThrow(/window/);
  });
});

describe('trends across an arc', () => {
  test('a trend is found, with an interval that holds the truth and a plain sentence', () => {
    for (const method of ['theil-sen', 'huber'] as const) {
      const trend = crossArcTrend(arc({ rise: 1 }), 'K60', { method });
      expect(trend.verdict).toBe('trend');
      expect(trend.slopeInterval[0]).toBeLessThan(0.0105);
      expect(trend.slopeInterval[1]).toBeGreaterThan(0.0095);
      expect(trend.slopeInterval[0]).toBeGreaterThan(0);
      expect(trend.sentence).toMatch(/^K2O at 60 % SiO2 rises with slab depth across 7 volcanoes \(.*wt % per 100 km, 95 % interval/);
      expect(trend.band.x[0]).toBe(95);
    }
  });

  test('where there is none, it says so: in 40 arcs without a trend, at most four are called one', () => {
    let called = 0;
    for (let seed = 1; seed <= 40; seed++) {
      const trend = crossArcTrend(arc({ rise: 0, seed }), 'K60', { draws: 300 });
      if (trend.verdict === 'trend') called++;
      if (trend.verdict === 'none') expect(trend.sentence).toMatch(/^No trend of K2O at 60 % SiO2 with slab depth is shown/);
    }
    // 5 % by design: 2 of 40 expected, more than 5 has a probability of 1 %.
    expect(called).toBeLessThanOrEqual(5);
  });

  test('any tracer: Ba/Th', () => {
    const trend = crossArcTrend(arc({ rise: 1 }), { of: 'Ba/Th', against: 'SlabDepth' });
    expect(trend.verdict).toBe('trend');
    expect(Math.abs(trend.line.slope - 0.5)).toBeLessThan(0.25);
  });

  test('the same seed gives the same result; it is in the lineage', () => {
    const a = crossArcTrend(arc({ rise: 1 }), 'K60', { seed: 5 });
    const b = crossArcTrend(arc({ rise: 1 }), 'K60', { seed: 5 });
    expect(a.slopeInterval).toEqual(b.slopeInterval);
    expect(a.lineage.at(-1)!.detail['seed']).toBe(5);
  });

  test('volcanoes too close in depth are pointed out; too few are refused', () => {
    const close = crossArcTrend(arc({ rise: 1, depths: [100, 101, 102, 103, 104, 105] }), 'K60');
    expect(close.notes.join(' ')).toMatch(/spans only 5 km.*a trend could not be seen/);
    expect(() => crossArcTrend(arc({ rise: 1, depths: [100, 120, 140, 160] }), 'K60')).toThrow(
      /4 volcanoes have both K2O and SlabDepth; a trend needs 5/,
    );
    expect(() => crossArcTrend(arc({ rise: 1 }), 'K60', { against: 'ThermalParameter' })).toThrow(/thermal parameter from withKinematics/);
    expect(() => crossArcTrend(arc({ rise: 1 }), 'K60', { confidence: 95 })).toThrow(/share such as 0.95/);
    expect(() => crossArcTrend(arc({ rise: 1 }), 'K60', { draws: 5 })).toThrow(/whole number from 100/);
  });
});

describe('joined to a suite', () => {
  // A plane below 40–60° W: 50 km deep at the trench side, 30 km more each degree west.
  const grid = { longitude: [] as number[], latitude: [] as number[], depth: [] as number[] };
  for (let x = -135; x <= -127; x += 0.5)
    for (let y = -48; y <= -41; y += 0.5) (grid.longitude.push(x), grid.latitude.push(y), grid.depth.push(20 - 55 * (x + 127.5)));
  const slab = slabFromDepths(slabPoints(grid));
  const suite = withCoordinates(
    suiteOf({ columns: [column({ symbol: 'SiO2', values: [52, 55, 60, 61] })], labels: { volcano: ['Fore', 'Fore', 'Rear', 'Lost'] } }),
    { Fore: [-129, -44], Rear: [-131, -44.5], Lost: [-20, 30] },
  );

  test('columns, states and the label; samples without a slab below have missing cells', () => {
    const placed = slabBelow(slab, suite);
    expect(placed.values('SlabDepth')[0]).toBeCloseTo(20 + 55 * 1.5, 0);
    expect(placed.column('SlabDepth').sigma![0]).toBeGreaterThanOrEqual(10);
    expect(placed.label('slabSupport')).toEqual(['within data', 'within data', 'within data', 'no slab']);
    expect(placed.column('SlabDepth').states[3]).toBe(3);
    expect(placed.column('TrenchDistance').states[0]).toBe(3); // a grid brings no line
    expect(() => slabBelow(slab, suiteOf({ columns: [] }))).toThrow(/latitude.*longitude.*withCoordinates/s);
    expect(() => slabBelow({} as never, suite)).toThrow(/slab surface/);
    expect(() => withCoordinates(suite, { Fore: [10, 100] })).toThrow(/latitude 100/);
  });

  test('the table of volcanoes points out what is unusual', () => {
    const table = volcanoesAbove(slabBelow(slab, suite));
    const rear = table.volcanoes.find(({ group }) => group === 'Rear')!;
    expect(rear.samples).toBe(1);
    expect(table.volcanoes.find(({ group }) => group === 'Lost')!.remarks.join()).toMatch(/no slab below/);
    expect(table.notes.join(' ')).toMatch(/common practice/);
    expect(() => volcanoesAbove(suite)).toThrow(/Join the slab first/);
  });
});
