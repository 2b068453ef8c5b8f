import { escapeSpreadsheet, withoutZipTimes } from '../../display';
import type { TableBlock } from './blocks';
import { isNumeric } from './page';

/** A sheet of a results workbook: tables one below the other. */
export interface WorkbookSheet {
  readonly name: string;
  readonly tables: readonly TableBlock[];
}

interface StyledCell {
  readonly value: string | number;
  readonly fontWeight?: 'bold';
  readonly wrap?: boolean;
}
type Cell = StyledCell | null;
interface Sheet {
  readonly sheet: string;
  readonly data: Cell[][];
  readonly columns: { readonly width: number }[];
  readonly stickyRowsCount?: number;
}
type WriteWorkbook = (sheets: readonly Sheet[], options: { readonly fontFamily: string; readonly fontSize: number }) => { toBuffer(): Promise<Buffer> };

/** The tables as an Excel workbook; the same tables give the same bytes; numbers are numbers, and a text that a spreadsheet would take for a formula is made inert. */
export async function workbookBytes(sheets: readonly WorkbookSheet[]): Promise<Uint8Array> {
  // eslint-disable-next-line @typescript-eslint/no-require-imports
  const write = (require('write-excel-file/node') as { default: WriteWorkbook }).default;
  return withoutZipTimes(await write(sheets.map(sheetOf), { fontFamily: 'Arial', fontSize: 10 }).toBuffer());
}

const cellOf = (text: string): Cell => (text === '' ? null : { value: isNumeric(text) && Number.isFinite(Number(text)) ? Number(text) : escapeSpreadsheet(text) });

/** A head that stays in sight, where the sheet is one table. */
function sheetOf({ name, tables }: WorkbookSheet): Sheet {
  const data: Cell[][] = [];
  for (const [i, table] of tables.entries()) {
    if (i > 0) data.push([]);
    if (table.title !== '' && tables.length > 1) data.push([{ value: escapeSpreadsheet(table.title), fontWeight: 'bold' }]);
    data.push(table.columns.map((head) => (head === '' ? null : { value: escapeSpreadsheet(head), fontWeight: 'bold' })));
    for (const row of table.rows) data.push(row.map(cellOf));
    for (const note of table.notes) data.push([{ value: escapeSpreadsheet(note) }]);
  }
  const count = Math.max(1, ...tables.map(({ columns }) => columns.length));
  const columns = Array.from({ length: count }, (_, j) => {
    const longest = tables.reduce((most, { columns: heads, rows }) => rows.slice(0, 200).reduce((width, row) => Math.max(width, (row[j] ?? '').length), Math.max(most, (heads[j] ?? '').length)), 6);
    return { width: Math.min(60, longest + 2) };
  });
  return { sheet: name.slice(0, 31), data, columns, ...(tables.length === 1 ? { stickyRowsCount: 1 } : {}) };
}
