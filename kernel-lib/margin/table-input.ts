import { createHash } from 'node:crypto';
import { readFile } from 'node:fs/promises';
import { basename } from 'node:path';
import Papa from 'papaparse';

/** A fault in a table of points (hypocentres, slab depths, a trench line): names the file, the line and the column. */
export class PointTableError extends Error {
  override readonly name = 'PointTableError';
}

/** One column that a reader looks for: its spellings (compared without case, spaces, brackets and units) and the range of its values. */
export interface WantedColumn {
  readonly name: string;
  readonly spellings: readonly string[];
  readonly required: boolean;
  readonly range?: readonly [number, number];
  /** Whether the column is text. */
  readonly text?: boolean;
}

export interface PointTable {
  readonly file: string;
  readonly sha256: string;
  readonly size: number;
  readonly numbers: Readonly<Record<string, Float64Array | undefined>>;
  readonly texts: Readonly<Record<string, readonly string[] | undefined>>;
  /** Line in the file of each row. */
  readonly lines: Uint32Array;
}

/** `Longitude (°E)` → `longitude`, `depth_km` → `depthkm`. */
const plain = (head: string): string =>
  head
    .replace(/^\uFEFF/, '')
    .replace(/\(.*?\)|\[.*?\]/g, '')
    .toLowerCase()
    .replace(/[^a-z0-9]/g, '');

/** The longitudes, latitudes and depths that all readers look for. */
export const wantedLongitude: WantedColumn = {
  name: 'longitude',
  spellings: ['longitude', 'lon', 'long', 'longitudee', 'lone', 'londeg', 'x'],
  required: true,
  range: [-180, 360],
};
export const wantedLatitude: WantedColumn = {
  name: 'latitude',
  spellings: ['latitude', 'lat', 'latituden', 'latn', 'latdeg', 'y'],
  required: true,
  range: [-90, 90],
};
export const wantedDepth: WantedColumn = { name: 'depth', spellings: ['depth', 'depthkm', 'z', 'zkm', 'hkm'], required: true };

/**
 * Reads a delimited table of points. A blank cell of a numeric column is NaN; anything else that is not a number, or is outside its range,
 * stops with one error that names file, line and column.
 */
export async function readPointTable(path: string, wanted: readonly WantedColumn[], what: string): Promise<PointTable> {
  if (typeof path !== 'string' || path === '') throw new PointTableError(`${what}: the path of a CSV file is needed, not ${JSON.stringify(path)}.`);
  let bytes: Buffer;
  try {
    bytes = await readFile(path);
  } catch (error) {
    throw new PointTableError(
      `${what}: ${path} cannot be read (${(error as NodeJS.ErrnoException).code ?? (error as Error).message}). Check the path; it counts ` +
        `from ${process.cwd()}.`,
    );
  }
  const file = basename(path);
  const parsed = Papa.parse<string[]>(bytes.toString('utf8'), { skipEmptyLines: false });
  const heads = parsed.data[0]?.map(plain);
  if (heads === undefined || heads.every((head) => head === ''))
    throw new PointTableError(`${file}: the table is empty. The first line must hold the column heads.`);

  const places = wanted.map((column) => ({ column, at: column.spellings.map((spelling) => heads.indexOf(spelling)).find((at) => at >= 0) ?? -1 }));
  const lacking = places.filter(({ column, at }) => column.required && at < 0);
  if (lacking.length > 0) {
    const needs = lacking.map(({ column }) => `${column.name} (written as ${column.spellings.slice(0, 3).join(', ')} …)`).join(' and ');
    throw new PointTableError(`${file}, line 1: no column for ${needs}. The heads are: ${parsed.data[0].join(', ')}.`);
  }
  const rows: number[] = [];
  for (let r = 1; r < parsed.data.length; r++) if (parsed.data[r].length > 1 || parsed.data[r][0].trim() !== '') rows.push(r);
  const ragged = rows.find((r) => parsed.data[r].length !== heads.length);
  if (ragged !== undefined) {
    throw new PointTableError(
      `${file}, line ${ragged + 1}: ${parsed.data[ragged].length} cells under ${heads.length} column heads. Check the separators and ` +
        'quotes of that line.',
    );
  }
  const numbers: Record<string, Float64Array> = {};
  const texts: Record<string, readonly string[]> = {};
  for (const { column, at } of places) {
    if (at < 0) continue;
    if (column.text === true) texts[column.name] = rows.map((r) => parsed.data[r][at].trim());
    else
      numbers[column.name] = Float64Array.from(rows, (r) => readNumber(parsed.data[r][at], column, { file, line: r + 1, head: parsed.data[0][at] }));
  }
  return {
    file,
    sha256: createHash('sha256').update(bytes).digest('hex'),
    size: rows.length,
    numbers,
    texts,
    lines: Uint32Array.from(rows, (r) => r + 1),
  };
}

function readNumber(cell: string, { range, required }: WantedColumn, at: { file: string; line: number; head: string }): number {
  const text = cell.trim();
  if (text === '' || /^(nan|null|na)$/i.test(text)) return NaN;
  const value = Number(text);
  const where = `${at.file}, line ${at.line}, column "${at.head}"`;
  if (Number.isFinite(value) && (range === undefined || (value >= range[0] && value <= range[1]))) return value;
  if (Number.isFinite(value)) {
    if (!required) return NaN;
    throw new PointTableError(
      `${where}: ${text} is outside ${range![0]} to ${range![1]}. Check the units and that longitude and latitude are not exchanged.`,
    );
  }
  if (!required) return NaN;
  throw new PointTableError(`${where}: "${text}" is not a number. Correct the cell, or leave it empty to have the row left out.`);
}

/** Arrays given in a notebook as one set of numbers, checked for length and range. */
export function checkedPoints(longitudes: ArrayLike<number>, latitudes: ArrayLike<number>, what: string): void {
  const isList = (list: unknown): list is ArrayLike<number> =>
    typeof list === 'object' && list !== null && typeof (list as ArrayLike<number>).length === 'number';
  if (!isList(longitudes) || !isList(latitudes)) throw new RangeError(`${what}: longitudes and latitudes must be two arrays of numbers in degrees.`);
  if (longitudes.length !== latitudes.length)
    throw new RangeError(`${what}: ${longitudes.length} longitudes but ${latitudes.length} latitudes; give one of each a point.`);
  for (let i = 0; i < longitudes.length; i++) {
    if (Math.abs(latitudes[i]) > 90)
      throw new RangeError(`${what}: latitude ${latitudes[i]} of point ${i} is outside -90 to 90. Are longitude and latitude exchanged?`);
    if (longitudes[i] < -360 || longitudes[i] > 360)
      throw new RangeError(`${what}: longitude ${longitudes[i]} of point ${i} is outside -360 to 360.`);
  }
}
