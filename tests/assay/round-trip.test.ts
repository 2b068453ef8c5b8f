import { readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { dirname } from 'node:path';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cellState, column, readAssays, suiteOf, writeAssays, writeImportReport, writeTable, type Column, type Suite } from 'wedgework';
import { temporary } from './helpers';

const positive = fc.oneof(
  fc.double({ min: 1e-9, max: 1e9, noNaN: true }),
  fc.integer({ min: 0, max: 1_000_000 }).map((whole) => whole / 1000),
);
const anyNumber = fc.oneof(
  positive,
  fc.double({ noNaN: true, noDefaultInfinity: true }).filter((value) => !Object.is(value, -0)),
);

const symbols = [
  'SiO2',
  'TiO2',
  'FeOT',
  'Fe2O3',
  'LOI',
  'Ba',
  'Sr',
  'Au',
  '87Sr/86Sr',
  'epsilon-Nd',
  'Mg-number',
  'depth (km)',
  'Eu/Eu*',
  '=risk',
  'Zr XRF',
  'latitude',
] as const;

function columnOf(symbol: string, size: number): fc.Arbitrary<Column> {
  const known = { latitude: { unit: '°' }, 'Mg-number': { unit: '' }, 'depth (km)': { unit: 'km' }, 'Zr XRF': { unit: 'ppm' } }[symbol];
  const free = ['Mg-number', 'depth (km)', 'Eu/Eu*', '=risk', 'Zr XRF'].includes(symbol);
  const value =
    symbol === 'latitude' ? fc.double({ min: -90, max: 90, noNaN: true }).filter((each) => !Object.is(each, -0)) : free ? anyNumber : positive;
  const state = fc.constantFrom(
    cellState.measured,
    cellState.measured,
    cellState.belowDetection,
    cellState.aboveRange,
    cellState.missing,
    cellState.derived,
  );
  const cell = fc.record({ state, value, limit: fc.option(positive, { nil: NaN }), sigma: fc.option(positive, { nil: NaN }) });
  return fc.tuple(fc.array(cell, { minLength: size, maxLength: size }), fc.boolean()).map(([all, withSigma]) => {
    const held = (k: number) => all[k].state === cellState.measured || all[k].state === cellState.derived;
    const bounded = (k: number) => all[k].state === cellState.belowDetection || all[k].state === cellState.aboveRange;
    return column({
      symbol,
      ...known,
      values: Float64Array.from(all, (each, k) => (held(k) ? each.value : NaN)),
      states: Uint8Array.from(all, (each) => each.state),
      limits: Float64Array.from(all, (each, k) => (bounded(k) ? each.limit : NaN)),
      ...(withSigma ? { sigma: Float64Array.from(all, ({ sigma }) => sigma) } : {}),
    });
  });
}

// Texts that break careless writers: formulas, quotes, separators, scripts, names of object parts, numbers that are names.
const nasty = fc.constantFrom(
  '=1+1',
  '@x',
  '+44',
  '-7',
  "'=a",
  "''-",
  'a,b',
  'a;b',
  'say "x"',
  'line\nbreak',
  '<script>alert(1)</script>',
  '__proto__',
  'constructor',
  '007',
  '1e5',
  '#N/A',
  'µ-Ω',
  '<0.5',
  'n.d.',
  'TRUE',
  'DL',
  'units',
  "'LOD",
  '2015-12-01',
  ' ',
);
const text = fc
  .oneof(nasty, fc.string({ unit: 'grapheme', maxLength: 12 }))
  .map((each) => each.replace(/[\u0000-\u0008\u000b-\u001f\u007f-\u009f\ufffe\uffff\r]|[\ud800-\udfff]/g, '').trim());

const suites: fc.Arbitrary<Suite> = fc.integer({ min: 1, max: 12 }).chain((size) =>
  fc
    .tuple(
      fc
        .uniqueArray(fc.constantFrom(...symbols), { minLength: 2, maxLength: 8 })
        .chain((chosen) =>
          fc.tuple(...(['SiO2', ...chosen.filter((symbol) => symbol !== 'SiO2')] as string[]).map((symbol) => columnOf(symbol, size))),
        ),
      fc.uniqueArray(fc.constantFrom('volcano', 'rock', 'Ba', 'Sample ID', '__proto__', 'Total', '=note', 'unit (old)', 'lat', 'Method'), {
        maxLength: 3,
      }),
      fc.array(fc.array(text, { minLength: size, maxLength: size }), { minLength: 3, maxLength: 3 }),
      fc.array(text, { minLength: size, maxLength: size }),
    )
    .map(([columns, names, texts, samples]) =>
      suiteOf({
        columns,
        labels: new Map([
          ['sample', samples.map((name, i) => (name === '' ? `S-${i + 1}` : name))],
          ...names.map((name, k): [string, string[]] => [name, texts[k]]),
        ]),
      }),
    ),
);

function same(before: Suite, after: Suite): void {
  expect([...after.labels]).toEqual([...before.labels]);
  expect([...after.columns.keys()]).toEqual([...before.columns.keys()]);
  for (const [symbol, was] of before.columns) {
    const is = after.column(symbol);
    expect({ unit: is.unit, kind: is.kind }).toEqual({ unit: was.unit, kind: was.kind });
    expect([...is.states]).toEqual([...was.states]);
    expect([...is.values]).toEqual([...was.values]);
    const limits = (each: Column) => Array.from(each.states, (_, i) => each.limits?.[i] ?? NaN);
    expect(limits(is)).toEqual(limits(was));
    const sigma = (each: Column) => Array.from(each.states, (_, i) => each.sigma?.[i] ?? NaN);
    expect(sigma(is)).toEqual(sigma(was));
  }
}

describe('writeAssays', () => {
  it.each(['csv', 'xlsx'])('is read back without loss through .%s: numbers, states, limits, 1σ, labels', async (ending) => {
    await fc.assert(
      fc.asyncProperty(suites, async (suite) => {
        const path = temporary(`suite.${ending}`);
        await writeAssays(suite, path);
        const { suite: read } = await readAssays(path, { iron: 'as-given' });
        same(suite, read);
      }),
      { numRuns: ending === 'csv' ? 300 : 120 },
    );
  });

  it('makes formula-like texts inert', async () => {
    const path = temporary('inert.csv');
    await writeAssays(suiteOf({ columns: [column({ symbol: 'Ba', values: [1, 2] })], labels: { sample: ['=HYPERLINK("x")', '@cmd'] } }), path);
    const lines = readFileSync(path, 'utf8').split('\n');
    expect(lines[1]).toBe(`"'=HYPERLINK(""x"")",1`);
    expect(lines[2]).toBe(`'@cmd,2`);
  });

  it('refuses another ending and leaves nothing half-written', async () => {
    const suite = suiteOf({ columns: [column({ symbol: 'Ba', values: [1] })], labels: { sample: ['A'] } });
    await expect(writeAssays(suite, 'x.pdf')).rejects.toThrow(/\.csv or \.xlsx/);
    const path = temporary('broken.csv');
    const broken = {
      name: 'x',
      values: {
        length: 1,
        get 0(): number {
          throw new Error('lost');
        },
      },
    };
    await expect(writeTable(path, [broken], { sample: ['A'] })).rejects.toThrow('lost');
    expect(readdirSync(dirname(path)).filter((name) => name.includes('broken'))).toEqual([]);
  });
});

describe('writeImportReport', () => {
  it('writes every column and every line to check, texts inert', async () => {
    const source = temporary('source.csv');
    writeFileSync(source, 'Sample,=odd,SiO2 (wt%),Ba (ppm)\nA,x,51,oops\n');
    const path = temporary('report.csv');
    const { report } = await readAssays(source);
    writeImportReport(report, path);
    const lines = readFileSync(path, 'utf8').trim().split('\n');
    expect(lines[0]).toBe('column,head,became,name,unit,converted,measured,below,above,missing,unreadable,note');
    expect(lines[2]).toContain("B,'=odd,label,'=odd");
    expect(lines.at(-1)).toContain('Please check: ""Ba (ppm)"": 1 unreadable (first: D2 ""oops"", not a number)');
    expect([...(report.sheetRows as Uint32Array)]).toEqual([2]);
    expect(() => writeImportReport({} as never, path)).toThrow(/report of readAssays/);
  });
});

describe('writeTable', () => {
  it('writes labels, then columns with six significant digits, empty where there is no value', async () => {
    const path = temporary('table.csv');
    await writeTable(path, [column({ symbol: 'Ba/Th', values: [1 / 3, NaN], unit: '' }), { name: 'odd, name', values: [12345678, -0.00001] }], {
      sample: ['A', '=b'],
      rock: ['basalt', 'a,b'],
    });
    expect(readFileSync(path, 'utf8')).toBe(`sample,rock,Ba/Th,"odd, name"\nA,basalt,0.333333,1.23457e+07\n'=b,"a,b",,-1e-05\n`);
  });

  it('refuses columns of unequal length and two of one name', async () => {
    await expect(writeTable('x.csv', [{ name: 'a', values: [1] }], { sample: ['A', 'B'] })).rejects.toThrow(/"a" has 1 rows/);
    await expect(writeTable('x.csv', [{ name: 'sample', values: [1] }], { sample: ['A'] })).rejects.toThrow(/two columns/);
  });
});
