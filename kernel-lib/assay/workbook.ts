import { AssayError } from './errors';
import { CellGrid, type RawCell } from './grid';
import { sizeLimits } from './limits';
import type { OpenSheet } from './open-file';
import { readXlsx, spreadMerges, type Merge } from './xlsx';
import { ZipParts } from './zip';

/**
 * Reads every sheet of a workbook (.xlsx, .xls, .ods). Formulas are never evaluated: a cell has the value that was saved with it. Links
 * to other files are not followed.
 *
 * @throws AssayError for a file that is damaged, protected, or swells when unpacked
 */
export function readWorkbook(bytes: Buffer, file: string): OpenSheet[] {
  if (bytes[0] !== 0x50) return readByLibrary(bytes, file);
  const parts = new ZipParts(bytes, file);
  const content = parts.has('mimetype') || !parts.has('[Content_Types].xml') ? parts.read('content.xml') : undefined;
  if (content === undefined) return readXlsx(parts, file);
  checkRepeats(content.toString('utf8'), file);
  return readByLibrary(bytes, file);
}

/** The older and the open format, by a general library. */
function readByLibrary(bytes: Buffer, file: string): OpenSheet[] {
  // Loaded when first needed: few runs read these.
  // eslint-disable-next-line @typescript-eslint/no-require-imports
  const library = require('@e965/xlsx') as typeof import('@e965/xlsx');
  let book: ReturnType<typeof library.read>;
  try {
    book = library.read(bytes, {
      type: 'buffer',
      cellFormula: false,
      cellHTML: false,
      cellText: false,
      cellDates: false,
      dense: true,
      bookVBA: false,
    });
  } catch (error) {
    throw new AssayError(
      `${file} cannot be read as a workbook (${(error as Error).message}). Open it in a spreadsheet program and save it again as .xlsx or .csv.`,
    );
  }
  return book.SheetNames.map((name, at) => {
    const sheet = book.Sheets[name] as unknown as {
      '!data'?: ({ t?: string; v?: unknown } | undefined)[][];
      '!merges'?: { s: { r: number; c: number }; e: { r: number; c: number } }[];
    };
    const rows = Array.from(sheet['!data'] ?? [], (row) => Array.from(row ?? [], rawCell));
    if (rows.some((row) => row.length > sizeLimits.columns))
      throw new AssayError(`${file}, sheet "${name}" has more than ${sizeLimits.columns} columns; no assay sheet has.`);
    spreadMerges(
      rows,
      (sheet['!merges'] ?? []).map(({ s, e }): Merge => ({ top: s.r, left: s.c, bottom: e.r, right: e.c })),
    );
    return { name, grid: new CellGrid(rows), hidden: (book.Workbook?.Sheets?.[at]?.Hidden ?? 0) !== 0, remarks: [] };
  });
}

function rawCell(cell: { t?: string; v?: unknown; w?: string } | undefined): RawCell {
  if (cell === undefined || cell.t === 'z') return undefined;
  if (cell.t === 'e') return cell.w ?? '#N/A';
  return typeof cell.v === 'number' || typeof cell.v === 'string'
    ? cell.v
    : cell.v === undefined || cell.v === null
      ? undefined
      : cell.v instanceof Date
        ? cell.v.toISOString().replace(/T00:00:00\.000Z$/, '')
        : String(cell.v).toUpperCase();
}

/** In the open format one filled cell can stand for millions by its repeat counts: they are counted before they are spread. */
function checkRepeats(xml: string, file: string): void {
  let cells = 0;
  for (const row of xml.split('<table:table-row').slice(1)) {
    const rows = Number(/^[^>]*number-rows-repeated="(\d+)"/.exec(row)?.[1] ?? 1);
    for (const [tag, , repeated] of row.matchAll(/<table:(?:covered-)?table-cell\b([^>]*?number-columns-repeated="(\d+)")?[^>]*>/g)) {
      if (/value-type|formula/.test(tag)) cells += rows * Number(repeated ?? 1);
    }
    if (cells > sizeLimits.workbookCells)
      throw new AssayError(
        `${file} has more than ${sizeLimits.workbookCells / 1e6} million cells by its repeat counts. It is not opened; export the sheet as .csv.`,
      );
  }
}
