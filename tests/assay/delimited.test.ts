import fc from 'fast-check';
import Papa from 'papaparse';
import './helpers';
import { describe, expect, it } from 'vitest';
import { DelimitedGrid, guessDelimiter } from '../../kernel-lib/assay/delimited';
import { decodeText } from '../../kernel-lib/assay/encoding';
import { CellGrid, cellAddress, cellLook, columnLetters } from '../../kernel-lib/assay/grid';

const grid = (text: string, delimiter = ',') => new DelimitedGrid(Buffer.from(text), delimiter, { columns: 1000 });
const cellsOf = (of: DelimitedGrid) =>
  Array.from({ length: of.rows }, (_, row) => Array.from({ length: of.width(row) }, (_, column) => of.text(row, column)));

describe('cutting delimited text', () => {
  const field = fc.string({ unit: fc.constantFrom('a', '7', ',', '"', '\n', ' ', ';', 'é', '.', '\t'), maxLength: 6 });

  it('agrees with a general parser on any well-formed file (RFC 4180)', () => {
    fc.assert(
      fc.property(
        fc.array(fc.array(field, { minLength: 1, maxLength: 5 }), { minLength: 1, maxLength: 6 }),
        fc.constantFrom(',', ';', '\t', '|'),
        fc.constantFrom('\n', '\r\n'),
        (rows, delimiter, newline) => {
          const text = Papa.unparse(rows, { delimiter, newline, quotes: false });
          const expected = Papa.parse<string[]>(text, { delimiter, newline }).data;
          // A last row without any character is no row.
          if (expected.length > 0 && expected.at(-1)!.join('') === '' && expected.at(-1)!.length === 1) expected.pop();
          expect(cellsOf(grid(text, delimiter))).toEqual(expected.map((row) => row.map((cell) => cell.trim())));
        },
      ),
      { numRuns: 2000 },
    );
  });

  it('agrees with a general parser on any text without broken quotes, and tells of broken ones', () => {
    fc.assert(
      fc.property(fc.string({ unit: fc.constantFrom('a', '7', ',', '"', '\n', ' '), maxLength: 40 }), (body) => {
        const text = `${body}\n`;
        const parsed = Papa.parse<string[]>(text, { delimiter: ',', newline: '\n' });
        const own = grid(text);
        if (parsed.errors.some(({ type }) => type === 'Quotes')) {
          expect(own.faults.length).toBeGreaterThan(0);
          return;
        }
        const expected = parsed.data.map((row) => row.map((cell) => cell.trim()));
        expected.pop();
        expect(cellsOf(own)).toEqual(expected);
      }),
      { numRuns: 5000 },
    );
  });

  it('loses no row to a quotation mark that is never closed', () => {
    const own = grid('Sample,Ba\nA,"1\nB,2\nC,3\n');
    expect(own.rows).toBe(4);
    expect(own.text(3, 1)).toBe('3');
    expect(own.faults).toEqual([{ row: 1, kind: 'not closed' }]);
  });
});

describe('numbers read from bytes', () => {
  const number = (text: string) => {
    const own = grid(`${text}\n`, ';');
    return own.look(0, 0) === cellLook.number ? own.seen : undefined;
  };

  it('are the numbers of the language, to the last bit', () => {
    fc.assert(
      fc.property(
        fc.oneof(
          fc.double({ noNaN: true, noDefaultInfinity: true }).filter((value) => !Object.is(value, -0)),
          fc.tuple(fc.integer(), fc.integer({ min: 0, max: 12 })).map(([whole, places]) => whole / 10 ** places),
        ),
        (value) => {
          expect(number(String(value))).toBe(value);
          expect(number(value.toFixed(6))).toBe(Number(value.toFixed(6)));
          expect(number(value.toExponential(12))).toBe(Number(value.toExponential(12)));
        },
      ),
      { numRuns: 3000 },
    );
  });

  it.each(['', '.', '-', '+', '1e', 'e5', '1.2.3', '1,2', '0x10', 'Infinity', 'NaN', '1 2', '--1', '1e5.5', '٣'])('%j is not a number', (text) => {
    expect(number(text)).toBeUndefined();
  });

  it('with a decimal comma when the sheet has one', () => {
    const own = grid('5,25;<0,5;5.25\n', ';');
    own.useDecimal(',');
    expect([own.look(0, 0), own.seen]).toEqual([cellLook.number, 5.25]);
    expect([own.look(0, 1), own.seen]).toEqual([cellLook.below, 0.5]);
    expect(own.look(0, 2)).toBe(cellLook.text);
  });

  it('a workbook cell is looked at in the same way as a cell of text', () => {
    const texts = ['12.5', '<0.5', '< 0.5', 'bdl', '', ' 7 ', '-3', '<-1', '1e3', '1,5'];
    const own = grid(`${texts.map((text) => `"${text}"`).join(',')}\n`);
    const cells = new CellGrid([texts]);
    texts.forEach((text, column) => {
      if (text === '< 0.5') return;
      expect([text, cells.look(0, column)]).toEqual([text, own.look(0, column)]);
    });
  });
});

describe('delimiter, encoding, addresses', () => {
  it.each([
    ['a,b;c\n1,2;3\n', ','],
    ['a;b\n1,5;2,5\n3,5;4,5\n', ';'],
    ['a\tb\n1\t2\n', '\t'],
    ['a|b|c\n1|2|3\n', '|'],
    ['Sample\nA\n', ','],
  ])('%j is cut at %j', (text, delimiter) => {
    expect(guessDelimiter(Buffer.from(text))).toBe(delimiter);
  });

  it('finds encodings by their bytes', () => {
    expect(decodeText(Buffer.from('\ufeffé')).encoding).toBe('UTF-8');
    expect(decodeText(Buffer.from('é')).bytes.toString()).toBe('é');
    expect(decodeText(Buffer.from([0xe9])).bytes.toString()).toBe('é');
    // Windows-1252 differs from Latin-1 between 0x80 and 0x9f: 0x93 is a quotation mark
    expect(decodeText(Buffer.from([0x93, 0xb5])).bytes.toString()).toBe('“µ');
  });

  it('names cells as spreadsheets do', () => {
    expect([0, 25, 26, 51, 701, 702].map(columnLetters)).toEqual(['A', 'Z', 'AA', 'AZ', 'ZZ', 'AAA']);
    expect(cellAddress(11, 28)).toBe('AC12');
  });
});
