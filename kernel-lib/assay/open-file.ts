import { open, stat } from 'node:fs/promises';
import { basename } from 'node:path';
import { noteInput } from '../suite';
import { DelimitedGrid, guessDelimiter } from './delimited';
import { decodeText } from './encoding';
import { AssayError } from './errors';
import type { Grid } from './grid';
import { sizeLimits } from './limits';
import { readWorkbook } from './workbook';

/** One sheet of a file, before anything is known of what it holds. */
export interface OpenSheet {
  readonly name: string;
  readonly grid: Grid;
  readonly hidden: boolean;
  /** Things seen while opening that the report must tell. */
  readonly remarks: readonly string[];
}

export interface OpenFile {
  /** Base name: a path belongs to one machine. */
  readonly file: string;
  readonly sha256: string;
  readonly kind: 'delimited' | 'workbook';
  readonly encoding?: string;
  readonly delimiter?: string;
  readonly sheets: readonly OpenSheet[];
}

/**
 * Opens a text or workbook file, by its content rather than its extension.
 *
 * @throws AssayError for a file that is empty, too large, or of another kind
 */
export async function openFile(path: string, options: { readonly delimiter?: string } = {}): Promise<OpenFile> {
  const file = basename(path);
  const size = await sizeOf(path, file);
  if (size === 0) throw new AssayError(`${file} is empty (0 bytes). Save the sheet again, as .csv or .xlsx.`);
  if (size > sizeLimits.fileBytes)
    throw new AssayError(
      `${file} has ${Math.round(size / 1e6)} MB; sheets up to ${Math.round(sizeLimits.fileBytes / 1e6)} MB are read. Split it by rows.`,
    );
  const handle = await open(path);
  try {
    const head = Buffer.alloc(Math.min(size, sizeLimits.rowBytes));
    await handle.read(head, 0, head.length, 0);
    const packed = head[0] === 0x50 && head[1] === 0x4b;
    const compound = head.length > 8 && head.readUInt32BE(0) === 0xd0cf11e0;
    if (!packed && !compound && size > head.length && !head.includes(0x0a) && !head.includes(0x0d)) {
      throw new AssayError(`${file}: its first ${Math.round(head.length / 1e6)} MB are one line, so it is not a table. Check how it was saved.`);
    }
    const bytes = size === head.length ? head : await readRest(handle, head, size);
    const { sha256 } = noteInput(path, bytes);
    if (packed || compound) return { file, sha256, kind: 'workbook', sheets: readWorkbook(bytes, file) };
    return { file, sha256, kind: 'delimited', ...openText(bytes, file, options.delimiter) };
  } finally {
    await handle.close();
  }
}

async function sizeOf(path: string, file: string): Promise<number> {
  try {
    const found = await stat(path);
    if (found.isFile()) return found.size;
  } catch (error) {
    throw new AssayError(
      `${file} cannot be opened (${(error as NodeJS.ErrnoException).code ?? 'unknown reason'}). Check the path: it is taken from the folder of the notebook.`,
    );
  }
  throw new AssayError(`${file} is a folder, not a sheet. Give the path of a .csv, .tsv, .xlsx, .xls or .ods file.`);
}

async function readRest(handle: Awaited<ReturnType<typeof open>>, head: Buffer, size: number): Promise<Buffer> {
  const bytes = Buffer.allocUnsafe(size);
  head.copy(bytes);
  let at = head.length;
  while (at < size) {
    const { bytesRead } = await handle.read(bytes, at, size - at, at);
    if (bytesRead === 0) break;
    at += bytesRead;
  }
  return bytes.subarray(0, at);
}

function openText(raw: Buffer, file: string, wanted?: string): Pick<OpenFile, 'encoding' | 'delimiter' | 'sheets'> {
  const { bytes, encoding } = decodeText(raw);
  if (bytes.subarray(0, 4096).includes(0))
    throw new AssayError(`${file} is neither text nor a workbook that the library reads. Save it as .csv or .xlsx.`);
  const delimiter = wanted ?? guessDelimiter(bytes);
  let grid: DelimitedGrid;
  try {
    grid = new DelimitedGrid(bytes, delimiter, { columns: sizeLimits.columns });
  } catch (error) {
    if (error instanceof RangeError)
      throw new AssayError(`${file}: ${error.message}. Sheets of up to ${sizeLimits.columns} columns are read; check the delimiter.`);
    throw error;
  }
  const remarks = grid.faults
    .slice(0, 20)
    .map(({ row, kind }) =>
      kind === 'line breaks inside'
        ? `row ${row + 1}: a cell holds line breaks; if it should not, a quotation mark is broken there`
        : `row ${row + 1}: a quotation mark is broken (${kind})`,
    );
  if (grid.faults.length > remarks.length)
    remarks.push(`${grid.faults.length - remarks.length} more rows with broken quotation marks or line breaks in a cell`);
  return { encoding, delimiter, sheets: [{ name: '', grid, hidden: false, remarks }] };
}
