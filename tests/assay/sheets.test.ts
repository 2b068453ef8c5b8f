import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { readAssays, type ReadAssaysOptions } from 'wedgework';
import { cells } from './helpers';

/** What a sheet of the corpus must become; beside the sheet, as NAME.expected.json. */
interface Expected {
  readonly labels: Readonly<Record<string, readonly string[]>>;
  /** Cells as one reads them: a number, `<limit`, `>limit`, '' for missing; in wt % and ppm. */
  readonly columns: Readonly<Record<string, readonly (number | string)[]>>;
  readonly sigma?: Readonly<Record<string, readonly (number | null)[]>>;
  readonly options?: ReadAssaysOptions;
  readonly samplesIn?: 'rows' | 'columns';
  /** Relative difference that computed cells may have (default: none). */
  readonly close?: number;
  readonly iron?: Readonly<Record<string, number>>;
  readonly readIron?: boolean;
  /** Words that the list "please check" must hold. */
  readonly says?: readonly string[];
  readonly ignored?: readonly string[];
}

const folder = join(__dirname, 'sheets');
const sheets = readdirSync(folder).filter((name) => !name.endsWith('.json'));

// Written for the purpose, values invented: each a layout, an encoding or a habit of laboratories and printed tables.
describe('sheets as laboratories and papers give them', () => {
  it('are at least forty', () => expect(sheets.length).toBeGreaterThanOrEqual(40));

  it.each(sheets)('%s', async (name) => {
    const expected = JSON.parse(readFileSync(join(folder, name.replace(/\.\w+$/, '.expected.json')), 'utf8')) as Expected;
    const { suite, report } = await readAssays(join(folder, name), {
      ...(expected.readIron === true ? {} : { iron: 'as-given' }),
      ...expected.options,
    });
    expect(Object.fromEntries(suite.labels)).toEqual(expected.labels);
    const found = Object.fromEntries([...suite.columns.keys()].map((symbol) => [symbol, cells(suite, symbol)]));
    if (expected.close === undefined) expect(found).toEqual(expected.columns);
    else {
      expect(Object.keys(found)).toEqual(Object.keys(expected.columns));
      for (const [symbol, wanted] of Object.entries(expected.columns)) {
        wanted.forEach((cell, i) =>
          typeof cell === 'number'
            ? expect(Math.abs((found[symbol][i] as number) / cell - 1)).toBeLessThan(expected.close!)
            : expect(found[symbol][i]).toBe(cell),
        );
      }
    }
    for (const [symbol, wanted] of Object.entries(expected.sigma ?? {})) {
      wanted.forEach((sigma, i) =>
        sigma === null ? expect(suite.column(symbol).sigma![i]).toBeNaN() : expect(suite.column(symbol).sigma![i]).toBeCloseTo(sigma, 12),
      );
    }
    expect(report.samplesIn).toBe(expected.samplesIn ?? 'rows');
    if (expected.iron !== undefined) expect(report.iron).toEqual(expected.iron);
    for (const words of expected.says ?? []) expect(report.pleaseCheck.join('\n')).toContain(words);
    for (const words of expected.ignored ?? []) expect(report.ignored.join('\n')).toContain(words);
  });
});
