import { inspect } from 'node:util';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cellState, column, countStates, fillMissing, fromFrame, resolveColumn, suiteOf } from 'wedgework';

const three = () =>
  suiteOf({
    columns: [
      column({ symbol: 'SiO2', values: [52, 60, 70] }),
      column({ symbol: 'Ba', values: [200, NaN, NaN], states: Uint8Array.of(0, 1, 3), limits: Float64Array.of(NaN, 5, NaN), sigma: [4, NaN, NaN] }),
    ],
    labels: { sample: ['A', 'B', 'C'], volcano: ['Ketu', 'Halvo', 'Ketu'] },
  });

describe('column', () => {
  it('takes the unit and kind of a known analyte', () => {
    expect(column({ symbol: 'Ba', values: [1] })).toMatchObject({ unit: 'ppm', kind: 'element' });
    expect(column({ symbol: 'slab depth', values: [1], unit: 'km' })).toMatchObject({ unit: 'km', kind: 'quantity' });
  });

  it('makes whatever is not a finite number a missing cell', () => {
    expect([...column({ symbol: 'Ba', values: [1, NaN, Infinity] }).states]).toEqual([cellState.measured, cellState.missing, cellState.missing]);
  });

  it('names the array of the wrong length', () => {
    expect(() => column({ symbol: 'Ba', values: [1, 2], sigma: [1] })).toThrow('Column Ba: sigma has 1 cells, values has 2');
  });
});

describe('Suite', () => {
  it('says what it lacks, and what it has', () => {
    expect(() => three().column('Th')).toThrow('no column "Th". It has: SiO2, Ba');
    expect(() => three().label('unit')).toThrow('no label "unit". It has: sample, volcano');
    expect(() => three().sample('Z')).toThrow('The first names are: A, B, C');
    expect(() => three().rows([3])).toThrow('rows are 0 to 2');
  });

  it('refuses parts that do not fit together', () => {
    expect(() => suiteOf({ columns: [column({ symbol: 'Ba', values: [1] }), column({ symbol: 'Ba', values: [1] })] })).toThrow('two columns named "Ba"');
    expect(() => suiteOf({ columns: [column({ symbol: 'Ba', values: [1] })], labels: { sample: ['a', 'b'] } })).toThrow('"Ba" has 1, others have 2');
  });

  it('chooses rows by label, by value and by range, ends included', () => {
    expect(three().where({ volcano: 'Ketu' }).samples).toEqual(['A', 'C']);
    expect(three().where({ SiO2: { from: 60 } }).samples).toEqual(['B', 'C']);
    expect(three().where({ SiO2: { from: 52, to: 60 }, volcano: ['Ketu', 'Mera'] }).samples).toEqual(['A']);
    expect(three().where({ SiO2: [52, 70] }).samples).toEqual(['A', 'C']);
    // A cell without a usable value meets no range.
    expect(three().where({ Ba: {} }).samples).toEqual(['A']);
    expect(() => three().where({ volcano: { from: 1 } })).toThrow('"volcano" is a label');
    expect(() => three().where({ Th: { from: 1 } })).toThrow('no label "Th"');
  });

  it('carries states, limits and 1σ along with the rows', () => {
    const { states, limits, sigma } = three().rows([1, 0]).column('Ba');
    expect([...states]).toEqual([cellState.belowDetection, cellState.measured]);
    expect([...limits!]).toEqual([5, NaN]);
    expect([...sigma!]).toEqual([NaN, 4]);
  });

  it('records every step in the lineage and leaves the first suite as it was', () => {
    const first = three();
    const chosen = first.where({ volcano: 'Ketu' }).with([column({ symbol: 'Th', values: [1, 2] })]);
    expect(chosen.lineage.map(({ what }) => what)).toEqual(['where', 'with']);
    expect(chosen.lineage[0].detail).toMatchObject({ kept: 2, of: 3 });
    expect(first.lineage).toHaveLength(0);
    expect(first.analytes).toEqual(['SiO2', 'Ba']);
  });

  it('shares the columns that a step does not change', () => {
    const first = three();
    expect(first.with([column({ symbol: 'Th', values: [1, 2, 3] })]).column('SiO2')).toBe(first.column('SiO2'));
  });

  it('groups in order of first appearance, every row in one group', () => {
    const groups = three().groupBy('volcano');
    expect([...groups.keys()]).toEqual(['Ketu', 'Halvo']);
    expect([...groups.values()].flatMap((group) => group.samples).sort()).toEqual(['A', 'B', 'C']);
  });

  it('asks which row is meant when a name stands twice', () => {
    const twice = suiteOf({ columns: [], labels: { sample: ['A', 'A'] } });
    expect(() => twice.sample('A')).toThrow('"A" names 2 rows (1, 2)');
  });

  it('holds columns and labels with treacherous names like any other', () => {
    const odd = suiteOf({ columns: [column({ symbol: '__proto__', values: [1] }), column({ symbol: 'constructor', values: [2] })], labels: new Map([['toString', ['x']]]) });
    expect(odd.values('__proto__')[0]).toBe(1);
    expect(odd.values('constructor')[0]).toBe(2);
    expect(odd.label('toString')).toEqual(['x']);
    expect(() => odd.column('hasOwnProperty')).toThrow('no column');
  });

  it('shows limits as limits and missing cells as nothing', () => {
    const text = String(three().toMimeBundle()['text/plain']);
    expect(text).toContain('<5');
    expect(text).toContain('Suite of 3 samples × 2 columns (cells: 4 measured, 1 below detection, 1 missing)');
    expect(inspect(three())).toContain('Suite of 3 samples');
  });
});

describe('data frames', () => {
  it('go out and come back', () => {
    const back = fromFrame(three().toFrame());
    expect(back.samples).toEqual(['A', 'B', 'C']);
    expect([...back.values('SiO2')]).toEqual([52, 60, 70]);
    expect(back.label('volcano')).toEqual(['Ketu', 'Halvo', 'Ketu']);
  });

  it('keep a number that single precision would spoil', () => {
    const frame = suiteOf({ columns: [column({ symbol: '143Nd/144Nd', values: [0.5130581234567] })] }).toFrame();
    expect(fromFrame(frame).values('143Nd/144Nd')[0]).toBe(0.5130581234567);
  });

  it('take columns with treacherous names', () => {
    const frame = suiteOf({ columns: [column({ symbol: 'constructor', values: [1] })], labels: { sample: ['a'] } }).toFrame();
    expect(fromFrame(frame).values('constructor')[0]).toBe(1);
  });

  it('refuse text in the column of an analyte, naming the cell', () => {
    const frame = { columns: ['SiO2'], values: [[50], ['<1']], column: () => undefined };
    expect(() => fromFrame(frame)).toThrow('Frame column "SiO2", row 2: "<1" is not a number');
    expect(() => fromFrame([] as never)).toThrow('takes a data frame');
  });
});

describe('resolveColumn', () => {
  it('finds an element from its oxide and total iron from its other form', () => {
    const suite = suiteOf({ columns: [column({ symbol: 'TiO2', values: [1] }), column({ symbol: 'Fe2O3T', values: [10] })] });
    // 1 wt % TiO2 = 5993.5 ppm Ti; factor 0.59935 (IUPAC 2021 weights; handbook tables 0.5995).
    expect(resolveColumn(suite, 'Ti')!.values[0]).toBeCloseTo(5993.5, 1);
    expect(resolveColumn(suite, 'FeOT')!.values[0]).toBeCloseTo(8.9981, 4);
    expect(resolveColumn(suite, 'FeOT')!.states[0]).toBe(cellState.derived);
    expect(resolveColumn(suite, 'Ba')).toBeUndefined();
  });

  it('fills only the missing cells from the other form', () => {
    const suite = suiteOf({ columns: [column({ symbol: 'FeOT', values: [8, NaN] }), column({ symbol: 'Fe2O3T', values: [99, 10] })] });
    expect(resolveColumn(suite, 'FeOT')!.values[0]).toBe(8);
    expect(resolveColumn(suite, 'FeOT')!.values[1]).toBeCloseTo(8.9981, 4);
  });

  it('keeps a below-detection cell rather than filling it', () => {
    const below = column({ symbol: 'Ba', values: [NaN], states: Uint8Array.of(cellState.belowDetection), limits: Float64Array.of(5) });
    expect(fillMissing(below, column({ symbol: 'Ba', values: [7] })).states[0]).toBe(cellState.belowDetection);
  });
});

it('countStates accounts for every cell', () => {
  fc.assert(
    fc.property(fc.array(fc.integer({ min: 0, max: 4 })), (states) => {
      const counts = countStates(column({ symbol: 'Ba', values: states.map(() => 1), states: Uint8Array.from(states) }));
      expect(counts.reduce((sum, count) => sum + count, 0)).toBe(states.length);
    }),
  );
});
