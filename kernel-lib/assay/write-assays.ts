import { extname } from 'node:path';
import { findAnalyte } from '../chemistry';
import { escapeSpreadsheet, writeWhole } from '../display';
import { cellState, writeLineageBeside, type Column, type Suite } from '../suite';
import { ByteSink } from './byte-sink';
import { csvText } from './csv-text';
import { guarded } from './guarded';
import { readHeading, ownTag } from './heading';

/**
 * Writes a suite as a sheet that `readAssays` reads back without loss: numbers in full, `<0.5` and `>10000` with their limits, derived
 * cells and 1σ in columns of their own, labels as text (without blanks at their ends). What is derived is marked, not hidden.
 *
 * The file gets its name when it is complete. Texts that a spreadsheet program would take for a formula get an apostrophe, which
 * `readAssays` takes off again.
 *
 * @param suite n samples
 * @param path ending in .csv or .xlsx; folders are made; the lineage goes beside it, as `<path>.lineage.json`
 * @throws RangeError for another ending
 * @example await writeAssays(suite, 'checked.csv')
 */
export async function writeAssays(suite: Suite, path: string): Promise<void> {
  const ending = extname(path).toLowerCase();
  if (ending !== '.csv' && ending !== '.xlsx') throw new RangeError(`writeAssays: path must end in .csv or .xlsx, not "${path}".`);
  const parts = [...[...suite.labels].map(([name, texts]) => labelPart(name, texts)), ...[...suite.columns.values()].flatMap(columnParts)];
  const bare = bareRows(suite);
  if (ending === '.csv') await writeCsv(suite.size, parts, bare, path);
  else writeWhole(path, workbookBytes(suite.size, parts, bare));
  writeLineageBeside(path, suite.lineage);
}

/** One column of the written sheet: its head, and the cell of a row ('' where there is none). */
interface SheetPart {
  readonly head: string;
  readonly numbers: boolean;
  cell(row: number): string | number;
}

/** A head with a tag; the unit stands even when empty where the name itself ends in brackets. */
function tagged(name: string, unit: string, tag: 'text' | 'number' | 'state' | '1 sigma'): string {
  return `${name}${unit !== '' || name.endsWith(')') ? ` (${unit})` : ''} [${tag}]`;
}

function labelPart(name: string, texts: readonly string[]): SheetPart {
  const plain =
    name === 'sample' ||
    name === 'volcano' ||
    (name.trim() === name &&
      name !== '' &&
      !/\s\s|[\t\r\n]/.test(name) &&
      readHeading(name).role === 'unknown' &&
      readHeading(name, true).role === 'unknown' &&
      !ownTag.test(name));
  return { head: plain ? name : tagged(name, '', 'text'), numbers: false, cell: (row) => guarded(texts[row]) };
}

function columnParts(column: Column): SheetPart[] {
  const { symbol, unit, values, states, limits, sigma } = column;
  const known = findAnalyte(symbol);
  const plain = known !== undefined && known.unit === unit;
  const place = (symbol === 'latitude' || symbol === 'longitude') && unit === '°';
  const head = place ? symbol : plain ? (unit === '' ? symbol : `${symbol} (${unit})`) : tagged(symbol, unit, 'number');
  const parts: SheetPart[] = [
    {
      head,
      numbers: true,
      cell: (row) => {
        const state = states[row];
        if (state === cellState.missing) return '';
        const limit = limits?.[row] ?? NaN;
        if (state === cellState.belowDetection) return Number.isNaN(limit) ? 'bdl' : `<${limit}`;
        if (state === cellState.aboveRange) return Number.isNaN(limit) ? 'over range' : `>${limit}`;
        return values[row];
      },
    },
  ];
  if (states.includes(cellState.derived))
    parts.push({ head: tagged(symbol, unit, 'state'), numbers: false, cell: (row) => (states[row] === cellState.derived ? 'derived' : '') });
  if (sigma !== undefined)
    parts.push({ head: tagged(symbol, unit, '1 sigma'), numbers: true, cell: (row) => (Number.isNaN(sigma[row]) ? '' : sigma[row]) });
  return parts;
}

/** Rows without any value: one of their cells must say `n/a`, or the row would pass for a note. */
function bareRows(suite: Suite): Uint8Array {
  const bare = new Uint8Array(suite.size).fill(1);
  for (const { states } of suite.columns.values()) for (let i = 0; i < bare.length; i++) if (states[i] !== cellState.missing) bare[i] = 0;
  return bare;
}

function rowCell(part: SheetPart, row: number, bare: Uint8Array, isFirstNumber: boolean): string | number {
  const cell = part.cell(row);
  return cell === '' && isFirstNumber && bare[row] === 1 ? 'n/a' : cell;
}

async function writeCsv(size: number, parts: readonly SheetPart[], bare: Uint8Array, path: string): Promise<void> {
  const firstNumber = parts.findIndex(({ numbers }) => numbers);
  const sink = new ByteSink(path);
  try {
    sink.text(`${parts.map(({ head }) => csvText(escapeSpreadsheet(head))).join(',')}\n`);
    for (let row = 0; row < size; row++) {
      sink.text(`${parts.map((part, j) => csvText(String(rowCell(part, row, bare, j === firstNumber)))).join(',')}\n`);
      if (row % 4096 === 4095) await new Promise(setImmediate);
    }
    sink.finish();
  } catch (error) {
    sink.abandon();
    throw error;
  }
}

function workbookBytes(size: number, parts: readonly SheetPart[], bare: Uint8Array): Buffer {
  // Loaded when first needed: most runs write text files.
  // eslint-disable-next-line @typescript-eslint/no-require-imports
  const sheets = require('@e965/xlsx') as typeof import('@e965/xlsx');
  const firstNumber = parts.findIndex(({ numbers }) => numbers);
  const rows: (string | number | null)[][] = [parts.map(({ head }) => escapeSpreadsheet(head))];
  for (let row = 0; row < size; row++) {
    rows.push(
      parts.map((part, j) => {
        const cell = rowCell(part, row, bare, j === firstNumber);
        return cell === '' ? null : cell;
      }),
    );
  }
  const book = sheets.utils.book_new();
  sheets.utils.book_append_sheet(book, sheets.utils.aoa_to_sheet(rows), 'assays');
  return sheets.write(book, { type: 'buffer', bookType: 'xlsx', compression: true }) as Buffer;
}
