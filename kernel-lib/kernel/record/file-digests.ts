import { readFileSync } from 'node:fs';
import { sha256 } from './output-data';

/** Short digests of the lines or cells of a file, so that a later change can be named by its place. */
const digestLength = 6;
const short = (text: string): string => sha256(text).slice(0, digestLength);

/** Rows above which a sheet is recorded by its hash alone: its change is then found, but not placed. */
const mostRows = 20_000;

/** A sheet's rows and columns, each with a digest of its cells. One changed cell changes one of each. */
export interface SheetDigests {
  readonly sheet: string;
  readonly heads: readonly string[];
  readonly rows: string;
  readonly columns: string;
}

/** A grid of texts, from whatever file. */
export interface TextGrid {
  readonly name: string;
  readonly rows: number;
  readonly columns: number;
  text(row: number, column: number): string;
}

export function sheetDigests({ name, rows, columns, text }: TextGrid): SheetDigests | undefined {
  if (rows > mostRows) return undefined;
  const byRow: string[] = Array.from({ length: rows }, () => '');
  const byColumn: string[] = Array.from({ length: columns }, () => '');
  for (let i = 0; i < rows; i++) {
    for (let j = 0; j < columns; j++) {
      const cell = `${text(i, j)}\u0000`;
      byRow[i] += cell;
      byColumn[j] += cell;
    }
  }
  return { sheet: name, heads: Array.from({ length: columns }, (_, j) => text(0, j)), rows: byRow.map(short).join(''), columns: byColumn.map(short).join('') };
}

const split = (digests: string): string[] => digests.match(new RegExp(`.{${digestLength}}`, 'g')) ?? [];

/** Numbers (from 1) of the entries that differ, or the change of length. */
function changed(before: string, after: string): readonly number[] {
  const [old, now] = [split(before), split(after)];
  return old.flatMap((digest, i) => (digest === now[i] ? [] : [i + 1]));
}

/** What changed between two readings of a sheet, in words: `row 12, column Ba (ppm)`. */
export function sheetChange(before: SheetDigests, after: SheetDigests): string {
  const [rowsBefore, rowsAfter] = [split(before.rows).length, split(after.rows).length];
  if (rowsBefore !== rowsAfter) return `sheet ${before.sheet}: ${rowsAfter} rows, where there were ${rowsBefore}`;
  const rows = changed(before.rows, after.rows);
  const columns = changed(before.columns, after.columns).map((j) => before.heads[j - 1] || `number ${j}`);
  if (rows.length === 0) return '';
  const list = (items: readonly (string | number)[]) => (items.length > 8 ? `${items.slice(0, 8).join(', ')} … (${items.length})` : items.join(', '));
  return `sheet ${before.sheet}: row${rows.length === 1 ? '' : 's'} ${list(rows)}, column${columns.length === 1 ? '' : 's'} ${list(columns)}`;
}

/** A digest a line of a text file, joined. */
export function lineDigests(path: string): string {
  return readFileSync(path, 'utf8').split(/\r?\n/).map(short).join('');
}

/** Numbers (from 1) of the lines of a text file that differ from recorded digests. */
export function changedLines(before: string, path: string): readonly number[] {
  return changed(before, lineDigests(path));
}
