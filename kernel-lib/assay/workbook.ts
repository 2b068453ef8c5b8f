import { AssayError } from './errors';
import { CellGrid, type RawCell } from './grid';
import { sizeLimits } from './limits';
import type { OpenSheet } from './open-file';

/**
 * Reads every sheet of a workbook (.xlsx, .xls, .ods). Formulas are never evaluated: a cell has the value that was saved with it. Links
 * to other files are not followed.
 */
export async function readWorkbook(bytes: Buffer, file: string): Promise<OpenSheet[]> {
  try {
    // Loaded when first needed: most runs read text files.
    // eslint-disable-next-line @typescript-eslint/no-require-imports
    const { default: readAll } = require('read-excel-file/node') as typeof import('read-excel-file/node');
    const sheets = (await readAll(bytes)) as unknown as readonly { sheet: string; data: readonly (readonly unknown[])[] }[];
    return sheets.map(({ sheet, data }) => ({ name: sheet, grid: gridOf(data, file), hidden: false, remarks: [] }));
  } catch (error) {
    if (error instanceof AssayError) throw error;
    throw new AssayError(`${file} cannot be read as a workbook (${(error as Error).message}). Open it in a spreadsheet program and save it again as .xlsx or .csv.`);
  }
}

function gridOf(data: readonly (readonly unknown[])[], file: string): CellGrid {
  const grid = new CellGrid(data.map((row) => row.map(rawCell)));
  if (grid.columns > sizeLimits.columns) throw new AssayError(`${file}: a sheet has ${grid.columns} columns; up to ${sizeLimits.columns} are read.`);
  return grid;
}

function rawCell(cell: unknown): RawCell {
  if (cell === null || cell === undefined || typeof cell === 'number' || typeof cell === 'string') return cell;
  if (cell instanceof Date) return cell.toISOString().replace(/T00:00:00\.000Z$/, '');
  return String(cell);
}
