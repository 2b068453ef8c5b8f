import { escapeSpreadsheet, writeWhole, type TableCell } from '../display';
import { writeLineageBeside } from '../suite';
import { exportTable, type FertilityRows } from './export-columns';
import type { FertilityScreen } from './screen';

/** A file that was written. */
export interface SavedScreen {
  readonly path: string;
  readonly rows: number;
}

/** @internal Checks what every save function takes. */
export function checkSave(what: string, path: unknown, ending: string, rows: unknown): void {
  if (typeof path !== 'string' || !path.toLowerCase().endsWith(ending))
    throw new RangeError(`${what}: the path must be a file name that ends in ${ending}, not "${String(path)}".`);
  if (rows !== 'groups' && rows !== 'samples') throw new RangeError(`${what}: rows must be "groups" or "samples", not "${String(rows)}".`);
}

/**
 * Writes a screening as CSV (RFC 4180, UTF-8): one row a group or one row a sample, with the evidence, the flags and the cautions. Texts
 * that a spreadsheet would take for a formula are made inert. The file is written whole or not at all.
 *
 * @param screen what `screenFertility` returned
 * @param path file name ending in .csv
 * @param options `rows`: `groups` (default) or `samples`
 * @returns the path and the number of rows
 * @throws RangeError for another ending or an unknown option; the system's own error when the file cannot be written
 * @example saveFertilityCsv(screen, 'screening.csv', { rows: 'samples' })
 */
export function saveFertilityCsv(screen: FertilityScreen, path: string, options: { readonly rows?: FertilityRows } = {}): SavedScreen {
  const { rows = 'groups' } = options;
  checkSave('saveFertilityCsv', path, '.csv', rows);
  const table = exportTable(screen, rows);
  // Turned into bytes a piece at a time, so that short-lived texts stay short-lived.
  const pieces: Buffer[] = [];
  let piece = `${table.columns.map(({ head }) => cellText(head)).join(',')}\r\n`;
  // A column says the same few texts over and over: each is quoted once.
  const readers = table.columns.map(({ at }) => {
    const quoted = new Map<string, string>();
    return (row: number): string => {
      const cell = at(row);
      if (typeof cell !== 'string') return cellText(cell);
      let text = quoted.get(cell);
      if (text === undefined) {
        text = cellText(cell);
        if (quoted.size < 500) quoted.set(cell, text);
      }
      return text;
    };
  });
  for (let row = 0; row < table.rows; row++) {
    for (let j = 0; j < readers.length; j++) piece += j === 0 ? readers[j](row) : `,${readers[j](row)}`;
    piece += '\r\n';
    if (row % 500 === 499) {
      pieces.push(Buffer.from(piece));
      piece = '';
    }
  }
  pieces.push(Buffer.from(piece));
  writeWhole(path, Buffer.concat(pieces));
  writeLineageBeside(path, screen.lineage);
  return { path, rows: table.rows };
}

function cellText(cell: TableCell): string {
  if (cell === null || cell === undefined) return '';
  if (typeof cell !== 'string') return String(cell);
  const text = escapeSpreadsheet(cell);
  return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}
