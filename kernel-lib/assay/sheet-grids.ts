import { openFile } from './open-file';

/**
 * @internal The cells of every sheet of a file as texts, before anything is made of them: for records that say which cell changed.
 *
 * @throws AssayError for a file that is no sheet
 */
export async function sheetGrids(
  path: string,
): Promise<{ name: string; rows: number; columns: number; text(row: number, column: number): string }[]> {
  const { sheets } = await openFile(path);
  return sheets.map(({ name, grid }) => ({ name, rows: grid.rows, columns: grid.columns, text: (row, column) => grid.text(row, column) }));
}
