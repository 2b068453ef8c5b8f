import fc from 'fast-check';
import readExcelFile from 'read-excel-file/node';
import './helpers';
import { describe, expect, it } from 'vitest';
import { readWorkbook } from '../../kernel-lib/assay/workbook';
import { xmlText } from '../../kernel-lib/assay/xml-text';
// eslint-disable-next-line @typescript-eslint/no-require-imports
const sheets = require('@e965/xlsx') as typeof import('@e965/xlsx');

type Cell = string | number | boolean | null;

function written(rows: readonly (readonly Cell[])[], bookType: 'xlsx' | 'biff8' | 'ods' = 'xlsx', bookSST = false): Buffer {
  const book = sheets.utils.book_new();
  sheets.utils.book_append_sheet(book, sheets.utils.aoa_to_sheet(rows as Cell[][]), 'Data & more');
  return sheets.write(book, { type: 'buffer', bookType, compression: true, bookSST }) as Buffer;
}

const texts = (bytes: Buffer, rows: number, columns: number) => {
  const [{ grid }] = readWorkbook(bytes, 'made');
  return Array.from({ length: rows }, (_, row) => Array.from({ length: columns }, (_, column) => grid.text(row, column)));
};

describe('workbooks', () => {
  const text = fc.string({ unit: fc.constantFrom('a', '<', '&', '"', "'", ' ', 'é', 'µ', '₂', '\n', '>', '=', '5', '𝛿'), maxLength: 8 });
  const cell = fc.oneof(
    text,
    fc.double({ noNaN: true, noDefaultInfinity: true }).filter((value) => !Object.is(value, -0)),
    fc.boolean(),
    fc.constant(null),
  );
  const shown = (value: Cell) =>
    value === null ? '' : typeof value === 'boolean' ? String(value).toUpperCase() : typeof value === 'number' ? String(value) : value.trim();

  it('have the cells that two general libraries wrote and read', async () => {
    await fc.assert(
      fc.asyncProperty(
        fc.array(fc.array(cell, { minLength: 3, maxLength: 3 }), { minLength: 1, maxLength: 6 }),
        fc.boolean(),
        async (rows, shared) => {
          const bytes = written(rows, 'xlsx', shared);
          const found = texts(bytes, rows.length, 3);
          expect(found).toEqual(rows.map((row) => row.map(shown)));
          const [{ data }] = (await readExcelFile(bytes)) as unknown as { data: Cell[][] }[];
          data.forEach((row, i) => row.forEach((value, j) => expect(found[i][j]).toBe(shown(value))));
        },
      ),
      { numRuns: 150 },
    );
  });

  it.each(['biff8', 'ods'] as const)('of the kind %s have the same cells', (kind) => {
    const rows: Cell[][] = [
      ['Sample', 'SiO2 (wt%)', '<0.5'],
      ['é & <b>', 52.125, null],
      ['007', -1e-7, 'n.d.'],
    ];
    expect(texts(written(rows, kind), 3, 3)).toEqual(rows.map((row) => row.map(shown)));
  });

  it('decode the characters of XML and nothing else', () => {
    expect(xmlText('&lt;&#60;&#x3c;&amp;lt;&apos;&quot;')).toBe(`<<<&lt;'"`);
    expect(xmlText('&lol; &constructor; &#0;')).toBe('&lol; &constructor; ');
  });
});
